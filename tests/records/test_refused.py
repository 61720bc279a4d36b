"""Files that are refused, files that change while they are read, and disks that are full."""

from __future__ import annotations

import errno
import os
import resource
import subprocess
import sys
import tempfile
from pathlib import Path

import pytest

from logtool.errors import FileError
from logtool.records import reader, scan
from logtool.records.opening import open_logs
from logtool.records.reader import OpenOptions
from tests.records import comparing, slow_reader
from tests.records.comparing import line

STRANGERS = {
    "prose": b"It was a dark night, and the receiver heard nothing.\n",
    "commas": b"2026-03-01,22:00:00,7078000,-10,Q1ABC\n",
    "bad bytes": b"\xff\xfe\x00\n",
    "lone CR": b"a\rb\n",
    "bad times": line(time="never") + b"\n",
}


@pytest.mark.parametrize("what", STRANGERS)
def test_a_stranger_is_refused_and_the_others_are_read(what: str, tmp_path: Path) -> None:
    (tmp_path / "a.log").write_bytes(line())
    (tmp_path / "b.log").write_bytes(b"# a comment\n\n" + STRANGERS[what] * 9_998 + line(sender="Q7A"))
    (tmp_path / "c.log").write_bytes(line(sender="Q2A") + b"\n" + STRANGERS[what] * 10)
    with open_logs(tmp_path) as logs:
        assert [Path(ledger.file).name for ledger in logs.inputs] == ["a.log", "c.log"]
        assert [ledger.records for ledger in logs.inputs] == [1, 1]
        (refused,) = logs.refused
        assert {Path(name).name for name, *_ in logs.set_aside()} == {"c.log"}
    assert refused.startswith(f"{tmp_path / 'b.log'}: none of its first 10000 lines is a record")
    assert "9998 are " + str(slow_reader.read_line(STRANGERS[what][:-1])) in refused
    assert "--anyway" in refused
    with open_logs(tmp_path, anyway=True) as logs:
        assert [ledger.records for ledger in logs.inputs] == [1, 1, 1]
        assert logs.inputs[1].set_aside == 9_998
        assert logs.refused == []


@pytest.mark.parametrize(
    "data",
    [
        b"zzz\n" * 9_999 + line(),
        b"zzz\n" * 9_999,
        b"# a comment\n" * 20_000,
        b"\n \n" * 10_000,
        b"# a comment\n" * 20_000 + b"zzz\n" + line(),
        line("stop") + b"\n" + b"zzz\n" * 20_000,
    ],
    ids=["record on line 10000", "9999 lines", "comments", "blank lines", "late start", "one record first"],
)
def test_what_may_be_a_log_is_not_refused(data: bytes, tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(data)
    with open_logs(log) as logs:
        assert logs.refused == []
        comparing.compare_opened(logs, slow_reader.read_files([(str(log), data)]))


@pytest.mark.parametrize(
    ("first", "refused"),
    [
        (b"# logtool layout 2\n", True),
        (b"# logtool layout 2\r\n", True),
        (b"# logtool layout 2", True),
        (b"\xef\xbb\xbf# logtool layout 12\n", True),
        (b"# logtool layout 1\n", False),
        (b"# logtool layout 0\n", False),
        (b"# logtool layout two\n", False),
        (b"# logtool layout 2 and more\n", False),
        (b"#logtool layout 2\n", False),
        (b"\n# logtool layout 2\n", False),
        (b"# a comment\n# logtool layout 2\n", False),
    ],
)
def test_a_higher_layout_is_refused_and_the_others_are_read(
    first: bytes, refused: bool, tmp_path: Path
) -> None:
    (tmp_path / "a.log").write_bytes(first + line() * first.endswith(b"\n"))
    (tmp_path / "b.log").write_bytes(b"# logtool layout 1\n" + line(sender="Q2A"))
    for anyway in (False, True):
        with open_logs(tmp_path, anyway=anyway) as logs:
            assert len(logs.refused) == refused
            assert [ledger.records for ledger in logs.inputs][-1] == 1
            assert len(logs.inputs) == 2 - refused
            if refused:
                assert "layout 1; get a newer version" in logs.refused[0]


def test_an_endless_line_refuses_its_file_alone(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(scan, "LONGEST_LINE_BYTES", 2 << 20)
    (tmp_path / "a.log").write_bytes(b"\xff\n" + line() + b"\n" + b"x" * (4 << 20))
    (tmp_path / "b.log").write_bytes(line(sender="Q2A"))
    with open_logs(tmp_path) as logs:
        assert [(Path(ledger.file).name, ledger.records) for ledger in logs.inputs] == [("b.log", 1)]
        assert logs.refused == [
            f"{tmp_path / 'a.log'}: it has a line of over 2 MB, so it is no text log; name the logs alone"
        ]


NIGHT = b"\n".join([*comparing.night(40), b"bad", b""])
MORE = b"\n".join(
    [line(sender=f"Q{i}NEW") for i in range(5)] + [b"bad", line("setup", time="2026-03-01T23:30:00Z"), b""]
)


@pytest.mark.parametrize(
    "more", [MORE, b"half a li", b"\xff\xff\n", b"a\rb\n\x01", b"x" * 100_000, b"\x00\n"]
)
def test_a_log_that_grows_after_the_look_is_read_as_it_was_seen(more: bytes, tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(NIGHT)
    (tmp_path / "other.log").write_bytes(MORE[:200])
    accounts = slow_reader.read_files([(str(log), NIGHT), (str(tmp_path / "other.log"), MORE[:200])])
    with open_logs(tmp_path) as logs:
        with log.open("ab") as file:
            file.write(more)
        comparing.compare_opened(logs, accounts)
        with log.open("ab") as file:
            file.write(b"\n" + MORE)
        logs.tally([1_772_402_400_000_001])
        assert [ledger.records for ledger in logs.inputs] == [len(account.records) for account in accounts]


@pytest.mark.parametrize("more", [MORE, b"\xff\xff\n", b"x" * 100_000 + b"\n", b"a\rb\n\x01"])
def test_a_log_that_grows_while_it_is_read_is_read_as_it_was_seen(
    more: bytes, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(NIGHT)
    make = reader.create_tally
    calls = []

    def grow(*args: object, **options: object) -> object:
        calls.append(1)
        if len(calls) == 1:
            with log.open("ab") as file:
                file.write(more)
        return make(*args, **options)

    monkeypatch.setattr(reader, "create_tally", grow)
    with open_logs(log) as logs:
        comparing.compare_opened(logs, slow_reader.read_files([(str(log), NIGHT)]))
    assert len(calls) == 2


def test_a_log_that_grows_after_the_tally_keeps_its_set_aside_lines(tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(b"bad\n" + line() + b"\nworse")
    with open_logs(log) as logs:
        logs.tally()
        with log.open("ab") as file:
            file.write(b" and worse\nbad\n" + line(sender="Q8A"))
        assert logs.set_aside() == [
            (str(log), 1, "too-few-fields", b"bad"),
            (str(log), 3, "too-few-fields", b"worse"),
        ]
        assert logs.connection.execute(f"SELECT count(*) FROM {logs.lines}").fetchone() == (3,)


def test_a_log_that_is_gone_after_the_look_is_named(tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(NIGHT)
    with open_logs(log) as logs:
        log.unlink()
        with pytest.raises(FileError, match=r"night\.log: cannot be read \(No such file or directory\)"):
            logs.tally()


def test_a_dirty_log_that_grows_or_goes_was_copied(tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(NIGHT + b"\xff\n")
    with open_logs(log) as logs:
        log.unlink()
        comparing.compare_opened(logs, slow_reader.read_files([(str(log), NIGHT + b"\xff\n")]))


def temporary_folders(folder: Path) -> list[str]:
    return [name for name in os.listdir(folder) if name.startswith("logtool-")]


def test_the_temporary_folder_goes_on_closing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    work = tmp_path / "work"
    work.mkdir()
    monkeypatch.setattr(tempfile, "tempdir", str(work))
    log = tmp_path / "night.log"
    log.write_bytes(NIGHT + b"\xff\n")
    with open_logs(log) as logs:
        logs.tally()
        assert len(temporary_folders(work)) == 1
    assert temporary_folders(work) == []
    logs.close()
    with pytest.raises(FileError):
        open_logs(log, tmp_path / "none.log")
    assert temporary_folders(work) == []
    with pytest.raises(KeyboardInterrupt), open_logs(log):
        raise KeyboardInterrupt
    assert temporary_folders(work) == []
    assert log.read_bytes() == NIGHT + b"\xff\n"


def test_a_full_disk_is_named_and_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    work = tmp_path / "work"
    work.mkdir()
    monkeypatch.setattr(tempfile, "tempdir", str(work))
    (tmp_path / "night.log").write_bytes(b"\xff\n" + NIGHT)

    def full(*_: object) -> bytes:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(scan, "_taken_out", full)
    with pytest.raises(FileError, match=r"night\.log: its text cannot be copied to .*No space left.*TMPDIR"):
        open_logs(tmp_path / "night.log")
    assert temporary_folders(work) == []


LIMITED = """
import signal, sys
from logtool.errors import FileError
from logtool.records.opening import open_logs
signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
try:
    open_logs(sys.argv[1])
except FileError as error:
    print(error)
"""


@pytest.mark.parametrize("size", [300, 3_000_000], ids=["on closing", "on writing"])
def test_a_copy_that_cannot_be_written_is_named(size: int, tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(b"\xff\n" + NIGHT * (size // len(NIGHT) + 1))
    work = tmp_path / "work"
    work.mkdir()
    ran = subprocess.run(
        [sys.executable, "-c", LIMITED, str(log)],
        capture_output=True,
        text=True,
        check=True,
        env=os.environ | {"TMPDIR": str(work)},
        preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_FSIZE, (200, 200)),
    )
    assert f"{log}: its text cannot be copied to {work}" in ran.stdout
    assert "File too large" in ran.stdout
    assert os.listdir(work) == []


def test_progress_goes_up_to_the_whole(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_bytes(NIGHT)
    (tmp_path / "b.log").write_bytes(b"\xff\n" + NIGHT)
    told: list[tuple[str, float]] = []
    options = OpenOptions(progress=lambda what, share: told.append((what, share)))
    with reader.Logs((tmp_path,), options=options) as logs:
        logs.tally()
    shares = [share for _, share in told]
    assert shares == sorted(shares)
    assert shares[0] > 0
    assert shares[-1] == 1
