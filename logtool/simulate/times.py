"""When it listens: the nights, their slots, and instants as the layout writes them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta

import numpy as np

from logtool.places.locator import centre
from logtool.places.sun import crossings
from logtool.simulate.laws import US_PER_S, IntArray
from logtool.simulate.scenario import Scenario, ScenarioError

HOUR_US = 3600 * US_PER_S
MINUTE_US = 60 * US_PER_S
DAY_US = 24 * HOUR_US
US_PER_MS = 1000


@dataclass(frozen=True)
class Night:
    """One night: its date, and the first and the last instant of listening (the last not held)."""

    day: date
    start_us: int
    end_us: int


def nights_of(scenario: Scenario) -> tuple[Night, ...]:
    """Return the nights of a scenario, beginning and ending on whole minutes. [microseconds since 1970, UTC]

    Raises
    ------
    ScenarioError
        Where the sun neither sets nor rises, or a night has no length or runs into the next.
    """
    given = scenario.nights
    nights: list[Night] = []
    for number in range(given.number):
        day = given.first + timedelta(days=number)
        start_us, end_us = _by_sun(scenario, day) if given.hours == "sun" else _by_clock(scenario, day)
        if end_us <= start_us:
            raise ScenarioError(f"[nights]: the night of {day} has no length; change its hours")
        if nights and start_us < nights[-1].end_us:
            raise ScenarioError(
                f"[nights]: the night of {day} begins before the one before ends; shorten them"
            )
        nights.append(Night(day, start_us, end_us))
    return tuple(nights)


def _by_clock(scenario: Scenario, day: date) -> tuple[int, int]:
    given = scenario.nights
    to_h = given.to_h if given.to_h > given.from_h else given.to_h + 24.0
    midnight_us = (day - date(1970, 1, 1)).days * DAY_US
    return _to_minute(midnight_us + given.from_h * HOUR_US), _to_minute(midnight_us + to_h * HOUR_US)


def _by_sun(scenario: Scenario, day: date) -> tuple[int, int]:
    given, place = scenario.nights, centre(scenario.receiver[0].locator)
    sunset_s, sunrise_s = crossings(day, *place)[1], crossings(day + timedelta(days=1), *place)[0]
    if sunset_s is None or sunrise_s is None:
        raise ScenarioError(
            f"[nights]: at {scenario.receiver[0].locator} the sun does not set and rise on {day}; "
            'give hours = "utc" with from_h and to_h'
        )
    start_us = sunset_s * US_PER_S - given.before_sunset_h * HOUR_US
    return _to_minute(start_us), _to_minute(sunrise_s * US_PER_S + given.after_sunrise_h * HOUR_US)


def _to_minute(at_us: float) -> int:
    return round(at_us / MINUTE_US) * MINUTE_US


def slots_of(night: Night, slot_us: int) -> IntArray:
    """Return the beginnings of the slots that lie wholly in a night; slots count from midnight UTC."""
    midnight_us = night.start_us // DAY_US * DAY_US
    first = math.ceil((night.start_us - midnight_us) / slot_us)
    last = (night.end_us - midnight_us) // slot_us
    return midnight_us + slot_us * np.arange(first, last, dtype=np.int64)


def written_times(at_us: IntArray) -> list[str]:
    """Return instants as the layout writes them, with as few decimals as they all need.

    Examples
    --------
    >>> written_times(np.array([0, 1_500_000]))
    ['1970-01-01T00:00:00.000Z', '1970-01-01T00:00:01.500Z']
    """
    instants = np.asarray(at_us, dtype=np.int64).view("datetime64[us]")
    if not np.any(at_us % US_PER_S):
        instants = instants.astype("datetime64[s]")
    elif not np.any(at_us % US_PER_MS):
        instants = instants.astype("datetime64[ms]")
    return [f"{text}Z" for text in np.datetime_as_string(instants).tolist()]


def written_time(at_us: int) -> str:
    """Return one instant in RFC 3339, with decimals only where it needs them.

    Examples
    --------
    >>> written_time(0)
    '1970-01-01T00:00:00Z'
    """
    at = datetime.fromtimestamp(at_us // US_PER_S, UTC) + timedelta(microseconds=at_us % US_PER_S)
    return at.replace(tzinfo=None).isoformat() + "Z"
