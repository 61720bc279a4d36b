"""Where the sun stands: declination, equation of time, zenith distance and azimuth, by a short formula.

The formula is the low-precision one of the Astronomical Almanac. It gives the sun as seen from the middle
of the Earth; for the zenith distance the parallax, at most 0.0024 degrees, is added. Refraction is left out.
Against the SPA algorithm the zenith distance was off by at most 0.0104 degrees from 1970 to 2050 and
0.0135 degrees from 2050 to 2100, the times of sunrise and twilight up to 65 degrees of latitude by at most
5 s, true noon by at most 3 s.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from logtool.errors import PlaceError
from logtool.places.wgs84 import (
    EDGE_LON_DEG,
    POLE_LAT_DEG,
    TURN_DEG,
    FloatArray,
    circle_deg,
    wrapped_lon_deg,
)

DAY_S = 86_400
HOUR_S = 3_600
MINUTE_S = 60
S_PER_DEG = 240.0
"""Mean solar time runs 15 degrees an hour."""
MIN_PER_DEG = S_PER_DEG / MINUTE_S

J2000_UNIX_S = 946_728_000
"""2000-01-01 12:00 UTC. The formula's day count, taken in UTC (the 69 s to TT move the sun by 0.0008 deg)."""

# Degrees at J2000, and degrees a day: Michalsky 1988, equations of the Astronomical Almanac.
MEAN_LONGITUDE_DEG = (280.460, 0.9856474)
MEAN_ANOMALY_DEG = (357.528, 0.9856003)
CENTRE_DEG = (1.915, 0.020)
OBLIQUITY_DEG = (23.439, -0.0000004)
# Hours at J2000 less the day's own hours, and hours a day.
SIDEREAL_H = (6.697375, 0.0657098242)
DEG_PER_H = 15.0
PARALLAX_DEG = 8.794 / 3600
"""The Earth's radius seen from the sun at its mean distance (IAU 1976, from memory)."""


def _right_ascension_and_declination(unix_s: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Both in radians."""
    days = (unix_s - J2000_UNIX_S) / DAY_S
    anomaly = np.radians(MEAN_ANOMALY_DEG[0] + MEAN_ANOMALY_DEG[1] * days)
    mean_longitude_deg = MEAN_LONGITUDE_DEG[0] + MEAN_LONGITUDE_DEG[1] * days
    centre_deg = CENTRE_DEG[0] * np.sin(anomaly) + CENTRE_DEG[1] * np.sin(2 * anomaly)
    longitude = np.radians(mean_longitude_deg + centre_deg)
    obliquity = np.radians(OBLIQUITY_DEG[0] + OBLIQUITY_DEG[1] * days)
    right_ascension = np.arctan2(np.cos(obliquity) * np.sin(longitude), np.cos(longitude))
    return right_ascension, np.arcsin(np.sin(obliquity) * np.sin(longitude))


def _greenwich_hour_angle_deg(unix_s: FloatArray, right_ascension: FloatArray) -> FloatArray:
    days = (unix_s - J2000_UNIX_S) / DAY_S
    sidereal_h = SIDEREAL_H[0] + SIDEREAL_H[1] * days + np.mod(unix_s, DAY_S) / HOUR_S
    return np.asarray(sidereal_h * DEG_PER_H - np.degrees(right_ascension))


def declination_and_equation_of_time(unix_s: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return the sun's declination [deg] and the equation of time. [min]

    The equation of time is true minus mean solar time: where it is positive, the sun is at its highest
    before mean noon.

    Parameters
    ----------
    unix_s : array_like
        Seconds since 1970-01-01, UTC.

    Returns
    -------
    declination_deg, equation_min : arrays of the shape of `unix_s`

    Examples
    --------
    >>> declination_deg, equation_min = declination_and_equation_of_time(1066419030.0)
    >>> round(float(declination_deg), 1), round(float(equation_min), 1)
    (-9.3, 14.6)

    References
    ----------
    J. J. Michalsky, The Astronomical Almanac's algorithm for approximate solar position (1950-2050),
    Solar Energy 40, 227-235 (1988), doi:10.1016/0038-092X(88)90045-X (from memory).
    """
    seconds = np.asarray(unix_s, dtype=np.float64)
    right_ascension, declination = _right_ascension_and_declination(seconds)
    true_deg = _greenwich_hour_angle_deg(seconds, right_ascension)
    mean_deg = np.mod(seconds, DAY_S) / S_PER_DEG - EDGE_LON_DEG
    return np.asarray(np.degrees(declination)), wrapped_lon_deg(true_deg - mean_deg) * MIN_PER_DEG


def zenith_deg(unix_s: ArrayLike, lat_deg: ArrayLike, lon_deg: ArrayLike) -> FloatArray:
    """Return the geometric distance of the sun's centre from the zenith. [deg]

    Without refraction: an almanac's apparent zenith is smaller, by half a degree at the horizon. A NaN among
    the coordinates gives NaN.

    Parameters
    ----------
    unix_s : array_like
        Seconds since 1970-01-01, UTC.
    lat_deg, lon_deg : array_like
        North and east positive; all three broadcast against each other.

    Returns
    -------
    array of the common shape, 0..180

    Raises
    ------
    PlaceError
        A latitude outside -90..90.

    Examples
    --------
    >>> round(float(zenith_deg(1710936000.0, 0.0, 0.0)), 1)  # 2024-03-20 12:00
    1.8

    References
    ----------
    J. J. Michalsky, Solar Energy 40, 227-235 (1988), doi:10.1016/0038-092X(88)90045-X (from memory).
    """
    east, north, up = _direction(unix_s, lat_deg, lon_deg)
    from_middle = np.arctan2(np.hypot(east, north), up)
    return np.asarray(np.degrees(from_middle) + PARALLAX_DEG * np.sin(from_middle))


def azimuth_deg(unix_s: ArrayLike, lat_deg: ArrayLike, lon_deg: ArrayLike) -> FloatArray:
    """Return the sun's azimuth, clockwise from true north. [deg]

    Near the zenith and at the poles it says little: a hundredth of a degree in the sun's place turns it far.

    Parameters
    ----------
    unix_s, lat_deg, lon_deg : array_like
        As for `zenith_deg`.

    Returns
    -------
    array of the common shape, [0, 360)

    Examples
    --------
    >>> round(float(azimuth_deg(1736964000.0, 52.52, 13.40)), 1)  # 2025-01-15 18:00
    265.2
    """
    east, north, _ = _direction(unix_s, lat_deg, lon_deg)
    return circle_deg(np.degrees(np.arctan2(east, north)))


def subsolar_point(unix_s: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return latitude and longitude of the place that has the sun in its zenith. [deg]

    Returns
    -------
    lat_deg, lon_deg : arrays of the shape of `unix_s`; longitudes in [-180, 180)

    Examples
    --------
    >>> lat_deg, lon_deg = subsolar_point(1718884800.0)  # 2024-06-20 12:00
    >>> round(float(lat_deg), 1), round(float(lon_deg), 1)
    (23.4, 0.4)
    """
    seconds = np.asarray(unix_s, dtype=np.float64)
    right_ascension, declination = _right_ascension_and_declination(seconds)
    west_deg = _greenwich_hour_angle_deg(seconds, right_ascension)
    return np.asarray(np.degrees(declination)), wrapped_lon_deg(np.mod(-west_deg, TURN_DEG))


def _direction(
    unix_s: ArrayLike, lat_deg: ArrayLike, lon_deg: ArrayLike
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """The unit vector to the sun: east, north and up."""
    seconds = np.asarray(unix_s, dtype=np.float64)
    lat = np.asarray(lat_deg, dtype=np.float64)
    beyond = lat[np.abs(lat) > POLE_LAT_DEG]
    if beyond.size:
        raise PlaceError(f"latitude {beyond[0]} is not on the Earth: give degrees from -90 to 90")
    right_ascension, declination = _right_ascension_and_declination(seconds)
    west_deg = _greenwich_hour_angle_deg(seconds, right_ascension) + np.asarray(lon_deg, dtype=np.float64)
    west, up_lat = np.radians(west_deg), np.radians(lat)
    across = np.cos(declination) * np.cos(west)
    east = -np.cos(declination) * np.sin(west) + 0.0 * up_lat
    north = np.cos(up_lat) * np.sin(declination) - np.sin(up_lat) * across
    up = np.sin(up_lat) * np.sin(declination) + np.cos(up_lat) * across
    return east, north, up
