"""What `convert` and the others must not overwrite, refuse, or leave half done."""

from __future__ import annotations

import os
import signal
import subprocess
import time
from pathlib import Path

import pytest

from tests.benchmarks.make_log import make_log
from tests.cli.calling import COMMAND, HEADER, ROOT, call, heard, heeding_interrupts

RECIPE = """recipe = 1
[constants]
receiver = "hut"
dial_hz = 7041500
[[line]]
kind = "heard"
separator = ","
columns = ["time", "sender"]
"""
TEXT = "2026-03-01T18:00:00Z,Q1ABC\n2026-03-01T18:00:15Z,Q2DEF\n"


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "r.toml").write_text(RECIPE)
    (tmp_path / "t.txt").write_text(TEXT)
    return tmp_path


@pytest.mark.parametrize("command", ["reach", "map", "convert"])
def test_the_recipe_is_never_the_output(command: str, folder: Path) -> None:
    done = call(
        command, "--recipe", "r.toml", "t.txt", "--at", "JO74", "-o", "r.toml", cwd=folder, env=here()
    )
    assert done.returncode == 2
    assert "r.toml is the recipe" in done.stderr
    assert (folder / "r.toml").read_text() == RECIPE


def test_suggest_never_overwrites_the_text(folder: Path) -> None:
    done = call("convert", "--suggest", "t.txt", "-o", "t.txt", cwd=folder, env=here())
    assert done.returncode == 2
    assert (folder / "t.txt").read_text() == TEXT


@pytest.mark.parametrize("words", [["--hide-senders"], ["--coarsen", "4"], ["--to", "csv"]])
def test_suggest_refuses_what_it_would_not_do(words: list[str], folder: Path) -> None:
    done = call("convert", "--suggest", "t.txt", *words, cwd=folder, env=here())
    assert done.returncode == 2
    assert words[0] in done.stderr


def test_nothing_is_written_where_there_is_no_record(folder: Path) -> None:
    (folder / "old.csv").write_text("old")
    (folder / "empty.log").write_text(HEADER)
    done = call("convert", "empty.log", "--to", "csv", "-o", "old.csv", cwd=folder, env=here())
    assert done.returncode == 1
    assert "convert --suggest" in done.stderr
    assert (folder / "old.csv").read_text() == "old"


def test_a_file_keeps_its_rights(folder: Path) -> None:
    out = folder / "out.csv"
    out.write_text("old")
    out.chmod(0o600)
    assert (
        call(
            "convert", "--recipe", "r.toml", "t.txt", "--to", "csv", "-o", "out.csv", cwd=folder, env=here()
        ).returncode
        == 0
    )
    assert out.stat().st_mode & 0o777 == 0o600
    assert out.read_text().count("Q") == 2


def test_many_records_come_in_order_though_sorted_in_pieces(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    from logtool.records import in_order
    from logtool.records.opening import open_logs

    times = [f"2026-03-01T{h:02d}:{m:02d}:00Z" for h in range(24) for m in range(60)]
    lines = [heard(at, f"Q{i % 7}A{'ABCDEFG'[i % 7]}") for i, at in enumerate(reversed(times))]
    log = tmp_path / "a.log"
    log.write_text(HEADER + "".join(lines))
    monkeypatch.setattr(in_order, "PIECE_ROWS", 100)
    with open_logs(log) as logs:
        found = logs.to_arrow().column("time").to_pylist()
    assert len(found) == len(times)
    assert found == sorted(found)


def test_ctrl_c_in_a_query_ends_with_130_and_the_old_file(tmp_path: Path) -> None:
    log, out = tmp_path / "a.log", tmp_path / "out.csv"
    make_log(300_000, log)
    out.write_text("old")
    for wait_s in (0.8, 1.2, 1.6):
        process = subprocess.Popen(
            [*COMMAND, "convert", str(log), "--to", "csv", "-o", str(out)],
            stderr=subprocess.PIPE,
            text=True,
            cwd=ROOT,
            preexec_fn=heeding_interrupts,
        )
        time.sleep(wait_s)
        process.send_signal(signal.SIGINT)
        _, told = process.communicate(timeout=60)
        assert process.returncode == 130, told
        assert "interrupted" in told
        assert out.read_text() == "old"
        assert sorted(path.name for path in tmp_path.iterdir()) == ["a.log", "out.csv"]


def here() -> dict[str, str]:
    """The environment in which the command is found from another folder."""
    return {**os.environ, "PYTHONPATH": str(ROOT)}
