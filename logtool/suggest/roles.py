"""What each column of the messages' table is, by its values; names in the log are hints only."""

from __future__ import annotations

from dataclasses import dataclass, field

from logtool.records.recipes.names import target_of
from logtool.suggest.call_columns import Calls
from logtool.suggest.day_order import name_date_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.left_out import doubt_left_out
from logtool.suggest.messages import find_calls
from logtool.suggest.number_columns import doubt_distances, name_by_hints, name_by_values, name_frequencies
from logtool.suggest.numbers import (
    spread_of,
)
from logtool.suggest.tables import Column, Table
from logtool.suggest.times import Times, find_times
from logtool.suggest.values import (
    words_for_nothing,
)
from logtool.suggest.wordy import name_words


@dataclass
class Roles:
    """What was found of a table: the name of each column that is wanted, and what is in doubt."""

    names: dict[int, str] = field(default_factory=dict)
    notes: dict[int, str] = field(default_factory=dict)
    doubts: list[Doubt] = field(default_factory=list)
    values: dict[str, dict[str, str]] = field(default_factory=dict)
    where: dict[int, str] = field(default_factory=dict)
    empty: set[str] = field(default_factory=set)
    decimal: str = "."
    times: Times = field(default_factory=Times)
    calls: Calls = field(default_factory=Calls)

    def has(self, target: str) -> bool:
        """Return whether a column becomes a target."""
        return any(target_of(name) == target for name in self.names.values())

    def free(self, target: str) -> bool:
        """Return whether no column has become a target yet."""
        return not self.has(target)


def find_roles(table: Table, parts: list[int], file_name: str) -> Roles:
    """Return what the columns of a table are.

    Parameters
    ----------
    table : Table
    parts : list of int
        The part of the file to which each row belongs.
    file_name : str
        Its date may tell the order of day and month.
    """
    roles = Roles()
    columns = table.columns
    roles.times = find_times(columns, parts, name_date_of(file_name))
    roles.doubts += roles.times.doubts
    for k, name in ((roles.times.time, "time"), (roles.times.date, "date")):
        if k is not None:
            roles.names[k] = name
    roles.calls = find_calls(columns, set(roles.names))
    roles.names |= roles.calls.names
    roles.values |= roles.calls.values
    roles.notes |= roles.calls.notes
    roles.doubts += roles.calls.doubts
    spreads = {
        k: spread
        for k, column in enumerate(columns)
        if k not in roles.names and (spread := spread_of(column))
    }
    name_by_hints(roles, columns, spreads)
    name_frequencies(roles, columns, spreads)
    name_by_values(roles, columns, spreads)
    name_words(roles, columns)
    doubt_distances(roles, columns)
    doubt_left_out(roles, columns, spreads)
    _written(roles, columns)
    return roles


def _written(roles: Roles, columns: list[Column]) -> None:
    """Find out how the numbers of the wanted columns are written, and which words stand for nothing."""
    commas = points = 0
    for k, name in roles.names.items():
        if name == "text":
            continue
        roles.empty |= words_for_nothing(columns[k].values)
        if columns[k].kind == "number":
            commas += sum("," in value for value in columns[k].values)
            points += sum("." in value for value in columns[k].values)
    if commas:
        roles.decimal = ","
        if points:
            roles.doubts.append(
                Doubt("decimal", "numbers are written with points and with commas; the comma is taken")
            )
