"""The records themselves, with the place, distance and bearing of each reception: what exports are made of."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from logtool.records.each import LAYOUT_COLUMNS, fields_sql, shown_sql, typed_sql, written_sql
from logtool.records.engine import among, create_table
from logtool.records.in_order import ORDER
from logtool.records.judge import Record, judge
from logtool.records.layout import COLUMN_NAMES
from logtool.records.tally import FIELD, HOUR_US, SPLIT
from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import conditions, unknown_words
from logtool.tables.locators import make_pairs
from logtool.tables.receptions import receptions_sql
from logtool.tables.result import output_value, written_time
from logtool.tables.rollup import make_hour_nights, make_rollup

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs

_DISTANCES = ("distance_km", "uncertainty_km", "bearing_deg")
DERIVED_COLUMNS = {
    "band": "text",
    "antenna": "text",
    "receiver_locator": "text",
    "sender_locator": "text",
    "borrowed": "flag",
    **dict.fromkeys(_DISTANCES, "number"),
}
"""What is worked out for a reception; null for records of other kinds."""

RECORD_COLUMNS = LAYOUT_COLUMNS | DERIVED_COLUMNS
"""Each column of an export with the kind of its values; see `logtool.records.arrow.schema_of`."""


def records_query(
    logs: Logs, choice: Choice, columns: Sequence[str] = tuple(RECORD_COLUMNS), *, with_setups: bool = False
) -> str:
    """Return the SQL query of all records that a choice counts, each once, for `pieces_in_order`.

    Times are in microseconds since 1970. A choice by sender or mode leaves receptions only. Records of other
    kinds are chosen by the receiver and antenna in force and by the night of their hour; a band leaves out
    those that are on another dial. Unlike in figures, nothing is left out for being heard with the antenna
    off: that would lose records.

    Parameters
    ----------
    logs : Logs
        Opened logs; what they leave out of an output is left out here.
    choice : Choice
        Which records.
    columns : sequence of str
        Names of `RECORD_COLUMNS`, distances rounded for output, and `raw` (the line), `f` (the fields as written,
        from 1).
    with_setups : bool
        Also a line for each setup that no line states: one made from what a recipe or another format says of the
        receiver's place.
    """
    records = _with_places(logs, receptions_sql(logs, choice, also_off=True), rounded=True)
    if not choice.senders and not choice.modes:
        nothing = ", ".join(f"NULL AS {name}" for name in DERIVED_COLUMNS)
        others = f"SELECT raw, f, time_us, {nothing} FROM {_others(logs, choice, with_setups)}"
        records = f"(FROM {records} UNION ALL BY NAME {others})"
    return _query(logs, records, columns)


def _query(logs: Logs, records: str, columns: Sequence[str]) -> str:
    """Return the query of columns of a relation of records, for `pieces_in_order`."""
    typed = {name: typed_sql(name) for name in LAYOUT_COLUMNS}
    listed = ", ".join(f"{typed.get(name, name)} AS {name}" for name in columns)
    return f"SELECT {ORDER}, {listed} FROM {shown_sql(logs, records)}"


def _with_places(logs: Logs, receptions: str, *, rounded: bool) -> str:
    """Return the SQL of a relation of raw, f, time_us and the derived columns of a relation of receptions."""
    connection = logs.connection
    make_pairs(connection, "SELECT DISTINCT place, locator FROM rollup")
    pairs = "pair"
    if rounded:
        pairs = "written_pair"
        columns = {"place": "VARCHAR", "locator": "VARCHAR", **dict.fromkeys(_DISTANCES, "DOUBLE")}
        rows = connection.execute(f"SELECT {', '.join(columns)} FROM pair").fetchall()
        values = [
            [output_value(name, value) for value in values]
            for name, values in zip(columns, zip(*rows, strict=True), strict=False)
        ]
        create_table(connection, pairs, columns, values)
    return f"""(
        SELECT raw, f, time_us, band, antenna, place AS receiver_locator,
            {written_sql("locator")} AS sender_locator, CASE WHEN locator IS NOT NULL THEN borrowed END AS borrowed,
            {", ".join(_DISTANCES)}
        FROM {receptions} LEFT JOIN sender_hour USING (sender, hour) LEFT JOIN {pairs} USING (place, locator))"""


def _others(logs: Logs, choice: Choice, with_setups: bool) -> str:
    """Return the SQL of a relation of raw, f and time_us of the records that are no receptions."""
    connection = make_rollup(logs, choice)
    lines = "odd_records"
    if with_setups:
        create_table(connection, "setup_beside", {"line": "VARCHAR"}, [_setups_beside(logs)])
        lines = "(SELECT line FROM odd_records UNION ALL FROM setup_beside)"
    placed = f"""(
        SELECT raw, f, time_us, time_us AS start_us, name AS receiver, antenna, band, lon_deg,
            time_us // {HOUR_US} AS hour
        FROM (SELECT *, {FIELD["receiver"]} AS receiver FROM {fields_sql(lines)}) AS record
            ASOF JOIN station ON record.receiver = station.receiver AND time_us >= since_us
            LEFT JOIN dial_band ON {FIELD["dial_hz"]} = dial_band.dial_hz)"""
    where = conditions(replace(choice, bands=()), of_receptions=False, also_off=True)
    if choice.bands:
        where.append(f"(band IS NULL OR {among('band', choice.bands)})")
    if choice.nights:
        make_hour_nights(connection, "record_night", f"SELECT DISTINCT lon_deg, hour FROM {placed}")
        placed = f"""(
            SELECT placed.*, night FROM {placed} AS placed JOIN record_night
                ON placed.hour = record_night.hour AND placed.lon_deg IS NOT DISTINCT FROM record_night.lon_deg)"""
    return f"(SELECT raw, f, time_us FROM {placed} WHERE {' AND '.join(where)})"


def _setups_beside(logs: Logs) -> list[str]:
    """Return a line of the layout for each setup that no line of the logs states."""
    stated = set()
    for (line,) in logs.connection.execute(
        f"SELECT line FROM odd_records WHERE {SPLIT}[2] = 'setup'"
    ).fetchall():
        record = judge(line.encode())
        assert isinstance(record, Record)
        stated.add(
            (record.field("receiver"), record.time_us, record.field("locator"), record.keys["antenna"])
        )
    lines = []
    for setup in (setup for setups in logs.setups.values() for setup in setups):
        if (setup.receiver, setup.time_us, setup.locator, setup.antenna) in stated:
            continue
        fields = {
            "time": written_time(setup.time_us),
            "kind": "setup",
            "receiver": setup.receiver,
            "dial_hz": str(setup.dial_hz),
            "locator": setup.locator,
            "more": setup.more,
        }
        lines.append("\t".join(fields.get(name, "") for name in COLUMN_NAMES))
    return lines


def receptions(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return the receptions that a choice counts, each with the distance to its sender. [km]

    The distance is between the centres of two cells and may be off by `uncertainty_km`; where it is smaller
    than that there is no bearing. `locator` is what the message gives, `sender_locator` where the sender is in
    that hour by all that was heard of it, which may be `borrowed` from another hour.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`, but for `by`.

    Returns
    -------
    pandas.DataFrame
        One row a reception in the order of time, each once: the columns of the layout (`time` as a timestamp
        in UTC, `text` with its escapes) and `DERIVED_COLUMNS`, not rounded.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    import pyarrow as pa

    from logtool.records.arrow import batches, schema_of

    choice = choose(**words)
    records = _with_places(logs, receptions_sql(logs, choice), rounded=False)
    schema = schema_of(RECORD_COLUMNS)
    query = _query(logs, records, tuple(RECORD_COLUMNS))
    frame = pa.Table.from_batches(batches(logs.connection, query, schema), schema).to_pandas()
    frame.attrs["notes"] = unknown_words(logs.connection, choice, logs.privacy)
    return frame
