"""Cutting lines where a map ends: at the 180th meridian and at the poles."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from logtool.errors import PlaceError
from logtool.places.wgs84 import EDGE_LON_DEG, POLE_LAT_DEG, TURN_DEG, FloatArray

AT_POLE_DEG = 1e-9
"""So near to 90, or to opposite meridians, is taken as over the pole (0.1 mm)."""

Piece = tuple[FloatArray, FloatArray]


def split_at_antimeridian(lat: ArrayLike, lon: ArrayLike) -> list[Piece]:
    """Return the pieces of a line that can each be drawn on a map from 180 W to 180 E. [deg]

    Between neighbouring points the line takes the shorter way round. Where that passes the 180th meridian
    the line is cut there, with the latitude interpolated, and both pieces get the point of the cut, at 180
    and at -180. Where the line passes exactly over a pole it is cut too: one piece goes up to the map's edge,
    the next comes down from it on the opposite meridian. A ring round a pole comes back as a line from edge
    to edge. The points must lie close enough for straight lines on the map, as those of `line_points` do.

    Parameters
    ----------
    lat, lon : array_like of shape (n,)
        Degrees, longitudes in -180..180.

    Returns
    -------
    list of (lat_deg, lon_deg)
        Pieces in the order of the line; longitudes in [-180, 180].

    Raises
    ------
    PlaceError
        Latitudes and longitudes that differ in number.

    Examples
    --------
    >>> for lat_deg, lon_deg in split_at_antimeridian([45.0, 45.0], [170.0, -170.0]):
    ...     print(lat_deg.tolist(), lon_deg.tolist())
    [45.0, 45.0] [170.0, 180.0]
    [45.0, 45.0] [-180.0, -170.0]

    References
    ----------
    RFC 7946, The GeoJSON Format, 3.1.9 Antimeridian Cutting.
    """
    lat_deg, lon_deg = np.asarray(lat, dtype=np.float64), np.asarray(lon, dtype=np.float64)
    if lat_deg.shape != lon_deg.shape or lat_deg.ndim != 1:
        raise PlaceError(
            f"a line needs as many latitudes as longitudes, not {lat_deg.shape}, {lon_deg.shape}"
        )
    pieces: list[Piece] = []
    for part_lat, part_lon in _split_at_poles(lat_deg, lon_deg):
        pieces.extend(_split_at_edges(part_lat, part_lon))
    return pieces


def _split_at_poles(lat: FloatArray, lon: FloatArray) -> list[Piece]:
    """Parts that touch a pole only with an end, and there on the meridian that they come along."""
    parts: list[list[tuple[float, float]]] = [[]]
    before: tuple[float, float] | None = None
    for here in zip(lat.tolist(), lon.tolist(), strict=True):
        if before is not None:
            pole = _pole_between(before, here)
            if _at_pole(here):
                here = (here[0], before[1])
            elif _at_pole(before):
                parts.append([(before[0], here[1])])
            elif pole is not None:
                parts[-1].append((pole, before[1]))
                parts.append([(pole, here[1])])
        parts[-1].append(here)
        before = here
    arrays = [np.array(part) for part in parts if len(part) > 1]
    return [(part[:, 0], part[:, 1]) for part in arrays]


def _at_pole(point: tuple[float, float]) -> bool:
    return abs(point[0]) >= POLE_LAT_DEG - AT_POLE_DEG


def _pole_between(a: tuple[float, float], b: tuple[float, float]) -> float | None:
    """The latitude of the pole that the short way from a to b leads over, if it leads over one."""
    turned = abs(a[1] - b[1]) % TURN_DEG
    if abs(turned - EDGE_LON_DEG) > AT_POLE_DEG:
        return None
    return POLE_LAT_DEG if a[0] + b[0] >= 0 else -POLE_LAT_DEG


def _split_at_edges(lat: FloatArray, lon: FloatArray) -> list[Piece]:
    """Pieces of a line on which the longitude runs on, cut at every odd multiple of 180."""
    unrolled = np.unwrap(lon, period=TURN_DEG)
    points = [(float(lat[0]), float(unrolled[0]))]
    sheets: list[int | None] = []
    for lat_b, lon_b in zip(lat[1:].tolist(), unrolled[1:].tolist(), strict=True):
        lat_a, lon_a = points[-1]
        sheet_a, sheet_b = _sheet(min(lon_a, lon_b)), _sheet(max(lon_a, lon_b))
        edge = TURN_DEG * sheet_b - EDGE_LON_DEG
        if sheet_b > sheet_a and min(lon_a, lon_b) < edge < max(lon_a, lon_b):
            share = (edge - lon_a) / (lon_b - lon_a)
            points.append((lat_a + share * (lat_b - lat_a), edge))
            sheets.append(_sheet((lon_a + edge) / 2))
            sheets.append(_sheet((edge + lon_b) / 2))
        else:
            along_edge = lon_a == lon_b and sheets
            sheets.append(sheets[-1] if along_edge else _sheet((lon_a + lon_b) / 2))
        points.append((lat_b, lon_b))
    pieces: list[Piece] = []
    start = 0
    for end in range(1, len(points)):
        if end == len(sheets) or sheets[end] != sheets[start]:
            piece = np.array(points[start : end + 1])
            pieces.append((piece[:, 0], piece[:, 1] - TURN_DEG * (sheets[start] or 0)))
            start = end
    return pieces


def _sheet(lon: float) -> int:
    """Which turn round the Earth an unrolled longitude is on: 0 for -180..180."""
    return int(np.floor((lon + EDGE_LON_DEG) / TURN_DEG))
