"""Take values out of a recipe's tables, each checked, with errors that name the file, line and key."""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterator
from itertools import takewhile
from typing import Any

from logtool.records.recipes.patterns import fault_of
from logtool.records.recipes.recipe import RecipeError
from logtool.records.recipes.timeforms import date_fault, time_fault

_NEEDED = object()
_WORDS = {str: "a text", int: "a whole number", bool: "true or false", dict: "a table", list: "a list"}


class Fields:
    """One table of a recipe; what was not taken when it is finished is a key that nobody knows."""

    def __init__(
        self,
        told: dict[str, Any],
        text: str,
        name: str,
        where: tuple[str, int] = ("", 0),
        inside: str | None = None,
    ) -> None:
        self._told = told
        self._text = text
        self._name = name
        self._where = where  # the table's heading and how many of that heading come before
        self._inside = inside  # the key under that heading that this table is the value of
        self._taken: set[str] = set()

    def __contains__(self, key: str) -> bool:
        return key in self._told

    def __iter__(self) -> Iterator[str]:
        return iter(self._told)

    def error(self, key: str | None, message: str) -> RecipeError:
        """Return the error that says where in the recipe something is wrong."""
        heading = self._where[0]
        path = ".".join(part for part in (heading.strip("[]"), self._inside, key) if part)
        line = self._line_of(self._inside or key)
        place = f"{self._name}{f', line {line}' if line else ''}"
        return RecipeError(f"{place}: {f'`{path}`: ' if path else ''}{message}")

    def _line_of(self, key: str | None) -> int | None:
        """Return the number of the line of a key in this table, else of the table's heading."""
        heading, before = self._where
        outer = heading.strip("[]")
        begin = 0
        block = lines = [line.strip() for line in self._text.splitlines()]
        if heading:
            starts = [i for i, line in enumerate(lines) if line.startswith((heading, f"[{outer}."))]
            starts = [i for i in starts if lines[i].startswith(heading) or not heading.startswith("[[")]
            if before >= len(starts):
                return None
            begin = starts[before]
            block = [lines[begin], *takewhile(lambda line: not line.startswith("[["), lines[begin + 1 :])]
        name = re.escape(key or "")
        own = [line if not line.startswith("[") else "" for line in block]
        stop = next((i for i, line in enumerate(block) if i and line.startswith("[")), len(block))
        for i, line in enumerate(own[:stop]):
            if key is not None and re.match(rf"""["']?{name}["']?\s*[=.]""", line):
                return begin + i + 1
        for i, line in enumerate(block):
            if key is not None and re.match(
                rf"""\[+{f"{outer}[.]" if outer else ""}["']?{name}["']?[].]""", line
            ):
                return begin + i + 1
        return begin + 1 if heading else None

    def take(self, key: str, kind: Any, default: Any = _NEEDED) -> Any:
        """Return a value of a kind (or one of several kinds)."""
        self._taken.add(key)
        if key not in self._told:
            if default is _NEEDED:
                raise self.error(None, f"it needs the key `{key}`")
            return default
        value = self._told[key]
        kinds = kind if isinstance(kind, tuple) else (kind,)
        if not isinstance(value, kinds) or (isinstance(value, bool) and bool not in kinds):
            wanted = " or ".join(_WORDS.get(one, "a number") for one in kinds)
            raise self.error(key, f"{value!r} is not {wanted}")
        return value

    def number(self, key: str, low: float, high: float) -> str | None:
        """Return a number as it would be written, or None where it is not given."""
        value = self.take(key, (int, float), None)
        if value is not None and not low <= value <= high:
            raise self.error(key, f"{value} cannot be used; give {low:g} to {high:g}")
        return None if value is None else f"{value:g}"

    def words(self, key: str, default: tuple[str, ...] = ()) -> tuple[str, ...]:
        """Return a list of texts."""
        value = self.take(key, list, None)
        if value is None:
            return default
        if not all(isinstance(word, str) for word in value):
            raise self.error(key, "it is a list of texts, each in quotes")
        return tuple(value)

    def strings(self, key: str) -> dict[str, str]:
        """Return a table of texts; empty where it is not given."""
        value = self.take(key, dict, {})
        if not all(isinstance(word, str) for word in value.values()):
            raise self.error(key, "it is a table of texts, each in quotes")
        return dict(value)

    def one_of(self, key: str, words: tuple[str, ...], *, needed: bool = False) -> str:
        """Return one of some words, by default the first."""
        value: str = self.take(key, str) if needed else self.take(key, str, words[0])
        if value not in words:
            raise self.error(key, f"{value!r} is none of {', '.join(words)}")
        return value

    def check_pattern(self, key: str, pattern: str) -> None:
        """Raise an error where the engine's matcher does not take a pattern."""
        fault = fault_of(pattern)
        if fault:
            raise self.error(
                key, f"{pattern!r} is no pattern: {fault} (RE2 syntax: no look-around, no back-references)"
            )

    def pattern(self, key: str) -> str | None:
        """Return a pattern, or None where it is not given."""
        value: str | None = self.take(key, str, None)
        if value is not None:
            self.check_pattern(key, value)
        return value

    def patterns(self, key: str) -> tuple[str, ...]:
        """Return a list of patterns."""
        patterns = self.words(key)
        for pattern in patterns:
            self.check_pattern(key, pattern)
        return patterns

    def time_form(self, key: str, default: str) -> str:
        """Return the form of a time."""
        form: str = self.take(key, str, default)
        if fault := time_fault(form):
            raise self.error(key, f"{form!r}: {fault}")
        return form

    def date_form(self, key: str) -> str | None:
        """Return the form of a date, or None where it is not given."""
        form: str | None = self.take(key, str, None)
        if form is not None and (fault := date_fault(form)):
            raise self.error(key, f"{form!r}: {fault}")
        return form

    def table(self, key: str) -> Fields:
        """Return a table in this one, empty where it is not given."""
        told = self.take(key, dict, {})
        heading = self._where[0].strip("[]")
        if heading:
            return Fields(told, self._text, self._name, self._where, key)
        return Fields(told, self._text, self._name, (f"[{key}]", 0))

    def tables(self, key: str) -> list[Fields]:
        """Return the tables of a list, like all [[line]]."""
        told = self.take(key, list, [])
        if not all(isinstance(one, dict) for one in told):
            raise self.error(key, f"write [[{key}]] above each")
        return [Fields(one, self._text, self._name, (f"[[{key}]]", i)) for i, one in enumerate(told)]

    def finish(self) -> None:
        """Raise an error where a key is none that was taken."""
        for key in self._told:
            if key not in self._taken:
                alike = difflib.get_close_matches(key, self._taken, n=1)
                hint = (
                    f"; did you mean `{alike[0]}`?"
                    if alike
                    else f"; there are {', '.join(sorted(self._taken))}"
                )
                raise self.error(key, f"there is no such key{hint}")
