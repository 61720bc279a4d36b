"""Read one file by a recipe: a text in the layout with one line for each of its lines."""

from __future__ import annotations

import csv
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from logtool.records.quick import sql_text
from logtool.records.recipes.blocks import blocks_of
from logtool.records.recipes.cutting import HEADER, NONE, SKIPPED, parsed_sql, targets_of
from logtool.records.recipes.making import carried_targets, carrying, guarded_sql, made_sql, said_sql
from logtool.records.recipes.patterns import groups_of
from logtool.records.recipes.recipe import HEADER_RULE, NO_RULE, Recipe, RecipeError
from logtool.records.recipes.times import NO_TIME, FileClock
from logtool.records.recipes.values import column, constant_value

if TYPE_CHECKING:
    import duckdb
    import pyarrow as pa

    from logtool.records.sources import Text

_LF, _TAB, _CR, _DELETE, _C1_LEAD = b"\n\t\r\x7f\xc2"
_MIDNIGHT_FORM = "%Y-%m-%d"
_SKIP_RULE = "skip"  # what the ledger calls lines that a pattern of `skip` passes over


@dataclass
class Made:
    """A block of made lines (in order, one for each line of the text) and what they are by the recipe."""

    out: pa.ChunkedArray
    rules: np.ndarray  # of each line: see `cutting`


class Converter:
    """Turns one file's lines into lines of the layout, block by block.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        An engine for this use alone.
    recipe : Recipe
        What the lines are.
    file_name : str
        The file's name, for its pattern and for messages.
    day_us : int, optional
        The date (`--date`) at which files begin that name none.
    """

    def __init__(
        self, connection: duckdb.DuckDBPyConnection, recipe: Recipe, file_name: str, day_us: int | None = None
    ) -> None:
        self.recipe = recipe
        self.counts: Counter[str] = Counter()
        self.earliest: dict[str, tuple[int, str]] = {}  # receiver to time_us and dial_hz of its first record
        self._connection = connection
        self._file_name = file_name
        self._constants = dict(constant_value(name, value) for name, value in recipe.constants.items())
        named_day_us = self._read_name()
        self._clock = FileClock(recipe.zone, day_us if named_day_us is None else named_day_us)
        self._headers: dict[int, list[str]] = {}
        self._header_line: str | None = None
        self._own = targets_of(recipe)
        self._carried: dict[str, str | None] = dict.fromkeys(carried_targets(recipe))
        self._last_step: tuple[int, dict[str, int]] | None = None  # its time, and how often each line came in it
        self._lines = 0
        connection.execute("SET TimeZone = 'UTC'")
        connection.execute("SET preserve_insertion_order = true")

    @property
    def place_and_antenna(self) -> tuple[str, str] | None:
        """Where the file's receivers stand and with which antenna, where the recipe says both."""
        if "place" in self._constants and "antenna" in self._constants:
            return self._constants["place"], self._constants["antenna"]
        return None

    def notes(self) -> list[str]:
        """Return what a user should know of the file's times."""
        told, notes = self._clock.notes, []
        if told.steps:
            notes.append(
                f"the time of day falls {told.steps} times by up to {told.largest_step_s:g} s without a new day, "
                f"first in line {told.first_step}: lines out of order or a step of the clock"
            )
        if told.doubtful:
            notes.append(
                f"{told.doubtful} lines, first line {told.first_doubtful}, stand in an hour that the clock of "
                f"{self.recipe.zone} had twice: read by their order"
            )
        if told.skipped:
            notes.append(
                f"{told.skipped} lines have a time that the clock of {self.recipe.zone} never showed: is the zone right?"
            )
        return notes

    def blocks(self, text: Text) -> Iterator[tuple[bytes, Made]]:
        """Give the lines of a text (as UTF-8) and the made lines, block by block."""
        for block in blocks_of(text, self.recipe.encoding):
            yield block, self.make(block)

    def make(self, block: bytes) -> Made:
        """Return the made lines of a block of whole lines in UTF-8."""
        values = np.frombuffer(block, np.uint8)
        ends = np.flatnonzero(values == _LF) + 1
        if not len(ends) or ends[-1] != len(block):
            ends = np.append(ends, len(block))
        lines = len(ends)
        if self._lines == 0:
            self._read_header(block)
        has_control = self._register(block, ends, values)
        self._connection.execute(
            f"CREATE OR REPLACE TEMP TABLE parsed AS {parsed_sql(self.recipe, self._headers, self._header_line)}"
        )
        self._make_timed()
        has_said = self.recipe.messages is not None and "text" in self._own
        if has_said:
            self._connection.execute(f"CREATE OR REPLACE TEMP TABLE said AS {said_sql(self.recipe)}")
        for target in self._carried:
            self._make_carried(target)
        made = made_sql(self.recipe, self._own, self._constants, has_said=has_said)
        self._connection.execute(
            f"CREATE OR REPLACE TEMP TABLE made AS {guarded_sql(made, has_control=has_control)}"
        )
        self._note_earliest()
        if self.recipe.time_step_s:
            self._tell_apart()
        table = self._connection.sql("SELECT rule, out FROM made ORDER BY i").to_arrow_table()
        rules = table.column("rule").to_numpy()
        self._count(rules)
        self._lines += lines
        return Made(table.column("out"), rules)

    def _register(self, block: bytes, ends: np.ndarray, values: np.ndarray) -> bool:
        """Make the relation `block` of i, line and bad (its encoding); return whether it has control characters."""
        import pyarrow as pa

        bad = np.zeros(len(ends), bool)
        starts = np.concatenate(([0], ends[:-1]))
        wrong = self._wrong_lines(block, starts, ends)
        if len(wrong):
            bad[wrong] = True
            pieces = [block[a:b] for a, b in zip(starts.tolist(), ends.tolist(), strict=True)]
            for i in wrong.tolist():
                pieces[i] = b"?\n"
            block = b"".join(pieces)
            ends = np.cumsum([len(piece) for piece in pieces])
            values = np.frombuffer(block, np.uint8)
        offsets = np.concatenate(([0], ends)).astype(np.int32)
        lines = pa.StringArray.from_buffers(len(ends), pa.py_buffer(offsets), pa.py_buffer(block))
        raw = pa.table({"i": np.arange(len(ends), dtype=np.int64), "raw": lines, "bad": bad})
        self._connection.register("raw_block", raw)
        line = "rtrim(raw, chr(10))"
        has_return = bool((values == _CR).any())
        if has_return:
            line = f"CASE WHEN ends_with(raw, chr(13) || chr(10)) THEN raw[:-3] ELSE {line} END"
        self._connection.execute(
            f"CREATE OR REPLACE TEMP VIEW block AS SELECT i, {line} AS line, bad FROM raw_block"
        )
        controls = (values < ord(" ")) & (values != _LF) & (values != _TAB) & (values != _CR)
        return bool(has_return or controls.any() or ((values == _DELETE) | (values == _C1_LEAD)).any())

    def _wrong_lines(self, block: bytes, starts: np.ndarray, ends: np.ndarray) -> np.ndarray:
        """Return which lines are not of the encoding."""
        bounds = enumerate(zip(starts.tolist(), ends.tolist(), strict=True))
        if self.recipe.encoding == "utf-8":
            if _is_utf8(block):
                return np.zeros(0, np.int64)
            return np.array([i for i, (a, b) in bounds if not _is_utf8(block[a:b])], np.int64)
        replaced = "\ufffd".encode()
        if replaced not in block:
            return np.zeros(0, np.int64)
        return np.array([i for i, (a, b) in bounds if replaced in block[a:b]], np.int64)

    def _make_timed(self) -> None:
        """Make the relation `timed` of i and time_us (UTC) for all lines whose time is known."""
        import pyarrow as pa

        found = self._connection.execute("""
            SELECT i, CASE WHEN stamp_us IS NULL THEN -1 ELSE lacking END AS lacking,
                coalesce(stamp_us, 0) AS stamp_us, day_us
            FROM parsed WHERE stamp_us IS NOT NULL OR day_us IS NOT NULL ORDER BY i""").fetchnumpy()
        i, lacking = (np.asarray(found[name], np.int64) for name in ("i", "lacking"))
        days_us = np.ma.filled(np.ma.asarray(found["day_us"], np.int64), NO_TIME)
        stamps_us = np.asarray(found["stamp_us"], np.int64)
        utc_us = self._clock.utc_us(self._lines + i + 1, lacking, stamps_us, days_us)
        known = utc_us != NO_TIME
        self._connection.register("timed", pa.table({"i": i[known], "time_us": utc_us[known]}))

    def _make_carried(self, target: str) -> None:
        """Make the table of the values that lines carry of a target, with the one from the block before."""
        rules = ", ".join(map(str, carrying(self.recipe, target)))
        name = f"carried_{target}"
        self._connection.execute(f"""
            CREATE OR REPLACE TEMP TABLE {name} AS
            SELECT i, {column(target)} AS value FROM parsed WHERE rule IN ({rules}) AND {column(target)} IS NOT NULL
            UNION ALL SELECT -1::BIGINT, ?::VARCHAR""", [self._carried[target]])  # fmt: skip
        last = self._connection.execute(f"SELECT arg_max(value, i) FROM {name}").fetchone()
        assert last is not None
        self._carried[target] = last[0]

    def _note_earliest(self) -> None:
        if self.place_and_antenna is None:
            return
        for receiver, time_us, dial_hz in self._connection.execute("""
                SELECT receiver, min(time_us), arg_min(dial_hz, (time_us, dial_hz)) FROM made
                WHERE receiver IS NOT NULL AND time_us IS NOT NULL AND dial_hz IS NOT NULL
                GROUP BY receiver""").fetchall():
            if receiver not in self.earliest or time_us < self.earliest[receiver][0]:
                self.earliest[receiver] = (time_us, dial_hz)

    def _tell_apart(self) -> None:
        """Number equal lines within one step of the text's times, so that none counts as repeated."""
        self._connection.execute("""
            CREATE OR REPLACE TEMP TABLE stepped AS
            SELECT i, out, time_us, sum(new) OVER (ORDER BY i ROWS UNBOUNDED PRECEDING) AS step FROM (
                SELECT i, out, time_us, (time_us IS DISTINCT FROM lag(time_us) OVER (ORDER BY i))::INTEGER AS new
                FROM made WHERE time_us IS NOT NULL AND out NOT LIKE '!%')""")
        before, counts = self._last_step or (None, {})
        self._connection.execute("CREATE OR REPLACE TEMP TABLE before (out VARCHAR, n BIGINT)")
        first = self._connection.execute("SELECT arg_min(time_us, i), max(step) FROM stepped").fetchone()
        assert first is not None
        if first[1] is None:
            return
        if before == first[0] and counts:
            self._connection.execute(
                "INSERT INTO before SELECT unnest(?::VARCHAR[]), unnest(?::BIGINT[])",
                [list(counts), list(counts.values())],
            )
        self._connection.execute("""
            CREATE OR REPLACE TEMP TABLE numbered AS
            SELECT stepped.i, stepped.out, time_us, step,
                row_number() OVER (PARTITION BY step, stepped.out ORDER BY stepped.i)
                    + CASE WHEN step = 1 THEN coalesce(before.n, 0) ELSE 0 END AS nth
            FROM stepped LEFT JOIN before ON stepped.out = before.out""")
        rows = self._connection.execute(
            "SELECT out, max(nth), any_value(time_us) FROM numbered WHERE step = ? GROUP BY out", [first[1]]
        ).fetchall()
        kept = counts if first[1] == 1 and before == first[0] else {}
        self._last_step = rows[0][2], {**kept, **{out: nth for out, nth, _ in rows}}
        self._connection.execute("""
            UPDATE made SET out = made.out || CASE WHEN ends_with(made.out, chr(9)) THEN '' ELSE '; ' END
                || 'nth=' || nth
            FROM numbered WHERE made.i = numbered.i AND nth > 1""")

    def _count(self, rules: np.ndarray) -> None:
        names = {NONE: NO_RULE, SKIPPED: _SKIP_RULE, HEADER: HEADER_RULE}
        names.update({k: rule.name for k, rule in enumerate(self.recipe.rules)})
        for code, count in zip(*np.unique(rules, return_counts=True), strict=True):
            if int(code) in names:
                self.counts[names[int(code)]] += int(count)

    def _read_name(self) -> int | None:
        """Take the values that the file's name gives; return the date among them."""
        pattern = self.recipe.name_pattern
        if pattern is None:
            return None
        groups = groups_of(pattern)
        listed = ", ".join(sql_text(group or f"_{i}") for i, group in enumerate(["whole_name", *groups]))
        row = self._connection.execute(
            f"SELECT regexp_extract(?, ?, [{listed}])", [Path(self._file_name).name, f"({pattern})"]
        ).fetchone()
        assert row is not None
        found: dict[str, Any] = row[0]
        if not found["whole_name"]:
            raise RecipeError(
                f"{self._file_name}: its name does not match `name.pattern` of {self.recipe.name} ({pattern!r}); "
                "rename the file or mend the pattern"
            )
        day_us = None
        for piece in filter(None, groups):
            if piece == "date":
                day_us = day_of(self._connection, found[piece], self.recipe.name_date_form or _MIDNIGHT_FORM)
                if day_us is None:
                    raise RecipeError(
                        f"{self._file_name}: {found[piece]!r} in its name is no date of the form "
                        f"{self.recipe.name_date_form!r} (`name.date_form` of {self.recipe.name})"
                    )
            elif found[piece]:
                target, value = constant_value(piece, self.recipe.values.get(piece, {}).get(found[piece], found[piece]))
                self._constants[target] = value
        return day_us

    def _read_header(self, block: bytes) -> None:
        """Find the columns that the file's first line names, for the rules that want it."""
        wanted = {k: rule for k, rule in enumerate(self.recipe.rules) if rule.form.header is not None}
        if not wanted:
            return
        for raw in block.split(b"\n"):
            line = raw.removesuffix(b"\r").decode("utf-8", "replace")
            if line.strip() and not any(_is_found(self._connection, pattern, line) for pattern in self.recipe.skip):
                break
        self._header_line = line
        for k, rule in wanted.items():
            assert rule.form.header is not None and rule.form.separator is not None
            names = [name.strip() for name in next(csv.reader([line], delimiter=rule.form.separator), [])]
            piece_of = {name: piece for piece, name in rule.form.header.items()}
            for name, piece in piece_of.items():
                if names.count(name) != 1:
                    raise RecipeError(
                        f"{self._file_name}, line 1: `columns.{piece}` of {self.recipe.name} wants a column {name!r}, and the "
                        f"header has {'several' if name in names else 'none'}: {', '.join(names)[:300]}"
                    )
            self._headers[k] = [piece_of.get(name, "") for name in names]


def day_of(connection: duckdb.DuckDBPyConnection, written: str, form: str) -> int | None:
    """Return the midnight of a written date in microseconds since 1970, or None where it is not of the form."""
    from logtool.records.recipes.timeforms import date_sql

    row = connection.execute(f"SELECT {date_sql(sql_text(written), form)}").fetchone()
    assert row is not None
    day_us: int | None = row[0]
    return day_us


def _is_utf8(block: bytes) -> bool:
    if block.isascii():
        return True
    try:
        block.decode()
    except UnicodeDecodeError:
        return False
    return True


def _is_found(connection: duckdb.DuckDBPyConnection, pattern: str, line: str) -> bool:
    row = connection.execute("SELECT regexp_matches(?, ?)", [line, pattern]).fetchone()
    return bool(row and row[0])
