"""What a file says of itself beside its lines: in its name, and in a first line that names the columns."""

from __future__ import annotations

import csv
from pathlib import Path
from typing import TYPE_CHECKING, Any

from logtool.records.quick import sql_text
from logtool.records.recipes.patterns import groups_of
from logtool.records.recipes.recipe import Recipe, RecipeError
from logtool.records.recipes.timeforms import date_sql
from logtool.records.recipes.values import constant_value

if TYPE_CHECKING:
    import duckdb

_SHOWN_CHARACTERS = 300


def named_values(
    connection: duckdb.DuckDBPyConnection, recipe: Recipe, file_name: str
) -> tuple[dict[str, str], int | None]:
    """Return the values that a file's name gives by target, and its date as midnight in us since 1970.

    Raises
    ------
    RecipeError
        Where the name does not match the recipe's pattern, or its date cannot be read.
    """
    pattern = recipe.name_pattern
    if pattern is None:
        return {}, None
    groups = groups_of(pattern)
    listed = ", ".join(sql_text(group or f"_{i}") for i, group in enumerate(["whole_name", *groups]))
    found: dict[str, Any] = _one(
        connection, f"SELECT regexp_extract(?, ?, [{listed}])", [Path(file_name).name, f"({pattern})"]
    )
    if not found["whole_name"]:
        raise RecipeError(
            f"{file_name}: its name does not match `name.pattern` of {recipe.name} ({pattern!r}); "
            "rename the file or mend the pattern"
        )
    values, day_us = {}, None
    for piece in filter(None, groups):
        written = found[piece]
        if piece == "date":
            day_us = day_of(connection, written, recipe.name_date_form or "")
            if day_us is None:
                raise RecipeError(
                    f"{file_name}: {written!r} in its name is no date of the form {recipe.name_date_form!r} "
                    f"(`name.date_form` of {recipe.name})"
                )
        elif written:
            target, value = constant_value(piece, recipe.values.get(piece, {}).get(written, written))
            values[target] = value
    return values, day_us


def day_of(connection: duckdb.DuckDBPyConnection, written: str, form: str) -> int | None:
    """Return the midnight of a written date in microseconds since 1970, or None where it is not of the form."""
    day_us: int | None = _one(connection, f"SELECT {date_sql(sql_text(written), form)}", [])
    return day_us


def header_of(
    connection: duckdb.DuckDBPyConnection, recipe: Recipe, block: bytes, file_name: str
) -> tuple[str | None, dict[int, list[str]]]:
    """Return the line that names the columns and, for each rule that wants it, the piece of each column.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        The engine.
    recipe : Recipe
        What the lines are.
    block : bytes
        The file's first lines, as UTF-8.
    file_name : str
        For the message.

    Raises
    ------
    RecipeError
        Where a column is missing or there twice.
    """
    wanted = {k: rule for k, rule in enumerate(recipe.rules) if rule.form.header is not None}
    if not wanted:
        return None, {}
    for number, raw in enumerate(block.split(b"\n"), 1):  # noqa: B007 - told below
        line = raw.removesuffix(b"\r").decode("utf-8", "replace")
        if line.strip(" \t") and not any(_is_found(connection, pattern, line) for pattern in recipe.skip):
            break
    else:
        return None, {}
    columns = {}
    for k, rule in wanted.items():
        assert rule.form.header is not None
        assert rule.form.separator is not None
        try:
            names = [name.strip() for name in next(csv.reader([line], delimiter=rule.form.separator), [])]
        except csv.Error as error:
            raise RecipeError(
                f"{file_name}, line {number}: {recipe.name} wants a header there, and it cannot be read ({error})"
            ) from error
        piece_of = {name: piece for piece, name in rule.form.header.items()}
        for name, piece in piece_of.items():
            if names.count(name) != 1:
                raise RecipeError(
                    f"{file_name}, line {number}: `columns.{piece}` of {recipe.name} wants a column {name!r}, and "
                    f"the header has {'several' if name in names else 'none'}: {', '.join(names)[:_SHOWN_CHARACTERS]}"
                )
        columns[k] = [piece_of.get(name, "") for name in names]
    return line, columns


def _is_found(connection: duckdb.DuckDBPyConnection, pattern: str, line: str) -> bool:
    return bool(_one(connection, "SELECT regexp_matches(?, ?)", [line, pattern]))


def _one(connection: duckdb.DuckDBPyConnection, query: str, values: list[str]) -> Any:
    """Return the one value of a query; read to its end, since the connection would else stay busy with it."""
    ((value,),) = connection.execute(query, values).fetchall()
    return value
