"""Records as the log layout: the lines themselves, in order of time."""

from __future__ import annotations

from typing import IO, TYPE_CHECKING

from logtool.exports.rows import blocks
from logtool.records.layout import LAYOUT_LINE, LAYOUT_VERSION, NAMES_LINE
from logtool.tables.choice import Choice
from logtool.tables.records import records_query

if TYPE_CHECKING:
    from logtool.records.reader import Logs


def write(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write the records that a choice counts as they are written, and setups that no line states.

    Returns notes: none.
    """
    out.write(f"{LAYOUT_LINE}{LAYOUT_VERSION}\n{NAMES_LINE}\n".encode())
    for rows in blocks(logs, records_query(logs, choice, ("raw",), with_setups=True)):
        out.write("".join(f"{line}\n" for (line,) in rows).encode())
    return []
