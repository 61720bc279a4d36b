"""Distances, bearings and lines on the WGS84 ellipsoid, between locators and between points."""

from __future__ import annotations

from math import ceil

import numpy as np
from numpy.typing import ArrayLike

from logtool.errors import PlaceError
from logtool.places.antimeridian import split_at_antimeridian
from logtool.places.locator import centre, uncertainty_km
from logtool.places.wgs84 import M_PER_KM, TURN_DEG, FloatArray, Inverse, check_degrees, geod, inverse

__all__ = [
    "Inverse",
    "bearing_deg",
    "circle_points",
    "distance_km",
    "inverse",
    "line_points",
    "midpoint",
    "split_at_antimeridian",
]

LINE_STEP_KM = 100.0
"""Our choice: on a map with straight meridians a chord of 100 km is within 0.2 km of its geodesic at 45 N."""

HALF_ROUND_KM = 20003.931
"""From pole to pole along a meridian; no two points are farther apart."""


def distance_km(locator_a: str, locator_b: str) -> float:
    """Return the WGS84 distance between the centres of two locators. [km]

    A locator names a box, not a point: a box of 4 characters at 52 N is about 175 km from corner to corner,
    so each end may be off by half of that. See `uncertainty_km`.

    Raises
    ------
    PlaceError
        A word that is no locator.

    Examples
    --------
    >>> round(distance_km("JO62qm", "FN31pr"), 3)
    6243.955

    References
    ----------
    C. F. F. Karney, Algorithms for geodesics, J. Geodesy 87, 43-55 (2013), doi:10.1007/s00190-012-0578-z.
    """
    return float(inverse(*centre(locator_a), *centre(locator_b)).distance_km)


def bearing_deg(locator_a: str, locator_b: str) -> float | None:
    """Return the bearing at a of the short path to b, clockwise from true north. [deg]

    None where the centres are nearer to each other than the cells are uncertain: no direction is known
    then. The bearing back, at b, is not this one turned by 180 degrees.

    Returns
    -------
    float in [0, 360), or None

    Examples
    --------
    >>> round(bearing_deg("JO62qm", "FN31pr"), 3)
    296.122
    >>> bearing_deg("JO62", "JO62qm") is None
    True
    """
    path = inverse(*centre(locator_a), *centre(locator_b))
    if path.distance_km < uncertainty_km(locator_a, locator_b):
        return None
    return float(path.azimuth_a_deg)


def midpoint(
    lat_a: ArrayLike, lon_a: ArrayLike, lat_b: ArrayLike, lon_b: ArrayLike
) -> tuple[FloatArray, FloatArray]:
    """Return latitude and longitude half way along the geodesics from a to b. [deg]

    The mean of the coordinates is not that point: from 60 N 0 E to 60 N 90 E the way leads over 68 N.

    Parameters
    ----------
    lat_a, lon_a, lat_b, lon_b : array_like
        Degrees; broadcast against each other.

    Returns
    -------
    lat_deg, lon_deg : arrays of the common shape; longitudes in [-180, 180]

    Examples
    --------
    >>> lat_deg, lon_deg = midpoint(0.0, 170.0, 0.0, -170.0)
    >>> float(lat_deg), abs(float(lon_deg))
    (0.0, 180.0)
    """
    path = inverse(lat_a, lon_a, lat_b, lon_b)
    start_lat, start_lon, length_km, azimuth = np.broadcast_arrays(
        lat_a, lon_a, path.distance_km, np.where(path.distance_km > 0, path.azimuth_a_deg, 0.0)
    )
    return _ahead(start_lat, start_lon, azimuth, length_km / 2)


def line_points(
    lat_a: float, lon_a: float, lat_b: float, lon_b: float, *, step_km: float = LINE_STEP_KM
) -> tuple[FloatArray, FloatArray]:
    """Return points along the geodesic from a to b, both ends among them. [deg]

    The points lie evenly, at most `step_km` apart. The longitudes jump where the line passes the
    180th meridian: see `split_at_antimeridian`.

    Returns
    -------
    lat_deg, lon_deg : arrays of shape (n,), n >= 2

    Raises
    ------
    PlaceError
        Degrees out of bounds, or a step that is not above 0.

    Examples
    --------
    >>> lat_deg, lon_deg = line_points(0.0, 0.0, 0.0, 4.0, step_km=120.0)
    >>> lon_deg.round(6).tolist()
    [0.0, 1.0, 2.0, 3.0, 4.0]
    """
    check_degrees([lat_a, lat_b], [lon_a, lon_b])
    if not step_km > 0:
        raise PlaceError(f"a line needs a step above 0 km, not {step_km}")
    path = inverse(lat_a, lon_a, lat_b, lon_b)
    length_km = float(path.distance_km)
    steps = max(1, ceil(length_km / step_km))
    along_km = np.linspace(0.0, length_km, steps + 1)
    azimuth = float(path.azimuth_a_deg) if length_km > 0 else 0.0
    lat_deg, lon_deg = _ahead(*np.broadcast_arrays(lat_a, lon_a, azimuth, along_km))
    lat_deg[[0, -1]] = lat_a, lat_b
    lon_deg[[0, -1]] = lon_a, lon_b
    return lat_deg, lon_deg


def circle_points(
    lat: float, lon: float, radius_km: float, points: int = 180
) -> tuple[FloatArray, FloatArray]:
    """Return the points at one WGS84 distance from a place, as a closed ring. [deg]

    On a map with straight meridians the ring is no ellipse; round a pole it runs from edge to edge.

    Parameters
    ----------
    lat, lon : float
        The middle, in degrees.
    radius_km : float
        Above 0, at most half way round the Earth.
    points : int
        Different points, evenly spread in azimuth, clockwise from north.

    Returns
    -------
    lat_deg, lon_deg : arrays of shape (points + 1,); the last point is the first again

    Raises
    ------
    PlaceError
        Degrees or radius out of bounds, or fewer than 3 points.

    Examples
    --------
    >>> lat_deg, lon_deg = circle_points(0.0, 0.0, 111.319491, points=4)
    >>> lon_deg.round(4).tolist()
    [0.0, 1.0, 0.0, -1.0, 0.0]
    """
    check_degrees(lat, lon)
    if not 0 < radius_km <= HALF_ROUND_KM:
        raise PlaceError(f"a circle needs a radius above 0 and up to {HALF_ROUND_KM} km, not {radius_km}")
    if points < 3:
        raise PlaceError(f"a circle needs 3 points or more, not {points}")
    azimuth = np.arange(points) * (TURN_DEG / points)
    lat_deg, lon_deg = _ahead(*np.broadcast_arrays(lat, lon, azimuth, radius_km))
    return np.append(lat_deg, lat_deg[0]), np.append(lon_deg, lon_deg[0])


def _ahead(
    lat_deg: FloatArray, lon_deg: FloatArray, azimuth_deg: FloatArray, length_km: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Where one comes out after a way along geodesics; all four of one shape."""
    shape = np.shape(lat_deg)
    ways = (lon_deg, lat_deg, azimuth_deg, np.asarray(length_km) * M_PER_KM)
    lon, lat, azimuth, length_m = (np.array(values, dtype=np.float64).ravel() for values in ways)
    lon_out, lat_out, _ = geod().fwd(lon, lat, azimuth, length_m)
    return np.asarray(lat_out).reshape(shape), np.asarray(lon_out).reshape(shape)
