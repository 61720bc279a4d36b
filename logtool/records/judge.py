"""What one line is: blank, comment, record, or set aside with the first reason that holds.

This is the exact rule of the layout. It takes some microseconds a line, so the reader sends only those
lines here that the quick pattern does not vouch for.
"""

from __future__ import annotations

import re
from datetime import UTC, datetime, timedelta
from typing import NamedTuple

from logtool.records.layout import (
    COLUMNS,
    FIRST_YEAR,
    KEY_FORM,
    KINDS,
    KNOWN_KEYS,
    LAST_YEAR,
    MAX_LINE_BYTES,
    MAX_TEXT_BYTES,
    MAX_VALUE_BYTES,
    NEEDS,
    NUMBER_FORM,
    SETUP_LOCATOR_CHARACTERS,
    TIME_FORM,
)

EPOCH = datetime(1970, 1, 1, tzinfo=UTC)
_MICROSECOND = timedelta(microseconds=1)
_CONTROL = re.compile("[\x00-\x08\x0a-\x1f\x7f\x80-\x9f]")
_TIME = re.compile(TIME_FORM)
_KEY = re.compile(KEY_FORM)
_NUMBER = re.compile(NUMBER_FORM)
_FORMS = [re.compile(column.form, re.DOTALL) for column in COLUMNS]
_KEY_FORMS = {name: re.compile(key.form) for name, key in KNOWN_KEYS.items() if key.form}
_FIELD_OF = {column.name: i for i, column in enumerate(COLUMNS)}
_TEXT, _MORE, _LOCATOR = _FIELD_OF["text"], _FIELD_OF["more"], _FIELD_OF["locator"]


class Record(NamedTuple):
    """One checked line: its time in microseconds since 1970, its fields as written and its keys."""

    time_us: int
    fields: tuple[str, ...]
    keys: dict[str, str]

    @property
    def kind(self) -> str:
        """The kind of the record: `heard`, `setup` and so on."""
        return self.fields[1]

    def field(self, name: str) -> str:
        """Return the field of a column as it was written; empty where it is not known."""
        return self.fields[_FIELD_OF[name]]


def is_blank(line: bytes) -> bool:
    """Return whether a line without its ending is blank: only spaces and TABs."""
    return not line.strip(b" \t")


def is_comment(line: bytes) -> bool:
    """Return whether a line is a comment: its first byte is `#`, whatever follows."""
    return line.startswith(b"#")


def judge(line: bytes) -> Record | str:
    """Return the record that a line holds, or the reason for which it is set aside.

    Parameters
    ----------
    line : bytes
        A line without its ending that is neither blank nor a comment.

    Returns
    -------
    Record or str
        The reason is one of `logtool.records.layout.REASONS`; of several the first that holds.

    Examples
    --------
    >>> judge(b"2026-03-01T22:00:00Z\\tstop\\thut" + b"\\t" * 11).kind
    'stop'
    >>> judge(b"2026-03-01T22:00:00Z\\tstop")
    'too-few-fields'
    """
    try:
        text = line.decode()
    except UnicodeDecodeError:
        return "not-utf8"
    if len(line) > MAX_LINE_BYTES:
        return "too-long"
    if _CONTROL.search(text):
        return "control-character"
    fields = tuple(text.split("\t"))
    if len(fields) != len(COLUMNS):
        return "too-few-fields" if len(fields) < len(COLUMNS) else "too-many-fields"
    time_us = time_of(fields[0])
    if time_us is None:
        return "bad-time"
    kind = fields[1]
    if kind not in KINDS:
        return "bad-kind"
    keys = keys_of(fields[_MORE])
    return (
        _missing(kind, fields, keys or {})
        or _bad_form(fields, keys)
        or _out_of_range(kind, fields, keys or {})
        or Record(time_us, fields, keys or {})
    )


def time_of(written: str) -> int | None:
    """Return a written time in microseconds since 1970 (any year), or None where its form is bad.

    >>> time_of("1970-01-01T00:00:01.5Z")
    1500000
    >>> time_of("2026-02-29T00:00:00Z") is None
    True
    """
    match = _TIME.fullmatch(written)
    if not match:
        return None
    try:
        at = datetime(*(int(part) for part in match.groups()[:6]), tzinfo=UTC)  # type: ignore[misc,arg-type]
    except ValueError:
        return None
    fraction = int((match[7] or ".0")[1:].ljust(6, "0"))
    return (at - EPOCH) // _MICROSECOND + fraction


def keys_of(more: str) -> dict[str, str] | None:
    """Return the keys of a field `more`, or None where it cannot be read.

    >>> keys_of("antenna=wire; on_s=60")
    {'antenna': 'wire', 'on_s': '60'}
    >>> keys_of("antenna") is None
    True
    """
    keys: dict[str, str] = {}
    if not more:
        return keys
    for item in more.split("; "):
        key, _, value = item.partition("=")
        if not _KEY.fullmatch(key) or key in keys or ";" in value:
            return None
        if not 1 <= len(value.encode()) <= MAX_VALUE_BYTES:
            return None
        keys[key] = value
    return keys


def _missing(kind: str, fields: tuple[str, ...], keys: dict[str, str]) -> str | None:
    columns, needed_keys = NEEDS[kind]
    for name in ("receiver", *columns):
        if not fields[_FIELD_OF[name]]:
            return f"missing-{name}"
    return "missing-more" if any(key not in keys for key in needed_keys) else None


def _bad_form(fields: tuple[str, ...], keys: dict[str, str] | None) -> str | None:
    for i in range(2, _MORE):
        if fields[i] and not _FORMS[i].fullmatch(fields[i]):
            return f"bad-{COLUMNS[i].name}"
        if i == _TEXT and len(fields[i].encode()) > MAX_TEXT_BYTES:
            return "bad-text"
    if keys is None:
        return "bad-more"
    for name, value in keys.items():
        if name not in KNOWN_KEYS:
            continue
        key = KNOWN_KEYS[name]
        if key.form and not _KEY_FORMS[name].fullmatch(value):
            return "bad-more"
        if key.words and not key.form and value not in key.words:
            return "bad-more"
    return None


def _out_of_range(kind: str, fields: tuple[str, ...], keys: dict[str, str]) -> str | None:
    if not FIRST_YEAR <= int(fields[0][:4]) <= LAST_YEAR:
        return "range-time"
    for i, column in enumerate(COLUMNS):
        if column.low is not None and fields[i] and not _within(fields[i], column.low, column.high):
            return f"range-{column.name}"
        if i == _LOCATOR and kind == "setup" and len(fields[i]) < SETUP_LOCATOR_CHARACTERS:
            return "range-locator"
    for name, value in keys.items():
        if name not in KNOWN_KEYS:
            continue
        key = KNOWN_KEYS[name]
        if key.low is not None and not _within(value, key.low, key.high):
            return "range-more"
        if key.words and key.form and float(value) not in {float(word) for word in key.words}:
            return "range-more"
    return None


def _within(written: str, low: float, high: float | None) -> bool:
    return low <= float(written) <= (high if high is not None else float("inf"))
