"""Rows of a query, block by block, so that no export holds all records."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from logtool.records.in_order import pieces_in_order
from logtool.tables.result import written_time

if TYPE_CHECKING:
    from logtool.records.reader import Logs

BLOCK_ROWS = 10_000  # held at a time; our choice


def blocks(logs: Logs, query: str) -> Iterator[list[tuple[Any, ...]]]:
    """Give the rows of a query in order; the logs must not be asked for anything else meanwhile."""
    for piece in pieces_in_order(logs.connection, query):
        cursor = logs.connection.execute(piece)
        while rows := cursor.fetchmany(BLOCK_ROWS):
            yield rows


class Times(dict[int, str]):
    """Instants (microseconds since 1970) as RFC 3339 writes them, the latest ones kept: many records share one."""

    def __missing__(self, time_us: int) -> str:
        if len(self) >= BLOCK_ROWS:
            self.clear()
        self[time_us] = written_time(time_us)
        return self[time_us]
