"""Records as Arrow tables and batches, typed."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from logtool.records.each import LAYOUT_COLUMNS, fields_sql, receptions_sql, shown_sql, typed_sql
from logtool.records.in_order import ORDER, pieces_in_order

if TYPE_CHECKING:
    import duckdb
    import pyarrow as pa

    from logtool.records.reader import Logs

BATCH_ROWS = 1 << 16  # of one batch, so of one row group in a Parquet file; our choice


def schema_of(columns: dict[str, str], metadata: dict[str, str] | None = None) -> pa.Schema:
    """Return the Arrow schema of columns, each given with its kind.

    Parameters
    ----------
    columns : dict of str to str
        Names and kinds: `time` (UTC, microseconds), `text`, `integer`, `number` or `flag`.
    metadata : dict of str to str, optional
        What the schema says beside.
    """
    import pyarrow as pa

    types = {
        "time": pa.timestamp("us", tz="UTC"),
        "text": pa.string(),
        "integer": pa.int64(),
        "number": pa.float64(),
        "flag": pa.bool_(),
    }
    return pa.schema([(name, types[kind]) for name, kind in columns.items()], metadata)


def batches(connection: duckdb.DuckDBPyConnection, query: str, schema: pa.Schema) -> Iterator[pa.RecordBatch]:
    """Give the rows of a query in batches of `BATCH_ROWS` (the last has fewer), in the order of `pieces_in_order`.

    The connection must not be used for anything else meanwhile.
    """
    import pyarrow as pa

    waiting = schema.empty_table()
    for piece in pieces_in_order(connection, query):
        for batch in connection.sql(piece).to_arrow_reader(BATCH_ROWS):
            waiting = pa.concat_tables([waiting, pa.Table.from_batches([batch]).cast(schema)])
            while waiting.num_rows >= BATCH_ROWS:
                yield _alone(waiting.slice(0, BATCH_ROWS))
                waiting = waiting.slice(BATCH_ROWS)
    if waiting.num_rows:
        yield _alone(waiting)


def _alone(rows: pa.Table) -> pa.RecordBatch:
    """Return rows as one batch whose buffers hold nothing else, so that the same rows are the same bytes.

    What the engine leaves where a value is missing is whatever was there before.
    """
    import numpy as np

    (batch,) = rows.take(np.arange(rows.num_rows)).combine_chunks().to_batches()
    return batch


def records_arrow(logs: Logs) -> pa.Table:
    """Return all records of opened logs, typed, each once, in the order of time (then of their bytes).

    `text` is as written, with its escapes; what a line leaves empty is null. No choice is applied, so
    nothing is left out, also not what was heard with the antenna off.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.

    Returns
    -------
    pyarrow.Table
        One row a record with the columns of the layout: `time` as a timestamp in UTC, `dial_hz` as an
        integer, other numbers as doubles, the rest as strings.
    """
    import pyarrow as pa

    logs.tally()
    lines = f"(SELECT line FROM {receptions_sql(logs)} UNION ALL SELECT line FROM odd_records)"
    columns = ", ".join(f"{typed_sql(name)} AS {name}" for name in LAYOUT_COLUMNS)
    query = f"SELECT {ORDER}, {columns} FROM {shown_sql(logs, fields_sql(lines))}"
    schema = schema_of(LAYOUT_COLUMNS)
    return pa.Table.from_batches(batches(logs.connection, query, schema), schema)
