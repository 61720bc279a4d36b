"""Listening that can be counted by hand."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from logtool import open_logs
from logtool.tables.checks import check_table
from logtool.tables.choice import choose
from tests.tables.making import heard, line, note, rows_of, setup, stop, table, watch, write

AT = "2026-03-01T21:{}Z"


def minutes(folder: Path, lines: list[str], **words: Any) -> dict[Any, float]:
    """Listening by hour and band."""
    rows = rows_of(folder, lines, "reach", **words)
    return {(row["hour"][11:13], row["band"]): row["listening_min"] for row in rows}


def gaps(folder: Path, lines: list[str], gap_min: float = 10.0) -> list[tuple[str, str, float]]:
    with open_logs(write(folder, lines)) as logs:
        findings = check_table(logs, choose(gap_min=gap_min)).findings or []
    return [(f["from"][11:], f["to"][11:], f["size"]) for f in findings if f["what"] == "gap"]


def test_six_lines_and_one_hole(tmp_path: Path) -> None:
    times = ("00:00", "05:00", "10:00", "20:00.000001", "25:00", "30:00")
    lines = [heard(AT.format(time)) for time in times]
    (row,) = rows_of(tmp_path, lines, "reach")
    assert (row["listening"], row["receptions"]) == ("assumed", 6)
    assert row["listening_min"] == 20.0  # twice ten minutes, less a microsecond
    assert gaps(tmp_path, lines) == [("21:10:00Z", "21:20:00.000001Z", 10.0)]


def test_a_hole_of_exactly_the_longest_gap_is_none(tmp_path: Path) -> None:
    lines = [heard(AT.format(time)) for time in ("00:00", "10:00", "20:00")]
    assert minutes(tmp_path, lines) == {("21", "40m"): 20.0}
    assert gaps(tmp_path, lines) == []
    assert minutes(tmp_path, lines, gap_min=9.99) == {("21", "40m"): 0.0}
    # None of the three points has a length, so there is nothing between two stretches either.
    assert gaps(tmp_path, lines, gap_min=9.99) == []


def test_any_kind_of_record_shows_that_it_ran(tmp_path: Path) -> None:
    noise = line("noise", AT.format("16:00"), more="dbfs=-40")
    lines = [heard(AT.format("00:00")), note(AT.format("08:00")), noise, note(AT.format("24:00"))]
    assert minutes(tmp_path, lines) == {("21", "40m"): 24.0}


def test_a_stop_ends_assumed_listening(tmp_path: Path) -> None:
    lines = [
        heard(AT.format("00:00")),
        stop(AT.format("05:00")),
        heard(AT.format("10:00")),
        note(AT.format("12:00")),
    ]
    assert minutes(tmp_path, lines) == {("21", "40m"): 7.0}


def test_a_lone_record_is_no_listening_and_makes_no_row(tmp_path: Path) -> None:
    lines = [heard("2026-03-01T18:00:00Z"), note(AT.format("00:00")), heard("2026-03-01T23:00:00Z")]
    assert minutes(tmp_path, lines) == {("18", "40m"): 0.0, ("23", "40m"): 0.0}


def test_assumed_listening_counts_for_the_dial_last_told(tmp_path: Path) -> None:
    lines = [
        note(AT.format("00:00")),
        setup(AT.format("05:00"), dial_hz=3573000),
        heard(AT.format("10:00"), dial_hz=7074000),
        heard(AT.format("10:00"), dial_hz=6100000),
        note(AT.format("20:00")),
    ]
    assert minutes(tmp_path, lines) == {
        ("21", None): 5.0,
        ("21", "80m"): 5.0,
        ("21", "40m"): 10.0,
        ("21", "6100 kHz"): 10.0,
    }


def test_watches_are_cut_at_hours_and_setups(tmp_path: Path) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z", antenna="wire"),
        watch("2026-03-01T22:30:00Z", 5400),
        setup("2026-03-01T21:45:00Z", antenna="loop"),
    ]
    rows = rows_of(tmp_path, lines, "reach")
    found = [(row["hour"][11:13], row["antenna"], row["listening_min"]) for row in rows]
    assert found == [("21", "loop", 15.0), ("21", "wire", 45.0), ("22", "loop", 30.0)]
    assert {row["listening"] for row in rows} == {"recorded"}
    assert {(row["receptions"], row["senders"], row["senders_in_30"]) for row in rows} == {
        (0, 0, None),
        (0, 0, 0.0),
    }


def test_watches_that_overlap_or_touch_are_joined(tmp_path: Path) -> None:
    ends = {"10:00": 600, "15:00": 600, "20:00": 300, "40:00": 60, "40:00.5": 60}
    lines = [watch(AT.format(end), on_s) for end, on_s in ends.items()]
    assert minutes(tmp_path, lines) == {("21", "40m"): round(20 + 60.5 / 60, 3)}


def test_two_receivers_listen_for_themselves(tmp_path: Path) -> None:
    lines = [watch(AT.format("10:00"), 600), watch(AT.format("10:00"), 600, receiver="isle")]
    rows = rows_of(tmp_path, lines, "reach")
    assert [(row["receiver"], row["listening_min"]) for row in rows] == [("hut", 10.0), ("isle", 10.0)]


def test_one_watch_anywhere_ends_all_assuming(tmp_path: Path) -> None:
    lines = [heard(AT.format("00:00")), heard(AT.format("05:00")), watch("2026-03-02T10:00:00Z", 0)]
    (row,) = rows_of(tmp_path, lines, "reach")
    assert (row["listening_min"], row["listening"]) == (0.0, "recorded")
    both = [*lines, heard(AT.format("00:00"), receiver="isle"), heard(AT.format("05:00"), receiver="isle")]
    assert [row["listening"] for row in rows_of(tmp_path, both, "reach")] == ["recorded", "assumed"]
    with open_logs(tmp_path) as logs:
        summary = table(logs, "reach").written_summary() or {}
    assert (summary["listening"], summary["listening_min"], summary["receiver"]) == ("mixed", 5.0, None)


def test_a_reception_outside_every_watch(tmp_path: Path) -> None:
    lines = [watch(AT.format("10:00"), 600), heard("2026-03-01T22:30:00Z"), heard(AT.format("50:00"))]
    assert minutes(tmp_path, lines) == {("21", "40m"): 10.0, ("22", "40m"): 0.0}


@pytest.mark.parametrize("on_s", ["0", "0.0", "-0"])
def test_a_watch_of_no_seconds_is_no_listening(tmp_path: Path, on_s: str) -> None:
    assert minutes(tmp_path, [watch(AT.format("10:00"), on_s)]) == {}


def test_a_stop_cuts_a_watch_only_strictly_inside(tmp_path: Path) -> None:
    ends = watch(AT.format("30:00"), 1800)
    for when, left in {
        "00:00": 30.0,
        "00:00.000001": 0.0,
        "10:00": 10.0,
        "30:00": 30.0,
        "40:00": 30.0,
    }.items():
        assert minutes(tmp_path, [ends, stop(AT.format(when))]) == {("21", "40m"): left}
    assert minutes(tmp_path, [ends, stop(AT.format("10:00"), "isle")]) == {("21", "40m"): 30.0}


def test_a_watch_without_a_dial_takes_the_last_told_before_its_end(tmp_path: Path) -> None:
    blind = watch(AT.format("30:00"), 600, dial_hz="")
    assert minutes(tmp_path, [blind]) == {("21", None): 10.0}
    tuned = [setup(AT.format("00:00"), dial_hz=3573000), blind]
    assert minutes(tmp_path, tuned) == {("21", "80m"): 10.0}
    for when, band in {"29:59.999999": "40m", "30:00": "80m"}.items():
        listened = minutes(tmp_path, [*tuned, heard(AT.format(when), dial_hz=7074000)])
        assert listened[("21", band)] == 10.0
    other = heard(AT.format("20:00"), dial_hz=7074000, receiver="isle")
    assert minutes(tmp_path, [*tuned, other])[("21", "80m")] == 10.0


def test_only_watches(tmp_path: Path) -> None:
    lines = [watch(AT.format("30:00"), 1800)]
    (row,) = rows_of(tmp_path, lines, "reach")
    assert (row["hour"], row["receiver"], row["antenna"], row["band"]) == (
        "2026-03-01T21:00:00Z", "hut", None, "40m",
    )  # fmt: skip
    assert (row["listening_min"], row["receptions"], row["senders_in_30"]) == (30.0, 0, 0.0)
    assert (row["median_km"], row["farthest_sender"], row["sun_zenith_deg"]) == (None, None, None)
    (night,) = rows_of(tmp_path, lines, "nights")
    assert (night["night"], night["listening_min"], night["senders_in_30"]) == ("2026-03-01", 30.0, 0.0)
    assert [rows_of(tmp_path, lines, name) for name in ("senders", "sectors", "between", "lines")] == [[]] * 4
