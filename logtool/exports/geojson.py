"""Receivers, senders and paths as GeoJSON."""

from __future__ import annotations

import json
from typing import IO, TYPE_CHECKING, Any

from logtool import __version__
from logtool.exports.places import Place, places_of
from logtool.tables.choice import Choice

if TYPE_CHECKING:
    from logtool.records.reader import Logs

_KINDS = {"receivers": "receiver", "senders": "sender", "paths": "path"}


def write(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write receivers and senders as points, paths as geodesics; a feature a line. Returns notes.

    The property `what` tells them apart. A path that passes the 180th meridian is cut there. A sender without
    a place is a feature without a geometry.

    References
    ----------
    RFC 7946, The GeoJSON Format: 3.1.1 position (longitude first), 3.1.9 antimeridian, 3.2 features without a
    geometry, 6.1 further members.
    """
    places, notes = places_of(logs, choice)
    features = [_feature(place, what) for name, what in _KINDS.items() for place in getattr(places, name)]
    out.write(f'{{"type":"FeatureCollection","logtool":{_json(__version__)},"features":[\n'.encode())
    out.write(",\n".join(features).encode())
    out.write(b"\n]}\n")
    return notes


def _feature(place: Place, what: str) -> str:
    return _json(
        {"type": "Feature", "properties": {"what": what, **place.known}, "geometry": geometry_of(place)}
    )


def geometry_of(place: Place) -> dict[str, Any] | None:
    """Return the geometry of a place as GeoJSON has it."""
    if not place.lines:
        return None
    if len(place.lines) > 1:
        return {"type": "MultiLineString", "coordinates": place.lines}
    (line,) = place.lines
    if len(line) == 1:
        return {"type": "Point", "coordinates": line[0]}
    return {"type": "LineString", "coordinates": line}


def _json(value: Any) -> str:
    return json.dumps(value, allow_nan=False, separators=(",", ":"))
