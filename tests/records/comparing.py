"""Make logs, and compare what the reader says of them with the slow reader."""

from __future__ import annotations

import hashlib
from collections import Counter
from collections.abc import Sequence
from datetime import UTC, datetime
from decimal import Decimal
from pathlib import Path
from typing import Any

from logtool.records.opening import open_logs
from logtool.records.reader import Logs
from tests.records import slow_reader
from tests.records.slow_reader import Account, Record

HOUR_US = 3_600_000_000
HEARD = {
    "time": "2026-03-01T22:00:00Z",
    "kind": "heard",
    "receiver": "hut",
    "dial_hz": "7078000",
    "audio_hz": "1500",
    "snr_db": "-10.5",
    "late_s": "0.1",
    "mode": "K8",
    "sender": "Q1ABC",
    "addressee": "Q2XYZ",
    "locator": "JN58",
    "power_dbm": "37",
    "text": "hello",
    "more": "sure=0.9",
}
BARE = dict.fromkeys(slow_reader.COLUMNS, "") | {"time": "2026-03-01T22:00:00Z", "receiver": "hut"}
EVENTS = {
    "setup": BARE | {"kind": "setup", "dial_hz": "7078000", "locator": "JN58td", "more": "antenna=wire"},
    "watch": BARE | {"kind": "watch", "more": "on_s=60"},
    "noise": BARE | {"kind": "noise", "more": "dbfs=-43.5"},
    "stop": BARE | {"kind": "stop"},
    "note": BARE | {"kind": "note", "text": "rain"},
}


def line(kind: str = "heard", /, **fields: str) -> bytes:
    """Return a good line of a kind, with some fields changed."""
    return "\t".join(((HEARD if kind == "heard" else EVENTS[kind]) | fields).values()).encode()


def night(lines: int, receiver: str = "hut") -> list[bytes]:
    """Return a clean log's lines: all kinds, several senders, dials and hours, shapes of all sorts."""
    made = [b"# logtool layout 1", b"# " + "\t".join(slow_reader.COLUMNS).encode()]
    events = [
        line("setup", receiver=receiver),
        line("watch", receiver=receiver, time="2026-03-01T22:59:59.5Z"),
        line("noise", receiver=receiver, text="steady\\tnoise"),
        line("stop", receiver=receiver, time="2026-03-02T04:00:00Z"),
        line("note", receiver=receiver, text="wet \u2013 \\\\ \\n\\r \u00e9"),
        line("setup", receiver=receiver, time="2026-03-01T22:20:00Z", more="antenna=loop; order=random"),
    ]
    for i in range(lines - len(made)):
        if i % 5 == 2 and i // 5 < len(events):
            made.append(events[i // 5])
            continue
        made.append(
            line(
                receiver=receiver,
                time=f"2026-03-01T{20 + i % 4}:{(7 * i + i // 60) % 60:02d}:{i % 60:02d}{'.25' * (i % 2)}Z",
                dial_hz=("7078000", "3578000")[i % 3 == 0],
                snr_db=("", "-3", "12.5")[i % 3],
                sender=("Q1ABC", "q1abc", "Q5Z/P", "")[i % 4],
                locator=("JN58", "", "JO", "jn58TD25")[i % 4],
                text=("", "\\\\", "73 \u00b5")[i % 3],
                more=("", "sure=0.5; own=a=b", "assisted=1")[i % 3],
            )
        )
    return made


def write(folder: Path, files: Sequence[tuple[str, bytes]]) -> None:
    for name, data in files:
        (folder / name).write_bytes(data)


def compare(folder: Path, *datas: bytes) -> None:
    """Write the files in the order of their names, and compare the readers on all of them together."""
    files = [(f"{i:05d}.log", data) for i, data in enumerate(datas)]
    write(folder, files)
    with open_logs(folder, anyway=True) as logs:
        compare_opened(logs, slow_reader.read_files((str(folder / name), data) for name, data in files))
        assert [ledger.bytes for ledger in logs.inputs] == [len(data) for data in datas]
        assert [ledger.digest for ledger in logs.inputs] == [
            "sha256:" + hashlib.sha256(data).hexdigest() for data in datas
        ]


def compare_opened(logs: Logs, accounts: list[Account]) -> None:
    """Compare ledger, lines set aside, receptions, events and setups."""
    assert logs.file_names == [account.name for account in accounts]
    for ledger, account in zip(logs.inputs, accounts, strict=True):
        told = ledger.as_dict()
        assert {key: told[key] for key in ("file", *account.counts())} == {
            "file": account.name,
            **account.counts(),
        }
        parts = ("blank", "comments", "records", "repeated", "set_aside")
        assert told["lines"] == sum(told[part] for part in parts)
        assert list(told["reasons"]) == sorted(told["reasons"])
    assert logs.set_aside() == [(account.name, *rest) for account in accounts for rest in account.set_aside]
    assert receptions(logs) == slow_receptions(accounts)
    odd = logs.connection.execute("SELECT file, line FROM odd_records").fetchall()
    assert sorted(row for row in odd if row[1].split("\t")[1] != "heard") == sorted(
        (i, raw.decode())
        for i, account in enumerate(accounts)
        for _, raw, record in account.records
        if record.kind != "heard"
    )
    assert setups(logs) == slow_setups(accounts)


def receptions(logs: Logs) -> Counter[tuple[Any, ...]]:
    """Count the tally's times, levels and own locators by file, start of the piece and the other keys."""
    found: Counter[tuple[Any, ...]] = Counter()
    for file, start_us, receiver, dial_hz, mode, sender, n, times, snrs, locators in logs.connection.execute(
        "SELECT file, start_us, receiver, dial_hz, mode, sender, n, times, snrs, locators FROM tally"
    ).fetchall():
        key = (file, start_us, receiver, int(dial_hz), mode, sender.upper())
        assert n == len(times) == len(snrs) > 0
        for time_us in times:
            found[*key, "at", start_us // HOUR_US * HOUR_US + time_us] += 1
        for snr_db in snrs:
            found[*key, "snr", snr_db] += 1
        for locator in locators or ():
            found[*key, "from", locator] += 1
    return found


def slow_receptions(accounts: list[Account]) -> Counter[tuple[Any, ...]]:
    starts: dict[str, list[int]] = {}
    for account in accounts:
        for *_, record in account.records:
            if record.kind == "setup":
                starts.setdefault(record.receiver, []).append(us(record))
    found: Counter[tuple[Any, ...]] = Counter()
    for i, account in enumerate(accounts):
        for *_, record in account.records:
            if record.kind != "heard":
                continue
            time_us = us(record)
            pieces = [time_us - time_us % HOUR_US]
            pieces += [start for start in starts.get(record.receiver, []) if start <= time_us]
            key = (i, max(pieces), record.receiver, record.dial_hz, record.mode, record.sender)
            found[*key, "at", time_us] += 1
            found[*key, "snr", record.snr_db] += 1
            if len(record.locator) >= 4:
                found[*key, "from", record.locator] += 1
    return found


def us(record: Record) -> int:
    """The record's time in microseconds since 1970."""
    since = record.time.replace(tzinfo=UTC) - datetime(1970, 1, 1, tzinfo=UTC)
    return (since.days * 86_400 + since.seconds) * 1_000_000 + since.microseconds


def setups(logs: Logs) -> list[tuple[Any, ...]]:
    return [
        (receiver, at.time_us, at.locator, at.antenna, at.dial_hz)
        for receiver, held in sorted(logs.setups.items())
        for at in held
    ]


def slow_setups(accounts: list[Account]) -> list[tuple[Any, ...]]:
    latest = {}
    for account in accounts:
        for *_, record in account.records:
            if record.kind == "setup":
                antenna = dict(record.more)["antenna"]
                latest[record.receiver, us(record)] = (record.locator, antenna, record.dial_hz)
    return [(*key, *latest[key]) for key in sorted(latest)]


def same_number(written: str, value: Decimal | int | None) -> bool:
    """Whether a field as written stands for a value; both may be missing."""
    return value is None if written == "" else Decimal(written) == value
