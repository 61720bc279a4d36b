"""The map's data as one JSON text: compact for a week of hours, and safe inside a script element."""

from __future__ import annotations

import json
from collections.abc import Iterable, Sequence
from datetime import datetime
from typing import Any

from logtool.errors import LogtoolError
from logtool.pages.map_data import MapCounts, MapData, MapLine, MapPair, MapReceiver, MapTotals
from logtool.places.locator import cell, centre

RING_RADII_KM = (500, 1000, 2000, 3000, 5000, 10000, 15000)
RING_POINTS = 180  # a point every 2 degrees of bearing; the page puts in more where a ring nears a pole
RING_DECIMALS = 3  # 0.001 degrees, 110 m
CELL_DECIMALS = 6  # an edge of a locator of 10 characters is a multiple of 1/28800 degrees
KM_DECIMALS = 2
BEARING_DECIMALS = 4
SNR_DECIMALS = 1  # for the colours and the panel; the tables have three
ESCAPES = {"<": "\\u003c", ">": "\\u003e", "&": "\\u0026", "\u2028": "\\u2028", "\u2029": "\\u2029"}


def script_safe_json(value: object) -> str:
    """Return a value as JSON that no text inside can break out of a script element with.

    JSON alone is not enough: a file name with `</script>` in it would end the element. `<`, `>` and `&` and
    the two line separators that older scripts stumble over are written as escapes, which mean the same to a
    JSON reader.

    Parameters
    ----------
    value
        Anything that `json.dumps` takes; nan and inf are refused.

    Returns
    -------
    str
        JSON in ASCII but for letters beyond it, with no space.

    Raises
    ------
    ValueError
        A number is not finite.

    Examples
    --------
    >>> script_safe_json({"file": "</script>"})
    '{"file":"\\\\u003c/script\\\\u003e"}'
    """
    text = json.dumps(value, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    for character, escape in ESCAPES.items():
        text = text.replace(character, escape)
    return text.encode("utf-8", "backslashreplace").decode("utf-8")


def map_payload(data: MapData) -> dict[str, Any]:
    """Return what the page's script reads: the tables as flat lists, the rings worked out. [deg, km, dB, s]

    Counts are sorted by sender, group and hour and told as runs: `runs` holds sender, group and number of
    rows, and `hours` the steps from one hour to the next within a run, so that most numbers have one digit.
    `unplaced` are the indices of the rows in whose hour the sender has no locator.

    Raises
    ------
    LogtoolError
        The columns of the counts or totals differ in length.
    """
    farthest_km = max((pair.distance_km for pair in data.pairs if pair.distance_km is not None), default=0.0)
    return {
        "title": data.title,
        "files": data.files,
        "notes": data.notes,
        "ledger": data.ledger,
        "options": data.options,
        "receivers": [_receiver(receiver, farthest_km) for receiver in data.receivers],
        "senders": [
            [
                sender.name,
                sender.locator,
                _edges(sender.locator),
                None if sender.borrowed is None else int(sender.borrowed),
            ]
            for sender in data.senders
        ],
        "pairs": [_pair(pair) for pair in data.pairs],
        "groups": [[group.receiver, group.antenna, group.band, group.mode] for group in data.groups],
        "hours": [
            [
                hour.start_unix_s,
                round(hour.subsolar_lat_deg, RING_DECIMALS),
                round(hour.subsolar_lon_deg, RING_DECIMALS),
                hour.nights,
                [_rounded(minutes, SNR_DECIMALS) for minutes in hour.listening_min],
            ]
            for hour in data.hours
        ],
        "counts": _counts(data.counts),
        "totals": _totals(data.totals),
    }


def ring_radii_km(farthest_km: float) -> tuple[int, ...]:
    """Return the radii of the rings drawn: up to the first that holds the farthest sender. [km]

    Examples
    --------
    >>> ring_radii_km(2500.0)
    (500, 1000, 2000, 3000)
    """
    inside = sum(radius < farthest_km for radius in RING_RADII_KM)
    return RING_RADII_KM[: inside + 1]


def _receiver(receiver: MapReceiver, farthest_km: float) -> list[Any]:
    from logtool.places.geodesic import circle_points

    lat_deg, lon_deg = centre(receiver.locator)
    rings = []
    for radius_km in ring_radii_km(farthest_km):
        lats_deg, lons_deg = circle_points(lat_deg, lon_deg, radius_km, points=RING_POINTS)
        rings.append(
            [radius_km, _numbers(lats_deg[:-1], RING_DECIMALS), _numbers(lons_deg[:-1], RING_DECIMALS)]
        )
    return [receiver.name, receiver.locator, _edges(receiver.locator), rings, int(receiver.assumed)]


def _pair(pair: MapPair) -> list[Any]:
    return [
        pair.sender,
        pair.receiver,
        _rounded(pair.distance_km, KM_DECIMALS),
        _rounded(pair.uncertainty_km, KM_DECIMALS),
        _rounded(pair.bearing_deg, BEARING_DECIMALS),
        _instant(pair.first),
        _instant(pair.last),
        int(pair.heard_again),
        [part for line in pair.lines for part in _line(line)],
        *([] if pair.locator is None else [pair.locator]),
    ]


def _line(line: MapLine) -> tuple[int, int, int | str]:
    return line.file, line.line, _instant(line.time)


def _instant(time: str) -> int | str:
    """Return a time as whole seconds since 1970, shorter than its text; as it is where it has a fraction."""
    moment = datetime.fromisoformat(time)
    return time if moment.microsecond or moment.tzinfo is None else int(moment.timestamp())


def _edges(locator: str | None) -> list[Any] | None:
    """Return a cell as south, west, north, east. [deg]"""
    if locator is None:
        return None
    box = cell(locator)
    return _numbers((box.south_deg, box.west_deg, box.north_deg, box.east_deg), CELL_DECIMALS)


def _rounded(number: float | None, decimals: int) -> float | int | None:
    if number is None:
        return None
    shorter = round(float(number), decimals)
    return int(shorter) if shorter.is_integer() else shorter


def _numbers(values: Iterable[float], decimals: int) -> list[Any]:
    return [_rounded(value, decimals) for value in values]


def _counts(counts: MapCounts) -> dict[str, list[Any]]:
    columns = (counts.sender, counts.group, counts.hour, counts.receptions, counts.snr_median_db)
    _same_length("counts", (*columns, counts.located) if counts.located else columns)
    located = counts.located or [True] * len(counts.sender)
    runs: list[int] = []
    steps: list[int] = []
    receptions: list[int] = []
    snr_db: list[Any] = []
    unplaced: list[int] = []
    before = (-1, -1, 0)
    rows = sorted(zip(*columns, located, strict=True), key=lambda row: row[:3])
    for i, (sender, group, hour, heard, median_db, placed) in enumerate(rows):
        if (sender, group) != before[:2]:
            runs += (int(sender), int(group), 0)
            before = (sender, group, 0)
        runs[-1] += 1
        steps.append(int(hour - before[2]))
        receptions.append(int(heard))
        snr_db.append(_rounded(median_db, SNR_DECIMALS))
        if not placed:
            unplaced.append(i)
        before = (sender, group, hour)
    return {"runs": runs, "hours": steps, "receptions": receptions, "snr": snr_db, "unplaced": unplaced}


def _totals(totals: MapTotals) -> list[Any]:
    columns = (totals.sender, totals.group, totals.receptions, totals.snr_median_db)
    _same_length("totals", columns)
    flat: list[Any] = []
    for sender, group, heard, median_db in sorted(zip(*columns, strict=True), key=lambda row: row[:2]):
        flat += (int(sender), int(group), int(heard), _rounded(median_db, SNR_DECIMALS))
    return flat


def _same_length(name: str, columns: tuple[Sequence[Any], ...]) -> None:
    lengths = [len(column) for column in columns]
    if len(set(lengths)) > 1:
        raise LogtoolError(
            f"map: the columns of {name} differ in length: {lengths}; each needs one value a row"
        )
