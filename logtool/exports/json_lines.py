"""Records as JSON Lines: one JSON object (RFC 8259) a line."""

from __future__ import annotations

import json
from typing import IO, TYPE_CHECKING

from logtool.exports.rows import Times, blocks
from logtool.tables.choice import Choice
from logtool.tables.records import RECORD_COLUMNS, records_query

if TYPE_CHECKING:
    from logtool.records.reader import Logs


def write(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write the records that a choice counts as JSON objects with all keys; missing values are null.

    Returns notes: none.
    """
    time_of = Times()
    encode = json.JSONEncoder(allow_nan=False, separators=(",", ":")).encode
    names = tuple(RECORD_COLUMNS)
    for rows in blocks(logs, records_query(logs, choice)):
        objects = (dict(zip(names, (time_of[time_us], *rest), strict=True)) for time_us, *rest in rows)
        out.write("".join(f"{encode(one)}\n" for one in objects).encode())
    return []
