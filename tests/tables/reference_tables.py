"""The tables by plain loops over single receptions, to hold the package's tables against.

Rows are lists of (column, value) pairs as they leave the program, so the order of the columns counts too.
"""

from __future__ import annotations

from collections import Counter
from datetime import date

from logtool.places.geodesic import distance_km
from logtool.places.locator import centre
from logtool.places.nights import night_bounds
from logtool.places.sun import zenith_deg
from tests.records.slow_reader import COLUMNS
from tests.tables.reference_figures import (
    Row,
    Words,
    chosen,
    figures,
    groups,
    last_place,
    ordered,
    percentile,
    senders_of,
    shown_row,
    shown_time,
    thinned,
)
from tests.tables.reference_records import (
    HOUR_US,
    MINUTE_US,
    SECOND_US,
    Reception,
    World,
    most_frequent,
    written,
)

NIGHT_COLUMNS = (
    "listening_min", "listening", "receptions", "senders", "senders_in_30", "squares", "median_km", "p90_km",
    "farthest_km", "farthest_sender",
)  # fmt: skip


def reach(world: World, words: Words) -> tuple[list[Row], Row]:
    receptions, spells = chosen(world, words)
    by = [key for key in words.get("by", ()) if key not in ("receiver", "antenna", "band")]
    keys = ["hour", "receiver", "antenna", "band", *by]
    rows = []
    for key, own, listened in groups(receptions, spells, keys):
        place = last_place((r.at_us, r.place) for r in own) or last_place(
            (s.to_us, s.place) for s in listened
        )
        zenith = None
        if place:
            zenith = float(zenith_deg(key[0] * 3600.0 + 1800.0, *centre(place)))
        told = dict(zip(keys, key, strict=True)) | {"hour": key[0] * HOUR_US}
        rows.append(shown_row(**told, **figures(own, listened, hourly=True), sun_zenith_deg=zenith))
    summary: Row = []
    if rows:
        times = [r.at_us for r in receptions]
        shared = {key: {dict(row)[key] for row in rows} for key in keys[1:]}
        summary = shown_row(
            from_=min(times, default=None), to=max(times, default=None), hour=None,
            **{key: values.pop() if len(values) == 1 else None for key, values in shared.items()},
            **figures(receptions, spells), sun_zenith_deg=None,
        )  # fmt: skip
    return rows, summary


def senders(world: World, words: Words) -> list[Row]:
    receptions, _ = chosen(world, words)
    by = [key for key in words.get("by", ()) if key not in ("receiver", "band")]
    rows = []
    for key, own, _ in groups(receptions, [], ["receiver", "band", *by]):
        for s in senders_of(own, hourly=False):
            one_mode = len({r.mode for r in s.receptions if r.snr_db is not None}) == 1
            order = ordered([*key[:2], -len(s.receptions), s.sender, *key[2:]])
            row = shown_row(
                receiver=key[0], band=key[1], sender=s.sender, **dict(zip(by, key[2:], strict=True)),
                locator=s.locator and written(s.locator), borrowed=s.borrowed, distance_km=s.distance_km,
                uncertainty_km=s.uncertainty_km, bearing_deg=s.bearing_deg, receptions=len(s.receptions),
                heard_again=s.again, first=min(r.at_us for r in s.receptions),
                last=max(r.at_us for r in s.receptions), nights=len({r.night for r in s.receptions}),
                snr_median_db=percentile(s.snrs, 50) if one_mode else None,
                snr_best_db=max(s.snrs) if one_mode else None,
            )  # fmt: skip
            rows.append((order, row))
    return [row for _, row in sorted(rows, key=lambda pair: pair[0])]


def sectors(world: World, words: Words) -> list[Row]:
    receptions, _ = chosen(world, words)
    by = [key for key in words.get("by", ()) if key not in ("receiver", "antenna", "band")]
    rows = []
    for key, own, _ in groups(receptions, [], ["receiver", "antenna", "band", *by]):
        senders = [s for s in senders_of(own, hourly=False) if s.bearing_deg is not None]
        for k in range(16):
            there = [s for s in senders if _is_in_sector(s.bearing_deg, k)]
            row = shown_row(
                receiver=key[0], antenna=key[1], band=key[2], sector_deg=22.5 * k,
                **dict(zip(by, key[3:], strict=True)),
                receptions=sum(len(s.receptions) for s in there), senders=len(there),
                median_km=percentile([s.distance_km for s in there], 50),
                farthest_km=max([s.distance_km for s in there if s.again], default=None),
            )  # fmt: skip
            rows.append((ordered([*key[:3], k, *key[3:]]), row))
    return [row for _, row in sorted(rows, key=lambda pair: pair[0])]


def _is_in_sector(bearing_deg: float, k: int) -> bool:
    if k == 0:
        return bearing_deg >= 348.75 or bearing_deg < 11.25
    return 22.5 * k - 11.25 <= bearing_deg < 22.5 * k + 11.25


def nights(world: World, words: Words) -> list[Row]:
    receptions, spells = chosen(world, words)
    by = [key for key in words.get("by", ()) if key not in ("night", "receiver", "antenna", "band")]
    keys = ["night", "receiver", "antenna", "band", *by]
    rows = []
    for key, own, listened in groups(receptions, spells, keys):
        told = figures(own, listened)
        shares = [
            thinned(senders_of(r, hourly=True), sum(s.to_us - s.from_us for s in spent) / MINUTE_US)
            for _, r, spent in groups(own, listened, ["hour"])
        ]
        known = [share for share in shares if share is not None]
        told["senders_in_30"] = sum(known) / len(known) if known else None
        lons = {thing.place.lon_deg for thing in (*own, *listened)}
        assert len(lons) == 1
        day = (date.fromisoformat(key[0]) - date(1970, 1, 1)).days
        start_s, stop_s = night_bounds(day, lons.pop())
        rows.append(
            shown_row(
                **dict(zip(keys, key, strict=True)),
                from_=round(start_s) * SECOND_US, to=round(stop_s) * SECOND_US,
                **{name: told[name] for name in NIGHT_COLUMNS},
            )
        )  # fmt: skip
    return rows


def between(world: World, words: Words) -> list[Row]:
    receptions, _ = chosen(world, words)
    messages: dict[tuple[str, str, str], set[tuple[int, str, str]]] = {}
    for r in receptions:
        if r.sender and r.addressee and r.sender != r.addressee:
            a, b = sorted((r.sender, r.addressee))
            messages.setdefault((a, b, r.band), set()).add((r.at_us, r.sender, r.text))
    rows = []
    for (a, b, band), said in sorted(messages.items()):
        locators = []
        for station in (a, b):
            found = [world.locator_in(station, at_us // HOUR_US) for at_us, _, _ in said]
            own = Counter(locator for locator, borrowed in found if locator and not borrowed)
            lent = Counter(locator for locator, _ in found if locator)
            locators.append(most_frequent(own or lent) if lent else None)
        times = [at_us for at_us, _, _ in said]
        rows.append(
            shown_row(
                a=a, b=b, band=band, first=min(times), last=max(times),
                from_a=sum(sender == a for _, sender, _ in said),
                from_b=sum(sender == b for _, sender, _ in said),
                locator_a=locators[0] and written(locators[0]),
                locator_b=locators[1] and written(locators[1]),
                between_km=distance_km(*locators) if all(locators) else None,
            )
        )  # fmt: skip
    return rows


def lines(world: World, words: Words) -> list[Row]:
    receptions, _ = chosen(world, words)
    return [_line(r) for r in sorted(receptions, key=lambda r: (r.file, r.line))]


def _line(r: Reception) -> Row:
    fields = dict(zip(COLUMNS, r.raw.split("\t"), strict=True))
    values: Words = {"file": r.file, "line": r.line}
    for name, field in fields.items():
        if not field:
            values[name] = None
        elif name == "time":
            values[name] = shown_time(r.at_us)
        elif name == "dial_hz":
            values[name] = int(field)
        elif name in ("audio_hz", "snr_db", "late_s", "power_dbm"):
            values[name] = round(float(field), 3)
        elif name in ("sender", "addressee"):
            values[name] = field.upper()
        else:
            values[name] = written(field) if name == "locator" else field
    return list(values.items())
