"""What a map of another program is made of: receivers, senders and the paths between them."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING, Any, NamedTuple

from numpy.typing import ArrayLike

from logtool.places.geodesic import line_points, split_at_antimeridian
from logtool.places.locator import centre
from logtool.tables.choice import Choice
from logtool.tables.senders import KEYS, senders_table

if TYPE_CHECKING:
    from logtool.records.reader import Logs

COORDINATE_DECIMALS = 6  # about 10 cm; RFC 7946, section 11.2
_OF_PATH = ("receiver", "band", "sender", "distance_km", "uncertainty_km", "bearing_deg", "receptions")

Position = tuple[float, float]
"""Longitude and latitude in degrees, in this order."""


class Place(NamedTuple):
    """One thing on a map: what is known of it, and the lines it is drawn as.

    A point is one line of one position; without a place there is no line; a path that passes the 180th
    meridian is several.
    """

    known: dict[str, Any]
    lines: tuple[tuple[Position, ...], ...]


class Places(NamedTuple):
    """Receivers, senders as each receiver heard them on a band, and the paths to those with a distance."""

    receivers: list[Place]
    senders: list[Place]
    paths: list[Place]


def places_of(logs: Logs, choice: Choice) -> tuple[Places, list[str]]:
    """Return what a choice counts as places, with the figures of `logtool senders`, and notes.

    Points are the centres of cells: `uncertainty_km` says how far off a distance may be.
    """
    table = senders_table(logs, choice)
    connection = logs.connection
    stands_at = {
        tuple(key): place
        for place, *key in connection.execute(
            f"SELECT place, {', '.join(KEYS)}, sender FROM per_sender"
        ).fetchall()
    }
    shown = []
    for row in table.rows():
        heard_from = stands_at[row["receiver"], row["band"], row["sender"]]
        shown.append((row | {"sender": logs.privacy.call(row["sender"])}, heard_from))
    shown.sort(key=lambda one: (*(one[0][key] for key in KEYS), -one[0]["receptions"], one[0]["sender"]))
    senders = [Place(row, _point(row["locator"])) for row, _ in shown]
    paths = [
        Place({name: row[name] for name in _OF_PATH}, _path(heard_from, row["locator"]))
        for row, heard_from in shown
        if row["distance_km"]
    ]
    receivers = [
        Place({"receiver": name, "locator": place, "receptions": receptions}, _point(place))
        for name, place, receptions in connection.execute("""
            SELECT receiver, place, sum(n)::BIGINT FROM (
                SELECT receiver, place, n FROM heard UNION ALL SELECT receiver, place, 0 FROM listened)
            GROUP BY ALL ORDER BY receiver, place NULLS FIRST""").fetchall()
    ]
    unplaced = sum(not sender.lines for sender in senders)
    notes = [f"{unplaced} of {len(senders)} senders have no place, so they are no points"] if unplaced else []
    return Places(receivers, senders, paths), notes


def _point(locator: str | None) -> tuple[tuple[Position, ...], ...]:
    if locator is None:
        return ()
    lat_deg, lon_deg = centre(locator)
    return (_positions([lat_deg], [lon_deg]),)


@lru_cache(maxsize=1 << 14)
def _path(place: str, locator: str) -> tuple[tuple[Position, ...], ...]:
    return lines_of(*line_points(*centre(place), *centre(locator)))


def lines_of(lat_deg: ArrayLike, lon_deg: ArrayLike) -> tuple[tuple[Position, ...], ...]:
    """Return a line as the pieces that lie on one side of the 180th meridian, as positions.

    >>> lines_of([45.0, 45.0], [170.0, -170.0])
    (((170.0, 45.0), (180.0, 45.0)), ((-180.0, 45.0), (-170.0, 45.0)))
    """
    return tuple(
        _positions(lat.tolist(), lon.tolist()) for lat, lon in split_at_antimeridian(lat_deg, lon_deg)
    )


def _positions(lat_deg: list[float], lon_deg: list[float]) -> tuple[Position, ...]:
    return tuple(
        (round(lon, COORDINATE_DECIMALS) + 0.0, round(lat, COORDINATE_DECIMALS) + 0.0)
        for lat, lon in zip(lat_deg, lon_deg, strict=True)
    )
