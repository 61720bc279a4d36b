"""The senders: call signs that nobody has, places, powers and habits."""

from __future__ import annotations

from dataclasses import dataclass
from string import ascii_uppercase

import numpy as np

from logtool.places.locator import centre, centres, locator_at, written
from logtool.places.wgs84 import M_PER_KM, TURN_DEG, geod, inverse, wrapped_lon_deg
from logtool.simulate.laws import BoolArray, FloatArray
from logtool.simulate.scenario import Scenario
from logtool.simulate.streams import stream

USUAL_DBM = 37.0
PLACE_CHARACTERS = 6
FALSE_CHARACTERS = 4
_LETTERS = len(ascii_uppercase)
CALLS = 10 * _LETTERS**3


@dataclass(frozen=True)
class Cast:
    """All senders, an entry each; `distance_km` and `bearing_deg` have a row a receiver."""

    call: tuple[str, ...]
    locator: tuple[str, ...]
    sent_locator: tuple[str, ...]
    power_dbm: FloatArray
    activity: FloatArray
    with_locator: BoolArray
    with_power: BoolArray
    audio_hz: FloatArray
    late_s: FloatArray
    level_db: FloatArray
    distance_km: FloatArray
    bearing_deg: FloatArray


def call_sign(number: int) -> str:
    """Return the call sign of a number from 0 to 175 759: Q, a digit and three letters; no series begins with Q.

    Examples
    --------
    >>> call_sign(0), call_sign(175_759)
    ('Q0AAA', 'Q9ZZZ')
    """
    rest, third = divmod(number, _LETTERS)
    rest, second = divmod(rest, _LETTERS)
    digit, first = divmod(rest, _LETTERS)
    return f"Q{digit}{ascii_uppercase[first]}{ascii_uppercase[second]}{ascii_uppercase[third]}"


def call_numbers(seed: int) -> list[int]:
    """Return all call signs' numbers in a random order: senders take them from the front, false ones from the back."""
    numbers: list[int] = stream(seed, "calls").permutation(CALLS).tolist()
    return numbers


def activity_of(number: int, tail: float, rng: np.random.Generator) -> FloatArray:
    """Return how active each of some senders is, 1 for the median: Pareto with this exponent; 0 for all alike."""
    shares = rng.random(number)
    return np.ones(number) if tail == 0 else (2.0 * (1.0 - shares)) ** (-1.0 / tail)


def invent(scenario: Scenario, seed: int) -> Cast:
    """Return the senders of a scenario."""
    given, path = scenario.senders, scenario.path
    habits, n = stream(seed, "habits"), given.number
    activity = activity_of(n, given.activity_tail, habits)
    with_locator = habits.random(n) < given.with_locator
    with_power = habits.random(n) < given.with_power
    audio_hz = given.audio_low_hz + (given.audio_high_hz - given.audio_low_hz) * habits.random(n)
    late_s = given.late_sd_s * habits.standard_normal(n)
    locators = _places(scenario, seed)
    lat, lon = centres(locators)
    sites = [centre(receiver.locator) for receiver in scenario.receiver]
    ways = [inverse(*site, lat, lon) for site in sites]
    power_dbm = np.asarray(given.power_dbm)[stream(seed, "powers").integers(len(given.power_dbm), size=n)]
    spread_db = path.sender_sd_db * stream(seed, "sender levels").standard_normal(n)
    return Cast(
        call=tuple(call_sign(number) for number in call_numbers(seed)[:n]),
        locator=locators,
        sent_locator=tuple(locator[: given.locator_characters] for locator in locators),
        power_dbm=power_dbm,
        activity=activity,
        with_locator=with_locator,
        with_power=with_power,
        audio_hz=audio_hz,
        late_s=late_s,
        level_db=path.at_1000_km_db + power_dbm - USUAL_DBM + spread_db,
        distance_km=np.array([way.distance_km for way in ways]),
        bearing_deg=np.array([np.nan_to_num(way.azimuth_a_deg) for way in ways]),
    )


def _places(scenario: Scenario, seed: int) -> tuple[str, ...]:
    given = scenario.senders
    if given.locators:
        return tuple(written(given.locators[i % len(given.locators)]) for i in range(given.number))
    dice = stream(seed, "places")
    shares = dice.random((2, given.number))
    turn_deg = given.bearing_to_deg - given.bearing_from_deg
    bearing_deg = (given.bearing_from_deg + turn_deg * shares[0]) % TURN_DEG
    power = 2.0 if given.spread == "area" else 1.0
    low, high = given.near_km**power, given.far_km**power
    length_km = (low + (high - low) * shares[1]) ** (1.0 / power)
    site_lat, site_lon = centre(scenario.receiver[0].locator)
    starts = np.full(given.number, site_lon), np.full(given.number, site_lat)
    lon, lat, _ = geod().fwd(*starts, bearing_deg, length_km * M_PER_KM)
    return tuple(
        locator_at(round(float(y), 6), round(float(x), 6), PLACE_CHARACTERS)
        for y, x in zip(lat, wrapped_lon_deg(lon), strict=True)
    )


def random_locators(number: int, rng: np.random.Generator) -> list[str]:
    """Return locators of four characters, anywhere on the Earth."""
    shares = rng.random((2, number)).tolist()
    return [
        locator_at(round(180.0 * a - 90.0, 6), round(TURN_DEG * b - 180.0, 6), FALSE_CHARACTERS)
        for a, b in zip(*shares, strict=True)
    ]
