"""A log with records of all shapes, and what they are by the slow reader."""

from __future__ import annotations

import io
from datetime import UTC
from pathlib import Path
from typing import Any

from logtool.exports.formats import write_as
from logtool.records.opening import open_with
from logtool.records.privacy import Privacy
from logtool.records.reader import Logs, OpenOptions
from logtool.tables.choice import choose
from tests.records import slow_reader
from tests.records.cases import GOOD_LINES
from tests.tables.making import heard, note, setup, stop, watch

NUMBERS = ("audio_hz", "snr_db", "late_s", "power_dbm")
# Two receivers, one of which moves and takes its antenna off; a sender that borrows, one with `/`, one unnamed.
STORY = [
    setup("2026-03-01T18:00:00Z", "JN58td", "wire"),
    watch("2026-03-01T19:00:00Z", 3600),
    heard("2026-03-01T18:10:00Z", "Q1ABC", locator="JO62", snr_db="-12", text="=1+1,\"x\"", more="sure=0.5"),
    heard("2026-03-01T18:10:00Z", "q1abc/p", locator="jo62QM12ab", snr_db="3.5", addressee="Q2XYZ", power_dbm="37"),
    heard("2026-03-01T19:20:00.25Z", "Q1ABC", snr_db="-7.250", text="<EOR> gr\u00fc\u00dfe \\\\ \U0001f4fb \\t73"),
    heard("2026-03-01T19:21:00Z", "", text="TNX", more="sure=0.4; path=a\\b \u00fc"),
    heard("2026-03-01T19:22:00Z", "-Q1", mode="+K8", text="@home"),
    setup("2026-03-01T20:00:00Z", "JN58td", "none"),
    heard("2026-03-01T20:10:00Z", "Q7XS", locator="KP32", snr_db="20"),
    setup("2026-03-01T21:00:00Z", "RE78ir92", "loop"),
    heard("2026-03-01T21:10:00Z", "Q5A", locator="AG05", dial_hz=10_140_000),
    note("2026-03-01T21:15:00Z"),
    stop("2026-03-01T22:00:00Z"),
    heard("2026-03-01T18:05:00Z", "Q1ABC", receiver="islet", locator="JO62"),
    heard("2026-03-01T18:10:00Z", "Q1ABC", locator="JO62", snr_db="-12", text="=1+1,\"x\"", more="sure=0.5"),
]  # fmt: skip


def write_log(path: Path, *, story: list[str] = STORY, shapes: bool = True) -> Path:
    """Write the story, and with it a line of each shape that the layout allows."""
    data = "".join(f"{line}\n" for line in story).encode()
    path.write_bytes(data + b"".join(line + b"\n" for line in GOOD_LINES if shapes))
    return path


def raw_records(path: Path) -> list[bytes]:
    """The records of a log, each once, in order of time, then of bytes: by the slow reader."""
    (account,) = slow_reader.read_files([(str(path), path.read_bytes())])
    assert account.records
    return [raw for _, raw, _ in sorted(account.records, key=lambda one: (one[2].time, one[1]))]


def typed(raw: bytes) -> dict[str, Any]:
    """What an export says of a record, by the slow reader: typed, with what is empty as None."""
    record = slow_reader.read_line(raw)
    assert isinstance(record, slow_reader.Record)
    written = dict(zip(slow_reader.COLUMNS, raw.decode().split("\t"), strict=True))
    row: dict[str, Any] = {name: written[name] or None for name in slow_reader.COLUMNS}
    row["time"] = record.time.replace(tzinfo=UTC)
    row["dial_hz"] = record.dial_hz
    for name in NUMBERS:
        value = getattr(record, name)
        row[name] = None if value is None else float(value)
    for name in ("sender", "addressee"):
        row[name] = getattr(record, name) or None
    if record.locator:
        row["locator"] = record.locator[:2].upper() + record.locator[2:].lower()
    return row


def exported(name: str, logs: Logs, **words: Any) -> bytes:
    """What a choice is in a format."""
    out = io.BytesIO()
    write_as(name, logs, choose(**words), out)
    return out.getvalue()


def export(name: str, path: Path, *, privacy: Privacy | None = None, **words: Any) -> bytes:
    """What a log is in a format."""
    options = OpenOptions(privacy=privacy or Privacy(), others_too=True)
    with open_with((path,), None, None, options) as logs:
        return exported(name, logs, **words)
