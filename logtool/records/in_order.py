"""The rows of a query in the order of time, piece by piece, so that they are never held or sorted as a whole."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING

from logtool.records.quick import sql_text

if TYPE_CHECKING:
    import duckdb

PIECE_ROWS = 200_000  # sorted at a time; our choice
_GROUP_ROWS = 50_000  # passed over as one where its times are of another piece; our choice
ORDER = "time_us AS order_us, raw AS order_raw"  # what the columns of a query begin with


def pieces_in_order(connection: duckdb.DuckDBPyConnection, query: str) -> Iterator[str]:
    """Give queries whose rows, one query after the other, are those of a query in the order of time, then bytes.

    The rows wait in a file beside the engine's spilled data: a table of them in memory is not spilled. Joins go
    as they are written, rows streaming past what is small; the engine's own guess may hold all rows instead.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Used for nothing else until the last row is read.
    query : str
        SQL of the rows, its columns beginning with those of `ORDER`, which are left out of what is given.
    """
    ((spill,),) = connection.execute("SELECT current_setting('temp_directory')").fetchall()
    path = Path(spill).parent / "unsorted.parquet"
    rows_of = f"read_parquet({sql_text(str(path))})"
    try:
        connection.execute("SET disabled_optimizers = 'join_order,build_side_probe_side'")
        connection.execute(f"""
            COPY ({query}) TO {sql_text(str(path))}
            (FORMAT parquet, COMPRESSION lz4_raw, ROW_GROUP_SIZE {_GROUP_ROWS})""")
        ((rows,),) = connection.execute(f"SELECT count(*) FROM {rows_of}").fetchall()
        pieces = -(-rows // PIECE_ROWS)
        bounds: list[int] = []
        if pieces > 1:
            shares = [k / pieces for k in range(1, pieces)]
            ((bounds,),) = connection.execute(
                f"SELECT quantile_disc(order_us, {shares}) FROM {rows_of}"
            ).fetchall()
        for low, high in pairwise([None, *sorted(set(bounds)), None]):
            within = [f"order_us >= {low}"] if low is not None else []
            within += [f"order_us < {high}"] if high is not None else []
            yield f"""
                SELECT * EXCLUDE (order_us, order_raw) FROM {rows_of}
                WHERE {" AND ".join(within) or "true"} ORDER BY order_us, order_raw"""
    finally:
        connection.execute("RESET disabled_optimizers")
        path.unlink(missing_ok=True)
