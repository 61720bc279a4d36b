"""Columns and tables: what cutting the lines of a sample gives, whatever the way of cutting."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import lru_cache
from typing import Protocol

from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of
from logtool.suggest.timeforms import forms_of, shared_forms
from logtool.suggest.values import (
    CALLING_WORDS,
    ENOUGH,
    FEW_WORDS,
    given,
    is_call,
    is_locator,
    is_number,
    is_word,
    most_are,
)

TYPED = ("time", "number", "call", "locator", "word")
_NUMBER_FIRST = re.compile(r"[+-]?[0-9]+(?:[.,:][0-9]+)*(?:[ \t]|$)")
_SPLIT = re.compile(r"[\s,;|\"'=:()\[\]{}]+")
_DIGITS_ONLY = re.compile(r"[0-9.]+")
FEW_LOCATORS = 3  # so few different words in many lines are rather modes that look like locators; our choice
_SEEN = 300  # values by which a column's kind is found


class Way(Protocol):
    """A way of cutting lines that can be written as a rule."""

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the rule's TOML lines: `names` says what columns are called, `forms` how they must look."""
        ...


@dataclass
class Column:
    """The values of one column of a table, and what stands about it in the log itself."""

    label: str  # for people: `column 3`, or its name in quotes
    values: list[str]
    hint: str = ""  # the log's own name for it
    unit: str = ""  # a unit that stands beside the values
    literal: bool = False  # one word of prose, always the same

    @property
    def kind(self) -> str:
        """`time`, `number`, `call`, `locator`, `word`, `text`, `other`, or empty where nothing is given."""
        return kind_of(tuple(given(self.values)[:_SEEN]))


@dataclass
class Table:
    """Lines cut in one way; `rows` are their places in the sample."""

    way: Way
    columns: list[Column]
    rows: list[int]
    where: dict[int, str] = field(default_factory=dict)  # column to a pattern that makes a line of this kind
    strict: bool = False  # other lines look alike, so the rule has to say how the pieces look
    doubts: list[Doubt] = field(default_factory=list)
    header_rows: list[int] = field(default_factory=list)

    def keep(self, wanted: list[bool]) -> None:
        """Keep only some rows."""
        self.rows = [row for row, keep in zip(self.rows, wanted, strict=True) if keep]
        for column in self.columns:
            column.values = [value for value, keep in zip(column.values, wanted, strict=True) if keep]


@lru_cache(maxsize=4096)
def kind_of(values: tuple[str, ...]) -> str:
    """Return what the values of a column are. See `Column.kind`.

    >>> kind_of(("22:15", "22:16")), kind_of(("1", "-2")), kind_of(("Q1ABC", "Q2ABC")), kind_of(("a b", "c"))
    ('time', 'number', 'call', 'other')
    """
    if not values:
        return ""
    if shared_forms(values) and not most_are(values, lambda value: bool(_DIGITS_ONLY.fullmatch(value))):
        return "time"
    if most_are(values, is_number):
        return "number"
    different = len(set(values))
    if most_are(values, is_locator):
        return "word" if different <= max(1, min(FEW_LOCATORS, len(values) // 20)) else "locator"
    if most_are(values, is_call):
        return "call"
    if most_are(values, lambda value: is_call(value) or value in CALLING_WORDS) and any(map(is_call, values)):
        return "call"
    single = all(" " not in value for value in set(values))
    if single and different <= max(1, min(FEW_WORDS, len(values) // 4)):
        return "word"
    if has_calls(values):
        return "text"
    return "other"


def has_calls(texts: tuple[str, ...] | list[str]) -> bool:
    """Return whether a good part of some texts hold a call sign."""
    return sum(holds_call(text) for text in texts) >= 0.3 * max(len(texts), 1)


@lru_cache(maxsize=50_000)
def holds_call(text: str) -> bool:
    """Return whether a text holds a word of a call sign's form.

    >>> holds_call("22:15 'CQ Q1ABC JO62'"), holds_call("22:15 listening")
    (True, False)
    """
    return any(is_call(word) and not is_locator(word) for word in _SPLIT.split(text) if len(word) > 2)


def without_wrong_times(table: Table) -> None:
    """Drop the rows that have no time where the others have one."""
    for column in table.columns:
        if column.kind == "time":
            forms = shared_forms(given(column.values))
            wanted = [not value or bool(set(forms_of(value)) & set(forms)) for value in column.values]
            if not all(wanted) and sum(wanted) >= 0.5 * len(wanted):
                table.keep(wanted)


def split_by_word(table: Table, lines: list[str]) -> None:
    """Keep the rows of messages where a column's word says that other rows are of another kind."""
    for k, column in enumerate(table.columns):
        counted = Counter(column.values)
        if not 1 < len(counted) <= FEW_WORDS or not all(
            is_word(word) or len(word) == 1 for word in counted if word
        ):
            continue
        with_calls = Counter(
            value for row, value in zip(table.rows, column.values, strict=True) if holds_call(lines[row])
        )
        heard = {word for word in counted if with_calls[word] >= 0.3 * counted[word]}
        other = {word for word in counted if not with_calls[word]}
        if not heard or not other or heard | other != set(counted):
            continue
        if _differ(table, column, heard) < 2:
            continue
        table.where[k] = "|".join(re.escape(word) for word in sorted(heard))
        table.keep([value in heard for value in column.values])
        return


def _differ(table: Table, tag: Column, words: set[str]) -> int:
    """Return in how many columns the rows with some words look other than the rest."""
    differ = 0
    for column in table.columns:
        if column is tag:
            continue
        ours = [v for v, word in zip(column.values, tag.values, strict=True) if word in words]
        theirs = [v for v, word in zip(column.values, tag.values, strict=True) if word not in words]
        differ += kind_of(tuple(given(ours)[:_SEEN])) != kind_of(tuple(given(theirs)[:_SEEN]))
    return differ


def give_names(table: Table, lines: list[str]) -> None:
    """Give columns that stand in order the names of a line before them that has as many words."""
    taken = set(table.rows)
    for i, line in enumerate(lines[: max(table.rows[0], 1)]):
        words = line.strip(" \t#;*%/|").split()
        if (
            i in taken
            or len(words) != len(table.columns)
            or not all(any(map(str.isalpha, word)) for word in words)
        ):
            continue
        if sum(bool(meanings_of(word)) for word in words) < 0.5 * len(words):
            continue
        for column, word in zip(table.columns, words, strict=True):
            if not column.literal:
                column.hint = word
                column.label += f" ({word})"
        return


def begins_with_numbers(texts: list[str]) -> bool:
    """Return whether some texts, not nearly all, begin with a number or time: a column that is not always there."""
    numbers = sum(bool(_NUMBER_FIRST.match(text)) for text in texts)
    return numbers > 0.05 * len(texts)


def _points(column: Column) -> float:
    kind = column.kind
    if column.literal:
        return 0.0
    if kind == "text":
        return 0.0 if begins_with_numbers(column.values) else 0.6
    return 1.0 if kind in TYPED else 0.0


def score(table: Table, total: int) -> float:
    """Return how well a table explains a sample: typed columns, weighed by its share of the lines."""
    if not table.rows:
        return 0.0
    points = sum(_points(column) for column in table.columns)
    whole = len({value for column in table.columns for value in column.values}) > 1
    return points * (len(table.rows) / total) ** 0.5 if whole else 0.0


def enough(part: int, total: int) -> bool:
    """Return whether a part is nearly all."""
    return total > 0 and part >= ENOUGH * total
