"""The same records give the same bytes, however they are ordered, split, packed, repeated or read."""

from __future__ import annotations

import tempfile
from collections.abc import Iterator
from pathlib import Path
from random import Random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logtool import open_logs
from tests.tables.drawing import drawn
from tests.tables.making import all_rows, heard, rows_of, setup, table, write

WITHOUT_WATCHES = 47


@pytest.fixture
def folder() -> Iterator[Path]:
    with tempfile.TemporaryDirectory() as name:
        yield Path(name)


def without_twins(lines: list[str]) -> list[str]:
    """The lines without a second setup of one receiver at one time: of these the order decides."""
    seen, left = set(), []
    for text in lines:
        key = tuple(text.split("\t")[:3])
        if key[1] != "setup" or key not in seen:
            left.append(text)
        seen.add(key)
    return left


@settings(max_examples=3, deadline=None, derandomize=True, database=None)
@given(seed=st.integers(0, 10**6))
def test_one_log_in_many_ways(seed: int) -> None:
    rng = Random(seed)
    lines = without_twins([text for file in drawn(seed).files for text in file])
    cuts = sorted(rng.randrange(len(lines) + 1) for _ in range(3))
    parts = [lines[a:b] for a, b in zip([0, *cuts], [*cuts, len(lines)], strict=True)]
    with tempfile.TemporaryDirectory() as name:
        base = Path(name)
        whole = write(base / "whole", lines)
        ways = {
            "split": (write(base / "split", *parts),),
            "packed": (write(base / "packed", *parts, packed=True),),
            "other order of lines": (write(base / "order", rng.sample(lines, len(lines))),),
            "other names": (write(base / "names", *reversed(parts)),),
            "twice": (whole, write(base / "twice", lines)),
            "twice in one file": (write(base / "doubled", [text for text in lines for _ in range(2)]),),
            "paths from last to first": tuple(sorted((base / "split").iterdir(), reverse=True)),
        }
        with open_logs(whole, threads=1) as logs:
            expected = all_rows(logs)
        with open_logs(whole, threads=2) as logs:
            assert all_rows(logs) == expected, "two threads"
        for way, paths in ways.items():
            with open_logs(*paths, threads=1, anyway=True) as logs:
                assert all_rows(logs) == expected, way


def test_tables_do_not_disturb_each_other(folder: Path) -> None:
    write(folder, *drawn(WITHOUT_WATCHES).files)
    narrow = {"from_": "2026-12-31T11:40:10Z", "to": "2026-12-31T12:20:00Z"}
    with open_logs(folder) as logs:
        wide_first = all_rows(logs)
        cut = all_rows(logs, **narrow)
        assert all_rows(logs) == wide_first
        assert all_rows(logs, gap_min=1.0) != wide_first
        assert all_rows(logs) == wide_first
    with open_logs(folder) as logs:
        assert all_rows(logs, **narrow) == cut
        assert all_rows(logs) == wide_first


@pytest.mark.parametrize("names", [("hut", "isle"), ("isle", "hut")])
def test_a_sender_heard_at_two_places_at_once_has_one_distance_in_the_summary(
    folder: Path, names: tuple[str, str]
) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z", "JN58td", receiver=names[0]),
        setup("2026-03-01T20:00:00Z", "KO02aa", receiver=names[1]),
        heard("2026-03-01T21:00:00Z", locator="IO91", receiver=names[0]),
        heard("2026-03-01T21:00:00Z", locator="IO91", receiver=names[1]),
    ]
    with open_logs(write(folder, lines)) as logs:
        made = table(logs, "reach")
    far = max(row["farthest_once_km"] for row in made.rows())
    assert made.written_summary()["farthest_once_km"] == far  # of KO02aa, the last by name


def test_of_two_setups_at_one_time_the_later_read_wins_everywhere(folder: Path) -> None:
    first = setup("2026-03-01T20:00:00Z", "JN58td", "wire", dial_hz=3573000)
    second = setup("2026-03-01T20:00:00Z", "KO02aa", "loop", dial_hz=7074000)
    # The dial of the one that lost is not listened on either: heard lines follow within ten minutes.
    notes = [heard("2026-03-01T20:05:00Z", ""), heard("2026-03-01T20:10:00Z", "")]
    for nth, (lines, antenna) in enumerate(
        [([first, second], "loop"), ([second, first], "wire"), ([second, first, second], "wire")]
    ):
        rows = rows_of(folder / str(nth), [*lines, *notes], "reach")
        assert {row["antenna"] for row in rows} == {antenna}
        listened = {row["band"]: row["listening_min"] for row in rows}
        assert listened == ({"40m": 10.0} if antenna == "loop" else {"80m": 5.0, "40m": 5.0})
