"""Each exit status of `docs/commands.md`, by a call from the shell that ends with it."""

from __future__ import annotations

import re
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from tests.docs.running import ROOT, SAMPLES, TIMEOUT_S, environment, logtool

NO_RECORD, WRONG_USAGE, UNREAD, INTERRUPTED = 1, 2, 3, 130
STARTED_S = 20.0


@pytest.fixture
def night(tmp_path: Path) -> Path:
    path = tmp_path / "night.log"
    path.write_text("2026-03-01T22:00:00Z\tstop\thut" + "\t" * 11 + "\n", encoding="utf-8")
    return path


def test_page_names_all_of_them() -> None:
    page = (ROOT / "docs" / "commands.md").read_text(encoding="utf-8")
    assert re.findall(r"^\| (\d+) \|", page, flags=re.MULTILINE) == ["0", "1", "2", "3", "130"]


def test_done(night: Path) -> None:
    assert logtool("reach", str(night)).returncode == 0
    assert logtool("reach", str(night), "--band", "40m").returncode == 0  # nothing left is no error


def test_no_record_is_printed_all_the_same(tmp_path: Path) -> None:
    (tmp_path / "empty.log").write_text("# nothing yet\n", encoding="utf-8")
    done = logtool("check", str(tmp_path), "--json")
    assert done.returncode == NO_RECORD
    assert '"comments": 1' in done.stdout
    assert "no record" in done.stderr


def test_strict(night: Path) -> None:
    assert logtool("check", "--strict", str(night)).returncode == 0
    assert logtool("check", "--strict", str(SAMPLES / "2026-03-02.log")).returncode == NO_RECORD
    assert logtool("check", str(SAMPLES / "2026-03-02.log")).returncode == 0


@pytest.mark.parametrize(
    ("words", "told"),
    [
        (["--at", "ZZ99"], "not a locator"),
        (["--from", "tomorrow"], "neither a date nor a time"),
        (["--by", "sender"], "antenna, band, mode, night, receiver"),
        (["--nonsense"], "No such option"),
        (["--json", "--csv"], "exclude each other"),
    ],
)
def test_wrong_usage(night: Path, words: list[str], told: str) -> None:
    done = logtool("reach", str(night), *words)
    assert done.returncode == WRONG_USAGE
    assert told in done.stderr
    assert done.stdout == ""


def test_no_log_named() -> None:
    assert logtool("reach").returncode == WRONG_USAGE


def test_unread_and_unwritten(night: Path, tmp_path: Path) -> None:
    missing = logtool("reach", str(tmp_path / "no.log"))
    assert missing.returncode == UNREAD
    assert "no such file" in missing.stderr
    unwritten = logtool("reach", str(night), "--out", str(tmp_path / "no" / "out.txt"))
    assert unwritten.returncode == UNREAD
    assert "cannot be written" in unwritten.stderr


def test_refused_file_leaves_the_others(night: Path, tmp_path: Path) -> None:
    (tmp_path / "newer.log").write_text("# logtool layout 2\n", encoding="utf-8")
    done = logtool("check", str(tmp_path), "--json")
    assert done.returncode == UNREAD
    assert '"records": 1' in done.stdout
    assert "newer.log" not in done.stdout.partition('"notes"')[0]
    assert "newer.log" in done.stdout.partition('"notes"')[2]


def test_interrupt_leaves_no_half_file(tmp_path: Path) -> None:
    """Stopped while it waits for more on standard input, as by Ctrl-C."""
    out = tmp_path / "out.json"
    process = subprocess.Popen(
        [sys.executable, "-m", "logtool", "reach", "-", "--json", "--out", str(out)],
        env=environment(TMPDIR=str(tmp_path)), stdin=subprocess.PIPE, stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )  # fmt: skip
    end = time.monotonic() + STARTED_S
    while not list(tmp_path.glob("logtool-*")) and time.monotonic() < end:
        time.sleep(0.02)
    process.send_signal(signal.SIGINT)
    _, told = process.communicate(timeout=TIMEOUT_S)
    assert process.returncode == INTERRUPTED
    assert b"Traceback" not in told
    assert list(tmp_path.iterdir()) == []


def test_broken_pipe_is_silent() -> None:
    program = f'"{sys.executable}" -m logtool lines sample_logs/2026-03-02.log --csv'
    done = subprocess.run(
        ["bash", "-c", f'{program} | head -n 1; echo "${{PIPESTATUS[0]}}"'],
        cwd=ROOT, env=environment(), capture_output=True, text=True, timeout=TIMEOUT_S,
    )  # fmt: skip
    assert done.stdout.splitlines()[-1] == "0"
    assert done.stderr == ""
