"""The shell lines of `docs/watch-lines.md` run beside a program, and what they write is taken."""

from __future__ import annotations

import json
import re
import shutil
import subprocess
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from tests.docs.running import ROOT, TIMEOUT_S, logtool

PAGE = (ROOT / "docs" / "watch-lines.md").read_text(encoding="utf-8")
SCRIPT = re.findall(r"^```sh\n(.*?)^```$", PAGE, flags=re.DOTALL | re.MULTILINE)[0]
SLEEP = "sleep 60"
SHORT_SLEEP = "sleep 0.3"
DECODER_S = 2
SHELLS = [shell for shell in ("sh", "bash", "dash", "ksh", "zsh") if shutil.which(shell)]


def run(shell: str, folder: Path) -> subprocess.CompletedProcess[str]:
    """Run the lines, the sleep shortened, beside a program that ends after `DECODER_S`."""
    script = folder / "watch.sh"
    script.write_text(SCRIPT.replace(SLEEP, SHORT_SLEEP), encoding="utf-8")
    return subprocess.run(
        [shell, script.name, "sleep", str(DECODER_S)], cwd=folder, stdin=subprocess.DEVNULL,
        capture_output=True, text=True, timeout=TIMEOUT_S,
    )  # fmt: skip


def test_there_are_three_lines() -> None:
    assert SCRIPT.count("\n") == 3
    assert SCRIPT.count(SLEEP) == 1


@pytest.mark.parametrize("shell", SHELLS)
def test_lines_are_taken_and_end_with_the_decoder(shell: str, tmp_path: Path) -> None:
    began = datetime.now(UTC).replace(microsecond=0)
    done = run(shell, tmp_path)
    took = datetime.now(UTC) - began
    assert (done.returncode, done.stderr) == (0, "")
    assert took >= timedelta(seconds=DECODER_S)
    text = (tmp_path / "watch.log").read_text(encoding="utf-8")
    told = logtool("check", "--strict", "--json", str(tmp_path / "watch.log"))
    assert told.returncode == 0, told.stdout
    ledger = json.loads(told.stdout)["inputs"][0]
    assert ledger["set_aside"] == 0
    assert ledger["comments"] == 1
    lines = text.splitlines()[1:]
    # Some 2 s by 0.3 s, on a busy machine fewer; equal ones within a second count as repeated.
    assert 2 <= len(lines) <= DECODER_S / 0.3
    assert ledger["records"] + ledger["repeated"] == len(lines)
    for line in lines:
        fields = line.split("\t")
        at = datetime.fromisoformat(fields[0])
        assert began <= at <= began + took
        assert fields[1:] == ["watch", "hut", "7041500", *[""] * 9, "on_s=60"]


def test_the_log_goes_with_a_text_and_its_recipe(tmp_path: Path) -> None:
    """Beside a text that a recipe reads the watch lines are read as they are; a second start appends."""
    run("sh", tmp_path)
    run("sh", tmp_path)
    watch = tmp_path / "watch.log"
    recipes = ROOT / "docs" / "recipes"
    told = logtool(
        "check", "--strict", "--json", "--recipe", str(recipes / "blanks.toml"), str(watch),
        str(recipes / "blanks.txt"),
    )  # fmt: skip
    assert told.returncode == 1  # for the text's own damaged line
    ledgers = {Path(ledger["file"]).name: ledger for ledger in json.loads(told.stdout)["inputs"]}
    assert ledgers["watch.log"]["set_aside"] == 0
    assert ledgers["watch.log"]["comments"] == 2
    assert "rules" not in ledgers["watch.log"]
    assert ledgers["blanks.txt"]["records"] == 17


def test_a_minute_of_watch_is_a_minute_of_listening(tmp_path: Path) -> None:
    """The line as it stands on the page, with times of our own: 60 lines fill an hour."""
    pattern = re.search(r"printf '(.*?)'", SCRIPT)
    assert pattern is not None
    line = pattern[1].replace("\\t", "\t").replace("\\n", "\n")
    began = datetime(2026, 3, 1, 22, tzinfo=UTC)
    times = [f"{began + timedelta(minutes=i):%Y-%m-%dT%H:%M:%SZ}" for i in range(1, 61)]
    (tmp_path / "watch.log").write_text("".join(line % time for time in times), encoding="utf-8")
    told = json.loads(logtool("reach", "--json", "--at", "JN58", str(tmp_path / "watch.log")).stdout)
    assert [(row["hour"], row["listening_min"], row["listening"]) for row in told["rows"]] == [
        ("2026-03-01T22:00:00Z", 60, "recorded")
    ]
