"""`logtool convert` from the shell."""

from __future__ import annotations

import subprocess
from pathlib import Path

import pytest
from pyarrow import ipc, parquet

from logtool.exports.formats import FORMATS
from logtool.records.privacy import Privacy
from tests.cli.calling import COMMAND, ROOT, call, call_on_terminal
from tests.exports.logs import export, write_log


@pytest.fixture
def log(tmp_path: Path) -> Path:
    return write_log(tmp_path / "a.log", shapes=False)


@pytest.mark.parametrize("name", FORMATS)
def test_file_and_standard_output_are_the_same(name: str, log: Path, tmp_path: Path) -> None:
    done = call("convert", log, "--to", name, "-o", tmp_path / "out", "--quiet")
    assert (done.returncode, done.stdout, done.stderr) == (0, "", "")
    printed = subprocess.run(
        [*COMMAND, "convert", log, "--to", name], capture_output=True, cwd=ROOT, timeout=120
    )
    assert printed.returncode == 0
    assert printed.stdout == (tmp_path / "out").read_bytes() == export(name, log)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["a.log", "out"]


def test_layout_unless_a_format_is_named(log: Path) -> None:
    assert call("convert", log, "-o", "-").stdout == call("convert", log, "--to", "layout").stdout
    assert call("convert", log).stdout.startswith("# logtool layout 1\n")


def test_a_format_and_a_time_go_together(log: Path) -> None:
    words = ["convert", log, "--from", "2026-03-01T19:00:00Z", "--to", "2026-03-01T20:00:00Z"]
    of_layout = call(*words).stdout.splitlines()
    of_lines = call(*words, "--to", "jsonl").stdout.splitlines()
    assert len(of_layout) - 2 == len(of_lines) == 4


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--to", "xls"], "--to 'xls' is neither a time nor a format; there are: layout, csv, jsonl,"),
        (["--to", "csv", "--to", "adi"], "give one format and one time at most"),
        (["--to", "2026-13-01"], "--to '2026-13-01' is neither a date nor a time"),
        (
            ["--band", "40m", "--to", "2026-03-01", "--to", "2026-03-02"],
            "give one format and one time at most",
        ),
    ],
)
def test_wrong_usage(words: list[str], message: str, log: Path) -> None:
    done = call("convert", log, *words)
    assert done.returncode == 2
    assert message in done.stderr
    assert done.stdout == ""


def test_a_log_is_never_written_over(log: Path) -> None:
    before = log.read_bytes()
    done = call("convert", log, "-o", log)
    assert done.returncode == 2
    assert "is one of the logs" in done.stderr
    assert log.read_bytes() == before


@pytest.mark.parametrize("name", [name for name, form in FORMATS.items() if form.binary])
def test_what_is_no_text_is_not_shown_on_a_terminal(name: str, log: Path) -> None:
    shown = call_on_terminal("convert", log, "--to", name)
    assert "name a file with -o FILE" in " ".join(shown.split())
    assert "PAR1" not in shown
    assert "ARROW1" not in shown


@pytest.mark.parametrize("name", ["parquet", "arrow"])
def test_typed_columns_go_through_a_pipe(name: str, log: Path, tmp_path: Path) -> None:
    with (tmp_path / "piped").open("wb") as out:
        first = subprocess.Popen([*COMMAND, "convert", log, "--to", name], stdout=subprocess.PIPE, cwd=ROOT)
        subprocess.run(["cat"], stdin=first.stdout, stdout=out, check=True, timeout=120)
        assert first.wait(timeout=120) == 0
    read = parquet.read_table if name == "parquet" else lambda path: ipc.open_file(path).read_all()
    assert read(tmp_path / "piped").num_rows == 14


def test_endings(tmp_path: Path, log: Path) -> None:
    empty = tmp_path / "empty.log"
    empty.write_text("# nothing\n")
    done = call("convert", empty, "--to", "csv")
    assert done.returncode == 1
    assert not done.stdout
    done = call("convert", log, tmp_path / "none.log", "--to", "csv")
    assert done.returncode == 3
    assert "none.log" in done.stderr
    assert len(done.stdout.splitlines()) == 15
    assert call("convert", log, "-o", tmp_path / "no" / "such").returncode == 3


def test_notes_tell_what_a_format_cannot_hold(log: Path) -> None:
    told = call("convert", log, "--to", "adi", "--band", "2m").stderr
    assert "no band '2m' in the inputs" in told
    told = call("convert", log, "--to", "adi").stderr
    assert "1 receptions name no sender" in told
    assert "6 records are no receptions" in told


def test_privacy_options_reach_the_output(log: Path, tmp_path: Path) -> None:
    words = ("--coarsen", "4", "--without-text", "--hide-senders", "--key", tmp_path / "key")
    (tmp_path / "key").write_bytes(b"a secret key of 24 bytes")
    privacy = Privacy(coarsen=4, without_text=True, key=b"a secret key of 24 bytes")
    for name in ("layout", "geojson"):
        assert call("convert", log, "--to", name, *words).stdout.encode() == export(
            name, log, privacy=privacy
        )
