"""Read ADI, the text form of ADIF, as the log layout: one line for each entry.

An entry that cannot be a record becomes a line that the judge sets aside, so the ledger counts entries.
"""

from __future__ import annotations

import hashlib
import re
from array import array
from collections.abc import Iterator
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import IO

import numpy as np

from logtool.errors import FileError
from logtool.records.adi_entry import WANTED, Stand, columns_of, entry_shown, line_of, stand_of
from logtool.records.adi_tags import adi_entries
from logtool.records.judge import EPOCH, Record, judge, time_of
from logtool.records.layout import COLUMNS, FIRST_YEAR, INTEGER_FORM, LAST_YEAR, MAX_LINE_BYTES
from logtool.records.scan import BOM, Scan, ScanOptions
from logtool.records.sources import Source, Text

_MICROSECOND = timedelta(microseconds=1)
_CHARACTER_BYTES = 4  # of the longest in UTF-8
_LEAST_US = (datetime(FIRST_YEAR, 1, 1, tzinfo=UTC) - EPOCH) // _MICROSECOND
_MOST_US = (datetime(LAST_YEAR + 1, 1, 1, tzinfo=UTC) - EPOCH) // _MICROSECOND - 1
_LEAST_HZ, _MOST_HZ = next((c.low or 0, c.high or 0) for c in COLUMNS if c.name == "dial_hz")
_NOT_GOOD = -1
_DIAL = re.compile(INTEGER_FORM)
_END_OF_HEADER = re.compile(rb"<eoh>", re.IGNORECASE)
_WRITTEN_LINES = 4096  # held before they go to the file; our choice


def scan_adi(source: Source, path: Path, options: ScanOptions) -> Scan:
    """Return what an ADI file holds, and write its entries to `path` as lines of the layout, one for each.

    So a line number of the text is the number of an entry. The receiver's place and antenna are no entries:
    they become setups without a line, at the earliest entry of each receiver that states them and wherever they
    change. Entries of two stations in one file are two receivers.

    Parameters
    ----------
    source : Source
        The file, plain or packed.
    path : Path
        Where the text shall be; must not exist.
    options : ScanOptions
        How to look; a file without anything of ADI is refused unless `anyway`.

    Raises
    ------
    FileError
        Where the file cannot be read or the text not be written.

    References
    ----------
    ADIF 3.1.6; see `logtool.records.adi_tags` and `docs/formats.md`.
    """
    found = Scan(source, path, copied=True)
    text = Text(source)
    text.digest = hashlib.sha256() if options.with_digest else None
    try:
        with path.open("wb") as out:
            out.write(BOM)  # the reader drops one
            seen = _Seen()
            _write_lines(found, seen.blocks(text, options), out)
    except OSError as error:
        raise FileError(
            f"{source.name}: its entries cannot be kept in {path.parent} ({error.strerror}); "
            "free some space there or set TMPDIR to a folder with more"
        ) from error
    found.stored_bytes, found.broken = text.stored_bytes, text.broken
    if not (found.lines or seen.header or seen.empty or options.anyway):
        found.refused = "it has neither an entry nor a header of ADI, so it is something else; check the file"
    if text.digest is not None:
        found.digest = f"sha256:{text.digest.hexdigest()}"
    return found


class _Seen:
    """What was seen of a text that may hold no entry."""

    empty = True
    header = False

    def blocks(self, text: Text, options: ScanOptions) -> Iterator[bytes]:
        """Give the blocks of the text, and tell how far it is."""
        for block in text:
            self.empty = self.empty and not block.strip()
            self.header = self.header or bool(_END_OF_HEADER.search(block))
            yield block
            if options.progress is not None:
                options.progress(text.stored_bytes)


def _write_lines(found: Scan, blocks: Iterator[bytes], out: IO[bytes]) -> None:
    """Write a line for each entry and fill in what is counted of them."""
    stands = _Stands()
    lines: list[bytes] = []
    for entry in adi_entries(blocks, WANTED):
        columns = columns_of(entry)
        found.lines += 1
        if columns is None:
            lines.append(entry_shown(entry))
        else:
            lines.append(line_of(columns))
            stands.note(columns, stand_of(entry), found.lines)
        if len(lines) >= _WRITTEN_LINES:
            _write(out, lines)
    _write(out, lines)
    found.setups = stands.setups()


def _write(out: IO[bytes], lines: list[bytes]) -> None:
    out.writelines((line if len(line) <= MAX_LINE_BYTES else _cut(line)) + b"\n" for line in lines)
    lines.clear()


def _cut(line: bytes) -> bytes:
    """Return the beginning of a line that is too long, cut between characters so that it still is."""
    return line[: MAX_LINE_BYTES + _CHARACTER_BYTES].decode(errors="ignore").encode()


class _Stands:
    """Where each receiver stood at each entry, a few bytes an entry; entries need not be in order of time."""

    def __init__(self) -> None:
        self._numbers: dict[tuple[str, Stand], int] = {}
        self._noted: dict[str, array[int]] = {}  # of each receiver: time, stand, dial and entry, and so on

    def note(self, columns: dict[str, str], stand: Stand | None, entry: int) -> None:
        """Note where the receiver of an entry stood, if the entry says it and could be a record."""
        if stand is None:
            return
        receiver, time_us, dial_hz = columns["receiver"], time_of(columns["time"]), columns["dial_hz"]
        if time_us is None or not _DIAL.fullmatch(dial_hz):
            return
        key = (receiver, stand)
        if key not in self._numbers:
            good = isinstance(_setup(receiver, stand, _LEAST_US, _LEAST_HZ), Record)
            self._numbers[key] = len(self._numbers) if good else _NOT_GOOD
        if (
            self._numbers[key] != _NOT_GOOD
            and _LEAST_US <= time_us <= _MOST_US
            and _LEAST_HZ <= int(dial_hz) <= _MOST_HZ
        ):
            self._noted.setdefault(receiver, array("q")).extend(
                (time_us, self._numbers[key], int(dial_hz), entry)
            )

    def setups(self) -> list[tuple[int, Record]]:
        """Return a setup for the earliest entry of each receiver and for each later one with another stand."""
        stand_of_number = {number: stand for (_, stand), number in self._numbers.items()}
        found = []
        for receiver in sorted(self._noted):
            noted = np.frombuffer(self._noted[receiver], np.int64).reshape(-1, 4)
            noted = noted[np.argsort(noted[:, 0], kind="stable")]
            stands = noted[:, 1]
            for i in np.flatnonzero(np.concatenate(([True], stands[1:] != stands[:-1]))).tolist():
                time_us, number, dial_hz, entry = noted[i].tolist()
                setup = _setup(receiver, stand_of_number[number], time_us, dial_hz)
                assert isinstance(setup, Record)
                found.append((entry, setup))
        return found


def _setup(receiver: str, stand: Stand, time_us: int, dial_hz: float) -> Record | str:
    at = EPOCH + time_us * _MICROSECOND
    fields = {
        "time": at.isoformat().replace("+00:00", "Z"),
        "kind": "setup",
        "receiver": receiver,
        "dial_hz": f"{dial_hz:.0f}",
        "locator": stand.locator,
        "more": f"antenna={stand.antenna}",
    }
    return judge(line_of(fields))
