"""What a written value is: a number, a call sign, a locator, a word that stands for nothing."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Callable, Iterable

from logtool.records.callsigns import COMPOUND_CALL

ENOUGH = 0.97  # of the values have to be of a kind; the rest may be damaged; our choice
FEW_WORDS = 8  # so many different values are few; our choice
EMPTY_WORDS = frozenset(
    ("-", "--", "---", "----", "?", "??", "*", ".", "_", "~~", "N/A", "n/a", "NA",
     "NULL", "null", "None", "none", "nil", "nan", "NaN", "unknown")
)  # fmt: skip
CALLING_WORDS = frozenset(("CQ", "QRZ", "DE"))  # words of a message's beginning that are no call signs
_CALL = re.compile(rf"<?{COMPOUND_CALL}>?|<\.\.\.>")
_LOCATOR = re.compile(r"[A-R]{2}[0-9]{2}(?:[A-Xa-x]{2}(?:[0-9]{2})?)?|[A-R]{2}[0-9]{2}[A-X]{2}")
_NUMBER = re.compile(r"[+-]?[0-9]{1,15}(?:[.,][0-9]{1,9})?")
_WORD = re.compile(r"[A-Za-z][A-Za-z_]*")
_MODE = re.compile(r"[A-Za-z0-9_./+-]{1,16}")


def is_call(value: str) -> bool:
    """Return whether a value has the form of a call sign (ITU Radio Regulations, Article 19), in one case.

    >>> [is_call(word) for word in ("Q1ABC", "<Q1ABC/P>", "q1abc", "JO62", "Q1Abc")]
    [True, True, True, False, False]
    """
    return bool(_CALL.fullmatch(value.upper() if value.islower() else value))


def is_locator(value: str) -> bool:
    """Return whether a value has the form of a locator of four, six or eight characters."""
    return value != "RR73" and bool(_LOCATOR.fullmatch(value))


def is_number(value: str) -> bool:
    """Return whether a value is a decimal number, with a point or a comma."""
    return bool(_NUMBER.fullmatch(value))


def number_of(value: str) -> float:
    """Return the number that a value is. See `is_number`."""
    return float(value.replace(",", "."))


def is_word(value: str) -> bool:
    """Return whether a value is letters only."""
    return bool(_WORD.fullmatch(value))


def is_mode_word(value: str) -> bool:
    """Return whether a value could stand in the column `mode` of the layout."""
    return bool(_MODE.fullmatch(value)) and not is_number(value)


def given(values: Iterable[str]) -> list[str]:
    """Return the values that say something: neither empty nor a word for nothing."""
    return [value for value in values if value and value not in EMPTY_WORDS]


def most_are(values: Iterable[str], test: Callable[[str], bool]) -> bool:
    """Return whether there are values and nearly all (`ENOUGH`) pass a test."""
    counted = Counter(values)
    total = sum(counted.values())
    return bool(total) and sum(n for value, n in counted.items() if test(value)) >= ENOUGH * total


def words_for_nothing(values: Iterable[str]) -> set[str]:
    """Return the words in a column that stand for "not known"."""
    return {value for value in values if value in EMPTY_WORDS}


def quoted(values: Iterable[str], most: int = 3) -> str:
    """Return some different values for a sentence, in quotes.

    >>> quoted(["a", "b", "a", "c", "d"])
    "'a', 'b', 'c', ..."
    """
    different = list(dict.fromkeys(value for value in values if value))
    return ", ".join(repr(value) for value in different[:most]) + (", ..." if len(different) > most else "")
