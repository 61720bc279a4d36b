"""`make bench`: logtool against bare peers that do the same work, in turn, as whole processes.

Prints for each pair the median wall and processor seconds, the peak memory and the ratio pair by pair.
Nothing here decides whether a test passes.
"""

from __future__ import annotations

import json
import os
import statistics
import subprocess
import sys
import time
from dataclasses import dataclass
from pathlib import Path

from tests.benchmarks.make_foreign import make_foreign
from tests.benchmarks.make_log import make_log

FOLDER = Path("bench")
RUNS = 5
MANY, WEEK = 10_000_000, 300_000
LOGTOOL = [sys.executable, "-m", "logtool"]
PEERS = {
    "duckdb": [sys.executable, "-m", "tests.benchmarks.peer_duckdb"],
    "polars": [sys.executable, "-m", "tests.benchmarks.peer_polars"],
}


@dataclass(frozen=True)
class Run:
    """One run of a command as the operating system accounts for it."""

    wall_s: float
    processor_s: float
    peak_mb: float


def measure(command: list[str]) -> Run:
    """Return what one run of a command takes; its output is thrown away."""
    start = time.perf_counter()
    with open(os.devnull, "wb") as nowhere:
        process = subprocess.Popen(command, stdout=nowhere, stderr=nowhere)
        _, status, used = os.wait4(process.pid, 0)
    if status:
        raise SystemExit(f"{' '.join(command)} failed")
    return Run(time.perf_counter() - start, used.ru_utime + used.ru_stime, used.ru_maxrss / 1024)


def told(name: str, runs: list[Run]) -> None:
    """Print the medians of some runs."""
    wall, processor, peak = (
        statistics.median(getattr(run, field) for run in runs)
        for field in ("wall_s", "processor_s", "peak_mb")
    )
    print(f"{name:34s} {wall:7.2f} s wall {processor:7.2f} s processor {peak:6.0f} MB", flush=True)


def pair(name: str, command: list[str], other_name: str, other: list[str]) -> None:
    """Run two commands in turn and print both and the ratio of their wall times, pair by pair."""
    measure(command), measure(other)
    ours, theirs = [], []
    for _ in range(RUNS):
        ours.append(measure(command))
        theirs.append(measure(other))
    told(name, ours)
    told(other_name, theirs)
    ratios = sorted(a.wall_s / b.wall_s for a, b in zip(ours, theirs, strict=True))
    print(
        f"{'':34s} ratio {ratios[0]:.2f} to {ratios[-1]:.2f}, median {statistics.median(ratios):.2f}",
        flush=True,
    )


def agree(log: Path) -> None:
    """Stop unless the peers print the rows that `reach` prints, so that they do the same work."""
    ours = json.loads(
        subprocess.run([*LOGTOOL, "reach", "--json", str(log)], capture_output=True, check=True).stdout
    )
    for name, command in PEERS.items():
        rows = json.loads(subprocess.run([*command, str(log)], capture_output=True, check=True).stdout)
        wanted = [{key: row[key] for key in rows[0]} for row in ours["rows"] if row["receptions"]]
        if rows != wanted:
            raise SystemExit(f"the {name} peer gives other rows than reach: they do not do the same work")
    print(f"both peers give the {len(ours['rows'])} rows of reach", flush=True)


def read_alike(log: Path, text: Path, recipe: Path) -> None:
    """Stop unless a text by its recipe gives the rows that the same records in the layout give."""
    commands = [[str(log)], ["--recipe", str(recipe), str(text)]]
    rows = [
        json.loads(
            subprocess.run([*LOGTOOL, "reach", "--json", *words], capture_output=True, check=True).stdout
        )["rows"]
        for words in commands
    ]
    if rows[0] != rows[1]:
        raise SystemExit(
            "the text by its recipe gives other rows than the log: they are not the same records"
        )


def main() -> None:
    """Make the logs that are missing and measure."""
    FOLDER.mkdir(exist_ok=True)
    logs = {"week": (WEEK, 0.0), "many": (MANY, 0.0), "dirty": (MANY, 0.01)}
    for name, (lines, bad_share) in logs.items():
        if not (FOLDER / f"{name}.log").exists():
            make_log(lines, FOLDER / f"{name}.log", bad_share)
    week, many, dirty = (FOLDER / f"{name}.log" for name in logs)
    texts = {log: FOLDER / f"{log.stem}-foreign.txt" for log in (week, many)}
    recipe = FOLDER / "foreign.toml"
    for log, text in texts.items():
        if not text.exists():
            make_foreign(log, text, recipe)
    agree(week)
    read_alike(week, texts[week], recipe)
    for name in ("--help", "reach", "senders", "sectors", "nights", "map"):
        where = ["--out", str(FOLDER / "map.html")] if name == "map" else []
        command = [*LOGTOOL, name, *where, *([str(week)] if name[0] != "-" else [])]
        runs = [measure(command) for _ in range(RUNS + 1)][1:]
        told(f"logtool {name}, a week", runs)
    reach = [*LOGTOOL, "reach", "--json"]
    for name, command in PEERS.items():
        pair("logtool reach, ten million lines", [*reach, str(many)], f"bare {name}", [*command, str(many)])
    for log in (week, many):
        by_recipe = [*reach, "--recipe", str(recipe), str(texts[log])]
        pair(
            f"logtool reach, {log.stem} by a recipe", by_recipe, "the same in the layout", [*reach, str(log)]
        )
    pair("logtool reach, 1 % bad lines", [*reach, str(dirty)], "logtool reach, clean", [*reach, str(many)])


if __name__ == "__main__":
    main()
