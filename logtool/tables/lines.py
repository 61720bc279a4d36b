"""The lines behind a figure: file, line number and what the line says."""

from __future__ import annotations

from collections import defaultdict
from typing import TYPE_CHECKING, Any

from logtool.places.locator import written
from logtool.records.layout import COLUMNS, Column
from logtool.records.locate import line_numbers
from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import unknown_words
from logtool.tables.receptions import receptions_sql
from logtool.tables.result import Table

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs


def lines_table(logs: Logs, choice: Choice) -> Table:
    """Return the columns of `lines`; see `lines`."""
    receptions = receptions_sql(logs, choice)
    wanted: dict[int, dict[bytes, tuple[int, list[str]]]] = defaultdict(dict)
    rows = logs.connection.execute(f"SELECT file, raw, time_us, f FROM {receptions}").fetchall()
    for file, raw, time_us, fields in rows:
        wanted[file][raw.encode()] = (time_us, fields)
    columns: dict[str, list[Any]] = {name: [] for name in ("file", "line", *(c.name for c in COLUMNS))}
    paths, names = logs.paths, logs.file_names
    for file in sorted(wanted):
        left = wanted[file]
        for number, raw in line_numbers(paths[file], left):
            if raw not in left:
                continue
            time_us, fields = left.pop(raw)
            values = [names[file], number, time_us, *map(_read, COLUMNS[1:], fields[1:])]
            for name, value in zip(columns, values, strict=True):
                columns[name].append(value)
    table = Table(columns)
    table.notes = unknown_words(logs.connection, choice)
    return table


def _read(column: Column, field: str) -> Any:
    """Return a field as its column means it; None where it is empty."""
    if not field:
        return None
    if column.shape == "integer":
        return int(field)
    if column.shape == "number":
        return float(field)
    if column.name in ("sender", "addressee"):
        return field.upper()
    return written(field) if column.name == "locator" else field


def lines(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return the receptions that a choice counts, each with the file and the line it stands on.

    A repeated line is given once, where it stands first. `text` is as written, with its escapes.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`, but for `by`.

    Returns
    -------
    pandas.DataFrame
        One row per reception with `file`, `line` and the columns of the layout, in the order of the files.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    return lines_table(logs, choose(**words)).to_pandas()
