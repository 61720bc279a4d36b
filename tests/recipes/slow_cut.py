"""Cut one line into pieces as `docs/recipes.md` says, character by character; shares nothing with the package."""

from __future__ import annotations

import json
import re
from typing import Any

BLANKS = " \t"


def delimited(line: str, separator: str) -> list[str] | None:
    """Return the fields of a line, quoted ones after RFC 4180; None where its quotes are not well formed."""
    fields = []
    at = 0
    while True:
        if line[at : at + 1] == '"':
            field, at = "", at + 1
            while True:
                if at >= len(line):
                    return None  # the quote is never closed
                if line[at] != '"':
                    field += line[at]
                    at += 1
                elif line[at + 1 : at + 2] == '"':
                    field += '"'
                    at += 2
                else:
                    at += 1
                    break
            if line[at : at + 1] not in ("", separator):
                return None
        else:
            end = line.find(separator, at)
            end = len(line) if end < 0 else end
            field, at = line[at:end], end
        fields.append(field)
        if at >= len(line):
            return fields
        at += 1


def by_columns(line: str, separator: str, columns: list[str]) -> dict[str, str] | None:
    """Return the pieces of a line with named columns in order."""
    more = columns[-1] == "..."
    names = columns[:-1] if more else columns
    if separator == "space":
        words = [word for word in re.split(r"[ \t]+", line) if word]
        if len(words) < len(names):
            return None
        if not more:  # the last name takes the rest of the line
            rest = line.lstrip(BLANKS)
            for _ in names[1:]:
                rest = re.sub(r"^[^ \t]+[ \t]+", "", rest)
            words = [*words[: len(names) - 1], rest]
    else:
        fields = delimited(line, separator)
        if fields is None or len(fields) < len(names) or (len(fields) > len(names) and not more):
            return None
        words = fields
    return {name: word for name, word in zip(names, words, strict=False) if name}


def by_header(
    line: str, separator: str, header: list[str], column_of: dict[str, str]
) -> dict[str, str] | None:
    """Return the pieces of a line whose columns the file's first line names."""
    fields = delimited(line, separator)
    if fields is None or len(fields) != len(header):
        return None
    return {piece: fields[header.index(column)] for piece, column in column_of.items()}


def by_places(line: str, fixed: dict[str, list[int]]) -> dict[str, str]:
    """Return the pieces between first and last characters, from 1."""
    return {name: line[span[0] - 1 : span[1] if len(span) > 1 else None] for name, span in fixed.items()}


def by_json(line: str, paths: dict[str, str]) -> dict[str, str | None] | None:
    """Return the pieces of one JSON object; None where the line is none."""
    try:
        told = json.loads(line)
    except ValueError:
        return None
    if not isinstance(told, dict):
        return None
    return {name: _written(_led_to(told, path.split("."))) for name, path in paths.items()}


def _led_to(told: Any, path: list[str]) -> Any:
    for part in path:
        if not isinstance(told, dict) or part not in told:
            return None
        told = told[part]
    return told


def _written(value: Any) -> str | None:
    if value is None or isinstance(value, str):
        return value
    return json.dumps(value, separators=(",", ":"))


def by_pattern(line: str, pattern: str) -> dict[str, str] | None:
    """Return the named groups of a pattern of the whole line."""
    match = re.fullmatch(pattern, line)
    return None if match is None else {name: text or "" for name, text in match.groupdict().items()}


def cut(line: str, rule: dict[str, Any], header: list[str] | None) -> dict[str, Any] | None:
    """Return the pieces of a line by a rule as it stands in the recipe; None where it is not of this form."""
    if "pattern" in rule:
        return by_pattern(line, rule["pattern"])
    if "fixed" in rule:
        return by_places(line, rule["fixed"])
    if "json" in rule:
        return by_json(line, rule["json"])
    if rule.get("header"):
        assert header is not None
        return by_header(line, rule["separator"], header, rule["columns"])
    return by_columns(line, rule["separator"], rule["columns"])


def pieces_of(rule: dict[str, Any]) -> list[str]:
    """Return the names that a rule gives to pieces, in order."""
    if "pattern" in rule:
        return list(re.compile(rule["pattern"]).groupindex)
    for way in ("fixed", "json"):
        if way in rule:
            return list(rule[way])
    return [name for name in rule["columns"] if name not in ("", "...")]
