"""Invented data for the map's tests: senders with call signs in Q round a receiver, from a stated seed."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, datetime
from string import ascii_uppercase

import numpy as np

from logtool.pages.map_data import (
    MapCounts,
    MapData,
    MapGroup,
    MapHour,
    MapLine,
    MapPair,
    MapReceiver,
    MapSender,
    MapTotals,
)
from logtool.places.geodesic import bearing_deg, distance_km
from logtool.places.locator import locator_at, uncertainty_km

START = int(datetime(2026, 3, 1, tzinfo=UTC).timestamp())
HOUR_S = 3600


def call_sign(number: int) -> str:
    """Return an invented call sign, a different one for each number up to 175 760."""
    letters = "".join(ascii_uppercase[number // 26**k % 26] for k in (2, 1, 0))
    return f"Q{number // 26**3 % 10}{letters}"


def iso(unix_s: float) -> str:
    """Return seconds since 1970 as RFC 3339 in UTC."""
    return datetime.fromtimestamp(unix_s, UTC).isoformat().replace("+00:00", "Z")


def hour(index: int, receivers: int, sun: tuple[float, float] | None = None) -> MapHour:
    """Return an hour of March 2026; its sun is a plain stand-in, its night turns at noon UTC."""
    lat, lon = sun or (-7.5 + index * 0.016, -15.0 * ((index + 0.5) % 24 - 12))
    night = f"2026-{'02-28' if index < 12 else f'03-{(index - 12) // 24 + 1:02d}'}"
    return MapHour(START + index * HOUR_S, lat, lon, (night,) * receivers, (60.0,) * receivers)


def pair(
    sender: int, receiver: int, here: str, there: str | None, lines: tuple[MapLine, ...] = ()
) -> MapPair:
    """Return a pair with true distance and bearing between two locators."""
    times = (iso(START + 15), iso(START + 7200))
    if there is None:
        return MapPair(sender, receiver, None, None, None, *times, heard_again=False, lines=lines)
    km, off_km = distance_km(here, there), uncertainty_km(here, there)
    bearing = None if km < off_km else bearing_deg(here, there)
    return MapPair(sender, receiver, km, off_km, bearing, *times, heard_again=True, lines=lines)


def small(**changes: object) -> MapData:
    """Return five senders at one receiver over three hours, small enough to count by hand.

    Heard by antenna `wire` in hour 0: Q1AAA 4 times, Q2BBB twice; by `loop` in hour 1: Q1AAA 3 times, Q3CCC
    once, Q4DDD (no locator) 5 times; by `wire` on 20m in hour 2: Q5EEE once, from the receiver's own cell.
    """
    places = ("FN42", "KP20", "QM05aa", None, "JO74xa")
    names = ("Q1AAA", "Q2BBB", "Q3CCC", "Q4DDD", "Q5EEE")
    values = {
        "title": "The hut, three hours",
        "receivers": (MapReceiver("hut", "JO74xa"),),
        "senders": tuple(
            MapSender(name, place, None if place is None else name == "Q2BBB")
            for name, place in zip(names, places, strict=True)
        ),
        "pairs": tuple(
            pair(i, 0, "JO74xa", place, (MapLine(0, 10 + i, iso(START + 15)),))
            for i, place in enumerate(places)
        ),
        "groups": (
            MapGroup(0, "wire", "40m", "M1"),
            MapGroup(0, "loop", "40m", "M1"),
            MapGroup(0, "wire", "20m", "M1"),
        ),
        "hours": (
            MapHour(START + 22 * HOUR_S, -7.0, -157.5, ("2026-03-01",), (60.0,)),
            MapHour(START + 23 * HOUR_S, -7.0, -172.5, ("2026-03-01",), (30.0,)),
            MapHour(START + 36 * HOUR_S, -6.8, -7.5, ("2026-03-02",), (None,)),
        ),
        "counts": MapCounts(
            [0, 1, 0, 2, 3, 4],
            [0, 0, 1, 1, 1, 2],
            [0, 0, 1, 1, 1, 2],
            [4, 2, 3, 1, 5, 1],
            [-10.0, -4.5, -14.0, None, 3.0, 9.0],
        ),
        "totals": MapTotals(
            [0, 0, 1, 2, 3, 4], [0, 1, 0, 1, 1, 2], [4, 3, 2, 1, 5, 1], [-10.0, -14.0, -4.5, None, 3.0, 9.0]
        ),
        "files": ("night-1.log",),
    }
    return MapData(**{**values, **changes})  # type: ignore[arg-type]


def around(
    receiver: str, places: list[str | None], *, rows: int = 2000, hours: int = 24, seed: int = 1
) -> MapData:
    """Return senders at these locators, heard by two antennas at random hours, the first ones most often."""
    rng = np.random.default_rng(seed)
    weights = 1 / (1 + np.arange(len(places))) ** 0.7
    keys = rng.choice(len(places), rows, p=weights / weights.sum()) * 2 * hours + rng.integers(
        0, 2 * hours, rows
    )
    keys = np.unique(np.concatenate([keys, np.arange(len(places)) * 2 * hours]))
    sender, rest = np.divmod(keys, 2 * hours)
    group, hour_index = np.divmod(rest, hours)
    heard = rng.poisson(3 * weights[sender] / weights.mean()) + 1
    snr = np.round(rng.normal(-10, 7, len(keys)) * 2) / 2
    snr_db = [None if i % 97 == 0 else float(value) for i, value in enumerate(snr)]
    total_keys, first = np.unique(sender * 2 + group, return_index=True)
    senders = tuple(
        MapSender(call_sign(i * 7), place, None if place is None else i % 5 == 0)
        for i, place in enumerate(places)
    )
    lines = [
        tuple(
            MapLine(
                int(rng.integers(0, 3)),
                int(rng.integers(3, 40000)),
                iso(START + 15 * int(rng.integers(0, 40000))),
            )
            for _ in range(5)
        )
        for _ in places
    ]
    return MapData(
        title="The hut by the lake, invented nights",
        receivers=(MapReceiver("hut", receiver),),
        senders=senders,
        pairs=tuple(pair(i, 0, receiver, place, lines[i]) for i, place in enumerate(places)),
        groups=(MapGroup(0, "wire", "40m", "M1"), MapGroup(0, "loop", "40m", "M1")),
        hours=tuple(hour(i, 1) for i in range(hours)),
        counts=MapCounts(sender.tolist(), group.tolist(), hour_index.tolist(), heard.tolist(), snr_db),
        totals=MapTotals(
            (total_keys // 2).tolist(),
            (total_keys % 2).tolist(),
            np.add.reduceat(heard, first).tolist(),
            [snr_db[i] for i in first],
        ),
        files=("night-1.log", "night-2.log", "night-3.log.gz"),
        notes=("invented data",),
        ledger=("night-1.log: 40000 lines, 39990 records, 10 set aside",),
        options=(("receiver", "all"),),
    )


def with_island(data: MapData, locator: str, shared: int) -> MapData:
    """Return data with a second receiver, `island`, that heard the first `shared` senders in hour 3."""
    group, heard, snr_db = [2] * shared, [4] * shared, [-3.0] * shared
    counts, totals = data.counts, data.totals
    return replace(
        data,
        receivers=(*data.receivers, MapReceiver("island", locator)),
        groups=(*data.groups, MapGroup(1, "dipole", "40m", "M1")),
        pairs=(*data.pairs, *(pair(i, 1, locator, data.senders[i].locator) for i in range(shared))),
        hours=tuple(hour(i, 2) for i in range(len(data.hours))),
        counts=MapCounts(
            [*counts.sender, *range(shared)],
            [*counts.group, *group],
            [*counts.hour, *[3] * shared],
            [*counts.receptions, *heard],
            [*counts.snr_median_db, *snr_db],
        ),
        totals=MapTotals(
            [*totals.sender, *range(shared)],
            [*totals.group, *group],
            [*totals.receptions, *heard],
            [*totals.snr_median_db, *snr_db],
        ),
    )


def spread(count: int, *, seed: int = 2, unplaced: int = 0) -> list[str | None]:
    """Return locators of 4 or 6 characters: half near 50 N 10 E, the rest over the whole Earth."""
    rng = np.random.default_rng(seed)
    near = rng.random(count) < 0.5
    lat = np.where(near, rng.normal(50, 8, count), np.degrees(np.arcsin(rng.uniform(-0.8, 0.95, count))))
    lon = np.where(near, rng.normal(12, 16, count), rng.uniform(-180, 180, count))
    placed: list[str | None] = [
        locator_at(float(a), float(o), 6 if i % 3 == 0 else 4)
        for i, (a, o) in enumerate(zip(lat, lon, strict=True))
    ]
    return placed + [None] * unplaced
