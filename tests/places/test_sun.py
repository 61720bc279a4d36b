"""The sun's place against the SPA algorithm, its report, and an almanac example."""

from __future__ import annotations

from datetime import UTC, datetime

import numpy as np
import pandas as pd
import pytest
from pvlib import solarposition

from logtool.errors import PlaceError
from logtool.places import almanac, sun

from .sources import read, table, turned

POSITIONS = read("sun_positions.toml")

ZENITH_OFF_DEG = 0.0105  # the short formula's own error, measured against SPA from 1970 to 2050
LATE_ZENITH_OFF_DEG = 0.0136  # the same from 2050 to 2100, outside the years it was made for
ACROSS_OFF_DEG = 0.0105  # the same at right angles to the zenith's direction
EQUATION_OFF_MIN = 0.045  # the same for the equation of time: 2.7 s
TT_LESS_UT_S = 69.2  # of the years about 2026


def spa(unix_s: np.ndarray, lat_deg: float, lon_deg: float) -> pd.DataFrame:
    times = pd.to_datetime(unix_s, unit="s", utc=True)
    return solarposition.spa_python(times, lat_deg, lon_deg, altitude=0, delta_t=TT_LESS_UT_S)


def at(*parts: int) -> float:
    return datetime(*parts, tzinfo=UTC).timestamp()


def test_spa_example_without_refraction() -> None:
    row = POSITIONS["spa_example"]
    unix_s, place = row["time"].timestamp(), (row["lat_deg"], row["lon_deg"])
    assert sun.zenith_deg(unix_s, *place) == pytest.approx(row["geometric_zenith_deg"], abs=ZENITH_OFF_DEG)
    off_deg = turned(float(sun.azimuth_deg(unix_s, *place)), row["azimuth_deg"])
    assert off_deg * np.sin(np.radians(row["geometric_zenith_deg"])) == pytest.approx(0, abs=ACROSS_OFF_DEG)
    equation_min = sun.declination_and_equation_of_time(unix_s)[1]
    assert equation_min == pytest.approx(row["equation_of_time_min"], abs=EQUATION_OFF_MIN)


def test_almanac_example() -> None:
    row = POSITIONS["meeus"]
    right_ascension, declination = almanac._right_ascension_and_declination(np.array(row["time"].timestamp()))
    off_deg = turned(float(np.degrees(right_ascension)), row["right_ascension_deg"])
    assert off_deg == pytest.approx(
        0, abs=0.01
    )  # the Astronomical Almanac gives 0.01 deg for its short formula
    assert np.degrees(declination) == pytest.approx(row["declination_deg"], abs=0.01)  # as the line before


@pytest.mark.parametrize("row", table(POSITIONS["geometric"]), ids=lambda row: f"{row['time']:%Y-%m-%d %H}")
def test_zenith_and_azimuth_of_the_table(row: dict) -> None:
    unix_s, place = row["time"].timestamp(), (row["lat_deg"], row["lon_deg"])
    assert sun.zenith_deg(unix_s, *place) == pytest.approx(row["zenith_deg"], abs=ZENITH_OFF_DEG)
    off_deg = turned(float(sun.azimuth_deg(unix_s, *place)), row["azimuth_deg"])
    assert off_deg * np.sin(np.radians(row["zenith_deg"])) == pytest.approx(0, abs=ACROSS_OFF_DEG)


@pytest.mark.parametrize("lat_deg", [-90, -65, -35, 0, 23.4, 52, 70, 90])
def test_every_hour_of_a_year_against_spa(lat_deg: float) -> None:
    unix_s = np.arange(at(2026, 1, 1), at(2027, 1, 1), 3600.0)
    right = spa(unix_s, lat_deg, 13.4)
    off_deg = sun.zenith_deg(unix_s, lat_deg, 13.4) - right.zenith.to_numpy()
    assert np.abs(off_deg).max() < ZENITH_OFF_DEG
    assert np.sqrt(np.mean(off_deg**2)) < 0.0045  # measured: 0.0024 at the poles, 0.0044 on the equator
    turned_deg = (sun.azimuth_deg(unix_s, lat_deg, 13.4) - right.azimuth.to_numpy() + 180) % 360 - 180
    assert np.abs(turned_deg * np.sin(np.radians(right.zenith))).max() < ACROSS_OFF_DEG


@pytest.mark.parametrize(
    ("first", "last", "limit_deg"), [(1970, 2050, ZENITH_OFF_DEG), (2050, 2100, LATE_ZENITH_OFF_DEG)]
)
@pytest.mark.parametrize("lat_deg", [-65, 0, 52])
def test_all_years_of_the_layout_against_spa(first: int, last: int, limit_deg: float, lat_deg: float) -> None:
    unix_s = np.random.default_rng(first).uniform(at(first, 1, 1), at(last, 1, 1), 10_000)
    off_deg = sun.zenith_deg(unix_s, lat_deg, -77.0) - spa(unix_s, lat_deg, -77.0).zenith.to_numpy()
    assert np.abs(off_deg).max() < limit_deg


def test_equation_of_time_against_spa() -> None:
    unix_s = np.arange(at(2026, 1, 1), at(2027, 1, 1), 7200.0)
    off_min = sun.declination_and_equation_of_time(unix_s)[1] - spa(unix_s, 0, 0).equation_of_time.to_numpy()
    assert np.abs(off_min).max() < EQUATION_OFF_MIN


def test_places_and_times_broadcast() -> None:
    unix_s, lat_deg = np.array([at(2026, 1, 1), at(2026, 7, 1)]), np.array([[-60.0], [0.0], [60.0]])
    grid = sun.zenith_deg(unix_s, lat_deg, 10.0)
    assert grid.shape == sun.azimuth_deg(unix_s, lat_deg, 10.0).shape == (3, 2)
    assert grid[2, 1] == sun.zenith_deg(at(2026, 7, 1), 60.0, 10.0)
    assert np.isnan(sun.zenith_deg(unix_s, np.nan, 10.0)).all()
    with pytest.raises(PlaceError, match=r"latitude 90\.5 is not on the Earth"):
        sun.zenith_deg(unix_s, 90.5, 10.0)


def test_subsolar_point_has_the_sun_in_its_zenith() -> None:
    unix_s = np.random.default_rng(4).uniform(at(1970, 1, 1), at(2100, 1, 1), 1000)
    lat_deg, lon_deg = sun.subsolar_point(unix_s)
    assert np.abs(lat_deg).max() < 23.46
    assert lon_deg.min() >= -180
    assert lon_deg.max() < 180
    assert sun.zenith_deg(unix_s, lat_deg, lon_deg).max() < 1e-9
    assert sun.zenith_deg(unix_s, -lat_deg, (lon_deg + 360) % 360 - 180).min() > 180 - 1e-9


@pytest.mark.parametrize("points", [3, 181, 182])
@pytest.mark.parametrize(
    "unix_s", [at(2026, 1, 1), at(2026, 3, 20, 14, 46), at(2026, 6, 21, 3), at(2026, 9, 23)]
)
def test_terminator_has_the_sun_on_the_horizon(unix_s: float, points: int) -> None:
    lat_deg, lon_deg = sun.terminator(unix_s, points)
    assert lat_deg.shape == lon_deg.shape == (points,)
    assert (lon_deg[0], lon_deg[-1]) == (-180.0, 180.0)
    assert (np.diff(lon_deg) >= 0).all()
    parallax_deg = 8.794 / 3600  # the line is one of the Earth's middle, the zenith is seen from its surface
    zeniths = sun.zenith_deg(unix_s, lat_deg, lon_deg)
    assert zeniths == pytest.approx(np.full(points, 90 + parallax_deg), abs=1e-9)


def test_terminator_parts_day_from_night() -> None:
    unix_s = at(2026, 6, 21, 3)
    lat_deg, lon_deg = sun.terminator(unix_s)
    assert sun.subsolar_point(unix_s)[0] > 0
    assert (sun.zenith_deg(unix_s, lat_deg + 1, lon_deg) < 90).all()
    assert (sun.zenith_deg(unix_s, lat_deg - 1, lon_deg) > 90).all()
    with pytest.raises(PlaceError, match="3 points or more, not 2"):
        sun.terminator(unix_s, 2)
