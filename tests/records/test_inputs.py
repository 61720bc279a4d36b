"""Which files are read, in which order, under which names."""

from __future__ import annotations

import os
import random
import subprocess
import sys
import tempfile
from collections import Counter
from pathlib import Path

import pytest

from logtool.errors import FileError, UsageError
from logtool.records.opening import open_logs
from logtool.records.sources import sources_of
from tests.records import comparing, slow_reader
from tests.records.comparing import line

ODD_NAMES = [
    "*.log", "?.log", "[a-z].log", "a*b?[c]{d,e}.log", "it's.log", 'say "x".log', " spaces  in .log",
    "new\nline.log", "tab\there.log", "\u00fcber \u4e2d\U0001f4fb.log", "semi;colon$HOME`x`.log",
    "back\\slash.log", "-.log", "--help.log", "#.log", "%s%d.log", "~.log", "..log", ".log", "a,b.log",
    "\x01.log", "\x7f.log", "\u0085.log",
]  # fmt: skip
UNDECODABLE = os.fsdecode(b"caf\xe9 \xff.log")


@pytest.mark.parametrize("dirty", [False, True])
def test_names_with_odd_characters(dirty: bool, tmp_path: Path) -> None:
    files = sorted(
        (name, line(sender=f"Q{i}A") + b"\n\xff\n" * dirty)
        for i, name in enumerate([*ODD_NAMES, UNDECODABLE])
    )
    comparing.write(tmp_path, files)
    accounts = slow_reader.read_files(
        # bytes of a name that are not UTF-8 are shown as escapes, so that what is printed is UTF-8
        (os.fsencode(tmp_path / name).decode("utf-8", "backslashreplace"), data)
        for name, data in files
    )
    with open_logs(tmp_path) as logs:
        comparing.compare_opened(logs, accounts)
    with open_logs(*(tmp_path / name for name, _ in reversed(files))) as logs:
        comparing.compare_opened(logs, accounts)
    for name, _ in files:
        with open_logs(str(tmp_path / name)) as logs:
            assert [ledger.records for ledger in logs.inputs] == [1]


@pytest.mark.parametrize("name", ["a[b]*?", "it's", "\u00fc {x}", 'q"'])
def test_a_temporary_folder_with_odd_characters(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    odd = tmp_path / name
    odd.mkdir()
    monkeypatch.setattr(tempfile, "tempdir", str(odd))
    for files in ([line() + b"\n\xff\n"], [line() + b"\n\xff\n", line("stop")]):
        logs_folder = tmp_path / f"logs{len(files)}"
        logs_folder.mkdir()
        comparing.compare(logs_folder, *files)


def test_folders_are_read_with_all_below_and_other_endings_left(tmp_path: Path) -> None:
    read = [
        "a.log",
        "b.txt",
        "c.tsv",
        "d.log.gz",
        "e.TXT.zst",
        "deep/er/f.log",
        "deep/g.tsv.GZ",
        "x.log/h.txt",
        ".hidden.log",
    ]
    left = ["a.csv", "log", "b.log.bak", "c.gz", "d.log.bz2", "e.log.gz.old", "deep/readme.md", "f.log~"]
    for name in read + left:
        (tmp_path / name).parent.mkdir(parents=True, exist_ok=True)
        (tmp_path / name).write_bytes(b"")
    assert [source.name for source in sources_of((tmp_path,))] == sorted(
        str(tmp_path / name) for name in read
    )
    assert [source.name for source in sources_of((tmp_path / "a.csv",))] == [str(tmp_path / "a.csv")]


def test_a_folder_without_logs_has_no_inputs(tmp_path: Path) -> None:
    (tmp_path / "readme.md").write_text("nothing here")
    with open_logs(tmp_path) as logs:
        assert logs.inputs == []
        assert logs.set_aside() == []
        assert logs.setups == {}
        assert logs.connection.execute("SELECT count(*) FROM tally").fetchone() == (0,)
        assert logs.connection.execute("SELECT count(*) FROM odd_records").fetchone() == (0,)


def test_the_same_file_is_read_once(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(b"\n".join(comparing.night(20)))
    (tmp_path / "link.log").symlink_to(log)
    (tmp_path / "also").symlink_to(tmp_path, target_is_directory=True)
    monkeypatch.chdir(tmp_path)
    for paths in (
        (log, log),
        (tmp_path,),
        (tmp_path, log),
        ("night.log", "./night.log", tmp_path / "also" / "night.log"),
    ):
        with open_logs(*paths) as logs:
            (ledger,) = logs.inputs
            assert (ledger.records, ledger.repeated) == (18, 0)


def test_a_copy_is_another_file_and_all_its_records_are_repeated(tmp_path: Path) -> None:
    data = b"\n".join([*comparing.night(25), b"\xff", b"bad", b"", b"# end"])
    comparing.compare(tmp_path, data, data, data)
    with open_logs(tmp_path) as logs:
        assert [(ledger.records, ledger.repeated, ledger.set_aside) for ledger in logs.inputs] == [
            (23, 0, 2),
            (0, 23, 2),
            (0, 23, 2),
        ]


def test_the_order_of_the_arguments_changes_nothing(tmp_path: Path) -> None:
    chance = random.Random(3)
    lines = comparing.night(200)
    files = [(f"{i}.log", b"\n".join(chance.choices(lines, k=80))) for i in range(6)]
    comparing.write(tmp_path, files)
    accounts = slow_reader.read_files((str(tmp_path / name), data) for name, data in files)
    for _ in range(4):
        paths = [tmp_path / name for name, _ in files]
        chance.shuffle(paths)
        with open_logs(*paths) as logs:
            comparing.compare_opened(logs, accounts)


def test_the_splitting_of_a_log_changes_no_reception(tmp_path: Path) -> None:
    lines = comparing.night(120)
    found = []
    for n in (1, 2, 7, 60):
        folder = tmp_path / str(n)
        folder.mkdir()
        size = -(-len(lines) // n)
        for i in range(n):
            (folder / f"{i:03d}.log").write_bytes(b"\n".join(lines[i * size : (i + 1) * size]) + b"\n")
        with open_logs(folder) as logs:
            logs.tally()
            of_all_files: Counter[tuple[object, ...]] = Counter()
            for key, count in comparing.receptions(logs).items():
                of_all_files[key[1:]] += count
            found.append((of_all_files, comparing.setups(logs)))
    assert found[0][0].total() > 100
    assert all(one == found[0] for one in found)


def test_of_two_setups_at_one_time_the_later_read_wins(tmp_path: Path) -> None:
    first, second = line("setup", more="antenna=wire"), line("setup", more="antenna=loop")
    cases = {
        "loop": [first + b"\n" + second],
        "wire": [second, first],
        # A line repeated is counted once: it is no later setup.
        "loop ": [first + b"\n" + second + b"\n" + first],
        "loop  ": [first, second, first],
    }
    for antenna, datas in cases.items():
        folder = tmp_path / f"case {antenna}"
        folder.mkdir()
        comparing.compare(folder, *datas)
        with open_logs(folder) as logs:
            assert [setup.antenna for setup in logs.setups["hut"]] == [antenna.strip()]


def test_setups_and_bounds_cut_hours(tmp_path: Path) -> None:
    """Six receptions of one hour, a setup at 20 past and a bound at 40 past: three pieces of two each."""
    heard = [line(time=f"2026-03-01T22:{minute}:00Z") for minute in ("00", "19", "20", "39", "40", "59")]
    log = tmp_path / "night.log"
    log.write_bytes(b"\n".join([*heard, line("setup", time="2026-03-01T22:20:00Z")]))
    hour_us = 1_772_402_400_000_000  # 2026-03-01T22:00:00Z
    minute_us = 60_000_000
    query = "SELECT (start_us - ?) // ?, n, list_sort(times) FROM tally ORDER BY 1"
    with open_logs(log) as logs:
        logs.tally()
        found = logs.connection.execute(query, [hour_us, minute_us]).fetchall()
        assert [row[:2] for row in found] == [(0, 2), (20, 4)]
        logs.tally([hour_us + 40 * minute_us])
        found = logs.connection.execute(query, [hour_us, minute_us]).fetchall()
        assert [row[:2] for row in found] == [(0, 2), (20, 2), (40, 2)]
        assert found[2][2] == [40 * minute_us, 59 * minute_us]
        assert [ledger.records for ledger in logs.inputs] == [7]


def test_missing_and_unreadable_inputs_are_named(tmp_path: Path) -> None:
    with pytest.raises(FileError, match=r"none\.log: there is no such file or folder"):
        open_logs(tmp_path / "none.log")
    with pytest.raises(FileError, match="no such file or folder"):
        open_logs(tmp_path / "night.log" / "deeper.log")
    with pytest.raises(UsageError, match="no log is named"):
        open_logs()
    (tmp_path / "broken.log").symlink_to(tmp_path / "gone")
    with pytest.raises(FileError, match=r"broken\.log"):
        open_logs(tmp_path)


def test_an_empty_name_is_no_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "night.log").write_bytes(line())
    monkeypatch.chdir(tmp_path)
    with pytest.raises(FileError, match="no such file or folder"):
        open_logs("")


@pytest.mark.skipif(os.geteuid() == 0, reason="root may read everything")
def test_a_file_without_the_right_to_read_is_named(tmp_path: Path) -> None:
    log = tmp_path / "night.log"
    log.write_bytes(line())
    log.chmod(0)
    with pytest.raises(FileError, match=r"night\.log: cannot be read \(Permission denied\)"):
        open_logs(log)
    folder = tmp_path / "closed"
    folder.mkdir()
    (folder / "night.log").write_bytes(line())
    folder.chmod(0)
    try:
        with pytest.raises(FileError, match="closed"):
            open_logs(folder / "night.log")
        with pytest.raises(FileError, match="closed"):
            open_logs(folder)
    finally:
        folder.chmod(0o700)


COUNT = """
import sys
from logtool.records.opening import open_logs
with open_logs(*sys.argv[1:]) as logs:
    print([(ledger.file, ledger.lines, ledger.records, ledger.set_aside) for ledger in logs.inputs])
"""


@pytest.mark.parametrize("tail", [b"", b"\xff\n"], ids=["clean", "dirty"])
def test_standard_input_is_read_last_and_once(tail: bytes, tmp_path: Path) -> None:
    data = b"\n".join(comparing.night(20)) + b"\n" + tail
    (tmp_path / "~night.log").write_bytes(line(sender="Q9A"))
    ran = subprocess.run(
        [sys.executable, "-c", COUNT, "-", str(tmp_path), "-"], input=data, capture_output=True, check=True
    )
    night = (str(tmp_path / "~night.log"), 1, 1, 0)
    assert ran.stdout.decode().strip() == str([night, ("-", 20 + bool(tail), 18, int(bool(tail)))])


@pytest.mark.skipif(not Path("/dev/fd").exists(), reason="needs /dev/fd")
@pytest.mark.parametrize("tail", [b"", b"\xff\n"], ids=["clean", "dirty"])
def test_a_pipe_is_read_once(tail: bytes) -> None:
    data = b"\n".join(comparing.night(20)) + b"\n" + tail
    ran = subprocess.run(
        [sys.executable, "-c", COUNT, "/dev/fd/0"], input=data, capture_output=True, check=True, timeout=30
    )
    assert ran.stdout.decode().strip() == str([("/dev/fd/0", 20 + bool(tail), 18, int(bool(tail)))])
