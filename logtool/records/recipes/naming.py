"""Names and constants in a recipe: whether they are known, and whether a line can hold them."""

from __future__ import annotations

import difflib
import re

from logtool.records.layout import LOCATOR_FORM, NAME_FORM, NUMBER_FORM, SETUP_LOCATOR_CHARACTERS
from logtool.records.recipes.fields import Fields
from logtool.records.recipes.names import NUMBER_TARGETS, PIECES, target_of
from logtool.records.recipes.values import constant_value

OF_LINES = ("time", "date", "text", "locator")  # what only a line can say


def check_names(fields: Fields, key: str, names: tuple[str, ...] | list[str], keep: tuple[str, ...]) -> None:
    """Stop at a name that is none of those known or kept; the message has some that are alike."""
    for name in names:
        if name in PIECES or name in keep:
            continue
        alike = [known for known in PIECES if known.startswith(name) or name.startswith(known.split("_")[0])]
        alike = alike or difflib.get_close_matches(name, PIECES, 3)
        hint = f"; did you mean {' or '.join(alike[:3])}?" if alike else "."
        raise fields.error(
            key, f"{name!r} is no known name{hint} The names stand in docs/recipes.md; list others in `keep`"
        )


def constants_of(fields: Fields, keep: tuple[str, ...]) -> dict[str, str]:
    """Return a table of constants, as texts."""
    constants = {}
    for name in list(fields):
        if name in OF_LINES:
            hint = (
                "the receiver's own locator is called `place`"
                if name == "locator"
                else "it belongs to a line"
            )
            raise fields.error(name, f"{name!r} cannot be a constant: {hint}")
        check_names(fields, name, [name], keep)
        value = str(fields.take(name, (str, int, float)))
        if target_of(name) in NUMBER_TARGETS and not _is_number(constant_value(name, value)[1]):
            raise fields.error(name, f"{value!r} is no number that can be used")
        check_clean(fields, name, value)
        _check_form(fields, name, value)
        constants[name] = value
    return constants


def _check_form(fields: Fields, name: str, value: str) -> None:
    """Stop at a name or a place that no record can hold: a setup with it would be lost."""
    if name in ("receiver", "antenna") and not re.fullmatch(NAME_FORM, value):
        raise fields.error(name, f"{value!r} is no name: write 1 to 32 of the characters A-Z a-z 0-9 _ -")
    is_place = re.fullmatch(LOCATOR_FORM, value) and len(value) >= SETUP_LOCATOR_CHARACTERS
    if name == "place" and not is_place:
        raise fields.error(name, f"{value!r} is no locator of 4, 6, 8 or 10 characters, like JN58td")


def _is_number(text: str) -> bool:
    return re.fullmatch(NUMBER_FORM, text) is not None


def check_clean(fields: Fields, key: str, text: str) -> None:
    """Stop where a text would break the line that it goes into."""
    if not text.isprintable():
        raise fields.error(key, f"{text!r} has a character that no value can hold, like a TAB")
