"""Find sender, addressee and locator in messages as `docs/recipes.md` says, word by word."""

from __future__ import annotations

import re

DEFAULT_PATTERNS = [
    "{sender} {locator} {power_dbm}",
    "CQ|QRZ [{word}] [DE] {sender} [{locator}] ...",
    "{addressee} [DE] {sender} [R] {locator} ...",
    "{addressee} [DE] {sender} {report_db} ...",
    "{addressee} [DE] {sender} ...",
    "DE {sender} [{locator}] ...",
]
UPPER, DIGIT = "ABCDEFGHIJKLMNOPQRSTUVWXYZ", "0123456789"


def is_call(text: str) -> bool:
    """Return whether a text has the form of a call sign, compound ones and those in brackets too."""
    if text == "<...>":
        return True
    if text[:1] == "<" and text[-1:] == ">":
        text = text[1:-1]
    parts = text.split("/")
    if len(parts) > 3:
        return False
    for i, part in enumerate(parts):
        around = [*parts[:i], *parts[i + 1 :]]
        places = i in (0, 1) and i >= len(parts) - 2  # at most one part before and one behind
        if places and is_plain_call(part) and all(_is_affix(other) for other in around):
            return True
    return False


def _is_affix(text: str) -> bool:
    return 1 <= len(text) <= 4 and all(c in UPPER + DIGIT for c in text)


def is_plain_call(text: str) -> bool:
    """Return whether a text is a series, one digit and one to seven characters, the last a letter."""
    for length in (1, 2, 3):
        series, rest = text[:length], text[length:]
        if not (is_series(series) and 2 <= len(rest) <= 8 and rest[0] in DIGIT and rest[-1] in UPPER):
            continue
        if all(c in UPPER + DIGIT for c in rest):
            return True
    return False


def is_series(text: str) -> bool:
    """Return whether a text can stand for a country: one letter of few, two characters or three."""
    shape = "".join("L" if c in UPPER else "D" if c in DIGIT else "?" for c in text)
    return text in list("BFGIKMNRWQ") or shape in ("LL", "LD", "DL", "LLL", "DLL")


def _fits(word: str, slot: str) -> str | None:
    """Return what a word stands for in a slot, or None."""
    if slot in ("sender", "addressee"):
        return word if is_call(word) else None
    if slot == "locator":
        return word if re.fullmatch("[A-R][A-R][0-9][0-9]([A-X][A-X])?", word) else None
    if slot == "report_db":
        bare = word.removeprefix("R")
        return bare if re.fullmatch("[+-][0-9][0-9]?", bare) else None
    if slot == "power_dbm":
        return word if re.fullmatch("[0-9][0-9]?", word) else None
    assert slot == "word"
    return word if re.fullmatch("[A-Z]{1,4}|[0-9]{3}", word) else None


def _matched(items: list[str], words: list[str], *, open_end: bool) -> dict[str, str] | None:
    if not items:
        return {} if open_end or not words else None
    item, optional = items[0], items[0].startswith("[")
    bare = item.strip("[]")
    if words:
        rest = None
        if bare.startswith("{"):
            found = _fits(words[0], bare.strip("{}"))
            rest = None if found is None else _matched(items[1:], words[1:], open_end=open_end)
            if rest is not None and found is not None:
                return {bare.strip("{}"): found, **rest}
        elif words[0] in [choice.upper() for choice in bare.split("|")]:
            rest = _matched(items[1:], words[1:], open_end=open_end)
            if rest is not None:
                return rest
    return _matched(items[1:], words, open_end=open_end) if optional else None


def said(text: str, patterns: list[str] | None) -> dict[str, str]:
    """Return the parts of a message by the first pattern that fits; empty where none does."""
    words = [word for word in text.upper().split(" ") if word]
    for pattern in DEFAULT_PATTERNS if patterns is None else patterns:
        items = pattern.split()
        open_end = items[-1] == "..."
        found = _matched(items[:-1] if open_end else items, words, open_end=open_end)
        if found is not None:
            return found
    return {}
