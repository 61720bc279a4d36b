"""Text of a recipe's TOML: values, patterns and comments as they are written."""

from __future__ import annotations

import json
import textwrap
from collections.abc import Iterable, Mapping

_SPECIAL = set(".^$*+?()[]{}|\\")
WIDTH = 110


def text_of(value: str) -> str:
    r"""Return a text as a TOML value: in single quotes where it can be.

    >>> print(text_of("\\d+"), text_of("it's"))
    '\d+' "it's"
    """
    if "'" not in value and value.isprintable():
        return f"'{value}'"
    return json.dumps(value, ensure_ascii=False)


def plain(value: str) -> str:
    """Return a text as a TOML value in double quotes."""
    return json.dumps(value, ensure_ascii=False)


def inline(table: Mapping[str, str]) -> str:
    """Return an inline table of values that are TOML already.

    >>> inline({"time": "[1, 6]"})
    '{ time = [1, 6] }'
    """
    return "{ " + ", ".join(f"{key} = {value}" for key, value in table.items()) + " }"


def escaped(literal: str) -> str:
    r"""Return a pattern that stands for a text itself, runs of blanks for any such.

    >>> escaped("at  [a.b]")
    'at +\\[a\\.b\\]'
    """
    out: list[str] = []
    for c in literal:
        if c in " \t":
            if not out or out[-1] != "[ \t]+":
                out.append("[ \t]+")
        else:
            out.append("\\" + c if c in _SPECIAL else c)
    return "".join(
        " +" if piece == "[ \t]+" and "\t" not in literal else r"[ \t]+" if piece == "[ \t]+" else piece
        for piece in out
    )


def comment(text: str, *, first: str = "# ", rest: str = "#   ") -> list[str]:
    """Return a text as comment lines."""
    safe = "".join(c if c.isprintable() else "?" for c in text)
    return textwrap.wrap(safe, WIDTH, initial_indent=first, subsequent_indent=rest, break_long_words=False)


def listed(items: Iterable[str]) -> str:
    """Return a TOML list of texts."""
    return "[" + ", ".join(text_of(item) for item in items) + "]"
