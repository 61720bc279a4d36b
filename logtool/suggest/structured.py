"""Lines whose columns are told by signs: JSON objects, and separators with or without a header."""

from __future__ import annotations

import csv
import json
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass

from logtool.suggest.tables import Column, Table, holds_call, split_by_word, without_wrong_times
from logtool.suggest.timeforms import forms_of
from logtool.suggest.toml import escaped, inline, plain, text_of
from logtool.suggest.values import is_call, is_locator, is_number

SEPARATORS = ("\t", ";", "|", ",")
FEWEST_COLUMNS = 3
_LEAST_SHARE = 0.3  # of the lines have to be of a way of cutting
_NAMED_SHARE = 0.5  # of the objects have a key
_COMMENT_SIGNS = "#;%/*! \t"


@dataclass(frozen=True)
class JsonWay:
    """One JSON object a line."""

    paths: tuple[str, ...]

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the rule's TOML lines."""
        return ["json = " + inline({name: plain(self.paths[k]) for k, name in names.items()})]


@dataclass(frozen=True)
class SeparatedWay:
    """Columns between separators; `rest`: the last one holds whatever is left of the line."""

    separator: str
    columns: int
    header: tuple[str, ...] = ()
    rest: bool = False
    suffixes: tuple[str, ...] = ()  # a unit that is glued to the values of each column

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the rule's TOML lines."""
        if self.rest or any(self.suffixes[k] for k in names if self.suffixes):
            return [f"pattern = {text_of(self._pattern(names))}"]
        separator = f"separator = {plain(self.separator)}"
        if self.header:
            columns = {name: plain(self.header[k]) for k, name in names.items()}
            return [separator, "header = true", f"columns = {inline(columns)}"]
        return [
            separator,
            "columns = [" + ", ".join(plain(names.get(k, "")) for k in range(self.columns)) + "]",
        ]

    def _pattern(self, names: Mapping[int, str]) -> str:
        sign = escaped(self.separator) if self.separator != "\t" else r"\t"
        pieces = []
        for k in range(self.columns):
            last = k == self.columns - 1 and self.rest
            field = ".*" if last else f"[^{sign}]*"
            suffix = self.suffixes[k] if self.suffixes else ""
            if k not in names:
                pieces.append(field)
            elif suffix:
                pieces.append(f" *(?P<{names[k]}>[^{sign}]*?)(?: *{escaped(suffix)})? *")
            else:
                pieces.append(f"(?P<{names[k]}>{field})")
        return sign.join(pieces)


def json_table(lines: list[str]) -> Table | None:
    """Return the table of lines that are JSON objects, or None where few are."""
    flat: list[tuple[int, dict[str, str]]] = []
    for i, line in enumerate(lines):
        if line.lstrip().startswith("{"):
            try:
                told = json.loads(line)
            except (ValueError, RecursionError):
                continue
            if isinstance(told, dict):
                flat.append((i, _flat(told)))
    if len(flat) < _LEAST_SHARE * len(lines) or not flat:
        return None
    paths = tuple(dict.fromkeys(path for _, told in flat for path in told))
    columns = [Column(repr(path), [told.get(path, "") for _, told in flat], path) for path in paths]
    table = Table(JsonWay(paths), columns, [i for i, _ in flat])
    split_by_word(table, lines)
    if not table.where:
        _split_by_keys(table, lines)
    without_wrong_times(table)
    return table


def _split_by_keys(table: Table, lines: list[str]) -> None:
    """Keep the objects with call signs where others have other keys."""
    shapes = [tuple(bool(column.values[i]) for column in table.columns) for i in range(len(table.rows))]
    heard = {shape for shape, row in zip(shapes, table.rows, strict=True) if holds_call(lines[row])}
    wanted = [shape in heard for shape in shapes]
    if all(wanted):
        return
    for k in range(len(table.columns)):
        if all(shape[k] == keep for shape, keep in zip(shapes, wanted, strict=True)):
            table.where[k] = ".+"
            break
    table.keep(wanted)


def _flat(told: dict[str, object], before: str = "") -> dict[str, str]:
    flat: dict[str, str] = {}
    for key, value in told.items():
        path = before + key
        if isinstance(value, dict):
            flat |= _flat(value, path + ".")
        elif isinstance(value, bool):
            flat[path] = "true" if value else "false"
        elif value is None:
            flat[path] = ""
        elif isinstance(value, str | int | float):
            flat[path] = str(value).strip()
    return flat


def split(line: str, separator: str) -> list[str]:
    """Return the fields of a line; those in double quotes by RFC 4180."""
    if '"' in line:
        try:
            return [field.strip() for field in next(csv.reader([line], delimiter=separator))]
        except (csv.Error, StopIteration):
            pass
    return [field.strip() for field in line.split(separator)]


def separated_table(lines: list[str], separator: str) -> Table | None:
    """Return the table of lines that a separator cuts, or None where it does not."""
    cut = [split(line, separator) for line in lines]
    telling = [i for i, line in enumerate(lines) if holds_call(line)] or list(range(len(lines)))
    counts = Counter(len(cut[i]) for i in telling if len(cut[i]) >= FEWEST_COLUMNS)
    if not counts or sum(counts.values()) < _LEAST_SHARE * len(telling):
        return None
    count = (
        min(n for n, times in counts.items() if times >= 0.15 * len(telling))
        if (max(counts.values()) >= 0.15 * len(telling))
        else counts.most_common(1)[0][0]
    )
    longer = sum(times for n, times in counts.items() if n > count)
    rest = longer > 0.005 * len(telling) and _rest_is_text(cut, telling, count)
    rows = [i for i in range(len(lines)) if len(cut[i]) == count or (rest and len(cut[i]) > count)]
    if len(rows) < _LEAST_SHARE * len(lines):
        return None
    if rest:
        cut = [
            fields if len(fields) <= count else _rejoined(lines[i], separator, count)
            for i, fields in enumerate(cut)
        ]
    headers = _header_rows(lines, cut, rows)
    names = tuple(cut[headers[0]]) if headers else ()
    rows = [i for i in rows if i not in set(headers)]
    if not rows:
        return None
    columns = [Column(f"column {k + 1}", [cut[i][k] for i in rows]) for k in range(count)]
    if names:
        names = (names[0].lstrip(_COMMENT_SIGNS), *names[1:])
        for column, name in zip(columns, names, strict=True):
            column.hint = name
            column.label = f"{column.label} ({name})" if name else column.label
    suffixes = tuple(_take_unit(column) for column in columns)
    usable = names and headers[0] == 0 and len(set(names)) == len(names) and lines[0][0] not in _COMMENT_SIGNS
    way = SeparatedWay(separator, count, names if usable else (), rest, suffixes)
    table = Table(way, columns, rows, header_rows=headers)
    split_by_word(table, lines)
    without_wrong_times(table)
    return table


def _rejoined(line: str, separator: str, count: int) -> list[str]:
    return [field.strip() for field in line.split(separator, count - 1)]


def _rest_is_text(cut: list[list[str]], telling: list[int], count: int) -> bool:
    """Return whether longer lines have the same first columns, so that the last one holds the separator."""
    exact = [cut[i] for i in telling if len(cut[i]) == count]
    longer = [cut[i] for i in telling if len(cut[i]) > count]
    alike = 0
    for k in range(count - 1):
        ours = Column("", [fields[k] for fields in exact]).kind
        theirs = Column("", [fields[k] for fields in longer]).kind
        if (
            ours in ("time", "number", "call", "locator")
            and theirs in ("time", "number", "call", "locator")
            and ours != theirs
        ):
            return False
        alike += ours == theirs
    return alike >= (count - 1) / 2


def _header_rows(lines: list[str], cut: list[list[str]], rows: list[int]) -> list[int]:
    """Return the rows that name the columns: words where other rows have times and numbers."""
    if len(rows) < 2:
        return []
    first = next((i for i in rows if _is_names(cut[i])), None)
    if first is None:
        return []
    others = [cut[i] for i in rows if not _is_names(cut[i])]
    if not any(is_number(value) or forms_of(value) for fields in others[:20] for value in fields):
        return []
    return [i for i in rows if lines[i] == lines[first]]


def _is_names(fields: list[str]) -> bool:
    named = [field for field in fields if field]
    return (
        len(named) >= _NAMED_SHARE * len(fields)
        and not any(
            is_number(field)
            or forms_of(field)
            or (is_call(field) and not field.isalpha())
            or is_locator(field)
            for field in fields
        )
        and len(set(named)) > len(named) / 2
        and all(any(c.isalpha() for c in field) or not field.strip("#") for field in named)
    )


_UNITS = ("MHz", "kHz", "Hz", "dBm", "dB", "ms", "s", "mW", "W")


def _take_unit(column: Column) -> str:
    """Take a unit that is glued to a column's numbers off them, and return it."""
    values = [value for value in column.values if value]
    for unit in _UNITS:
        bare = [value[: -len(unit)].rstrip() for value in values if value.endswith(unit)]
        if len(bare) >= 0.9 * len(values) and bare and all(map(is_number, bare)):
            column.unit = unit
            column.values = [
                value[: -len(unit)].rstrip() if value.endswith(unit) else value for value in column.values
            ]
            return unit
    return ""
