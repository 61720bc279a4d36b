"""Patterns of a recipe: their named groups, what is wrong with them, and templates of messages."""

from __future__ import annotations

import re
from functools import cache
from typing import TYPE_CHECKING

from logtool.records.callsigns import GIVEN_CALL

if TYPE_CHECKING:
    import duckdb

SLOTS = {
    "sender": GIVEN_CALL,
    "addressee": GIVEN_CALL,
    "locator": r"[A-R]{2}[0-9]{2}(?:[A-Xa-x]{2})?",
    "report_db": r"[+-][0-9]{1,2}",
    "power_dbm": r"[0-9]{1,2}",
    "word": r"(?:[A-Z]{1,4}|[0-9]{3})",
}
ANYTHING = "..."


def groups_of(pattern: str) -> list[str]:
    """Return the names of a pattern's groups in order; of those without a name an empty text.

    >>> groups_of(r"(?P<date>\\d{8}) (a|b)[[:alpha:](](?:c)\\(")
    ['date', '']
    """
    names = []
    in_class = False
    i = 0
    while i < len(pattern):
        if pattern.startswith("\\Q", i):
            end = pattern.find(r"\E", i)
            i = len(pattern) if end < 0 else end + 2
            continue
        if pattern[i] == "\\":
            i += 2
            continue
        if in_class and pattern.startswith("[:", i):
            i = max(i, pattern.find(":]", i) + 1)
        elif in_class:
            in_class = pattern[i] != "]"
        elif pattern[i] == "[":
            in_class = True
            i += 1 + (pattern[i + 1 : i + 2] == "^")
            i += pattern[i : i + 1] == "]"
            continue
        elif pattern[i] == "(":
            named = re.match(r"\(\?P<([^>]+)>", pattern[i:])
            if named:
                names.append(named[1])
            elif pattern[i + 1 : i + 2] != "?":
                names.append("")
        i += 1
    return names


@cache
def _matcher() -> duckdb.DuckDBPyConnection:
    import duckdb

    return duckdb.connect(":memory:", config={"threads": 1})


def fault_of(pattern: str) -> str | None:
    """Return what the engine's matcher says against a pattern, or None where it takes it.

    >>> fault_of("(a")
    'missing ): (a'
    """
    import duckdb

    connection = _matcher()
    try:
        connection.execute("SELECT regexp_matches('', ?)", [pattern])
        groups = groups_of(pattern)
        names = [f"g{i}" for i in range(len(groups))]
        if names:
            connection.execute(f"SELECT regexp_extract('', ?, {names})", [pattern])
    except duckdb.Error as error:
        return str(error).splitlines()[0].removeprefix("Invalid Input Error: ")
    return None


def template_pattern(template: str) -> str:
    """Return the pattern of a message's template.

    Raises
    ------
    ValueError
        Where the template cannot be read; the message says why.

    Examples
    --------
    >>> template_pattern("A|B {report_db} ...")
    '(?:A|B) +R?(?P<report_db>[+-][0-9]{1,2})(?: .*)?'
    >>> template_pattern("[{word}] C")
    '(?:(?P<word>(?:[A-Z]{1,4}|[0-9]{3})) +)?C'
    """
    items = template.split()
    open_end = items[-1:] == [ANYTHING]
    if open_end:
        items.pop()
    if not items or ANYTHING in items:
        raise ValueError(f"{ANYTHING!r} can stand at the end of a template only, after something")
    if all(item.startswith("[") for item in items):
        raise ValueError("everything in the template may be missing, so it would hold for anything")
    pieces: list[str] = []
    seen_needed = False
    for item in items:
        optional = item.startswith("[") and item.endswith("]")
        piece = _item_pattern(item[1:-1] if optional else item)
        if optional:
            pieces.append(f"(?: +{piece})?" if seen_needed else f"(?:{piece} +)?")
        else:
            pieces.append(f" +{piece}" if seen_needed else piece)
            seen_needed = True
    return "".join(pieces) + ("(?: .*)?" if open_end else "")


def _item_pattern(item: str) -> str:
    slot = re.fullmatch(r"\{(\w+)\}", item)
    if slot:
        if slot[1] not in SLOTS:
            raise ValueError(f"{item} is no part of a message; there are: {', '.join(SLOTS)}")
        prefix = "R?" if slot[1] == "report_db" else ""
        return f"{prefix}(?P<{slot[1]}>{SLOTS[slot[1]]})"
    if re.search(r"[{}\[\]]", item):
        raise ValueError(f"{item!r}: a part in {{}} or [] stands alone between blanks")
    words = "|".join(re.escape(word.upper()) for word in item.split("|"))  # messages are read in upper case
    return f"(?:{words})" if "|" in item else words
