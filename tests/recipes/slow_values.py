"""Turn pieces into the layout's values as `docs/recipes.md` says; shares nothing with the package."""

from __future__ import annotations

import math
import re
from decimal import ROUND_HALF_UP, Decimal
from typing import Any

UNITS = {
    "dial_khz": ("dial_hz", "1000"),
    "dial_mhz": ("dial_hz", "1000000"),
    "audio_khz": ("audio_hz", "1000"),
    "signal_khz": ("signal_hz", "1000"),
    "signal_mhz": ("signal_hz", "1000000"),
    "late_ms": ("late_s", "0.001"),
    "on_min": ("on_s", "60"),
    "power_w": ("power_dbm", "1"),
    "power_mw": ("power_dbm", "0.001"),
}
NUMBERS = [
    "dial_hz", "audio_hz", "signal_hz", "snr_db", "late_s", "power_dbm", "on_s", "dbfs", "peak_dbfs", "slot_s",
    "sure", "report_db", "drift_hz", "temperature_c",
]  # fmt: skip
UNREADABLE = "?"


def target(name: str) -> str:
    """Return the layout's name for a piece."""
    return UNITS[name][0] if name in UNITS else name


def cleaned(raw: str | None, name: str, recipe: dict[str, Any]) -> str | None:
    """Return a piece without blanks, empty words and by its value map; None where nothing is known."""
    text = (raw or "").strip(" \t")
    if not text or text in recipe.get("empty", []):
        return None
    return recipe.get("values", {}).get(name, {}).get(text, text) or None


def value(text: str | None, name: str, recipe: dict[str, Any]) -> str | None:
    """Return the layout's value of a cleaned piece; None where nothing is known."""
    if text is None:
        return None
    goal = target(name)
    if goal in NUMBERS:
        return number(text.replace(recipe.get("decimal", "."), "."), name)
    if goal in ("sender", "addressee") and text.startswith("<") and text.endswith(">"):
        return None if text == "<...>" else text[1:-1]
    if goal == "locator":
        never = [word.upper() for word in recipe.get("message", {}).get("never_locators", ["RR73"])]
        return None if text.upper() in never else text
    if goal == "text":
        escapes = {"\\": "\\\\", "\t": "\\t"}
        if any("json" in rule for rule in recipe["line"]):  # a piece of others has one line
            escapes |= {"\n": "\\n", "\r": "\\r"}
        return "".join(escapes.get(character, character) for character in text)
    return text


def number(text: str, name: str) -> str:
    """Return a written number in the layout's unit; as it stands where the unit is the layout's own."""
    goal, factor = UNITS.get(name, (name, "1"))
    if name not in UNITS and not (goal == "dial_hz" and "." in text):
        return text.removeprefix("+")
    if not re.fullmatch(r"[+-]?(\d+\.?\d*|\.\d+)", text, re.ASCII):
        return UNREADABLE
    exact = Decimal(text) * Decimal(factor)
    if goal != "power_dbm" and abs(exact) > Decimal("1e20"):
        return UNREADABLE
    if goal == "power_dbm":
        if exact <= 0:
            return UNREADABLE
        if exact > Decimal("1e300"):
            return UNREADABLE
        exact = Decimal(repr(10 * math.log10(float(exact)) + 30)).quantize(Decimal("0.001"), ROUND_HALF_UP)
    elif goal == "dial_hz":
        return str(int(exact.quantize(Decimal(1), ROUND_HALF_UP)))
    return plain(exact.quantize(Decimal("0.000001"), ROUND_HALF_UP))


def plain(number: Decimal) -> str:
    """Return a number without exponent and without zeros at its end."""
    text = f"{number:f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def constants(told: dict[str, Any]) -> dict[str, str]:
    """Return constants by target: numbers are turned into the layout's unit, with a decimal point."""
    found = {}
    for name, raw in told.items():
        goal = target(name)
        if goal in NUMBERS and name not in UNITS and "." not in str(raw):
            found[goal] = str(raw)
        elif goal in NUMBERS:
            found[goal] = plain(Decimal(number(str(raw), name)))
        else:
            found[goal] = str(raw)
    return found
