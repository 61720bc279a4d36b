"""Read one file by a recipe: a text in the layout with one line for each of its lines."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from logtool.records.quick import sql_text
from logtool.records.recipes.cutting import BLANK, HEADER, REASON_OF, SKIPPED, parsed_sql, targets_of
from logtool.records.recipes.file_facts import header_of, named_values
from logtool.records.recipes.making import carried_targets, carrying, guarded_sql, made_sql, said_sql
from logtool.records.recipes.prepared import Prepared, prepared_blocks
from logtool.records.recipes.recipe import HEADER_RULE, Recipe
from logtool.records.recipes.steps import Steps
from logtool.records.recipes.times import LOST_DATE, NO_TIME, FileClock
from logtool.records.recipes.values import column, constant_value

if TYPE_CHECKING:
    import duckdb
    import pyarrow as pa

    from logtool.records.sources import Text

_PASSED_OVER = {SKIPPED: "skip", HEADER: HEADER_RULE}  # what the ledger calls lines that are no record


@dataclass
class Made:
    """A block of made lines with their endings (in order, one for each line of the text), and their rules."""

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
        named, named_day_us = named_values(connection, recipe, file_name)
        self._constants |= named
        self._clock = FileClock(recipe.zone, day_us if named_day_us is None else named_day_us)
        self._headers: dict[int, list[str]] = {}
        self._header_line: str | None = None
        self._own = targets_of(recipe)
        self._carried: dict[str, str | None] = dict.fromkeys(carried_targets(recipe))
        self._steps = Steps(connection)
        self._lines = 0
        connection.execute("SET TimeZone = 'UTC'")

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
                f"{told.skipped} lines have a time that the clock of {self.recipe.zone} never showed; "
                "is the zone right?"
            )
        return notes

    def blocks(self, text: Text) -> Iterator[tuple[bytes, Made]]:
        """Give the lines of a text (as UTF-8) and the made lines, block by block."""
        for prepared in prepared_blocks(text, self.recipe.encoding):
            yield prepared.block, self.make(prepared)

    def make(self, prepared: Prepared) -> Made:
        """Return the made lines of a block."""
        if self._lines == 0:
            self._header_line, self._headers = header_of(
                self._connection, self.recipe, prepared.block, self._file_name
            )
        self._connection.register("raw_block", prepared.table)
        line = "replace(raw, chr(10), '')"  # there is one, at its end
        if prepared.has_return:
            line = f"CASE WHEN ends_with(raw, chr(13) || chr(10)) THEN raw[:-3] ELSE {line} END"
        self._connection.execute(
            f"CREATE OR REPLACE TEMP VIEW block AS SELECT i, {line} AS line, bad FROM raw_block"
        )
        self._connection.execute(
            f"CREATE OR REPLACE TEMP TABLE parsed AS {parsed_sql(self.recipe, self._headers, self._header_line)}"
        )
        self._make_timed()
        has_said = self.recipe.messages is not None and "text" in self._own
        if has_said:
            self._connection.execute(f"CREATE OR REPLACE TEMP TABLE said AS {said_sql(self.recipe)}")
        for target in self._carried:
            self._make_carried(target)
        has_escapes = b"\\" in prepared.block and any(rule.form.json for rule in self.recipe.rules)
        has_control = prepared.has_control or has_escapes
        made = made_sql(self.recipe, self._own, self._constants, has_said=has_said)
        self._connection.execute(
            f"CREATE OR REPLACE TEMP TABLE made AS {guarded_sql(made, has_control=has_control)}"
        )
        self._note_earliest()
        if self.recipe.time_step_s:
            self._steps.tell_apart()
        table = self._connection.sql(
            "SELECT rule, out || chr(10) AS out FROM made ORDER BY i"
        ).to_arrow_table()
        rules = table.column("rule").to_numpy()
        self._count(rules)
        self._lines += prepared.lines
        return Made(table.column("out"), rules)

    def _make_timed(self) -> None:
        """Make the relation `timed` of i and time_us (UTC) for all lines whose time is known."""
        import pyarrow as pa

        found = self._connection.execute(
            """
            SELECT i, CASE WHEN stamp_us IS NULL THEN -1 ELSE lacking END AS lacking,
                coalesce(stamp_us, 0) AS stamp_us, CASE WHEN lost_date THEN ? ELSE coalesce(day_us, ?) END AS day_us
            FROM parsed WHERE stamp_us IS NOT NULL OR day_us IS NOT NULL OR lost_date
            ORDER BY i""",
            [LOST_DATE, NO_TIME],
        ).fetchnumpy()
        names = ("i", "lacking", "stamp_us", "day_us")
        i, lacking, stamps_us, days_us = (np.asarray(found[name], np.int64) for name in names)
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
        ((last,),) = self._connection.execute(f"SELECT arg_max(value, i) FROM {name}").fetchall()
        self._carried[target] = last

    def _note_earliest(self) -> None:
        if self.place_and_antenna is None:
            return
        no_earlier = "".join(
            f" AND NOT (time_us >= {time_us} AND receiver = {sql_text(receiver)})"
            for receiver, (time_us, _) in self.earliest.items()
        )
        for receiver, time_us, dial_hz in self._connection.execute(f"""
                SELECT receiver, min(time_us), arg_min(dial_hz, (time_us, dial_hz)) FROM made
                WHERE receiver IS NOT NULL AND time_us >= 0 {no_earlier} AND regexp_full_match(dial_hz, '[0-9]+')
                GROUP BY receiver""").fetchall():
            self.earliest[receiver] = (time_us, dial_hz)

    def _count(self, rules: np.ndarray) -> None:
        for code, count in zip(*np.unique(rules, return_counts=True), strict=True):
            if int(code) != BLANK:
                self.counts[self.rule_name(int(code)) or REASON_OF[int(code)]] += int(count)

    def rule_name(self, code: int) -> str:
        """Return what the ledger calls lines with this code of `cutting`; empty where they are of no rule."""
        return self.recipe.rules[code].name if code >= 0 else _PASSED_OVER.get(code, "")
