"""What a row says after its keys, by plain loops over single receptions."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from typing import Any

import numpy as np

from logtool.places.geodesic import distance_km
from logtool.places.locator import centre, uncertainty_km
from logtool.places.wgs84 import inverse
from tests.tables.reference_records import EPOCH, MINUTE_US, Place, Reception, Spell, World, most_frequent

Words = dict[str, Any]
Row = list[tuple[str, Any]]
TIMES = ("hour", "from", "to", "first", "last")


def shown(name: str, value: Any) -> Any:
    """A value as it leaves the program."""
    if value is None:
        return None
    if name in TIMES:
        return shown_time(value)
    if isinstance(value, (str, bool, int)):
        return value
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
    by_name: dict[str, list[Reception]] = {}
    for r in receptions:
        if r.sender:
            by_name.setdefault(r.sender, []).append(r)
    found = []
    for sender, own in sorted(by_name.items()):
        if hourly:
            locator, borrowed = own[0].hour_locator, own[0].borrowed
        else:
            locator, borrowed = _row_locator(own)
        heard = Heard(sender, own, locator, borrowed if locator else None)
        place = last_place((r.at_us, r.place) for r in own)
        if locator and place:
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


def last_place(held: Iterable[tuple[int, Place]]) -> str | None:
    """The latest of some places; of several at one instant, as in a summary, the last by name."""
    known = [(at_us, place.locator) for at_us, place in held if place.locator]
    return max(known)[1] if known else None


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
    near = [s.distance_km for s in located if s.uncertainty_km <= s.distance_km / 2]
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
        "nearest_km": min(near, default=None),
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
