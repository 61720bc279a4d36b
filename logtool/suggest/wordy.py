"""Columns of few words: the mode, the receiver, and whether a line was received or sent."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from logtool.records.layout import NAME_FORM
from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of
from logtool.suggest.tables import Column
from logtool.suggest.values import FEW_WORDS, given, is_locator, is_mode_word, quoted

if TYPE_CHECKING:
    from logtool.suggest.roles import Roles

_RECEIVED = {"RX", "RCVD", "HEARD", "RECEIVED", "IN"}
_SENT = {"TX", "SENT", "TRANSMITTED", "OUT"}
_NO_MODES = {"USB", "LSB", "AM", "FM", "ON", "OFF", "YES", "NO", "TRUE", "FALSE", "OK"} | _RECEIVED | _SENT
_BAND_NAME = re.compile(r"[0-9.]+ ?(?:m|cm|M|CM)")
_LETTER_AND_DIGIT = re.compile(r"(?=.*[A-Za-z])(?=.*[0-9]).+")
_NAME = re.compile(NAME_FORM)


def name_words(roles: Roles, columns: list[Column]) -> None:
    """Give the columns of few words their names."""
    free = [k for k in range(len(columns)) if k not in roles.names and k not in roles.notes]
    wordy = [k for k in free if _few(columns[k])]
    for k in wordy:
        words = {value.upper() for value in given(columns[k].values)}
        if words <= _RECEIVED | _SENT and words & _SENT and words & _RECEIVED:
            roles.where[k] = "|".join(sorted({v for v in given(columns[k].values) if v.upper() in _RECEIVED}))
            roles.notes[k] = "received or sent"
            roles.doubts.append(
                Doubt(
                    "lines",
                    f"{columns[k].label} tells received lines from sent ones; sent ones are set aside",
                    essential=False,
                )
            )
        elif words and all(map(_BAND_NAME.fullmatch, words)):
            roles.notes[k] = "names of bands"
        elif _names_receivers(columns[k]):
            roles.names[k] = "receiver"
    _name_mode(
        roles,
        columns,
        [k for k in wordy if k not in roles.names and k not in roles.notes and k not in roles.where],
    )


def _names_receivers(column: Column) -> bool:
    """Return whether a column names receivers.

    `rx.grid` or `rx antenna` tell something else of them. A name that is a locator would tell the place, also
    where places are coarsened.
    """
    means, values = meanings_of(column.hint), given(column.values)
    return (
        "receiver" in means
        and means <= {"receiver", "sender", "other"}
        and all(map(_NAME.fullmatch, values))
        and not any(map(is_locator, values))
    )


def _few(column: Column) -> bool:
    values = given(column.values)
    different = len(set(values))
    if "mode" in meanings_of(column.hint):
        return bool(values) and column.kind not in ("number", "time", "text") and different <= FEW_WORDS
    return (
        bool(values)
        and column.kind not in ("number", "time", "text", "call", "locator")
        and different <= max(1, min(FEW_WORDS, len(values) / 4))
    )


def _name_mode(roles: Roles, columns: list[Column], wordy: list[int]) -> None:
    named = [k for k in wordy if "mode" in meanings_of(columns[k].hint)]
    if len(named) == 1:
        words = set(given(columns[named[0]].values))
        roles.names[named[0]] = "mode"
        if not all(map(is_mode_word, words)) or not all(any(c.isalnum() for c in word) for word in words):
            roles.doubts.append(
                Doubt(
                    "mode",
                    f"{columns[named[0]].label} holds {quoted(words)}: say in [values.mode] what they stand for",
                )
            )
        return
    unnamed = [k for k in wordy if not meanings_of(columns[k].hint)]
    able = [k for k in unnamed if all(_could_be_mode(value) for value in set(given(columns[k].values)))]
    clear = [
        k for k in able if all(_LETTER_AND_DIGIT.fullmatch(value) for value in set(given(columns[k].values)))
    ]
    if len(clear) == 1 and len(able) == 1:
        roles.names[clear[0]] = "mode"
        if all(map(is_locator, given(columns[clear[0]].values))):
            roles.doubts.append(
                Doubt(
                    "mode, locator",
                    f"{columns[clear[0]].label} ({quoted(columns[clear[0]].values)}) is taken as the mode; it has the"
                    " form of locators too",
                )
            )
        roles.notes[clear[0]] = f"few words of letters and digits: {quoted(columns[clear[0]].values)}"
        if columns[clear[0]].hint.strip():
            roles.doubts.append(
                Doubt("mode", f"{columns[clear[0]].label} is taken by its values; its name does not say so")
            )
    elif clear or able:
        k = (clear or able)[0]
        if len(clear or able) == 1:
            roles.names[k] = "mode"
            roles.doubts.append(
                Doubt("mode", f"NOT SURE that {columns[k].label} ({quoted(columns[k].values)}) is the mode")
            )
        else:
            labels = ", ".join(columns[k].label for k in clear or able)
            roles.doubts.append(Doubt("mode", f"NOT SURE which column it is: {labels}; none is read"))
            for k in clear or able:
                roles.notes[k] = "could be the mode"


def _could_be_mode(value: str) -> bool:
    return (
        is_mode_word(value)
        and value.upper() not in _NO_MODES
        and value == value.upper()
        and any(c.isalpha() for c in value)
    )
