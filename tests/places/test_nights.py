"""True noon, and the nights between noons."""

from __future__ import annotations

from datetime import UTC, date, datetime

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pvlib import solarposition

from logtool.errors import PlaceError
from logtool.places import nights, noon, sun

DAY_S = 86_400
NOON_OFF_S = 3.0  # the short formula's equation of time, measured against SPA
LONGITUDES_DEG = (-180.0, -179.99, -105.1786, 0.0, 13.4, 151.2, 179.99, 180.0)

longitudes = st.floats(-180, 180)
instants = st.floats(0, 4_102_444_800)
days = st.integers(0, 47_000)


def at(*parts: int) -> float:
    return datetime(*parts, tzinfo=UTC).timestamp()


@pytest.mark.parametrize("lon_deg", LONGITUDES_DEG)
def test_noon_of_every_date_of_a_year_against_spa(lon_deg: float) -> None:
    """At true noon SPA has the sun due south of 60 N; what its azimuth lacks is turned into seconds."""
    numbers = np.arange(noon.day_number(date(2026, 1, 1)), noon.day_number(date(2027, 1, 1)))
    found_s = sun.solar_noons(numbers, lon_deg)
    times = pd.to_datetime(found_s, unit="s", utc=True)
    right = solarposition.spa_python(times, 60.0, lon_deg, altitude=0, delta_t=69.2)
    declination_deg = sun.declination_and_equation_of_time(found_s)[0]
    steepness = np.sin(np.radians(right.zenith)) / np.cos(np.radians(declination_deg))
    off_s = (right.azimuth - 180) * steepness * 240
    assert np.abs(off_s).max() < NOON_OFF_S


def test_noon_on_the_greenwich_meridian_has_the_sun_at_its_highest() -> None:
    for day in (date(2026, 2, 11), date(2026, 4, 16), date(2026, 11, 3)):
        noon_s = sun.solar_noon_on(day, 0.0)
        assert turned_from_south(noon_s) == pytest.approx(0, abs=1e-5)
        assert datetime.fromtimestamp(noon_s, UTC).date() == day


def turned_from_south(unix_s: float) -> float:
    return float(sun.azimuth_deg(unix_s, 60.0, 0.0)) - 180


def test_true_noon_wanders_round_mean_noon_by_a_quarter_of_an_hour() -> None:
    """Equation of time, from memory: least -14.2 min about 11 February, most +16.4 min about 3 November."""
    numbers = np.arange(noon.day_number(date(2026, 1, 1)), noon.day_number(date(2027, 1, 1)))
    late_min = (sun.solar_noons(numbers, 0.0) - numbers * DAY_S - DAY_S / 2) / 60
    assert late_min.max() == pytest.approx(
        14.2, abs=0.05 + 0.045
    )  # half a digit, and the short formula's error
    assert late_min.min() == pytest.approx(-16.4, abs=0.05 + 0.045)  # as the line before
    assert nights.night_name(numbers[late_min.argmax()]) == "2026-02-11"
    assert nights.night_name(numbers[late_min.argmin()]) == "2026-11-03"


@given(instants, longitudes)
def test_noon_before_is_the_latest(unix_s: float, lon_deg: float) -> None:
    before_s = float(sun.solar_noon_before(unix_s, lon_deg))
    number = int(noon.local_mean_days(before_s, lon_deg))
    assert before_s <= unix_s
    assert before_s == noon.solar_noons(number, lon_deg)
    assert noon.solar_noons(number + 1, lon_deg) > unix_s


@given(days, longitudes)
def test_an_instant_at_noon_is_its_own_and_the_one_before_is_of_the_day_before(
    day: int, lon_deg: float
) -> None:
    noon_s = float(noon.solar_noons(day, lon_deg))
    assert sun.solar_noon_before(noon_s, lon_deg) == noon_s
    assert sun.solar_noon_before(np.nextafter(noon_s, 0), lon_deg) == noon.solar_noons(day - 1, lon_deg)


@given(days, longitudes)
def test_a_date_holds_its_noon_by_mean_time(day: int, lon_deg: float) -> None:
    noon_s = float(noon.solar_noons(day, lon_deg))
    assert noon.local_mean_days(noon_s, lon_deg) == day
    assert nights.local_mean_time(noon_s, lon_deg)[:2] in ("11", "12")
    assert sun.solar_noon_on(date.fromordinal(noon.EPOCH_ORDINAL + day), lon_deg) == noon_s


def test_noons_take_arrays() -> None:
    unix_s = np.arange(at(2026, 1, 1), at(2026, 1, 3), 3600.0)
    found = sun.solar_noon_before(unix_s[:, None], np.array(LONGITUDES_DEG))
    assert found.shape == (48, len(LONGITUDES_DEG))
    for column, lon_deg in enumerate(LONGITUDES_DEG):
        assert found[17, column] == sun.solar_noon_before(unix_s[17], lon_deg)


@given(days, st.one_of(st.none(), longitudes))
def test_nights_follow_without_a_gap(day: int, lon_deg: float | None) -> None:
    from_s, to_s = nights.night_bounds(day, lon_deg)
    assert to_s == nights.night_bounds(day + 1, lon_deg)[0]
    assert abs(to_s - from_s - DAY_S) < 31
    assert nights.night_start(from_s, lon_deg) == from_s
    assert nights.night_start(np.nextafter(to_s, 0), lon_deg) == from_s


@given(st.integers(0, 1_139_000), st.one_of(st.none(), longitudes))
def test_an_hour_is_of_the_night_that_holds_its_half_past(hour: int, lon_deg: float | None) -> None:
    day = int(nights.night_of_hours(hour * 3600, lon_deg))
    from_s, to_s = nights.night_bounds(day, lon_deg)
    assert from_s <= hour * 3600 + 1800 < to_s


def test_hours_across_new_year_without_a_place() -> None:
    hours_s = at(2026, 12, 31, 10) + 3600.0 * np.arange(28)
    names = [nights.night_name(day) for day in nights.night_of_hours(hours_s, None)]
    assert names == ["2026-12-30"] * 2 + ["2026-12-31"] * 24 + ["2027-01-01"] * 2
    assert nights.night_bounds(int(nights.night_of_hours(at(2027, 1, 1), None)), None) == (
        at(2026, 12, 31, 12),
        at(2027, 1, 1, 12),
    )


def test_hours_across_new_year_far_west() -> None:
    """At 105 W mean noon is at 19:00 UTC; on 31 December true noon comes 3 minutes later."""
    hours_s = at(2026, 12, 31, 17) + 3600.0 * np.arange(26)
    names = [nights.night_name(day) for day in nights.night_of_hours(hours_s, -105.0)]
    assert names == ["2026-12-30"] * 2 + ["2026-12-31"] * 24
    from_s, _ = nights.night_bounds(int(nights.night_of_hours(at(2027, 1, 1), -105.0)), -105.0)
    assert from_s == pytest.approx(at(2026, 12, 31, 19, 3), abs=60)


def test_the_half_past_decides_when_noon_falls_near_it() -> None:
    """At 7.5 W mean noon is at 12:30 UTC, true noon 14 minutes later in February, 16 earlier in November."""
    assert nights.night_name(nights.night_of_hours(at(2026, 2, 11, 12), -7.5)) == "2026-02-10"
    assert nights.night_name(nights.night_of_hours(at(2026, 2, 11, 13), -7.5)) == "2026-02-11"
    assert nights.night_name(nights.night_of_hours(at(2026, 11, 3, 12), -7.5)) == "2026-11-03"
    assert nights.night_name(nights.night_of_hours(at(2026, 11, 3, 11), -7.5)) == "2026-11-02"


@pytest.mark.parametrize(("month", "day"), [(2, 11), (11, 3)])
def test_dates_on_either_side_of_the_180th_meridian(month: int, day: int) -> None:
    """Mean noon at 180 E is at 0 h UTC of the date, at 180 W at 24 h: one instant has two dates."""
    east = noon.solar_noons(noon.day_number(date(2026, month, day)), 180.0)
    west = noon.solar_noons(noon.day_number(date(2026, month, day)) - 1, -180.0)
    assert east == pytest.approx(at(2026, month, day), abs=1000)
    assert east == west
    hour_s = at(2026, month, day, 1)
    assert nights.night_name(nights.night_of_hours(hour_s, 179.99)) == f"2026-{month:02d}-{day:02d}"
    assert nights.night_name(nights.night_of_hours(hour_s, -179.99)) == f"2026-{month:02d}-{day - 1:02d}"


def test_summer_time_moves_nothing() -> None:
    """A night has 24 hours, also when clocks in Europe are changed, 2026-03-29 and 2026-10-25."""
    for month, day in ((3, 28), (10, 24)):
        hours_s = at(2026, month, day, 0) + 3600.0 * np.arange(72)
        names = nights.night_of_hours(hours_s, 13.4)
        assert (names == noon.day_number(date(2026, month, day))).sum() == 24


@pytest.mark.parametrize(
    ("unix_s", "lon_deg", "said"),
    [
        (0.0, 0.0, "00:00"),
        (0.0, 180.0, "12:00"),
        (0.0, -180.0, "12:00"),
        (59.0, -0.25, "23:59"),
        (0.0, 13.4, "00:53"),
    ],
)
def test_local_mean_time(unix_s: float, lon_deg: float, said: str) -> None:
    assert nights.local_mean_time(unix_s, lon_deg) == said


@pytest.mark.parametrize("lon_deg", [180.1, -200.0, float("nan")])
def test_nights_need_a_longitude_on_the_earth(lon_deg: float) -> None:
    for ask in (nights.night_start, nights.night_of_hours, nights.local_mean_time, sun.solar_noon_before):
        with pytest.raises(PlaceError, match="is not on the Earth: give degrees from -180 to 180"):
            ask(0.0, lon_deg)
    with pytest.raises(PlaceError):
        nights.night_bounds(0, lon_deg)
