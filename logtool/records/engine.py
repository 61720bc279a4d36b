"""The embedded engine (DuckDB): one connection an opened set of logs, and how it reads lines."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from logtool.records.layout import MAX_LINE_BYTES
from logtool.records.quick import sql_text
from logtool.records.scan import ENGINE_DELIMITER

if TYPE_CHECKING:
    import duckdb

_NULL = sql_text("\x02")  # a line of this byte alone is read as NULL, and put back
_READ_LINE_BYTES = 2 * MAX_LINE_BYTES + 64  # longest line that the engine is given, with room


def connect(work: Path, threads: int | None, memory_mb: int) -> duckdb.DuckDBPyConnection:
    """Return a connection in memory that spills to the folder `work` and never uses the network."""
    import duckdb

    config: dict[str, str | bool | int | float | list[str]] = {
        "temp_directory": str(work / "spill"),
        "autoinstall_known_extensions": False,
        "autoload_known_extensions": False,
        "preserve_insertion_order": False,
        "enable_external_file_cache": False,
        "memory_limit": f"{memory_mb}MB",
    }
    if threads is not None:
        config["threads"] = threads
    connection = duckdb.connect(":memory:", config=config)
    connection.execute("SET enable_progress_bar_print = false")  # how far it is is told in our own way
    return connection


def lines_sql(paths: list[Path]) -> str:
    """Return the SQL of a relation of `file` (index in `paths`) and `line`, empty lines left out.

    The paths end in the file's index in eight digits; see `reader`.
    """
    if not paths:
        return "(SELECT 0::INTEGER AS file, ''::VARCHAR AS line WHERE false)"
    listed = ", ".join(sql_text(str(path)) for path in paths)
    read = (
        f"read_csv([{listed}], auto_detect=false, header=false, delim={sql_text(ENGINE_DELIMITER)}, "
        f"quote='', escape='', comment='', nullstr={_NULL}, strict_mode=false, "
        f"compression='none', max_line_size={_READ_LINE_BYTES}, columns={{'line': 'VARCHAR'}}"
    )
    if len(paths) == 1:
        return f"(SELECT {int(paths[0].name)}::INTEGER AS file, coalesce(line, {_NULL}) AS line FROM {read}))"
    return f"(SELECT right(filename, 8)::INTEGER AS file, coalesce(line, {_NULL}) AS line FROM {read}, filename=true))"


def create_table(
    connection: duckdb.DuckDBPyConnection, name: str, columns: dict[str, str], values: Sequence[Sequence[Any]]
) -> None:
    """Make a table of the columns (name to type) from one sequence of values a column."""
    declared = ", ".join(f"{column} {kind}" for column, kind in columns.items())
    connection.execute(f"CREATE OR REPLACE TEMP TABLE {name} ({declared})")
    if values and len(values[0]):
        unnested = ", ".join(f"unnest(?::{kind}[])" for kind in columns.values())
        connection.execute(f"INSERT INTO {name} SELECT {unnested}", [list(column) for column in values])


def among(column: str, words: Sequence[str]) -> str:
    """Return the SQL condition that a column is one of the words."""
    return f"{column} IN ({', '.join(sql_text(word) for word in words)})"
