"""The WGS84 ellipsoid: distances and azimuths between points, and the check that numbers are a place."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

from logtool.errors import PlaceError

if TYPE_CHECKING:
    from pyproj import Geod

FloatArray = NDArray[np.float64]

M_PER_KM = 1000.0
TURN_DEG = 360.0
POLE_LAT_DEG = 90.0
EDGE_LON_DEG = 180.0


@lru_cache(maxsize=1)
def geod() -> Geod:
    """Return the one WGS84 geodesic engine of the process, made at the first call."""
    from pyproj import Geod

    return Geod(ellps="WGS84")


@dataclass(frozen=True)
class Inverse:
    """What lies between pairs of points: distance in km, and the azimuth at each end in degrees."""

    distance_km: FloatArray
    azimuth_a_deg: FloatArray
    azimuth_b_deg: FloatArray


def check_degrees(lat_deg: ArrayLike, lon_deg: ArrayLike) -> None:
    """Raise unless every latitude is in -90..90 and every longitude in -180..180; NaN is refused too.

    Raises
    ------
    PlaceError
        Names the first value that is out of bounds.

    Examples
    --------
    >>> check_degrees(91.0, 13.0)
    Traceback (most recent call last):
    ...
    logtool.errors.PlaceError: latitude 91.0 is not on the Earth: give degrees from -90 to 90
    """
    for name, values, bound in (("latitude", lat_deg, POLE_LAT_DEG), ("longitude", lon_deg, EDGE_LON_DEG)):
        flat = np.asarray(values, dtype=np.float64).ravel()
        bad = flat[~(np.abs(flat) <= bound)]
        if bad.size:
            message = f"{name} {bad[0]} is not on the Earth: give degrees from -{bound:.0f} to {bound:.0f}"
            raise PlaceError(message)


def wrapped_lon_deg(lon_deg: ArrayLike) -> FloatArray:
    """Return longitudes brought into [-180, 180). [deg]

    Examples
    --------
    >>> wrapped_lon_deg([181.0, 180.0, -180.0]).tolist()
    [-179.0, -180.0, -180.0]
    """
    lon = np.asarray(lon_deg, dtype=np.float64)
    return circle_deg(lon + EDGE_LON_DEG) - EDGE_LON_DEG


def circle_deg(angle_deg: ArrayLike) -> FloatArray:
    """Return angles brought into [0, 360). [deg]

    A plain remainder turns -1e-15 into 360.0; here it becomes 0.

    Examples
    --------
    >>> circle_deg([-90.0, -1e-15, 360.0]).tolist()
    [270.0, 0.0, 0.0]
    """
    turned = np.mod(np.asarray(angle_deg, dtype=np.float64), TURN_DEG)
    return np.where(turned == TURN_DEG, 0.0, turned)


def inverse(lat_a: ArrayLike, lon_a: ArrayLike, lat_b: ArrayLike, lon_b: ArrayLike) -> Inverse:
    """Return WGS84 distances between points a and b [km] and the azimuths at both ends. [deg]

    `azimuth_b_deg` looks back from b towards a; it is not the azimuth at a turned by 180 degrees. Points that
    coincide have no azimuth: theirs is NaN. At a pole the azimuth counts from the meridian that the
    longitude given there names. A NaN among the coordinates gives NaN.

    Parameters
    ----------
    lat_a, lon_a, lat_b, lon_b : array_like
        Degrees, north and east positive; broadcast against each other.

    Returns
    -------
    Inverse
        Three arrays of the common shape; azimuths in [0, 360), clockwise from true north.

    Raises
    ------
    PlaceError
        A latitude outside -90..90 or a longitude outside -180..180.

    Examples
    --------
    >>> quarter = inverse(90.0, 0.0, 0.0, 0.0)
    >>> round(float(quarter.distance_km), 6)
    10001.965729

    References
    ----------
    C. F. F. Karney, Algorithms for geodesics, J. Geodesy 87, 43-55 (2013), doi:10.1007/s00190-012-0578-z,
    as carried by PROJ.
    """
    points = [np.asarray(values, dtype=np.float64) for values in (lat_a, lon_a, lat_b, lon_b)]
    shape = np.broadcast_shapes(*(values.shape for values in points))
    whole = np.stack([np.broadcast_to(values, shape).ravel() for values in points])
    known = ~np.isnan(whole).any(axis=0)
    start_lat, start_lon, end_lat, end_lon = np.where(known, whole, 0.0)
    check_degrees(start_lat, start_lon)
    check_degrees(end_lat, end_lon)
    forward, back, length_m = geod().inv(start_lon, start_lat, end_lon, end_lat)
    apart = known & (np.asarray(length_m) > 0)
    return Inverse(
        distance_km=np.where(known, np.asarray(length_m) / M_PER_KM, np.nan).reshape(shape),
        azimuth_a_deg=np.where(apart, circle_deg(forward), np.nan).reshape(shape),
        azimuth_b_deg=np.where(apart, circle_deg(back), np.nan).reshape(shape),
    )
