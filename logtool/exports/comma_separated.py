"""Records as CSV after RFC 4180."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence
from typing import IO, TYPE_CHECKING, Any

from logtool.exports.cells import cell_of
from logtool.exports.rows import Times, blocks
from logtool.tables.choice import Choice
from logtool.tables.records import RECORD_COLUMNS, records_query

if TYPE_CHECKING:
    from logtool.records.reader import Logs

_MADE = frozenset({"text", "flag"})  # kinds whose values are made cells; numbers are as they are


def write(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write the records that a choice counts as CSV with a header; missing values are empty, lines end in CRLF.

    Texts that a spreadsheet might run begin with `'`; see `logtool.exports.cells`. Returns notes: none.
    """
    time_of = Times()
    written: list[Sequence[Any]] = [tuple(RECORD_COLUMNS)]
    for rows in blocks(logs, records_query(logs, choice)):
        columns = []
        for kind, values in zip(RECORD_COLUMNS.values(), zip(*rows, strict=True), strict=True):
            if kind == "time":
                columns.append([time_of[value] for value in values])
            elif kind in _MADE:
                columns.append([cell_of(value) for value in values])
            else:
                columns.append(list(values))
        written += zip(*columns, strict=True)
        _write(out, written)
        written = []
    _write(out, written)
    return []


def _write(out: IO[bytes], rows: list[Sequence[Any]]) -> None:
    text = io.StringIO(newline="")
    csv.writer(text, lineterminator="\r\n").writerows(rows)
    out.write(text.getvalue().encode())
