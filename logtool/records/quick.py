"""Patterns for the lines that are surely records, in the linear-time syntax of the engine's matcher.

A pattern here may refuse a good line (it then goes to the judge) but never accepts a bad one. A property
test holds that against the judge.
"""

from __future__ import annotations

from functools import cache

from logtool.records.layout import (
    CALL_FORM,
    COLUMNS,
    KNOWN_KEYS,
    LOCATOR_FORM,
    MODE_FORM,
    NAME_FORM,
    NUMBER_FORM,
    Column,
    Key,
)

QUICK_LINE_BYTES = 1000  # longer lines go to the judge: the limits on text and values need counting
QUICK_MORE_BYTES = 200  # so do longer details: a value may have no more bytes

_FRACTION = r"(\.[0-9]{1,6})?"
_PLAIN = r"[^;\t\x00-\x1f\x7f-\x{9f}]"  # a character of a value
_TEXT = r"([^\\\t\x00-\x1f\x7f-\x{9f}]|\\[tnr\\])*"
_LEAP_YEAR = r"(19(72|76|80|84|88|92|96)|20([02468][048]|[13579][26]))"
_TIME = (
    r"((19[7-9][0-9]|20[0-9][0-9])-((0[13578]|1[02])-(0[1-9]|[12][0-9]|3[01])"
    r"|(0[469]|11)-(0[1-9]|[12][0-9]|30)|02-(0[1-9]|1[0-9]|2[0-8]))"
    rf"|{_LEAP_YEAR}-02-29)T([01][0-9]|2[0-3]):[0-5][0-9]:[0-5][0-9]{_FRACTION}Z"
)


def below(limit: int, least: int = 0) -> str:
    """Return a pattern for the whole numbers from `least` (0 or 1) to `limit` - 1, no leading zeros.

    >>> below(60)
    '([0-9]|[1-5][0-9])'
    >>> below(3600, 1)
    '([1-9]|[1-9][0-9]{1}|[1-9][0-9]{2}|[1-2][0-9]{3}|3[0-5][0-9]{2})'
    """
    digits = str(limit)
    choices = [f"[{least}-9]"] if len(digits) > 1 else []
    choices += [f"[1-9][0-9]{{{n}}}" for n in range(1, len(digits) - 1)]
    for i, digit in enumerate(digits):
        lowest = 0 if i else max(least, int(len(digits) > 1))
        if int(digit) > lowest:
            rest = len(digits) - i - 1
            last = f"[{lowest}-{int(digit) - 1}]"
            choices.append(digits[:i] + last + (f"[0-9]{{{rest}}}" if rest > 1 else "[0-9]" * rest))
    return "(" + "|".join(choices) + ")"


def _number(low: float | None, high: float | None) -> str:
    """Return a pattern for numbers within the bounds; all of the form where there are none."""
    if low is None or high is None:
        return rf"-?[0-9]{{1,10}}{_FRACTION}"
    inside = []
    if high >= 1:
        inside.append(below(int(high), least=int(low > 0)))
    if low <= -1:
        inside.append("-" + below(int(-low)))
    on_bound = [str(int(bound)) for bound in (low, high) if bound == int(bound)]
    return rf"(({'|'.join(inside)}){_FRACTION}|({'|'.join(on_bound)})(\.0{{1,6}})?)"


def _field(column: Column) -> str:
    forms = {
        "receiver": NAME_FORM,
        "dial_hz": "[1-9][0-9]{0,8}",  # below 1 GHz, and no leading zero
        "mode": f"({MODE_FORM})?",
        "sender": f"({CALL_FORM})?",
        "addressee": f"({CALL_FORM})?",
        "locator": f"({LOCATOR_FORM})?",
        "text": _TEXT,
    }
    return forms.get(column.name) or f"({_number(column.low, column.high)})?"


def _known(key: Key) -> str:
    if key.words:
        return f"({'|'.join(key.words)})"
    if key.form == NUMBER_FORM:
        return _number(key.low, key.high)
    return key.form or f"{_PLAIN}+"


def _unknown_key(words: frozenset[str], first: bool = True) -> str:
    """Return a pattern for what can be a key, or the rest of one, and is none of `words`."""
    heads = sorted({word[0] for word in words if word})
    alphabet = "abcdefghijklmnopqrstuvwxyz" + ("" if first else "0123456789_")
    choices = [f"[{''.join(c for c in alphabet if c not in heads)}][a-z0-9_]*"]
    for head in heads:
        tails = frozenset(word[1:] for word in words if word.startswith(head))
        choices.append(head + _unknown_key(tails, first=False))
    pattern = "(" + "|".join(choices) + ")"
    return pattern if first or "" in words else pattern + "?"


@cache
def heard_pattern() -> str:
    """Return the pattern of a `heard` line that is surely a record, but for its details."""
    return _line_pattern("heard", dial_needed=True)


@cache
def event_pattern() -> str:
    """Return the pattern of a `watch` or `noise` line that is surely a record, but for its details."""
    return _line_pattern("(watch|noise)", dial_needed=False)


def _line_pattern(kind: str, *, dial_needed: bool) -> str:
    fields = [_TIME, kind, *(_field(column) for column in COLUMNS[2:-1])]
    if not dial_needed:
        fields[3] = f"({fields[3]})?"
    return r"\t".join(fields) + rf"\t({_PLAIN}|;)*"


@cache
def more_pattern() -> str:
    """Return the pattern of details, each item followed by `; `, that are surely right.

    A key given twice or longer than the layout allows is left to `accepts_sql`.
    """
    known = "|".join(f"{name}={_known(key)}" for name, key in KNOWN_KEYS.items())
    return f"(({known}|{_unknown_key(frozenset(KNOWN_KEYS))}={_PLAIN}+); )*"


def sql_text(text: str) -> str:
    """Return a text as an SQL literal."""
    return "'" + text.replace("'", "''") + "'"


def accepts_sql(kind: str) -> str:
    """Return the SQL condition that the column `line` is surely a record.

    Parameters
    ----------
    kind : str
        `heard`, or `event` for `watch` and `noise`.
    """
    more = r"regexp_extract(line, '[^\t]*$')"
    keys = rf"regexp_extract_all({more}, '(?:^|; )([a-z0-9_]{{1,32}})=', 1)"
    details = (
        f"strlen({more}) <= {QUICK_MORE_BYTES}"
        f" AND regexp_full_match({more} || '; ', {sql_text(more_pattern())})"
        f" AND len(list_distinct({keys})) = len(string_split({more}, '; '))"
    )
    if kind == "heard":
        pattern = heard_pattern()
        details = f"CASE WHEN ends_with(line, chr(9)) THEN true ELSE {details} END"
    else:
        pattern = event_pattern()
        needed = r"CASE WHEN regexp_matches(line, '^[^\t]*\twatch\t') THEN 'on_s' ELSE 'dbfs' END"
        details += f" AND list_contains({keys}, {needed})"
    return (
        f"(strlen(line) <= {QUICK_LINE_BYTES} AND regexp_full_match(line, {sql_text(pattern)}) AND {details})"
    )
