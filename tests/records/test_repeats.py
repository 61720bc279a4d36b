"""A line equal to an earlier record's is counted once; lines that only look alike are not."""

from __future__ import annotations

import random
from pathlib import Path

import pytest

from logtool.records import tally
from logtool.records.opening import open_logs
from tests.records import comparing
from tests.records.comparing import line


def test_receptions_and_events_repeated_in_one_file_and_over_files(tmp_path: Path) -> None:
    """Counted by hand: four lines are new in the first, one of four in the second."""
    a, b, c = (line(sender=f"Q{i}ABC") for i in range(3))
    stop, watch = line("stop"), line("watch")
    first = [a, stop, b, a, stop, a, b"bad", b"bad", watch, a]
    second = [watch, c, b, stop]
    comparing.compare(tmp_path, b"\n".join(first), b"\r\n".join(second) + b"\r\n")
    with open_logs(tmp_path) as logs:
        told = [(ledger.records, ledger.repeated, ledger.set_aside) for ledger in logs.inputs]
    assert told == [(4, 4, 2), (1, 3, 0)]


def test_only_a_line_equal_byte_for_byte_is_repeated(tmp_path: Path) -> None:
    same = [
        line(),
        line(time="2026-03-01T22:00:00.0Z"),
        line(dial_hz="07078000"),
        line(snr_db="-10.50"),
        line(sender="q1abc"),
        line(locator="jn58"),
        line(text="hello "),
        line(more="sure=0.90"),
        line(more="x=1; sure=0.9"),
    ]
    comparing.compare(tmp_path, b"\n".join(same), b"\n".join(reversed(same)))
    with open_logs(tmp_path) as logs:
        assert [(ledger.records, ledger.repeated) for ledger in logs.inputs] == [(9, 0), (0, 9)]


def test_a_record_is_no_repeat_of_a_comment_or_of_a_line_set_aside(tmp_path: Path) -> None:
    comparing.compare(
        tmp_path, b"#" + line() + b"\n" + line() + b"\t\n" + line() + b"\n" + line() + b"\r\r\n"
    )


def test_many_lines_that_differ_in_little_are_all_counted(tmp_path: Path) -> None:
    """A hundred thousand lines of one sender in one hour, with an hour's last digits and audio in step."""
    lines = [
        line(time=f"2026-03-01T22:{i // 60 % 60:02d}:{i % 60:02d}.{i:06d}Z", audio_hz=str(i % 24_000))
        for i in range(100_000)
    ]
    (tmp_path / "night.log").write_bytes(b"\n".join(lines))
    with open_logs(tmp_path) as logs:
        assert [(ledger.records, ledger.repeated) for ledger in logs.inputs] == [(100_000, 0)]
    (tmp_path / "other.log").write_bytes(b"\n".join(lines[50_000:]))
    with open_logs(tmp_path) as logs:
        assert [(ledger.records, ledger.repeated) for ledger in logs.inputs] == [(100_000, 0), (0, 50_000)]


def test_a_line_repeated_ten_thousand_times(tmp_path: Path) -> None:
    """Work that grows with the square of a line's repeats would not end here."""
    (tmp_path / "a.log").write_bytes((line() + b"\n") * 100_000)
    (tmp_path / "b.log").write_bytes((line("stop") + b"\n" + line() + b"\n") * 50_000)
    with open_logs(tmp_path) as logs:
        assert [(ledger.records, ledger.repeated) for ledger in logs.inputs] == [(1, 99_999), (1, 99_999)]


@pytest.mark.parametrize("hashed", ["7::UBIGINT", "hash(line[20:22])", "hash(right(line, 8))"])
def test_lines_decide_where_their_hashes_are_equal(
    hashed: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """With a hash that is the same for many lines, or for all."""
    monkeypatch.setattr(tally, "_HASH", hashed)
    chance = random.Random(hashed)
    lines = comparing.night(150) + [
        line(
            time=f"2026-03-01T22:{i % 3:02d}:00Z",
            sender=f"Q{i % 2}A",
            snr_db=str(i % 4),
            locator=("", "JN58")[i % 2],
            text=str(i % 5),
        )
        for i in range(60)
    ]
    comparing.compare(tmp_path, *(b"\n".join(chance.choices(lines, k=120)) for _ in range(6)))
