"""Nights: from one true solar noon at the receiver to the next, named by the date at the first noon.

The date is the local mean solar date, UTC + longitude / 15 h. Without a place, noons and dates are UTC's.
"""

from __future__ import annotations

from datetime import date

import numpy as np
from numpy.typing import ArrayLike

from logtool.places.almanac import DAY_S, HOUR_S, MINUTE_S, S_PER_DEG
from logtool.places.noon import EPOCH_ORDINAL, NOON_S, DayArray, days_of_latest_noon, solar_noons
from logtool.places.wgs84 import FloatArray, check_degrees

HALF_PAST_S = HOUR_S // 2


def night_start(unix_s: ArrayLike, lon_deg: float | None) -> FloatArray:
    """Return the noons at which the nights that hold the instants begin, in unix seconds.

    Examples
    --------
    >>> float(night_start(86400.0, None))
    43200.0
    """
    return _noons(_nights(unix_s, lon_deg), lon_deg)


def night_of_hours(hour_unix_s: ArrayLike, lon_deg: float | None) -> DayArray:
    """Return the nights that hours belong to, as days from 1970-01-01 to the night's name.

    An hour belongs to the night that holds its half past, though a few of its minutes may lie in another.

    Parameters
    ----------
    hour_unix_s : array_like
        The hours' beginnings, seconds since 1970-01-01, UTC.
    lon_deg : float or None
        The receiver's longitude, -180..180; None for nights from UTC noon.

    Returns
    -------
    array of int64, of the shape of `hour_unix_s`

    Raises
    ------
    PlaceError
        A longitude outside -180..180, or NaN.

    Examples
    --------
    >>> night_of_hours([11 * 3600, 12 * 3600], None).tolist()
    [-1, 0]
    """
    return _nights(np.asarray(hour_unix_s, dtype=np.float64) + HALF_PAST_S, lon_deg)


def night_bounds(day: int, lon_deg: float | None) -> tuple[float, float]:
    """Return the two noons between which a night lies, in unix seconds: it holds the first, not the second.

    True noons are up to 30 s more or less than 24 h apart; a night's end is the next one's beginning exactly.

    Examples
    --------
    >>> night_bounds(0, None)
    (43200.0, 129600.0)
    """
    noons = _noons(np.array([day, day + 1]), lon_deg)
    return float(noons[0]), float(noons[1])


def night_name(day: int) -> str:
    """Return a night's name: the local mean solar date at its first noon.

    Examples
    --------
    >>> night_name(20818)
    '2026-12-31'
    """
    return date.fromordinal(EPOCH_ORDINAL + int(day)).isoformat()


def local_mean_time(unix_s: float, lon_deg: float) -> str:
    """Return the local mean solar time of an instant, UTC + longitude / 15 h, as hours and minutes.

    No zone, no summer time; the minute is the one begun.

    Examples
    --------
    >>> local_mean_time(0.0, -22.5)
    '22:30'
    """
    check_degrees(0.0, lon_deg)
    minutes = int((unix_s + lon_deg * S_PER_DEG) % DAY_S // MINUTE_S)
    return f"{minutes // MINUTE_S:02d}:{minutes % MINUTE_S:02d}"


def _nights(unix_s: ArrayLike, lon_deg: float | None) -> DayArray:
    if lon_deg is None:
        return np.floor((np.asarray(unix_s, dtype=np.float64) - NOON_S) / DAY_S).astype(np.int64)
    return days_of_latest_noon(unix_s, lon_deg)


def _noons(days: DayArray, lon_deg: float | None) -> FloatArray:
    return np.asarray(days * float(DAY_S) + NOON_S) if lon_deg is None else solar_noons(days, lon_deg)
