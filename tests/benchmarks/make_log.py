"""Make an invented log of any size for the benchmarks: a receiver, about 110 senders an hour, one dial.

Run `python -m tests.benchmarks.make_log LINES FILE`. The same arguments give the same bytes.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

LINES_A_DAY = 43_000  # a busy week has some 300 000 lines
SENDERS_AN_HOUR = 110
SLOTS_AN_HOUR = 240  # of 15 s
LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"
START = np.datetime64("2026-03-01T00:00:00")


def make_log(lines: int, path: Path, bad_share: float = 0.0) -> None:
    """Write a log of about so many lines; of each hundred, `bad_share` times a hundred break the layout."""
    rng = np.random.default_rng(1)
    days = max(1, round(lines / LINES_A_DAY))
    senders = min(20_000, 800 + 40 * days)
    calls = [
        f"Q{i % 10}{LETTERS[i // 676 % 26]}{LETTERS[i // 26 % 26]}{LETTERS[i % 26]}" for i in range(senders)
    ]
    places = [
        f"{LETTERS[a]}{LETTERS[b]}{c}{d}"
        for a, b, c, d in zip(
            rng.integers(5, 16, senders),
            rng.integers(8, 16, senders),
            rng.integers(0, 10, senders),
            rng.integers(0, 10, senders),
            strict=True,
        )
    ]
    weight = 1 / (1 + np.arange(senders)) ** 0.6
    weight /= weight.sum()
    written = 0
    with path.open("w", encoding="utf-8", newline="") as file:
        file.write("# logtool layout 1\n2026-02-28T23:00:00Z\tsetup\thut\t7041500" + "\t" * 7)
        file.write("JO74xa\t\t\tantenna=wire\n")
        for hour in range(24 * days):
            count = lines * (hour + 1) // (24 * days) - written
            written += count
            file.write(_hour(rng, hour, count, (calls, places, weight), bad_share))


def _hour(
    rng: np.random.Generator,
    hour: int,
    count: int,
    stations: tuple[list[str], list[str], np.ndarray],
    bad_share: float,
) -> str:
    calls, places, weight = stations
    active = rng.choice(len(calls), SENDERS_AN_HOUR, p=weight, replace=False)
    share = rng.gamma(0.7, 1, len(active))
    # A sender has one message a slot, so no line is a repeat and a script that knows none counts the same.
    chance = np.tile(share / share.sum() / SLOTS_AN_HOUR, SLOTS_AN_HOUR)
    slots, which = np.divmod(np.sort(rng.choice(len(chance), count, replace=False, p=chance)), len(active))
    who = active[which]
    times = (START + np.timedelta64(hour, "h") + (slots * 15).astype("timedelta64[s]")).astype(str)
    snr_db = np.clip(np.round(who % 23 - 20 + rng.normal(0, 4, count)), -24, 20).astype(int)
    late_s, calling, bad = rng.integers(-9, 15, count), rng.random(count) < 0.4, rng.random(count) < bad_share
    lines = []
    for i, sender in enumerate(who):
        call, place = calls[sender], places[sender] if calling[i] else ""
        text = f"CQ {call} {place}" if place else f"Q9XYZ {call} {snr_db[i]:+03d}"
        lines.append(
            f"{times[i]}{'' if bad[i] else 'Z'}\theard\thut\t7041500\t{200 + sender * 7919 % 2600}\t{snr_db[i]}\t"
            f"{late_s[i] / 10}\tKB15\t{call}\t{'' if place else 'Q9XYZ'}\t{place}\t\t{text}\t\n"
        )
    return "".join(lines)


if __name__ == "__main__":
    make_log(int(sys.argv[1]), Path(sys.argv[2]), float(sys.argv[3]) if len(sys.argv) > 3 else 0.0)
