"""Each reason, and each edge of what is good: by hand, against the slow reader, the judge and the reader."""

from __future__ import annotations

from pathlib import Path

import pytest

from logtool.records.judge import Record, judge, keys_of
from logtool.records.layout import COLUMN_NAMES, KNOWN_KEYS, NEEDS, REASONS
from logtool.records.opening import open_logs
from tests.records import comparing, slow_reader
from tests.records.cases import BAD_LINES, GOOD_LINES, padded


@pytest.mark.parametrize(("raw", "reason"), BAD_LINES)
def test_a_bad_line_has_the_reason_worked_out_by_hand(raw: bytes, reason: str) -> None:
    assert slow_reader.read_line(raw) == reason
    assert judge(raw) == reason


@pytest.mark.parametrize("raw", GOOD_LINES)
def test_a_good_line_is_the_same_record_to_both(raw: bytes) -> None:
    slow, judged = slow_reader.read_line(raw), judge(raw)
    assert isinstance(slow, slow_reader.Record)
    assert isinstance(judged, Record)
    assert judged.time_us == comparing.us(slow)
    assert tuple(judged.keys.items()) == slow.more
    assert judged.kind == slow.kind
    for name in ("receiver", "mode", "locator"):
        assert judged.field(name) == getattr(slow, name)
    for name in ("dial_hz", "audio_hz", "snr_db", "late_s", "power_dbm"):
        assert comparing.same_number(judged.field(name), getattr(slow, name))
    assert judged.field("sender").upper() == slow.sender
    assert judged.field("addressee").upper() == slow.addressee


def test_every_reason_that_the_layout_can_give_has_a_case() -> None:
    assert {reason for _, reason in BAD_LINES} == set(REASONS)
    assert len(set(REASONS)) == len(REASONS)


def test_every_column_and_kind_is_the_slow_readers() -> None:
    assert list(COLUMN_NAMES) == slow_reader.COLUMNS
    assert set(NEEDS) == set(slow_reader.KINDS)
    for kind, (columns, keys) in NEEDS.items():
        assert ["receiver", *columns] == slow_reader.NEEDED_COLUMNS[kind]
        assert keys == ((slow_reader.NEEDED_KEYS[kind],) if kind in slow_reader.NEEDED_KEYS else ())
    known = {*slow_reader.KEY_BOUNDS, *slow_reader.KEY_WORDS, "antenna", "assisted", "decoder"}
    assert set(KNOWN_KEYS) == known


def test_all_cases_in_one_file_and_in_many(tmp_path: Path) -> None:
    lines = [raw for raw, _ in BAD_LINES] + GOOD_LINES
    for name in ("one", "alone", "reversed"):
        (tmp_path / name).mkdir()
    comparing.compare(tmp_path / "one", b"\n".join(lines))
    comparing.compare(tmp_path / "alone", *lines, *(raw + b"\r\n" for raw in lines))
    comparing.compare(tmp_path / "reversed", b"\r\n".join(lines[::-1]), b"\n".join(lines))


def test_a_bad_line_costs_one_line_wherever_it_stands(tmp_path: Path) -> None:
    first_of = {reason: raw for raw, reason in reversed(BAD_LINES)}
    short = [raw for raw in first_of.values() if len(raw) < 500]
    long = [raw for raw in first_of.values() if len(raw) >= 500]
    files = []
    for n, raw in enumerate([*short, b"\x01", b"\x02", b"\r", b"\xef\xbb\xbf", b'"', b"'", b"\x00", b"\n\r"]):
        lines = comparing.night(12, f"hut{n}")
        files += [b"\n".join([*lines[:i], raw, *lines[i:], b""]) for i in range(len(lines) + 1)]
    for n, raw in enumerate(long):
        lines = comparing.night(12, f"far{n}")
        files += [b"\r\n".join([*lines[:i], raw, *lines[i:]]) for i in (0, 5, len(lines))]
    comparing.compare(tmp_path, *files)


def test_neighbours_of_a_bad_line_are_counted_by_hand(tmp_path: Path) -> None:
    good = [comparing.line(sender=f"Q{i}ABC") for i in range(6)]
    bad = [b"\xff", b"a\rb", b"\x01", b"x" * 20_000, b"\x00"]
    mixed = [raw for pair in zip(good, bad, strict=False) for raw in pair] + [good[-1]]
    log = tmp_path / "night.log"
    log.write_bytes(b"\n".join(mixed) + b"\n")
    with open_logs(log) as logs:
        (ledger,) = logs.inputs
        assert (ledger.lines, ledger.records, ledger.set_aside, ledger.blank) == (11, 6, 5, 0)
        assert [row[1] for row in logs.set_aside()] == [2, 4, 6, 8, 10]
        senders = logs.connection.execute("SELECT sender FROM tally ORDER BY 1").fetchall()
    assert senders == [(f"Q{i}ABC",) for i in range(6)]


def test_the_longest_line_is_8192_bytes() -> None:
    assert len(padded(8192)) == 8192
    assert isinstance(judge(padded(8192)), Record)
    assert judge(padded(8193)) == "too-long"


def test_details_that_cannot_be_read_hold_no_keys() -> None:
    assert keys_of("a=1; b") is None
    assert keys_of("") == {}
    assert keys_of("a=1; b=x=y") == {"a": "1", "b": "x=y"}
