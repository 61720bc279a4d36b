"""The ledger of files read by a recipe, and where `check`, `lines` and `--set-aside` say that a line stands."""

from __future__ import annotations

import gzip
import json
from pathlib import Path

import pytest

from logtool.records.opening import open_logs
from tests.cli.calling import HEADER, call, heard
from tests.recipes.comparing import compare_ledger, in_blocks_of, recipe, rule

TEXT = recipe(
    rule("skip", name="banner", pattern="==.*")
    + rule("carry", name="dial", pattern=r"dial (?P<dial_khz>\S+)")
    + rule(separator=",", columns=["time", "sender", "snr_db"])
    + rule("stop", pattern="stop (?P<time>.*)"),
    "skip = ['^//']\n",
)
DATA = (
    b"== start\n// remark\n\ndial 7074\n2026-03-01T18:00:00Z,Q1A,-3\n2026-03-01T18:00:00Z,Q1A,-3\r\n"
    b"2026-03-01T18:00:15Z,Q1A,x\nwhat is this\n2026-03-01T18:00:30Z,Q1\xff,3\n \t\n"
    b"2026-03-01 18:00:99Z,Q1A,3\nstop 2026-03-01T19:00:00Z\nwhat is this\n2026-03-01T18:01:00Z,Q1B,999"
)


@pytest.mark.parametrize("size", [20, 100, 1 << 20])
def test_each_line_is_counted_once(size: int, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    compare_ledger(tmp_path, TEXT, {"a.txt": DATA, "b.txt": DATA[60:], "c.txt": DATA})


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "r.toml").write_text(TEXT)
    (tmp_path / "a.txt").write_bytes(DATA)
    return tmp_path


def test_the_ledger_by_hand(folder: Path) -> None:
    with open_logs(folder / "a.txt", recipe=folder / "r.toml") as logs:
        (ledger,) = logs.inputs
    assert ledger.as_dict() | {"digest": None} == {
        "file": str(folder / "a.txt"), "digest": None, "bytes": len(DATA), "lines": 14, "blank": 2, "comments": 3,
        "records": 2, "repeated": 1, "set_aside": 6,
        "reasons": {"bad-encoding": 1, "bad-snr_db": 1, "bad-time": 1, "no-rule": 2, "range-snr_db": 1},
        "rules": {"bad-encoding": 1, "banner": 1, "dial": 1, "heard": 5, "no-rule": 2, "skip": 1, "stop": 1},
    }  # fmt: skip


def test_lines_set_aside_are_written_as_they_stand(folder: Path) -> None:
    out = folder / "aside"
    assert call("reach", "--recipe", folder / "r.toml", "--set-aside", out, folder / "a.txt").returncode == 0
    rows = [line.split("\t")[1:] for line in out.read_text().splitlines()]
    assert rows == [
        ["7", "bad-snr_db", "2026-03-01T18:00:15Z,Q1A,x"],
        ["8", "no-rule", "what is this"],
        ["9", "bad-encoding", "2026-03-01T18:00:30Z,Q1\\xff,3"],
        ["11", "bad-time", "2026-03-01 18:00:99Z,Q1A,3"],
        ["13", "no-rule", "what is this"],
        ["14", "range-snr_db", "2026-03-01T18:01:00Z,Q1B,999"],
    ]


def test_commands_name_the_line_of_the_original(folder: Path) -> None:
    words = ("--recipe", folder / "r.toml", "--json", folder / "a.txt")
    told = json.loads(call("lines", *words).stdout)
    assert [(Path(row["file"]).name, row["line"]) for row in told["rows"]] == [("a.txt", 5)]
    told = json.loads(call("check", *words).stdout)
    assert [(row["line"], row["reason"], row["shown"]) for row in told["rows"]] == [
        (7, "bad-snr_db", "2026-03-01T18:00:15Z,Q1A,x"),
        (8, "no-rule", "what is this"),
        (9, "bad-encoding", "2026-03-01T18:00:30Z,Q1\\xff,3"),
        (11, "bad-time", "2026-03-01 18:00:99Z,Q1A,3"),
        (13, "no-rule", "what is this"),
        (14, "range-snr_db", "2026-03-01T18:01:00Z,Q1B,999"),
    ]


def test_both_kinds_of_files_go_together(folder: Path) -> None:
    (folder / "b.log").write_text(HEADER + heard("2026-03-01T18:00:00Z") + "bad\n")
    (folder / "c.log.gz").write_bytes(gzip.compress((HEADER + heard("2026-03-02T18:00:00Z")).encode()))
    (folder / "d.log").write_bytes(b"\xef\xbb\xbf" + (HEADER + heard("2026-03-03T18:00:00Z")).encode())
    (folder / "e.log").write_text("")
    with open_logs(folder, recipe=folder / "r.toml") as logs:
        assert [(file.records, file.rules is None) for file in logs.inputs] == [
            (2, False), (1, True), (1, True), (1, True), (0, False),
        ]  # fmt: skip


def test_a_line_made_equal_to_another_files_counts_once(folder: Path) -> None:
    made = "2026-03-01T18:00:00Z\theard\thut\t7074000\t\t-3\t\t\tQ1A\t\t\t\t\t\n"
    (folder / "b.log").write_text(HEADER + made)
    with open_logs(folder, recipe=folder / "r.toml") as logs:
        assert [file.repeated for file in logs.inputs] == [1, 1]


def test_own_setups_begin_at_the_first_record_that_stands(tmp_path: Path) -> None:
    constants = "[constants]\nreceiver = 'hut'\nplace = 'JN58td'\nantenna = 'wire'\n"
    text = recipe(rule(separator=",", columns=["time", "dial_khz", "sender"]), constants=constants)
    (tmp_path / "r.toml").write_text(text)
    (tmp_path / "a.txt").write_text(
        "2026-03-01T17:00:00Z,x,Q1A\n2026-03-01T18:00:00Z,7074,Q1A\n2026-03-01T17:30:00Z,7075,Q1B\n"
    )
    with open_logs(tmp_path / "a.txt", recipe=tmp_path / "r.toml") as logs:
        (setup,) = logs.setups["hut"]
        assert (setup.locator, setup.antenna, setup.dial_hz) == ("JN58td", "wire", 7075000)
        assert setup.time_us == 1_772_386_200_000_000
