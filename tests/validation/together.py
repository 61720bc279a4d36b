"""How true the intervals of `compare`'s design `together` are: coverage, bias and what the checks tell.

    python -m tests.validation.together [--tables 2000] [--processes 2] [--cells WORD] [--seed 1]

Prints a table. A table's seed is the run's, the cell's place and the table's number, so each can be made again.
"""

from __future__ import annotations

import argparse
import time
from collections import Counter
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass
from datetime import UTC, datetime
from functools import partial

import numpy as np

import logtool
from logtool.verdicts.compare.together import estimate
from logtool.verdicts.compare.transmissions import Transmissions
from tests.validation.cells import PROMISED, STRESS
from tests.validation.made_transmissions import Setting, make

CELLS = PROMISED | STRESS
FAR_DB = 1.0  # an interval that misses the truth by more should be told of
CHUNK = 50


@dataclass(frozen=True)
class Trial:
    """What came of one table."""

    difference_db: float
    low_db: float
    high_db: float
    p_value: float
    of_these_db: float
    failed: tuple[str, ...]


def run_one(setting: Setting, seed: tuple[int, int], number: int) -> Trial | None:
    """Make a table and estimate; None where the table is said to hold too little."""
    made = make(setting, np.random.default_rng([*seed, number]))
    found = estimate(Transmissions(made.sender, made.this_db, made.that_db, made.spell))
    if found.difference_db is None:
        return None
    failed = tuple(check.name for check in found.checks if not check.holds)
    return Trial(found.difference_db, found.low_db, found.high_db, found.p_value, made.of_these_db, failed)


def summarise(setting: Setting, trials: list[Trial | None]) -> tuple[list[str], Counter[str]]:
    """Return a cell's figures as text, and how often each check failed."""
    good = [trial for trial in trials if trial is not None]
    truth_db = setting.difference_db
    low, middle, high, these = (
        np.array([getattr(trial, name) for trial in good])
        for name in ("low_db", "difference_db", "high_db", "of_these_db")
    )
    missed_db = np.maximum(np.maximum(low - truth_db, truth_db - high), 0)
    told = np.array([bool(trial.failed) for trial in good])
    beyond_few = np.array([bool(set(trial.failed) - {"few-senders"}) for trial in good])
    few = np.array(["few-senders" in trial.failed for trial in good])
    far = missed_db > FAR_DB
    figures = [
        f"{100 * np.mean(missed_db == 0):5.1f}",
        f"{100 * np.mean(low > truth_db):4.1f}",
        f"{100 * np.mean(missed_db[few] == 0):5.1f}" if few.any() else "    -",
        f"{100 * np.mean((low <= these) & (these <= high)):5.1f}",
        f"{np.mean(middle) - truth_db:+6.3f}",
        f"{np.mean(middle - these):+6.3f}",
        f"{np.std(middle):5.2f}",
        f"{np.mean(high - low):5.2f}",
        f"{100 * np.mean(told):5.1f}",
        f"{100 * np.mean(beyond_few):5.1f}",
        f"{100 * np.mean(far):5.1f}",
        f"{100 * np.mean(told[far]):5.1f}" if far.any() else "    -",
        f"{100 * np.mean(beyond_few[far]):5.1f}" if far.any() else "    -",
        f"{len(trials) - len(good):4d}",
    ]
    return figures, Counter(name for trial in good for name in trial.failed)


# cover: intervals that hold the mean of all senders; above: that lie above it; few: cover of the tables with under 12
# effective senders; these: that hold the mean of the table's own senders; bias against either; told: tables with a
# failed check; other: with one besides few-senders; far: intervals that miss by over 1 dB, and of these told and other.
HEAD = "cover above  few  these   bias b.these   sd  width  told  other  far  told  other none  cell; failed checks"


def main() -> None:
    """Run the cells and print the table."""
    words = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    words.add_argument("--tables", type=int, default=2000, help="tables in each cell")
    words.add_argument("--processes", type=int, default=1)
    words.add_argument("--cells", default="", help="only cells whose name has this in it")
    words.add_argument("--seed", type=int, default=1)
    chosen = words.parse_args()
    today = f"{datetime.now(UTC):%Y-%m-%d}"
    print(f"logtool {logtool.__version__}, {today}, {chosen.tables} tables a cell, seed {chosen.seed}")
    print(HEAD)
    with ProcessPoolExecutor(chosen.processes) as pool:
        for place, (name, setting) in enumerate(CELLS.items()):
            if chosen.cells not in name:
                continue
            start = time.perf_counter()
            run = partial(run_one, setting, (chosen.seed, place))
            trials = list(pool.map(run, range(chosen.tables), chunksize=CHUNK))
            figures, failed = summarise(setting, trials)
            shares = ", ".join(f"{key} {100 * n / len(trials):.1f}" for key, n in failed.most_common())
            each_ms = 1000 * (time.perf_counter() - start) / len(trials) * chosen.processes
            print("  ".join(figures), f" {name}; {shares}; {each_ms:.0f} ms", flush=True)


if __name__ == "__main__":
    main()
