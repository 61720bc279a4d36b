"""How the command ends: exit statuses, messages, and nothing half written."""

from __future__ import annotations

import json
import os
import re
import signal
import subprocess
import time
from pathlib import Path

import pytest

from tests.cli.calling import COMMAND, HEADER, ROOT, call, heard, heeding_interrupts, setup

GOOD = HEADER + setup("2026-03-01T22:00:00Z") + heard("2026-03-01T22:01:00Z", locator="JN58")


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["reach"], "Missing argument"),
        (["reach", "--gap-min", "x", "a"], "not a valid float"),
        (["reach", "--gap-min", "0", "sample_logs"], "--gap-min 0 cannot be used"),
        (["reach", "--gap-min", "nan", "sample_logs"], "--gap-min nan cannot be used"),
        (["reach", "--from", "soon", "sample_logs"], "--from 'soon' is neither a date nor a time"),
        (["reach", "--from", "2026-03-02", "--to", "2026-03-02", "sample_logs"], "is not before"),
        (["reach", "--by", "colour", "sample_logs"], "rows can be split by antenna, band, mode"),
        (["reach", "--night", "monday", "sample_logs"], "like 2026-03-01"),
        (["reach", "--at", "ZZ99", "sample_logs"], "'ZZ99' is not a locator"),
        (["reach", "--at", "JN", "sample_logs"], "too coarse"),
        (["reach", "--antenna-name", "a b", "sample_logs"], "--antenna-name 'a b'"),
        (["reach", "--json", "--csv", "sample_logs"], "exclude each other"),
        (["senders", "--sender", "a b", "sample_logs"], "is not a call sign"),
        (["nonsense"], "No such command"),
    ],
)
def test_wrong_usage_ends_with_2_and_says_why(words: list[str], said: str) -> None:
    done = call(*words)
    assert done.returncode == 2
    assert said in done.stderr
    assert done.stdout == ""
    assert "Traceback" not in done.stderr


def test_a_missing_file_ends_with_3() -> None:
    done = call("reach", "nowhere.log")
    assert done.returncode == 3
    assert (
        done.stderr
        == "logtool: nowhere.log: there is no such file or folder, or no right to look; check the path\n"
    )


@pytest.mark.parametrize("text", ["", "# only\n# comments\n", "something else\n"])
def test_no_record_ends_with_1_and_json_is_printed(text: str, tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text(text)
    done = call("reach", "--json", tmp_path)
    assert done.returncode == 1
    assert "hold no record" in done.stderr
    assert json.loads(done.stdout)["rows"] == []


def test_a_folder_without_logs_has_no_record(tmp_path: Path) -> None:
    done = call("senders", tmp_path)
    assert done.returncode == 1
    assert "hold no record" in done.stderr


def test_strict_ends_with_1_only_where_a_line_is_set_aside(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text(GOOD)
    assert call("check", "--strict", tmp_path).returncode == 0
    (tmp_path / "a.log").write_text(GOOD + "one bad line\n")
    assert call("check", "--strict", tmp_path).returncode == 1
    assert call("check", tmp_path).returncode == 0


def test_a_higher_layout_is_refused_and_the_others_are_read(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text("# logtool layout 2\n" + GOOD)
    (tmp_path / "b.log").write_text(GOOD)
    done = call("reach", "--json", tmp_path)
    assert done.returncode == 3
    assert "a.log: its first line names layout 2" in done.stderr
    told = json.loads(done.stdout)
    assert [Path(file["file"]).name for file in told["inputs"]] == ["b.log"]
    assert told["rows"][0]["receptions"] == 1
    assert any("layout 2" in note for note in told["notes"])


def test_something_else_altogether_is_refused_unless_anyway(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text("a line of some other text\n" * 10_001)
    done = call("reach", tmp_path)
    assert done.returncode == 3
    assert "none of its first 10000 lines is a record" in done.stderr
    assert "a line of some other text" in done.stderr
    assert call("reach", "--anyway", tmp_path).returncode == 1


def test_an_unknown_name_gives_a_note_with_those_there_are() -> None:
    done = call("reach", "--antenna", "beam", "sample_logs")
    assert done.returncode == 0
    assert "no antenna 'beam' in the inputs; there are: dipole, none, wire" in done.stderr
    assert "note" not in call("reach", "--quiet", "--antenna", "beam", "sample_logs").stderr


@pytest.mark.parametrize("command", ["reach", "lines", "--help"])
def test_a_broken_pipe_is_silent(command: str) -> None:
    process = subprocess.Popen(
        [*COMMAND, command, "sample_logs"], stdout=subprocess.PIPE, stderr=subprocess.PIPE, cwd=ROOT
    )
    assert process.stdout is not None
    assert process.stderr is not None
    process.stdout.close()
    assert process.stderr.read() == b""
    process.stderr.close()
    process.wait(timeout=60)


def test_a_full_disk_is_told_and_leaves_nothing(tmp_path: Path) -> None:
    """The size of files is limited to a few kilobytes, so that writing fails as on a full disk."""
    script = (
        "import resource, signal; signal.signal(signal.SIGXFSZ, signal.SIG_IGN);"
        "resource.setrlimit(resource.RLIMIT_FSIZE, (4096, 4096));"
        "from logtool.cli.main import main; main()"
    )
    done = subprocess.run(
        [
            COMMAND[0],
            "-c",
            script,
            "senders",
            "--csv",
            "-o",
            str(tmp_path / "out.csv"),
            "sample_logs/2026-03-02.log",
        ],
        capture_output=True,
        text=True,
        cwd=ROOT,
        env={**os.environ, "PYTHONPATH": str(ROOT)},
        timeout=60,
    )
    assert done.returncode == 3
    assert re.search("cannot be (written|copied)", done.stderr)
    assert "Traceback" not in done.stderr
    assert list(tmp_path.iterdir()) == []


def test_a_folder_that_cannot_be_written_is_told(tmp_path: Path) -> None:
    done = call("senders", "-o", tmp_path / "no" / "rows.txt", "sample_logs")
    assert done.returncode == 3
    assert "rows.txt: cannot be written" in done.stderr


def test_an_interrupt_ends_with_130_and_leaves_nothing(tmp_path: Path) -> None:
    logs, temporary = tmp_path / "logs", tmp_path / "temporary"
    logs.mkdir()
    temporary.mkdir()
    lines = "".join(
        heard(f"2026-03-{day:02d}T{hour:02d}:{minute:02d}:{second:02d}Z", f"Q{second % 10}AB")
        for day in range(1, 15)
        for hour in range(24)
        for minute in range(60)
        for second in range(0, 60, 4)
    )
    (logs / "a.log").write_text(GOOD + lines)
    process = subprocess.Popen(
        [*COMMAND, "lines", "--csv", "-o", str(tmp_path / "out.csv"), str(logs)],
        stderr=subprocess.PIPE,
        text=True,
        cwd=ROOT,
        env={**os.environ, "TMPDIR": str(temporary)},
        preexec_fn=heeding_interrupts,
    )
    limit = time.monotonic() + 20
    while not any(temporary.iterdir()) and time.monotonic() < limit:
        time.sleep(0.01)
    process.send_signal(signal.SIGINT)
    _, told = process.communicate(timeout=60)
    assert process.returncode == 130
    assert "interrupted" in told
    assert "Traceback" not in told
    assert not (tmp_path / "out.csv").exists()
    assert list(temporary.iterdir()) == []


def test_an_old_file_stays_where_the_new_one_fails(tmp_path: Path) -> None:
    old = tmp_path / "map.html"
    old.write_text("old")
    (tmp_path / "a.log").write_text(heard("2026-03-01T22:01:00Z", locator="JN58"))
    done = call("map", "-o", old, tmp_path / "a.log")
    assert done.returncode == 2
    assert "--at" in done.stderr
    assert old.read_text() == "old"


def test_help_of_every_command_names_its_options() -> None:
    for command in ("check", "reach", "senders", "sectors", "nights", "between", "lines", "map"):
        done = call(command, "--help")
        assert done.returncode == 0
        assert "--at LOCATOR" in done.stdout


def test_no_output_takes_the_place_of_a_log_or_of_the_other(tmp_path: Path) -> None:
    log = tmp_path / "a.log"
    log.write_text(GOOD)
    (tmp_path / "link.txt").symlink_to(log)
    for words in (
        ["reach", "-o", log, log],
        ["check", "--set-aside", log, tmp_path],
        ["map", "-o", tmp_path / "link.txt", log],
    ):
        done = call(*words)
        assert done.returncode == 2
        assert "is one of the logs" in done.stderr
        assert log.read_text() == GOOD
    done = call("check", "--set-aside", tmp_path / "x", "-o", tmp_path / "x", log)
    assert done.returncode == 2
    assert "both name" in done.stderr


def test_what_is_missing_does_not_keep_the_others_from_being_read(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text(GOOD)
    (tmp_path / "b.log").symlink_to(tmp_path / "nowhere")
    done = call("reach", "--json", tmp_path, tmp_path / "missing.log")
    assert done.returncode == 3
    told = json.loads(done.stdout)
    assert told["rows"][0]["receptions"] == 1
    assert [Path(file["file"]).name for file in told["inputs"]] == ["a.log"]
    assert "missing.log: there is no such file" in done.stderr
    assert "b.log: there is no such file" in done.stderr


def test_a_pipe_in_a_folder_is_no_log(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.log")
    (tmp_path / "a.log").write_text(GOOD)
    assert json.loads(call("reach", "--json", tmp_path).stdout)["rows"][0]["receptions"] == 1


def test_closed_streams_are_borne(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text(GOOD)
    line = " ".join(
        [*COMMAND, "senders", "--csv", "-o", str(tmp_path / "out.csv"), str(tmp_path / "a.log"), ">&-"]
    )
    done = subprocess.run(["sh", "-c", line], stderr=subprocess.PIPE, text=True, cwd=ROOT, timeout=60)
    assert (done.returncode, done.stderr) == (0, "")
    assert "Q1ABC" in (tmp_path / "out.csv").read_text()
    done = subprocess.run(
        ["sh", "-c", " ".join([*COMMAND, "reach", "-", "<&-"])],
        stderr=subprocess.PIPE,
        text=True,
        cwd=ROOT,
        timeout=60,
    )
    assert done.returncode == 3
    assert "standard input is closed" in done.stderr


def test_a_map_of_refused_files_says_why(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text("# logtool layout 2\n" + GOOD)
    done = call("map", "-o", tmp_path / "map.html", tmp_path / "a.log")
    assert done.returncode == 3
    assert "names layout 2" in done.stderr
    assert not (tmp_path / "map.html").exists()


def test_the_order_of_the_options_changes_no_byte(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_text(GOOD)
    one = call("reach", "--json", "--band", "40m", "--from", "2026-03-01", tmp_path)
    other = call("reach", "--from", "2026-03-01", tmp_path, "--band", "40m", "--json")
    assert one.stdout == other.stdout


def test_a_name_that_is_not_utf8_is_written_with_escapes(tmp_path: Path) -> None:
    (Path(os.fsdecode(os.fsencode(tmp_path) + b"/bad\xff.log"))).write_text(GOOD)
    for way in ("--json", "--csv"):
        shown = subprocess.run(
            [*COMMAND, "lines", way, str(tmp_path)], capture_output=True, cwd=ROOT, timeout=60
        ).stdout
        assert "bad\\xff.log" in shown.decode().replace("\\\\", "\\")
