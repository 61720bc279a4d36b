"""The tables by plain loops over single receptions, to hold the package's tables against.

Rows are lists of (column, value) pairs as they leave the program, so that the order of the columns counts too.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import date, datetime, timedelta
from typing import Any

import numpy as np

from logtool.places.geodesic import distance_km
from logtool.places.locator import centre, uncertainty_km
from logtool.places.nights import night_bounds
from logtool.places.sun import zenith_deg
from logtool.places.wgs84 import inverse
from tests.tables.reference_records import (
    EPOCH,
    HOUR_US,
    MINUTE_US,
    Place,
    Reception,
    Spell,
    World,
    most_frequent,
    written,
)

Words = dict[str, Any]
Row = list[tuple[str, Any]]
TIMES = ("hour", "from", "to", "first", "last")


def shown(name: str, value: Any) -> Any:
    """A value as it leaves the program."""
    if value is None or isinstance(value, (str, bool, int)) and name not in TIMES:
        return value
    if name in TIMES:
        return shown_time(value)
    if name == "bearing_deg":
        return round(float(value), 4) % 360
    return round(float(value), 4 if name.endswith("_deg") else 3) + 0.0


def shown_time(at_us: int) -> str:
    at = EPOCH + timedelta(microseconds=at_us)
    text = at.strftime("%Y-%m-%dT%H:%M:%S.%f").rstrip("0").rstrip(".")
    return text + "Z"


def shown_row(**values: Any) -> Row:
    return [(name.rstrip("_"), shown(name.rstrip("_"), value)) for name, value in values.items()]


@dataclass
class Heard:
    """One sender in one row."""

    sender: str
    receptions: list[Reception]
    locator: str | None
    borrowed: bool | None
    distance_km: float | None = None
    uncertainty_km: float | None = None
    bearing_deg: float | None = None

    @property
    def again(self) -> bool:
        return any(reception.again for reception in self.receptions)

    @property
    def snrs(self) -> list[float]:
        return [reception.snr_db for reception in self.receptions if reception.snr_db is not None]


def chosen(world: World, words: Words) -> tuple[list[Reception], list[Spell]]:
    """What the filters leave of the receptions and of the listening."""
    from_us, to_us = (_us(words[key]) if key in words else None for key in ("from_", "to"))
    receptions = [
        r for r in world.receptions
        if _place_is_chosen(r.place, words)
        and ("band" not in words or r.band == words["band"])
        and ("night" not in words or r.night == words["night"])
        and ("mode" not in words or r.mode == words["mode"])
        and ("sender" not in words or r.sender == words["sender"].upper())
        and (from_us is None or r.at_us >= from_us)
        and (to_us is None or r.at_us < to_us)
    ]  # fmt: skip
    spells = []
    for spell in world.spells:
        start = spell.from_us if from_us is None else max(spell.from_us, from_us)
        stop = spell.to_us if to_us is None else min(spell.to_us, to_us)
        if (
            start < stop
            and _place_is_chosen(spell.place, words)
            and ("band" not in words or spell.band == words["band"])
            and ("night" not in words or spell.night == words["night"])
        ):
            spells.append(Spell(start, stop, spell.place, spell.band, spell.night, spell.listening))
    return receptions, spells


def _us(text: str) -> int:
    at = datetime.fromisoformat(text if "T" in text else text + "T00:00:00+00:00")
    return (at - EPOCH) // timedelta(microseconds=1)


def _place_is_chosen(place: Place, words: Words) -> bool:
    if "receiver" in words and words["receiver"] not in (place.name, place.name.split("@")[0]):
        return False
    return place.antenna == words["antenna"] if "antenna" in words else place.antenna != "none"


def key_of(thing: Reception | Spell, name: str) -> Any:
    if name in ("receiver", "antenna"):
        return thing.place.name if name == "receiver" else thing.place.antenna
    return getattr(thing, name)


def ordered(keys: Sequence[Any]) -> list[tuple[bool, Any]]:
    """Something to sort keys by: nulls first."""
    return [(key is not None, key if key is not None else 0) for key in keys]


def senders_of(receptions: list[Reception], *, hourly: bool) -> list[Heard]:
    found = []
    for sender in sorted({r.sender for r in receptions} - {""}):
        own = [r for r in receptions if r.sender == sender]
        if hourly:
            locator, borrowed = own[0].hour_locator, own[0].borrowed
        else:
            locator, borrowed = _row_locator(own)
        heard = Heard(sender, own, locator, borrowed if locator else None)
        places = [(r.at_us, r.place.locator) for r in own if r.place.locator]
        if locator and places:
            place = max(places)[1]
            heard.distance_km = distance_km(place, locator)
            heard.uncertainty_km = uncertainty_km(place, locator)
            if heard.distance_km >= heard.uncertainty_km:
                heard.bearing_deg = float(inverse(*centre(place), *centre(locator)).azimuth_a_deg)
        found.append(heard)
    return found


def _row_locator(own: list[Reception]) -> tuple[str | None, bool]:
    votes: list[Callable[[Reception], str | None]] = [
        lambda r: r.own_locator or None,
        lambda r: None if r.borrowed else r.hour_locator,
        lambda r: r.hour_locator,
    ]
    for rank, vote in enumerate(votes):
        counts = Counter(locator for locator in map(vote, own) if locator)
        if counts:
            return most_frequent(counts), rank == 2
    return None, False


def percentile(values: list[float], percent: float) -> float | None:
    return float(np.percentile(values, percent)) if values else None


def median_snr(senders: list[Heard]) -> float | None:
    kinds = {(r.mode, r.band) for s in senders for r in s.receptions if r.snr_db is not None}
    if len(kinds) != 1:
        return None
    return percentile([float(np.percentile(s.snrs, 50)) for s in senders if s.snrs], 50)


def thinned(senders: list[Heard], listening_min: float) -> float | None:
    if listening_min < 30:
        return None
    return float(sum(1 - (1 - 30 / listening_min) ** len(s.receptions) for s in senders))


def figures(receptions: list[Reception], spells: list[Spell], *, hourly: bool = False) -> Words:
    """What a row of reach says after its keys."""
    senders = senders_of(receptions, hourly=hourly)
    listening_min = sum(spell.to_us - spell.from_us for spell in spells) / MINUTE_US
    ways = {thing.listening for thing in (*receptions, *spells)}
    located = [s for s in senders if s.distance_km is not None]
    distances = [s.distance_km for s in located]
    again = [s for s in located if s.again]
    farthest_km = max([s.distance_km for s in again], default=None)
    return {
        "listening_min": listening_min,
        "listening": ways.pop() if len(ways) == 1 else "mixed",
        "receptions": len(receptions),
        "unnamed": sum(r.sender == "" for r in receptions),
        "senders": len(senders),
        "heard_once": sum(not s.again for s in senders),
        "senders_in_30": thinned(senders, listening_min),
        "located": len(located),
        "squares": len({s.locator[:4] for s in senders if s.locator}),
        "nearest_km": min([s.distance_km for s in located if s.uncertainty_km <= s.distance_km / 2], default=None),
        "median_km": percentile(distances, 50),
        "p90_km": percentile(distances, 90) if len(distances) >= 5 else None,
        "farthest_km": farthest_km,
        "farthest_sender": min([s.sender for s in again if s.distance_km == farthest_km], default=None),
        "farthest_once_km": max([s.distance_km for s in located if not s.again], default=None),
        "snr_median_db": median_snr(senders),
    }  # fmt: skip


def groups(
    receptions: list[Reception], spells: list[Spell], keys: Sequence[str]
) -> list[tuple[tuple[Any, ...], list[Reception], list[Spell]]]:
    """The rows of a table by its keys, sorted; modes share the listening of the row that they split."""
    timed = [key for key in keys if key != "mode"]
    of_spells: dict[tuple[Any, ...], list[Spell]] = {}
    for spell in spells:
        of_spells.setdefault(tuple(key_of(spell, key) for key in timed), []).append(spell)
    of_receptions: dict[tuple[Any, ...], list[Reception]] = {}
    for reception in receptions:
        of_receptions.setdefault(tuple(key_of(reception, key) for key in keys), []).append(reception)
    heard = {tuple(k for k, key in zip(full, keys, strict=True) if key != "mode") for full in of_receptions}
    rows = []
    for full, own in of_receptions.items():
        short = tuple(k for k, key in zip(full, keys, strict=True) if key != "mode")
        rows.append((full, own, of_spells.get(short, [])))
    for short, silent in of_spells.items():
        if short not in heard:
            values = dict(zip(timed, short, strict=True))
            rows.append((tuple(values.get(key) for key in keys), [], silent))
    return sorted(rows, key=lambda row: ordered(row[0]))


def reach(world: World, words: Words) -> tuple[list[Row], Row]:
    receptions, spells = chosen(world, words)
    by = [key for key in words.get("by", ()) if key not in ("receiver", "antenna", "band")]
    keys = ["hour", "receiver", "antenna", "band", *by]
    rows = []
    for key, own, listened in groups(receptions, spells, keys):
        place = _last_place(own) or max([(s.to_us, s.place.locator) for s in listened if s.place.locator], default=(0, None))[1]  # fmt: skip
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


def _last_place(receptions: list[Reception]) -> str | None:
    return max([(r.at_us, r.place.locator) for r in receptions if r.place.locator], default=(0, None))[1]


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
    wanted = "listening_min listening receptions senders senders_in_30 squares median_km p90_km farthest_km farthest_sender"
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
                **dict(zip(keys, key, strict=True)), from_=round(start_s) * 1_000_000, to=round(stop_s) * 1_000_000,
                **{name: told[name] for name in wanted.split()},
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
                from_a=sum(sender == a for _, sender, _ in said), from_b=sum(sender == b for _, sender, _ in said),
                locator_a=locators[0] and written(locators[0]), locator_b=locators[1] and written(locators[1]),
                between_km=distance_km(*locators) if all(locators) else None,
            )
        )  # fmt: skip
    return rows
