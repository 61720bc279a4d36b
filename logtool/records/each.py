"""The records themselves, read again from the text: each once, its fields as they may be shown."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.records.engine import create_table
from logtool.records.layout import COLUMN_NAMES, COLUMNS
from logtool.records.quick import accepts_sql
from logtool.records.tally import FIELD, SPLIT

if TYPE_CHECKING:
    from logtool.records.reader import Logs

_CALLS = ("sender", "addressee")
LAYOUT_COLUMNS = {
    column.name: column.shape if column.shape in ("time", "integer", "number") else "text"
    for column in COLUMNS
}
"""The layout's columns, each with the kind of its values: `time`, `text`, `integer` or `number`."""


def receptions_sql(logs: Logs) -> str:
    """Return the SQL of a relation of `file` (index) and `line` of all receptions, each once.

    A repeated one stands in the first file that has it. The tally must be there.
    """
    lines = f"""
        SELECT file, line FROM {logs.lines} WHERE {accepts_sql("heard")}
        UNION ALL FROM odd_heard"""
    if any(file.repeated for file in logs.inputs):
        lines = f"SELECT min(file) AS file, line FROM ({lines}) GROUP BY line"
    return f"({lines})"


def fields_sql(lines: str) -> str:
    """Return the SQL of a relation of a relation's `line` as `raw`, its fields `f` (from 1) and `time_us`."""
    return f"""(
        SELECT *, epoch_us({FIELD["time"]}::TIMESTAMP) AS time_us
        FROM (SELECT line AS raw, {SPLIT} AS f FROM {lines}))"""


def shown_sql(logs: Logs, records: str) -> str:
    """Return the SQL of a relation with its `raw` and `f` as they may be shown; see `Privacy`.

    With any privacy option the text is empty; locators are cut and call signs replaced as the options say.

    Parameters
    ----------
    logs : Logs
        Opened logs; the tally must be there.
    records : str
        SQL of a relation of `raw`, `f` and others; those stay as they are.
    """
    privacy = logs.privacy
    if not privacy:
        return records
    field = {name: f"one.{place}" for name, place in FIELD.items()} | {"text": "''"}
    joins = ""
    if privacy.coarsen is not None:
        field["locator"] = f"left({field['locator']}, {privacy.coarsen})"
    if privacy.key is not None:
        _make_shown_calls(logs)
        for name in _CALLS:
            joins += f" LEFT JOIN shown_call AS {name} ON {name}.call = upper({field[name]})"
            field[name] = f"coalesce({name}.shown, '')"
    listed = ", ".join(field[name] for name in COLUMN_NAMES)
    return f"""(
        SELECT * REPLACE (array_to_string(f, chr(9)) AS raw)
        FROM (SELECT one.* REPLACE ([{listed}] AS f) FROM {records} AS one {joins}))"""


def _make_shown_calls(logs: Logs) -> None:
    """Make the table `shown_call`: each call sign (upper case) of the records, and what stands for it."""
    calls = " UNION ".join(
        f"SELECT upper({FIELD[name]}) AS call FROM (SELECT {SPLIT} AS f FROM {lines})"
        for name in _CALLS
        for lines in (receptions_sql(logs), "odd_records")
    )
    found = [
        call for (call,) in logs.connection.execute(f"SELECT call FROM ({calls}) ORDER BY call").fetchall()
    ]
    values = [found, [logs.privacy.call(call) for call in found]]
    create_table(logs.connection, "shown_call", {"call": "VARCHAR", "shown": "VARCHAR"}, values)


def written_sql(locator: str) -> str:
    """Return the SQL of a locator in the case that the project writes, `JN58td25`."""
    return f"upper(left({locator}, 2)) || lower(substr({locator}, 3))"


def typed_sql(name: str) -> str:
    """Return the SQL of a column's typed value from `f` and `time_us`; NULL where the field is empty.

    Times are in microseconds since 1970, call signs in upper case, locators in the case that is written, texts
    with their escapes.
    """
    if name == "time":
        return "time_us"
    field = f"nullif({FIELD[name]}, '')"
    if name in _CALLS:
        return f"upper({field})"
    if name == "locator":
        return written_sql(field)
    return {"integer": f"{field}::BIGINT", "number": f"{field}::DOUBLE"}.get(LAYOUT_COLUMNS[name], field)
