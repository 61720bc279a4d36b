"""An invented evening on the air: stations, and what one receiver heard of them."""

from __future__ import annotations

import random
from dataclasses import dataclass, field
from datetime import UTC, datetime, timedelta

SLOT_S = 15
LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"
DIALS_HZ = (7_078_000, 10_138_500, 3_571_500, 14_101_000)


@dataclass(frozen=True)
class Heard:
    """One message as it really was: what a log may tell of it."""

    time: datetime
    dial_hz: int
    audio_hz: int
    snr_db: int
    late_s: float
    mode: str
    text: str
    sender: str
    addressee: str
    locator: str


@dataclass
class Scenario:
    """What was heard, in order, and how to draw further random figures."""

    heard: list[Heard]
    draw: random.Random
    locators: dict[str, str] = field(default_factory=dict)


def make(
    seed: int,
    *,
    count: int = 400,
    start: datetime = datetime(2026, 3, 1, 18, 0, tzinfo=UTC),
    dials: int = 1,
    modes: tuple[str, ...] = ("KB15",),
    slot_s: float = SLOT_S,
    share: float = 0.8,
) -> Scenario:
    """Return a scenario of about `count` messages; `share` of the slots have any."""
    draw = random.Random(seed)
    stations = []
    while len(stations) < 45:
        call = f"Q{draw.randrange(10)}{''.join(draw.choices(LETTERS, k=draw.choice([2, 3, 3])))}"
        stations.append(call + draw.choice(["", "", "", "", "", "/P"]))
    locators = {
        call: f"{draw.choice('IJKLM')}{draw.choice('LMNOP')}{draw.randrange(100):02d}" for call in stations
    }
    audio = {call: draw.randrange(220, 2700) for call in stations}
    level = {call: draw.randrange(-22, 8) for call in stations}
    heard: list[Heard] = []
    at = start
    slot = 0
    dial = draw.choice(DIALS_HZ[:dials])
    while len(heard) < count:
        at = start + timedelta(seconds=slot * slot_s)
        slot += 1
        if dials > 1 and draw.random() < 0.02:
            dial = draw.choice(DIALS_HZ[:dials])
        if draw.random() > share:
            continue
        for caller in draw.sample(stations, draw.randrange(1, 5)):
            other = draw.choice([call for call in stations if call != caller])
            heard.append(_message(draw, at, dial, caller, other, locators, audio, level, draw.choice(modes)))
    return Scenario(heard, draw, locators)


def _message(
    draw: random.Random, at: datetime, dial: int, caller: str, other: str, locators: dict[str, str],
    audio: dict[str, int], level: dict[str, int], mode: str,
) -> Heard:  # fmt: skip
    kind = draw.random()
    locator = addressee = ""
    if kind < 0.4:
        locator = locators[caller]
        text = f"CQ {caller} {locator}"
    else:
        addressee = other
        if kind < 0.6:
            locator = locators[caller]
            end = locator
        elif kind < 0.75:
            end = f"{draw.randrange(-24, 10):+03d}"
        elif kind < 0.85:
            end = f"R{draw.randrange(-24, 10):+03d}"
        else:
            end = draw.choice(["RRR", "RR73", "73"])
        text = f"{other} {caller} {end}"
    return Heard(
        at, dial, max(200, audio[caller] + draw.randrange(-9, 10)), max(-26, level[caller] + draw.randrange(-4, 5)),
        round(draw.gauss(0.1, 0.3), 1) + 0.0, mode, text, caller, addressee, locator,
    )  # fmt: skip
