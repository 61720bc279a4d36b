"""The map of any logs: it agrees with the tables, is the same each time, and small and quick for a week."""

from __future__ import annotations

import os
import subprocess
import sys
import time
from collections import defaultdict
from datetime import datetime
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logtool import NoRecordsError, UsageError, open_logs
from logtool.pages.map import map_data_of, map_text
from logtool.tables.choice import choose
from tests.pages.map_cases import call_sign, spread
from tests.pages.map_made import SAMPLES, drawn_in
from tests.tables.drawing import drawn
from tests.tables.making import heard, setup, table, write

MB = 1_000_000
WEEK_LINES = 300_000
WEEK_LIMIT_BYTES = 4 * MB
WEEK_SECONDS = 15.0  # measured 2.2; the limit is for a loaded machine
PRINT_DIGEST = """
import hashlib, sys
from logtool import open_logs
from logtool.pages.map import map_text
from logtool.tables.choice import choose
with open_logs(sys.argv[1], threads=int(sys.argv[2])) as logs:
    print(hashlib.sha256(map_text(logs, choose(), options=[("band", "all")]).encode()).hexdigest())
"""


@settings(max_examples=800, deadline=None, database=None)
@given(seed=st.integers(0, 10**6))
def test_any_logs_give_the_figures_of_the_tables(tmp_path_factory: pytest.TempPathFactory, seed: int) -> None:
    log = drawn(seed)
    chosen = {key: value for key, value in log.words.items() if key != "by"}
    with open_logs(write(tmp_path_factory.mktemp("any"), *log.files), at=log.at, threads=1) as logs:
        rows = list(table(logs, "senders", **chosen).rows())
        try:
            data = map_data_of(logs, choose(**chosen))
        except (UsageError, NoRecordsError):
            assert all(row["distance_km"] is None for row in rows)
            return
    names = [receiver.name for receiver in data.receivers]
    rows = [row for row in rows if row["receiver"] in names]
    shown: dict[tuple[str, str], int] = defaultdict(int)
    for sender, group, count in zip(
        data.totals.sender, data.totals.group, data.totals.receptions, strict=True
    ):
        shown[names[data.groups[group].receiver], data.senders[sender].name] += count
    wanted: dict[tuple[str, str], int] = defaultdict(int)
    for row in rows:
        wanted[row["receiver"], row["sender"]] += row["receptions"]
    assert shown == wanted
    assert sum(data.counts.receptions) == sum(data.totals.receptions)
    located = {row["sender"] for row in rows if row["locator"]}
    assert {sender.name for sender in data.senders if sender.locator} == located == drawn_in(data)
    for pair in data.pairs:
        name, receiver = data.senders[pair.sender].name, names[pair.receiver]
        of_pair = [row for row in rows if (row["receiver"], row["sender"]) == (receiver, name)]
        assert pair.first == min((row["first"] for row in of_pair), key=datetime.fromisoformat)
        assert 1 <= len(pair.lines) <= 5
        if len(of_pair) == 1:  # one band
            (row,) = of_pair
            own = pair.locator or data.senders[pair.sender].locator
            assert (own, pair.distance_km, pair.bearing_deg, pair.heard_again, pair.last) == tuple(
                row[key] for key in ("locator", "distance_km", "bearing_deg", "heard_again", "last")
            )


def test_two_processes_give_the_same_bytes() -> None:
    digests = {
        subprocess.run(
            [sys.executable, "-c", PRINT_DIGEST, str(SAMPLES), threads],
            env={**os.environ, "PYTHONHASHSEED": seed, "PYTHONPATH": str(SAMPLES.parent)},
            check=True, capture_output=True, text=True,
        ).stdout
        for seed, threads in (("1", "1"), ("2", "2"), ("3", "3"))
    }  # fmt: skip
    assert len(digests) == 1


@pytest.mark.slow
def test_a_week_is_small_and_quick(tmp_path: Path) -> None:
    places = spread(800)
    lines = [setup("2026-03-01T00:00:00Z")]
    step_s = 7 * 86_400 / WEEK_LINES
    for i in range(WEEK_LINES):
        sender = i * i * 7919 % 800
        at = time.strftime("%Y-%m-%dT%H:%M:%SZ", time.gmtime(1_772_323_200 + i * step_s))
        own = places[sender] if i % 3 else ""
        lines.append(heard(at, call_sign(sender), locator=own, snr_db=i % 41 - 25, audio_hz=i % 3000))
    write(tmp_path, lines)
    start = time.perf_counter()
    with open_logs(tmp_path) as logs:
        page = map_text(logs, choose())
    assert time.perf_counter() - start < WEEK_SECONDS
    assert len(page.encode()) < WEEK_LIMIT_BYTES
