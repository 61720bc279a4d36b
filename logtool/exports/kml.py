"""Receivers, senders and paths as KML."""

from __future__ import annotations

from typing import IO, TYPE_CHECKING, Any
from xml.sax.saxutils import escape, quoteattr

from logtool.exports.places import COORDINATE_DECIMALS, Place, Position, places_of
from logtool.tables.choice import Choice

if TYPE_CHECKING:
    from logtool.records.reader import Logs

NAMESPACE = "http://www.opengis.net/kml/2.2"
_NAMED_BY = {
    "receivers": "receiver",
    "senders": "sender",
    "paths": "sender",
}  # the folders, and what names a place there


def write(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write receivers, senders and paths as the folders of a KML document. Returns notes.

    The same places and figures as in GeoJSON, the figures as `ExtendedData`.

    References
    ----------
    OGC 07-147r2, KML 2.2 (from memory): coordinates are longitude, latitude without a blank between.
    """
    places, notes = places_of(logs, choice)
    folders = [
        f"<Folder><name>{name}</name>\n"
        + "".join(_placemark(place, place.known[named_by]) for place in getattr(places, name))
        + "</Folder>\n"
        for name, named_by in _NAMED_BY.items()
    ]
    out.write(
        f'<?xml version="1.0" encoding="UTF-8"?>\n<kml xmlns="{NAMESPACE}">\n<Document><name>logtool</name>\n'
        f"{''.join(folders)}</Document>\n</kml>\n".encode()
    )
    return notes


def _placemark(place: Place, name: str) -> str:
    known = "".join(
        f"<Data name={quoteattr(key)}><value>{escape(_written(value))}</value></Data>"
        for key, value in place.known.items()
        if value is not None
    )
    return (
        f"<Placemark><name>{escape(name)}</name><ExtendedData>{known}</ExtendedData>"
        f"{_geometry(place)}</Placemark>\n"
    )


def _geometry(place: Place) -> str:
    drawn = [_drawn(line) for line in place.lines]
    return f"<MultiGeometry>{''.join(drawn)}</MultiGeometry>" if len(drawn) > 1 else "".join(drawn)


def _drawn(line: tuple[Position, ...]) -> str:
    coordinates = " ".join(
        f"{lon:.{COORDINATE_DECIMALS}f},{lat:.{COORDINATE_DECIMALS}f}" for lon, lat in line
    )
    if len(line) == 1:
        return f"<Point><coordinates>{coordinates}</coordinates></Point>"
    return f"<LineString><tessellate>1</tessellate><coordinates>{coordinates}</coordinates></LineString>"


def _written(value: Any) -> str:
    return str(value).lower() if isinstance(value, bool) else str(value)
