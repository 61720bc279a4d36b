"""Lines whose columns stand at fixed places, so that empty ones leave their room blank."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from logtool.suggest.cores import core_kind
from logtool.suggest.tables import Column, Table, give_names, holds_call, kind_of, without_wrong_times
from logtool.suggest.timeforms import has_date, has_time, has_year, shared_forms
from logtool.suggest.toml import inline
from logtool.suggest.values import given, is_word

_GUTTER_SHARE = 0.985  # of the lines are blank at a place between columns
_LEAST_ROWS = 8
_LEAST_COLUMNS = 3
_MESSAGE_KINDS = ("call", "locator", "text", "other", "word")


@dataclass(frozen=True)
class FixedWay:
    """Columns from a first to a last character, from 1; 0 stands for the line's end."""

    spans: tuple[tuple[int, int], ...]

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the rule's TOML lines."""
        spans = {}
        for k, name in names.items():
            first, last = self.spans[k]
            spans[name] = f"[{first}, {last}]" if last else f"[{first}]"
        return ["fixed = " + inline(spans)]


def fixed_table(lines: list[str]) -> Table | None:
    """Return the table of lines that are blank at the same places, or None where they are not."""
    rows = [i for i, line in enumerate(lines) if holds_call(line) and "\t" not in line]
    if len(rows) < _LEAST_ROWS:
        return None
    starts = _starts([lines[i] for i in rows])
    if len(starts) < _LEAST_COLUMNS:
        return None
    spans = [(start, end) for start, end in zip(starts, [*starts[1:], 0], strict=True)]
    spans = _with_whole_times([lines[i] for i in rows], spans)
    cells = [[_cell(lines[i], span) for span in spans] for i in rows]
    kinds = [kind_of(tuple(given(row[k] for row in cells)[:300])) for k in range(len(spans))]
    last = len(spans)
    if kinds[-1] in ("text", "other"):  # the last words of messages: what stands before belongs to them
        while (
            last > 1
            and kinds[last - 2] in _MESSAGE_KINDS
            and not _is_column([row[last - 2] for row in cells])
        ):
            last -= 1
    spans = [*spans[: last - 1], (spans[last - 1][0], 0)]
    everything = [i for i, line in enumerate(lines) if _fits(line, spans, kinds)]
    columns = [
        Column(f"characters {first + 1} to {end}" if end else f"characters from {first + 1}",
               [_cell(lines[i], (first, end)) for i in everything])
        for first, end in spans
    ]  # fmt: skip
    if not everything:
        return None
    way = FixedWay(tuple((first + 1, end) for first, end in spans))
    table = Table(way, columns, everything)
    for column in columns:
        column.literal = len(set(column.values)) == 1 and is_word(column.values[0])
    give_names(table, lines)
    without_wrong_times(table)
    return table


def _with_whole_times(lines: list[str], spans: list[tuple[int, int]]) -> list[tuple[int, int]]:
    """Return the spans with those joined that are one date and time with blanks in it."""
    merged: list[tuple[int, int]] = []
    k = 0
    while k < len(spans):
        for n in (5, 4, 3, 2):
            if k + n <= len(spans):
                joint = (spans[k][0], spans[k + n - 1][1])
                values = tuple(given(" ".join(_cell(line, joint).split()) for line in lines))
                forms = shared_forms(values[:300])
                if any(has_time(form) and (has_date(form) or "%p" in form) for form in forms) and not any(
                    has_year(form) and has_time(form)
                    for span in spans[k : k + n]
                    for form in shared_forms(given(_cell(line, span) for line in lines))
                ):
                    merged.append(joint)
                    k += n
                    break
        else:
            merged.append(spans[k])
            k += 1
    return merged


def _is_column(values: list[str]) -> bool:
    """Return whether values are few words for themselves, so no part of a message."""
    words = given(values)
    return kind_of(tuple(words[:300])) == "word" and not any(word in ("CQ", "QRZ", "DE") for word in words)


def _starts(lines: list[str]) -> list[int]:
    """Return where columns begin: after a run of places that are blank in nearly all lines."""
    width = max(map(len, lines))
    blank = [
        sum(p >= len(line) or line[p] == " " for line in lines) >= _GUTTER_SHARE * len(lines)
        for p in range(width)
    ]
    starts = [p for p in range(width) if not blank[p] and (p == 0 or blank[p - 1])]
    # A column of numbers to the right begins where the longest begins, so all of its places are seen.
    return starts


def _cell(line: str, span: tuple[int, int]) -> str:
    first, end = span
    return line[first : end or None].strip()


def _fits(line: str, spans: list[tuple[int, int]], kinds: list[str]) -> bool:
    """Return whether a line's first columns are of the kinds that they should be."""
    if "\t" in line:
        return False
    told = 0
    for span, kind in zip(spans[:-1], kinds, strict=False):
        value = _cell(line, span)
        first = span[0]
        if first and len(line) > first and line[first - 1] != " ":
            return False
        if not value:
            continue
        found = core_kind(value)
        if kind in ("number", "time") and found not in ("number", "time", "empty"):
            return False
        told += kind in ("number", "time")
    return told > 0
