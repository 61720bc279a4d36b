"""Day, night and twilight: when the sun passes a zenith distance, and where day and night meet.

The sun's position comes from `almanac`, true noon from `noon`; both can be had here too.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from typing import overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from logtool.errors import PlaceError
from logtool.places.almanac import (
    DAY_S,
    azimuth_deg,
    declination_and_equation_of_time,
    subsolar_point,
    zenith_deg,
)
from logtool.places.noon import day_number, local_mean_midnight, solar_noon_before, solar_noon_on, solar_noons
from logtool.places.wgs84 import EDGE_LON_DEG, TURN_DEG, FloatArray, check_degrees, wrapped_lon_deg

__all__ = [
    "ASTRONOMICAL_ZENITH_DEG",
    "CIVIL_ZENITH_DEG",
    "NAUTICAL_ZENITH_DEG",
    "SUNRISE_ZENITH_DEG",
    "Twilights",
    "azimuth_deg",
    "crossings",
    "day_or_night",
    "declination_and_equation_of_time",
    "solar_noon_before",
    "solar_noon_on",
    "solar_noons",
    "subsolar_point",
    "terminator",
    "twilights",
    "zenith_deg",
]

SUNRISE_ZENITH_DEG = 90 + 50 / 60
"""The upper limb on the horizon: 34' of refraction and 16' of semidiameter, as almanacs take it."""
CIVIL_ZENITH_DEG = 96.0
NAUTICAL_ZENITH_DEG = 102.0
ASTRONOMICAL_ZENITH_DEG = 108.0

_zenith = zenith_deg  # `crossings` has an argument of that name
_LIMITS_DEG = (SUNRISE_ZENITH_DEG, CIVIL_ZENITH_DEG, NAUTICAL_ZENITH_DEG, ASTRONOMICAL_ZENITH_DEG)
_NAMES = np.array(["day", "civil twilight", "nautical twilight", "astronomical twilight", "night"])

HALF_DAY_S = DAY_S / 2
SEARCH_STEP_S = 600
FINE_STEP_S = 1

Crossings = tuple[float | None, float | None]


@dataclass(frozen=True)
class Twilights:
    """Sun times of one local mean solar date, in unix seconds; None where the sun does not pass so."""

    noon: float
    noon_zenith_deg: float
    sunrise: float | None
    sunset: float | None
    civil_dawn: float | None
    civil_dusk: float | None
    nautical_dawn: float | None
    nautical_dusk: float | None
    astronomical_dawn: float | None
    astronomical_dusk: float | None

    @property
    def daylight(self) -> str:
        """What the sun does that day: 'rises and sets', 'rises', 'sets', 'up all day' or 'down all day'."""
        if self.sunrise is None and self.sunset is None:
            return "up all day" if self.noon_zenith_deg < SUNRISE_ZENITH_DEG else "down all day"
        if self.sunset is None:
            return "rises"
        return "sets" if self.sunrise is None else "rises and sets"


def crossings(day: date, lat: float, lon: float, zenith_deg: float = SUNRISE_ZENITH_DEG) -> Crossings:
    """Return when the sun rises and sinks through a zenith distance on a local date. [unix seconds]

    The local mean solar date runs from one mean midnight to the next. Near polar day an evening may come soon
    after midnight, before that date's morning; of two mornings on a date the first is given, of two evenings
    the last.

    Parameters
    ----------
    day : datetime.date
        The date of UTC + longitude / 15 h.
    lat, lon : float
        Degrees, north and east positive.
    zenith_deg : float
        Geometric zenith distance of the sun's centre, refraction left out.

    Returns
    -------
    morning, evening : float or None
        None where the sun does not pass it so: polar day, polar night, or no full darkness.

    Raises
    ------
    PlaceError
        Degrees out of bounds.

    Examples
    --------
    >>> from datetime import datetime, UTC
    >>> rise_s, set_s = crossings(date(2025, 3, 20), 51.4779, 0.0)
    >>> [datetime.fromtimestamp(at_s, UTC).strftime("%H:%M") for at_s in (rise_s, set_s)]
    ['06:02', '18:13']
    >>> crossings(date(2025, 6, 21), 51.4779, 0.0, ASTRONOMICAL_ZENITH_DEG)
    (None, None)

    References
    ----------
    The zenith distances are those of the U.S. Naval Observatory's definitions of rise, set and twilight.
    """
    check_degrees(lat, lon)
    number = day_number(day)
    midnight_s = float(local_mean_midnight(number, lon))
    steps_s = midnight_s + np.arange(0, DAY_S + SEARCH_STEP_S, SEARCH_STEP_S, dtype=np.float64)
    turns_s = solar_noons(number, lon) + np.array([-HALF_DAY_S, 0.0, HALF_DAY_S])
    within = (turns_s >= midnight_s) & (turns_s <= midnight_s + DAY_S)
    at_s = np.sort(np.concatenate((steps_s, turns_s[within])))
    above = _zenith(at_s, lat, lon) < zenith_deg
    mornings = np.flatnonzero(~above[:-1] & above[1:])
    evenings = np.flatnonzero(above[:-1] & ~above[1:])
    morning = _passage(at_s[mornings[0]], lat, lon, zenith_deg) if mornings.size else None
    evening = _passage(at_s[evenings[-1]], lat, lon, zenith_deg) if evenings.size else None
    return morning, evening


def twilights(day: date, lat: float, lon: float) -> Twilights:
    """Return noon, sunrise, sunset and the three twilights of a local mean solar date. [unix seconds]

    Examples
    --------
    >>> twilights(date(2025, 6, 21), 70.0, 20.0).daylight
    'up all day'
    """
    noon_s = solar_noon_on(day, lon)
    passages = [at for limit_deg in _LIMITS_DEG for at in crossings(day, lat, lon, limit_deg)]
    return Twilights(noon_s, float(_zenith(noon_s, lat, lon)), *passages)


@overload
def day_or_night(zenith: float) -> str: ...
@overload
def day_or_night(zenith: FloatArray) -> NDArray[np.str_]: ...
def day_or_night(zenith: ArrayLike) -> str | NDArray[np.str_]:
    """Return the name for a geometric zenith distance in degrees: 'day', a twilight, or 'night'.

    Each begins at its limit: 96 degrees is nautical twilight already.

    Raises
    ------
    PlaceError
        A zenith distance that is NaN.

    Examples
    --------
    >>> day_or_night(95.9), day_or_night(96.0), day_or_night(110.0)
    ('civil twilight', 'nautical twilight', 'night')
    """
    degrees = np.asarray(zenith, dtype=np.float64)
    if np.isnan(degrees).any():
        raise PlaceError("the sun's zenith distance is not known: a place and a time are needed")
    names = _NAMES[np.searchsorted(_LIMITS_DEG, degrees, side="right")]
    return str(names) if degrees.ndim == 0 else names


def terminator(unix_s: float, points: int = 181) -> tuple[FloatArray, FloatArray]:
    """Return the line where the sun's geometric zenith distance is 90 degrees, from west to east. [deg]

    The line is a great circle, as seen from the Earth's middle: the parallax of 0.0024 degrees is left out.
    Sunrise and sunset, by the upper limb and with refraction, lie 0.83 degrees on the night's side of it.
    Night lies towards the pole whose latitude has not the sign of `subsolar_point`'s latitude.

    Parameters
    ----------
    unix_s : float
        Seconds since 1970-01-01, UTC.
    points : int
        Points of the line, evenly spread on the globe except the two at its ends.

    Returns
    -------
    lat_deg, lon_deg : arrays of shape (points,)
        Longitudes rise from -180 to 180.

    Raises
    ------
    PlaceError
        Fewer than 3 points.

    Examples
    --------
    >>> lat_deg, lon_deg = terminator(1718884800.0, points=5)  # 2024-06-20 12:00
    >>> float(lat_deg.max().round(1)), float(lon_deg[0]), float(lon_deg[-1])
    (66.6, -180.0, 180.0)
    """
    if points < 3:
        raise PlaceError(f"a line round the Earth needs 3 points or more, not {points}")
    sun_lat_deg, sun_lon_deg = subsolar_point(unix_s)
    sun_lat = np.radians(sun_lat_deg)
    around = np.radians(np.arange(points - 2) * (TURN_DEG / (points - 2)))
    east, up = np.sin(around), np.cos(sun_lat) * np.cos(around)
    lon_deg = wrapped_lon_deg(sun_lon_deg + np.degrees(np.arctan2(east, -np.sin(sun_lat) * np.cos(around))))
    order = np.argsort(lon_deg)
    from_sun = np.radians(EDGE_LON_DEG - sun_lon_deg)
    side = np.copysign(1.0, sun_lat)
    edge_lat_deg = np.degrees(
        np.arctan2(-side * np.cos(sun_lat) * np.cos(from_sun), side * np.sin(sun_lat)),
    )
    lat_deg = np.concatenate(([edge_lat_deg], np.degrees(np.arcsin(up))[order], [edge_lat_deg]))
    return lat_deg, np.concatenate(([-EDGE_LON_DEG], lon_deg[order], [EDGE_LON_DEG]))


def _passage(from_s: float, lat: float, lon: float, limit_deg: float) -> float:
    """The instant after `from_s`, within one search step, at which the sun passes the limit."""
    at_s = from_s + np.arange(0, SEARCH_STEP_S + FINE_STEP_S, FINE_STEP_S, dtype=np.float64)
    over_deg = _zenith(at_s, lat, lon) - limit_deg
    before = int(np.flatnonzero((over_deg[:-1] < 0) != (over_deg[1:] < 0))[0])
    share = over_deg[before] / (over_deg[before] - over_deg[before + 1])
    return float(at_s[before] + share * FINE_STEP_S)
