"""Local mean solar dates and true solar noon.

A local mean solar date is the date of UTC + longitude / 15 h. True noon wanders up to 16.5 minutes round mean
noon through the year, so it always falls on the date whose mean noon is near, and each date has exactly one.
"""

from __future__ import annotations

from datetime import date

import numpy as np
from numpy.typing import ArrayLike, NDArray

from logtool.places.almanac import DAY_S, MINUTE_S, S_PER_DEG, declination_and_equation_of_time
from logtool.places.wgs84 import FloatArray, check_degrees

DayArray = NDArray[np.int64]

EPOCH_ORDINAL = date(1970, 1, 1).toordinal()
NOON_S = DAY_S // 2

NOON_ROUNDS = 4
"""Each round brings noon nearer by a factor of 2500 (the equation of time moves 30 s a day at most)."""


def day_number(day: date) -> int:
    """Return the days from 1970-01-01 to a date.

    Examples
    --------
    >>> day_number(date(2000, 1, 1))
    10957
    """
    return day.toordinal() - EPOCH_ORDINAL


def local_mean_midnight(days: ArrayLike, lon_deg: ArrayLike) -> FloatArray:
    """Return the instants at which local mean solar dates begin, in unix seconds.

    Examples
    --------
    >>> float(local_mean_midnight(1, 15.0))
    82800.0
    """
    return np.asarray(days, dtype=np.float64) * DAY_S - np.asarray(lon_deg, dtype=np.float64) * S_PER_DEG


def local_mean_days(unix_s: ArrayLike, lon_deg: ArrayLike) -> DayArray:
    """Return the local mean solar dates of instants, as days since 1970-01-01.

    180 and -180 degrees are one meridian, but the dates there differ by one: the longitude is taken as given.

    Raises
    ------
    PlaceError
        A longitude outside -180..180, or NaN.

    Examples
    --------
    >>> local_mean_days([0.0, 0.0], [180.0, -180.0]).tolist()
    [0, -1]
    """
    check_degrees(0.0, lon_deg)
    shifted_s = np.asarray(unix_s, dtype=np.float64) + np.asarray(lon_deg, dtype=np.float64) * S_PER_DEG
    return np.floor(shifted_s / DAY_S).astype(np.int64)


def solar_noons(days: ArrayLike, lon_deg: ArrayLike) -> FloatArray:
    """Return the instants of true solar noon of local mean solar dates, in unix seconds.

    Parameters
    ----------
    days : array_like of int
        Days since 1970-01-01.
    lon_deg : array_like
        -180..180; broadcast against `days`.

    Returns
    -------
    array of the common shape

    Raises
    ------
    PlaceError
        A longitude outside -180..180, or NaN.

    Examples
    --------
    >>> round(float(solar_noons(0, 0.0)) / 60) - 12 * 60  # 1970-01-01: minutes after mean noon
    4
    """
    check_degrees(0.0, lon_deg)
    mean_noon_s = local_mean_midnight(days, lon_deg) + NOON_S
    noon_s = mean_noon_s
    for _ in range(NOON_ROUNDS):
        noon_s = mean_noon_s - MINUTE_S * declination_and_equation_of_time(noon_s)[1]
    return noon_s


def solar_noon_on(day: date, lon_deg: float) -> float:
    """Return the instant of true solar noon of one local mean solar date, in unix seconds.

    The instant's UTC date may be the one before or after.

    Examples
    --------
    >>> from datetime import datetime, UTC
    >>> datetime.fromtimestamp(solar_noon_on(date(2003, 10, 17), -105.1786), UTC).strftime("%d %H:%M")
    '17 18:46'
    """
    return float(solar_noons(day_number(day), lon_deg))


def solar_noon_before(unix_s: ArrayLike, lon_deg: ArrayLike) -> FloatArray:
    """Return the latest true solar noon at or before each instant, in unix seconds.

    An instant that is a noon of `solar_noons` gives itself.

    Parameters
    ----------
    unix_s, lon_deg : array_like
        Seconds since 1970-01-01, UTC, and -180..180; broadcast against each other.

    Returns
    -------
    array of the common shape

    Raises
    ------
    PlaceError
        A longitude outside -180..180, or NaN.

    Examples
    --------
    >>> from datetime import datetime, UTC
    >>> noon_s = solar_noon_before(datetime(2003, 10, 17, 12, tzinfo=UTC).timestamp(), -105.1786)
    >>> datetime.fromtimestamp(float(noon_s), UTC).strftime("%d %H:%M")
    '16 18:46'
    """
    return solar_noons(days_of_latest_noon(unix_s, lon_deg), lon_deg)


def days_of_latest_noon(unix_s: ArrayLike, lon_deg: ArrayLike) -> DayArray:
    """Return the local mean solar dates of the latest true noons, as days since 1970-01-01.

    Examples
    --------
    >>> days_of_latest_noon([10 * 86400.0, 10.9 * 86400.0], 0.0).tolist()
    [9, 10]
    """
    days = local_mean_days(unix_s, lon_deg)
    return days - (solar_noons(days, lon_deg) > np.asarray(unix_s, dtype=np.float64))
