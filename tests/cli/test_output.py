"""What the commands print: JSON, CSV, tables, files, and what goes where."""

from __future__ import annotations

import csv
import hashlib
import io
import json
import re
from pathlib import Path

import pytest

from tests.cli.calling import HEADER, call, call_on_terminal, heard, setup

TABLES = ("check", "reach", "senders", "sectors", "nights", "between", "lines")
ENVELOPE = ["logtool", "layout", "command", "options", "inputs", "rows"]
LEDGER = [
    "file",
    "digest",
    "bytes",
    "lines",
    "blank",
    "comments",
    "records",
    "repeated",
    "set_aside",
    "reasons",
]


@pytest.fixture
def log(tmp_path: Path) -> Path:
    """A log of five good lines and one bad one."""
    path = tmp_path / "night.log"
    path.write_text(
        HEADER
        + setup("2026-03-01T22:00:00Z")
        + heard("2026-03-01T22:01:00Z", locator="JN58")
        + heard("2026-03-01T22:03:00Z")
        + heard("2026-03-01T22:05:00Z", "Q2XY", locator="ZZ99")
        + heard("2026-03-01T22:05:00Z", "Q2XY", locator="KO02", snr_db="7.25")
    )
    return path


@pytest.mark.parametrize("command", TABLES)
def test_json_has_the_envelope_and_a_ledger_that_adds_up(command: str, log: Path) -> None:
    done = call(command, "--json", log)
    assert done.returncode == 0
    assert done.stderr == ""
    told = json.loads(done.stdout)
    assert list(told)[: len(ENVELOPE)] == ENVELOPE
    assert set(told) - set(ENVELOPE) <= {"summary", "findings", "notes"}
    assert (told["layout"], told["command"]) == (1, command)
    (ledger,) = told["inputs"]
    assert list(ledger) == LEDGER
    assert ledger["digest"] == "sha256:" + hashlib.sha256(log.read_bytes()).hexdigest()
    assert ledger["bytes"] == log.stat().st_size
    assert ledger["lines"] == 6
    assert ledger["lines"] == sum(ledger[key] for key in LEDGER[4:9])
    assert ledger["reasons"] == {"bad-locator": 1}


def test_options_are_told_with_their_defaults(log: Path) -> None:
    options = json.loads(call("reach", "--json", "--band", "40m", "--from", "2026-03-01", log).stdout)[
        "options"
    ]
    assert options["band"] == ["40m"]
    assert options["from"] == "2026-03-01"
    assert options["gap_min"] == 10
    assert options["at"] is None
    assert set(options) >= {"to", "receiver", "antenna", "mode", "night", "sender", "by", "antenna_name"}


@pytest.mark.parametrize("command", [name for name in TABLES if name != "check"])
def test_csv_and_json_have_the_same_rows(command: str, log: Path) -> None:
    rows = json.loads(call(command, "--json", log).stdout)["rows"]
    printed = call(command, "--csv", log).stdout
    found = list(csv.DictReader(io.StringIO(printed, newline="")))
    assert len(found) == len(rows)
    for row, cells in zip(rows, found, strict=True):
        assert list(row) == list(cells)
        for name, value in row.items():
            wanted = "" if value is None else str(value).lower() if isinstance(value, bool) else str(value)
            assert cells[name] == wanted


def test_check_shows_the_line_that_was_set_aside(log: Path) -> None:
    (row,) = json.loads(call("check", "--json", log).stdout)["rows"]
    assert (row["file"], row["line"], row["reason"]) == (str(log), 5, "bad-locator")
    assert "\\tZZ99\\t" in row["shown"]


def test_set_aside_lines_go_to_a_file(log: Path, tmp_path: Path) -> None:
    call("reach", "--set-aside", tmp_path / "aside.txt", log)
    (line,) = (tmp_path / "aside.txt").read_text().splitlines()
    file, number, reason, shown = line.split("\t")
    assert (file, number, reason) == (str(log), "5", "bad-locator")
    assert shown == log.read_text().splitlines()[4].replace("\t", "\\t")


def test_times_and_numbers_leave_as_the_docs_say(log: Path) -> None:
    told = json.loads(call("senders", "--json", log).stdout)["rows"]
    assert [row["sender"] for row in told] == ["Q1ABC", "Q2XY"]
    assert told[0]["first"] == "2026-03-01T22:01:00Z"
    assert told[1]["snr_median_db"] == 7.25
    for row in told:
        for name, value in row.items():
            if isinstance(value, float):
                digits = len(f"{value!r}".split(".")[1])
                assert digits <= (4 if name.endswith("_deg") else 3)


def test_out_writes_the_same_as_is_printed(log: Path, tmp_path: Path) -> None:
    out = tmp_path / "rows.csv"
    done = call("senders", "--csv", "-o", out, log)
    assert done.stdout == ""
    assert out.read_bytes().decode() == call("senders", "--csv", log).stdout.replace("\n", "\r\n")
    assert [path.name for path in tmp_path.iterdir() if path.name.startswith(".")] == []


def test_standard_input_is_read_last_and_named_by_a_dash(log: Path) -> None:
    done = call("reach", "--json", "-", input=log.read_text())
    assert json.loads(done.stdout)["inputs"][0]["file"] == "-"
    assert json.loads(done.stdout)["rows"] == json.loads(call("reach", "--json", log).stdout)["rows"]


def test_the_same_call_gives_the_same_bytes() -> None:
    first, second = call("reach", "--json", "sample_logs"), call("reach", "--json", "sample_logs")
    assert first.stdout == second.stdout
    assert len(first.stdout) > 100_000


def test_a_terminal_shows_the_last_day_and_the_columns_that_fit() -> None:
    shown = call_on_terminal("reach", "sample_logs", columns=100)
    lines = [re.sub(r"\x1b\[[0-9;]*m", "", line) for line in shown.splitlines()]
    assert "earlier rows are not shown" in shown
    assert max(len(line) for line in lines) <= 100
    rows = [line for line in lines if re.match(r"2026-03-0\d ", line) and "UTC" not in line]
    assert {row[:10] for row in rows} == {"2026-03-08", "2026-03-09"}
    assert "█" in shown
    everything = call_on_terminal("reach", "--all", "sample_logs", columns=100)
    assert "2026-03-02 15:00" in everything


def test_a_pipe_gets_all_rows_and_no_progress() -> None:
    done = call("reach", "sample_logs")
    rows = [
        line
        for line in done.stdout.splitlines()
        if re.match(r"2026-03-0\d \d\d:00", line) and "UTC" not in line
    ]
    assert len(rows) == len(json.loads(call("reach", "--json", "sample_logs").stdout)["rows"])
    assert "\x1b" not in done.stdout + done.stderr
    assert done.stderr == ""


def test_a_distance_below_its_uncertainty_is_shown_as_such(tmp_path: Path) -> None:
    (tmp_path / "near.log").write_text(
        setup("2026-03-01T22:00:00Z") + heard("2026-03-01T22:01:00Z", locator="JO74")
    )
    shown = call("senders", tmp_path).stdout
    row = json.loads(call("senders", "--json", tmp_path).stdout)["rows"][0]
    assert row["distance_km"] < row["uncertainty_km"]
    assert row["bearing_deg"] is None
    assert f"< {round(row['uncertainty_km'])}" in shown
