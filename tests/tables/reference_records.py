"""Receptions and listening as the tables should see them: one object a record, loops, nothing clever.

Written from the rules in words. It takes from the package only the distances, the nights and the sun, which
`tests/places` holds against outside values.
"""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from functools import cache
from itertools import pairwise

from logtool.places.bands import band_name
from logtool.places.geodesic import distance_km
from logtool.places.locator import centre
from logtool.places.nights import night_of_hours
from tests.records.slow_reader import Record, read_files

SECOND_US = 1_000_000
MINUTE_US = 60 * SECOND_US
HOUR_US = 60 * MINUTE_US
DAY_US = 24 * HOUR_US
EPOCH = datetime(1970, 1, 1, tzinfo=UTC)


@dataclass
class Place:
    """What holds for a receiver at an instant."""

    name: str
    antenna: str | None
    locator: str | None
    lon_deg: float | None


@dataclass
class Reception:
    """One heard line, with all that is learned about it from the other lines."""

    at_us: int
    place: Place
    band: str
    mode: str
    sender: str
    addressee: str
    own_locator: str  # upper case; empty where it has none of 4 or more characters
    snr_db: float | None
    text: str
    night: str
    listening: str
    file: str
    line: int
    raw: str
    again: bool = False
    hour_locator: str | None = None
    borrowed: bool = False

    @property
    def hour(self) -> int:
        return self.at_us // HOUR_US


@dataclass
class Spell:
    """Listening without a break within one hour and one setup."""

    from_us: int
    to_us: int
    place: Place
    band: str | None
    night: str
    listening: str

    @property
    def hour(self) -> int:
        return self.from_us // HOUR_US


@dataclass
class World:
    """All receptions, all listening, and the locators that each sender has in each hour."""

    receptions: list[Reception]
    spells: list[Spell]
    locators: dict[str, dict[int, str]]

    def locator_in(self, sender: str, hour: int) -> tuple[str | None, bool]:
        """The sender's locator in an hour, and whether it is borrowed."""
        own = self.locators.get(sender, {})
        if hour in own:
            return own[hour], False
        near = [(abs(other - hour), other) for other in own if abs(other - hour) <= 14 * 24]
        if "/" in sender or not near:
            return None, False
        return own[min(near)[1]], True


def us(record: Record) -> int:
    return (record.time.replace(tzinfo=UTC) - EPOCH) // timedelta(microseconds=1)


def written(locator: str) -> str:
    return locator[:2].upper() + locator[2:].lower()


@cache
def night_at(hour: int, lon_deg: float | None) -> str:
    day = int(night_of_hours([hour * 3600.0], lon_deg)[0])
    return (date(1970, 1, 1) + timedelta(days=day)).isoformat()


def most_frequent(counts: dict[str, int]) -> str:
    """Each locator speaks for the one that it leads to in the end; the most spoken for wins."""

    def leads_to(locator: str) -> str:
        longer = [other for other in counts if len(other) > len(locator) and other.startswith(locator)]
        if not longer:
            return locator
        return leads_to(sorted(longer, key=lambda other: (-counts[other], -len(other), other))[0])

    spoken: Counter[str] = Counter()
    for locator, count in counts.items():
        spoken[leads_to(locator)] += count
    return sorted(spoken, key=lambda locator: (-spoken[locator], -len(locator), locator))[0]


def make_world(
    files: Iterable[tuple[str, bytes]],
    *,
    at: str | None = None,
    antenna_name: str | None = None,
    gap_min: float = 10.0,
) -> World:
    """Read the files in the order given and learn what there is to learn."""
    found = [
        (account.name, number, raw, record)
        for account in read_files(files)
        for number, raw, record in account.records
    ]
    records = [record for _, _, _, record in found]
    setups: dict[str, dict[int, Record]] = defaultdict(dict)
    for record in records:
        if record.kind == "setup":
            setups[record.receiver][us(record)] = record
    watched = {record.receiver for record in records if record.kind == "watch"}
    places: dict[str, list[tuple[int, Place]]] = {}
    for receiver in {record.receiver for record in records}:
        places[receiver] = _places(receiver, setups.get(receiver, {}), at, antenna_name)

    receptions: list[Reception] = []
    for file, number, raw, record in found:
        if record.kind != "heard":
            continue
        place = _place_at(places[record.receiver], us(record))
        assert record.dial_hz is not None
        receptions.append(
            Reception(
                us(record), place, band_name(record.dial_hz), record.mode, record.sender, record.addressee,
                record.locator.upper() if len(record.locator) >= 4 else "",
                None if record.snr_db is None else float(record.snr_db), record.text,
                night_at(us(record) // HOUR_US, place.lon_deg),
                "recorded" if record.receiver in watched else "assumed",
                file, number, raw.decode(),
            )
        )  # fmt: skip
    world = World(receptions, [], _hour_locators(receptions))
    for reception in receptions:
        if reception.sender:
            reception.hour_locator, reception.borrowed = world.locator_in(reception.sender, reception.hour)
    _mark_heard_again(receptions)
    for receiver in places:
        own = [record for record in records if record.receiver == receiver]
        tuned = [(us(r), r.dial_hz) for r in own if r.kind == "heard"]
        tuned += [(since_us, setup.dial_hz) for since_us, setup in setups.get(receiver, {}).items()]
        way = "recorded" if receiver in watched else "assumed"
        listened = _recorded(own, tuned) if way == "recorded" else _assumed(own, tuned, gap_min)
        for band, stretches in listened.items():
            for from_us, to_us in _joined(stretches):
                world.spells += _cut(from_us, to_us, places[receiver], band, way)
    return world


def _places(
    receiver: str, setups: dict[int, Record], at: str | None, antenna_name: str | None
) -> list[tuple[int, Place]]:
    """What holds from when on, in the order of time."""
    always = -(10**18)
    if not setups:
        locator = written(at) if at else None
        return [(always, Place(receiver, antenna_name, locator, centre(locator)[1] if locator else None))]
    order = sorted(setups)
    locators = [written(setups[since_us].locator) for since_us in order]
    groups: list[list[str]] = []  # of places that steps of at most 10 km link, each in the order of time
    for locator in dict.fromkeys(locators):
        linked = [group for group in groups if any(_one_place(locator, other) for other in group)]
        groups = [group for group in groups if group not in linked]
        groups.append(sorted(sum(linked, [locator]), key=locators.index))
    held: list[tuple[int, Place]] = [(always, Place(receiver, None, None, None))]
    for since_us, locator in zip(order, locators, strict=True):
        first = next(group for group in groups if locator in group)[0]
        name = receiver if len(groups) == 1 else f"{receiver}@{first}"
        antenna = dict(setups[since_us].more)["antenna"]
        held.append((since_us, Place(name, antenna, locator, centre(first)[1])))
    return held


def _place_at(places: list[tuple[int, Place]], at_us: int) -> Place:
    return [held for since_us, held in places if since_us <= at_us][-1]


def _one_place(a: str, b: str) -> bool:
    return a.startswith(b) or b.startswith(a) or distance_km(a, b) <= 10


def _hour_locators(receptions: list[Reception]) -> dict[str, dict[int, str]]:
    given: dict[str, dict[int, Counter[str]]] = defaultdict(lambda: defaultdict(Counter))
    for reception in receptions:
        if reception.sender and reception.own_locator:
            given[reception.sender][reception.hour][reception.own_locator] += 1
    return {
        sender: {hour: most_frequent(counts) for hour, counts in hours.items()}
        for sender, hours in given.items()
    }


def _mark_heard_again(receptions: list[Reception]) -> None:
    times = defaultdict(list)
    for r in receptions:
        times[r.place.name, r.band, r.sender].append(r.at_us)
    for r in receptions:
        others = times[r.place.name, r.band, r.sender]
        r.again = bool(r.sender) and any(MINUTE_US <= abs(other - r.at_us) < DAY_US for other in others)


def _dials(tuned: list[tuple[int, int | None]], until_us: int) -> set[int | None]:
    """The dials told at the latest instant up to and with `until_us`."""
    told = [at_us for at_us, _ in tuned if at_us <= until_us]
    return {dial for at_us, dial in tuned if at_us == max(told)} if told else {None}


Stretches = dict[str | None, list[tuple[int, int]]]


def _recorded(own: list[Record], tuned: list[tuple[int, int | None]]) -> Stretches:
    stops = sorted(us(record) for record in own if record.kind == "stop")
    stretches: Stretches = defaultdict(list)
    for watch in own:
        if watch.kind != "watch":
            continue
        end_us = us(watch)
        from_us = end_us - int(Decimal(dict(watch.more)["on_s"]) * SECOND_US)
        inside = [stop_us for stop_us in stops if from_us < stop_us < end_us]
        for dial in {watch.dial_hz} if watch.dial_hz else _dials(tuned, end_us - 1):
            stretches[_band(dial)].append((from_us, min([*inside, end_us])))
    return stretches


def _band(dial: int | None) -> str | None:
    return band_name(dial) if dial else None


def _assumed(own: list[Record], tuned: list[tuple[int, int | None]], gap_min: float) -> Stretches:
    stops = {us(record) for record in own if record.kind == "stop"}
    instants = sorted({us(record) for record in own})
    stretches: Stretches = defaultdict(list)
    for from_us, to_us in pairwise(instants):
        if from_us in stops or to_us - from_us > gap_min * MINUTE_US:
            continue
        for dial in _dials(tuned, from_us):
            stretches[_band(dial)].append((from_us, to_us))
    return stretches


def _joined(stretches: list[tuple[int, int]]) -> list[tuple[int, int]]:
    joined: list[tuple[int, int]] = []
    for from_us, to_us in sorted(stretches):
        if joined and from_us <= joined[-1][1]:
            joined[-1] = (joined[-1][0], max(joined[-1][1], to_us))
        elif from_us < to_us:
            joined.append((from_us, to_us))
    return joined


def _cut(
    from_us: int, to_us: int, places: list[tuple[int, Place]], band: str | None, way: str
) -> list[Spell]:
    hours = range(from_us // HOUR_US + 1, to_us // HOUR_US + 1)
    cuts = {hour * HOUR_US for hour in hours} | {since_us for since_us, _ in places}
    ends = sorted({from_us, to_us} | {cut for cut in cuts if from_us < cut < to_us})
    spells = []
    for start_us, stop_us in pairwise(ends):
        place = _place_at(places, start_us)
        spells.append(
            Spell(start_us, stop_us, place, band, night_at(start_us // HOUR_US, place.lon_deg), way)
        )
    return spells
