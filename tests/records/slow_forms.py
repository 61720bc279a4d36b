"""The forms of fields, by plain comparisons of characters, for the slow reader."""

from __future__ import annotations

import datetime

DIGITS = "0123456789"
LOWER = "abcdefghijklmnopqrstuvwxyz"
UPPER = LOWER.upper()


def time_parts(text: str) -> tuple[int, ...] | None:
    """Year, month, day, hour, minute, second, microsecond; None where the form does not hold."""
    if len(text) < 20 or text[-1] != "Z":
        return None
    pattern = "dddd-dd-ddTdd:dd:dd"
    for character, sign in zip(text, pattern, strict=False):
        if sign == "d" and character not in DIGITS:
            return None
        if sign != "d" and character != sign:
            return None
    point, decimals = text[19:20], text[20:-1]
    if text[19:] != "Z" and (point != "." or not 1 <= len(decimals) <= 6 or not only(decimals, DIGITS)):
        return None
    parts = [int(text[a:b]) for a, b in ((0, 4), (5, 7), (8, 10), (11, 13), (14, 16), (17, 19))]
    microsecond = int((decimals + "000000")[:6])
    try:
        datetime.datetime(*parts, microsecond)  # type: ignore[arg-type]
    except ValueError:
        return None
    return (*parts, microsecond)


def more_keys(text: str) -> list[tuple[str, str]] | None:
    """The keys and values in their order, or None where the field cannot be read."""
    if text == "":
        return []
    pairs: list[tuple[str, str]] = []
    for part in text.split("; "):
        key, equals, value = part.partition("=")
        if equals == "" or not 1 <= len(key) <= 32 or key[0] not in LOWER:
            return None
        if not only(key, LOWER + DIGITS + "_") or key in dict(pairs):
            return None
        if ";" in value or not 1 <= len(value.encode()) <= 200:
            return None
        pairs.append((key, value))
    return pairs


def only(text: str, allowed: str) -> bool:
    return all(character in allowed for character in text)


def word(text: str, signs: str, longest: int) -> bool:
    return 1 <= len(text) <= longest and only(text, UPPER + LOWER + DIGITS + signs)


def is_number(text: str) -> bool:
    if text[:1] == "-":
        text = text[1:]
    whole, point, decimals = text.partition(".")
    if not 1 <= len(whole) <= 10 or not only(whole, DIGITS):
        return False
    return point == "" or (1 <= len(decimals) <= 6 and only(decimals, DIGITS))


def is_locator(text: str) -> bool:
    if len(text) not in (2, 4, 6, 8, 10):
        return False
    for place, character in enumerate(text.upper()):
        pair = place // 2
        allowed = UPPER[:18] if pair == 0 else DIGITS if pair in (1, 3) else UPPER[:24]
        if character not in allowed or text[place] not in UPPER + LOWER + DIGITS:
            return False
    return True


def plain_text(text: str) -> str | None:
    """The text without its escapes, or None for an escape that is none of the four."""
    out = ""
    place = 0
    while place < len(text):
        if text[place] == "\\":
            meaning = {"t": "\t", "n": "\n", "r": "\r", "\\": "\\"}.get(text[place + 1 : place + 2])
            if meaning is None:
                return None
            out += meaning
            place += 2
        else:
            out += text[place]
            place += 1
    return out
