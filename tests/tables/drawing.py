"""Logs drawn at random: crowded in time and place, so that the rare cases meet."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from random import Random
from typing import Any

from tests.tables.making import heard, note, setup, stop, watch

START = datetime(2026, 12, 31, tzinfo=UTC)
SECONDS = (0, 0, 0, 15, 30, 59.999, 60, 0.000001)
ODD_MINUTES = (0, 1, 59, 60, 119, 700, 710, 720, 1439)
DAYS = (0, 0, 0, 0, 1, 13, 14, 15)  # up to 14 a locator is borrowed
RECEIVERS = ("hut", "isle", "top")
DIALS = ("7074000", "3573000", "7041500", "6100000", "007074000")
SENDERS = ("Q1ABC", "q1abc", "Q2X", "Q3Z/P", "Q4U", "Q5V", "Q6W", "", "Q7", "Q8", "Q9", "Q0AA")
LOCATORS = (
    "", "JN58", "JN58td", "jn58TD25", "JN58ae", "JN59", "KO02", "KO02aa", "AA00", "RE78ir", "RR99xx", "JN",
    "RE78",
)  # fmt: skip
# Steps of 4.6, 13.9 and 9.3 km, one that begins another, and places far off, one across the date line.
PLACES = ("JN58td", "JN58te", "JN58tg", "JN58", "jn58TD44", "KO02aa", "RE78ir", "AA00aa")
MODES = ("K8", "S2", "")
LEVELS = ("", "-10", "3.5", "7", "-21.25")
ON_S = (0, 0.5, 60, 600, 1800, 3600, 7200, 86400)
WORDS: dict[str, tuple[Any, ...]] = {
    "from_": ("2026-12-31", "2026-12-31T11:40:00Z", "2026-12-31T12:00:00Z"),
    "to": ("2027-01-13", "2026-12-31T12:30:00.000001Z", "2026-12-31T23:59:00Z"),
    "receiver": ("hut", "isle", "hut@JN58td", "nobody"),
    "antenna": ("wire", "none"),
    "band": ("40m", "80m", "6100 kHz"),
    "mode": ("K8", "S2"),
    "night": ("2026-12-31", "2026-12-30"),
    "sender": ("q1abc", "Q2X"),
    "by": (("mode",), ("night",), ("antenna", "mode"), ("receiver", "band")),
    "gap_min": (1.0, 30.0, 120.0),
}


@dataclass
class Drawn:
    """The lines of some files, the words of a command, and what stands in for a setup."""

    files: list[list[str]]
    words: dict[str, Any]
    at: str | None
    antenna_name: str | None


def drawn(seed: int) -> Drawn:
    """A log and a question, the same for the same seed; some lines stand in it twice."""
    rng = Random(seed)
    lines = _lines(rng)
    rng.shuffle(lines)
    files: list[list[str]] = [[] for _ in range(rng.choice([1, 1, 3]))]
    for text in lines:
        rng.choice(files).append(text)
        if rng.random() < 0.1:
            rng.choice(files).append(text)
    asked = rng.sample(list(WORDS), rng.choice([0, 0, 1, 1, 2, 3]))
    words = {name: rng.choice(WORDS[name]) for name in asked}
    return Drawn(files, words, rng.choice([None, None, "JN58td"]), rng.choice([None, "mast"]))


def _lines(rng: Random) -> list[str]:
    dense = rng.random() < 0.5
    minutes = [*ODD_MINUTES, *range(690, 810, rng.choice([1, 5]))]
    receivers = RECEIVERS[: rng.choice([1, 1, 2, 3])]
    dials = DIALS[: rng.choice([1, 2, 5])]
    senders, locators = SENDERS[: rng.choice([1, 2, 12])], LOCATORS[: rng.choice([3, 7, 13])]
    places, modes = PLACES[: rng.choice([1, 2, 8])], MODES[: rng.choice([1, 3])]

    def time() -> str:
        day, minute = (0, rng.randrange(690, 760)) if dense else (rng.choice(DAYS), rng.choice(minutes))
        at = START + timedelta(days=day, minutes=minute, seconds=rng.choice(SECONDS))
        return at.strftime("%Y-%m-%dT%H:%M:%S.%f").rstrip("0").rstrip(".") + "Z"

    def times(*counts: int) -> list[str]:
        return [time() for _ in range(rng.choice(counts))]

    lines = []
    for at in times(0, 1, 3, 10):
        antenna = rng.choice(["wire", "loop", "none"])
        lines.append(
            setup(at, rng.choice(places), antenna, receiver=rng.choice(receivers), dial_hz=rng.choice(dials))
        )
    for at in times(0, 0, 1, 5, 20):
        dial_hz = rng.choice([*dials, "", ""])
        lines.append(watch(at, rng.choice(ON_S), receiver=rng.choice(receivers[:2]), dial_hz=dial_hz))
    lines += [stop(at, rng.choice(receivers)) for at in times(0, 0, 2, 5)]
    lines += [note(at, rng.choice(receivers)) for at in times(0, 2)]
    for at in times(0, 5, 40, 150):
        sender, locator = rng.choice(senders), rng.choice(locators)
        for receiver in receivers if rng.random() < 0.3 else [rng.choice(receivers)]:
            addressee = rng.choice(["", "", "Q2X", "q1abc", "Q9"])
            text, level = rng.choice(["", "a", "b\\t"]), rng.choice(LEVELS)
            lines.append(
                heard(
                    at, sender, receiver=receiver, dial_hz=rng.choice(dials), addressee=addressee,
                    locator=locator, snr_db=level, mode=rng.choice(modes), text=text,
                )
            )  # fmt: skip
    return lines
