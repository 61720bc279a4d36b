"""Sunrise, sunset, twilight and true noon against the SPA report, tables and pvlib."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta

import numpy as np
import pandas as pd
import pytest
from pvlib import solarposition

from logtool.errors import PlaceError
from logtool.places import sun

from .sources import read, table

TIMES = read("sun_times.toml")
EXAMPLE = read("sun_positions.toml")["spa_example"]

TIME_OFF_S = 5.0  # 0.0105 deg of the short formula where the sun rises slowly, up to 65 degrees of latitude
NOON_OFF_S = 3.0  # the short formula's equation of time, measured against SPA
DAY_S = 86_400


@pytest.mark.parametrize("row", table(TIMES["spa_report"]), ids=lambda row: str(row["day"]))
def test_sunrise_and_sunset_of_the_spa_report(row: dict) -> None:
    morning, evening = sun.crossings(row["day"], row["lat_deg"], row["lon_deg"])
    assert morning == pytest.approx(row["sunrise"].timestamp(), abs=TIME_OFF_S)
    assert evening == pytest.approx(row["sunset"].timestamp(), abs=TIME_OFF_S)


def test_a_day_of_the_spa_report() -> None:
    found = sun.twilights(date(2003, 10, 17), EXAMPLE["lat_deg"], EXAMPLE["lon_deg"])
    assert found.sunrise == pytest.approx(EXAMPLE["sunrise"].timestamp(), abs=TIME_OFF_S)
    assert found.noon == pytest.approx(EXAMPLE["transit"].timestamp(), abs=NOON_OFF_S)
    evening = sun.crossings(date(2003, 10, 16), EXAMPLE["lat_deg"], EXAMPLE["lon_deg"])[1]
    assert evening == pytest.approx(EXAMPLE["sunset"].timestamp(), abs=TIME_OFF_S)


@pytest.mark.parametrize(
    "row", table(TIMES["twilights"]), ids=lambda row: f"{row['lat_deg']} {row['lon_deg']} {row['day']}"
)
def test_twilights_of_the_table(row: dict) -> None:
    found = sun.twilights(row["day"], row["lat_deg"], row["lon_deg"])
    for name in TIMES["twilights"]["columns"][3:]:
        unix_s = getattr(found, name)
        if row[name] == TIMES["twilights"]["none"]:
            assert unix_s is None
            continue
        clock = datetime.strptime(row[name], "%H:%M:%S")
        off_s = unix_s - (clock.hour * 3600 + clock.minute * 60 + clock.second)
        assert (off_s + DAY_S / 2) % DAY_S - DAY_S / 2 == pytest.approx(0, abs=TIME_OFF_S)
        assert abs(unix_s - found.noon) < DAY_S / 2  # of this date, not of a neighbour


@pytest.mark.parametrize("lat_deg", [-60, -35, 0, 52, 65])
def test_every_fifth_day_of_a_year_has_the_sun_there_by_spa(lat_deg: float) -> None:
    limits = (
        sun.SUNRISE_ZENITH_DEG,
        sun.CIVIL_ZENITH_DEG,
        sun.NAUTICAL_ZENITH_DEG,
        sun.ASTRONOMICAL_ZENITH_DEG,
    )
    passages = [
        (unix_s, limit_deg)
        for count in range(0, 365, 5)
        for limit_deg in limits
        for unix_s in sun.crossings(date(2026, 1, 1) + timedelta(count), lat_deg, 13.4, limit_deg)
        if unix_s is not None
    ]
    unix_s, limit_deg = np.array(passages).T
    right = solarposition.spa_python(
        pd.to_datetime(unix_s, unit="s", utc=True), lat_deg, 13.4, altitude=0, delta_t=69.2
    )
    assert len(passages) > 365
    assert np.abs(right.zenith.to_numpy() - limit_deg).max() < 0.0105  # the short formula's own error


def test_limits_are_those_of_the_almanacs() -> None:
    """U.S. Naval Observatory, Rise, Set, and Twilight Definitions; 34' + 16' from memory."""
    assert pytest.approx(90 + (34 + 16) / 60) == sun.SUNRISE_ZENITH_DEG
    assert (sun.CIVIL_ZENITH_DEG, sun.NAUTICAL_ZENITH_DEG, sun.ASTRONOMICAL_ZENITH_DEG) == (96, 102, 108)


def test_names_change_at_the_limits() -> None:
    zeniths = np.array([0, 90.83, 90.84, 95.99, 96, 101.99, 102, 107.99, 108, 180])
    assert sun.day_or_night(zeniths).tolist() == [
        *["day"] * 2,
        *["civil twilight"] * 2,
        *["nautical twilight"] * 2,
        *["astronomical twilight"] * 2,
        *["night"] * 2,
    ]
    assert sun.day_or_night(120.0) == "night"
    with pytest.raises(PlaceError, match="zenith distance is not known"):
        sun.day_or_night(float("nan"))


@pytest.mark.parametrize(
    ("day", "lat_deg", "said"),
    [
        (date(2025, 6, 21), 70.0, "up all day"),
        (date(2025, 12, 21), 70.0, "down all day"),
        (date(2025, 6, 21), -80.0, "down all day"),
        (date(2025, 3, 20), 70.0, "rises and sets"),
        (date(2025, 12, 21), 52.0, "rises and sets"),
    ],
)
def test_polar_day_and_night_are_said(day: date, lat_deg: float, said: str) -> None:
    found = sun.twilights(day, lat_deg, 20.0)
    assert found.daylight == said
    if said != "rises and sets":
        assert found.sunrise is found.sunset is None


def test_at_the_pole_the_sun_rises_once_a_year() -> None:
    days = [date(2026, 1, 1) + timedelta(count) for count in range(365)]
    said = [sun.twilights(day, 90.0, 0.0).daylight for day in days]
    assert said.count("rises") == 1
    assert said.count("sets") == 1
    assert days[said.index("rises")] == date(2026, 3, 18)  # 90.83 degrees two days before the equinox
    assert said[0] == said[-1] == "down all day"
    assert said[180] == "up all day"


def test_polar_twilight_has_civil_dawn_and_dusk() -> None:
    found = sun.twilights(date(2025, 12, 21), 70.0, 20.0)
    assert found.sunrise is None
    assert found.civil_dawn < found.noon < found.civil_dusk
    assert found.nautical_dawn < found.civil_dawn
    assert found.civil_dusk < found.nautical_dusk < found.astronomical_dusk


@pytest.mark.parametrize(("first", "most"), [(date(2026, 4, 15), 1), (date(2026, 7, 20), 2)])
def test_near_polar_day_the_first_morning_and_last_evening_are_given(first: date, most: int) -> None:
    """Held against all passages in steps of a minute; 9 August has two, after and before midnight."""
    lat_deg, lon_deg = 73.25, 20.0
    found = []
    for count in range(30):
        day = first + timedelta(count)
        midnight_s = datetime(day.year, day.month, day.day, tzinfo=UTC).timestamp() - lon_deg * 240
        at_s = midnight_s + np.arange(0, DAY_S + 60, 60.0)
        above = sun.zenith_deg(at_s, lat_deg, lon_deg) < sun.SUNRISE_ZENITH_DEG
        sinks = np.flatnonzero(above[:-1] & ~above[1:])
        found.append(sinks.size)
        rises = np.flatnonzero(~above[:-1] & above[1:])
        morning, evening = sun.crossings(day, lat_deg, lon_deg)
        assert morning == (pytest.approx(at_s[rises[0]] + 30, abs=30) if rises.size else None)
        assert evening == (pytest.approx(at_s[sinks[-1]] + 30, abs=30) if sinks.size else None)
    assert (min(found), max(found)) == (0, most)


def test_the_sun_is_at_the_limit_to_a_millisecond() -> None:
    for limit_deg in (sun.SUNRISE_ZENITH_DEG, 102.0):
        passages_s = np.array(sun.crossings(date(2026, 2, 1), 52.0, 13.4, limit_deg))
        in_a_millisecond_deg = 15 / 3600 / 1000
        off_deg = sun.zenith_deg(passages_s, 52.0, 13.4) - limit_deg
        assert np.abs(off_deg).max() < in_a_millisecond_deg


@pytest.mark.parametrize("place", [(95.0, 0.0), (0.0, 200.0), (float("nan"), 0.0)])
def test_times_need_a_place_on_the_earth(place: tuple[float, float]) -> None:
    with pytest.raises(PlaceError, match="is not on the Earth"):
        sun.crossings(date(2026, 1, 1), *place)
