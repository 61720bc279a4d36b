"""Columns of call signs and of locators: whose they are."""

from __future__ import annotations

from dataclasses import dataclass, field

from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of
from logtool.suggest.message_order import (
    Pairs,
    by_locators,
)
from logtool.suggest.tables import FEW_LOCATORS, Column
from logtool.suggest.values import CALLING_WORDS, EMPTY_WORDS, given, is_locator, quoted


@dataclass
class Calls:
    """What was found of call signs, locators and messages."""

    names: dict[int, str] = field(default_factory=dict)
    values: dict[str, dict[str, str]] = field(default_factory=dict)
    message: bool = False
    patterns: tuple[str, ...] = ()  # other than the usual ones
    doubts: list[Doubt] = field(default_factory=list)
    notes: dict[int, str] = field(default_factory=dict)


def may_be(column: Column, name: str) -> bool:
    """Return whether a column's own name does not speak against a meaning."""
    means = meanings_of(column.hint)
    return not means or name in means


def are_named_locators(column: Column) -> bool:
    return "locator" in meanings_of(column.hint) and all(map(is_locator, given(column.values)))


def name_locators(found: Calls, columns: list[Column], candidates: list[int]) -> None:
    varying = [k for k in candidates if len(set(given(columns[k].values))) > 1]
    for k in candidates:
        if k not in varying and "locator" not in meanings_of(columns[k].hint):
            found.notes[k] = "always the same locator: the receiver's place, not the sender's"
    named = [k for k in varying if "locator" in meanings_of(columns[k].hint)]
    if len(varying) == 1:
        found.names[varying[0]] = "locator"
        if not named and len(set(given(columns[varying[0]].values))) <= FEW_LOCATORS:
            found.doubts.append(
                Doubt(
                    "locator, mode",
                    f"{columns[varying[0]].label} ({quoted(columns[varying[0]].values)}) is taken as the sender's"
                    " locator; it could be the mode",
                )
            )
    elif len(named) == 1:
        found.names[named[0]] = "locator"
    elif varying:
        labels = ", ".join(columns[k].label for k in varying)
        found.doubts.append(Doubt("locator, mode", f"NOT SURE which is the sender's: {labels}; none is read"))


def name_calls(found: Calls, columns: list[Column], candidates: list[int], text: int | None) -> None:
    varying = [k for k in candidates if len(set(given(columns[k].values))) > 1]
    for k in candidates:
        if k not in varying:
            found.notes[k] = "always the same call sign: the receiver's own, not the sender's"
            if len(candidates) == 1 and text is None:
                found.doubts.append(
                    Doubt(
                        "sender",
                        f"{columns[k].label} is always {quoted(columns[k].values, 1)}, so not read as the sender",
                    )
                )
    for k in varying:
        for word in CALLING_WORDS:
            if word in columns[k].values:
                found.values.setdefault("addressee", {})[word] = ""
    calling = [k for k in varying if set(columns[k].values) & CALLING_WORDS]
    by_name = {
        name: [k for k in varying if name in meanings_of(columns[k].hint)] for name in ("sender", "addressee")
    }
    if len(by_name["addressee"]) == 1 and len(varying) <= 2:
        found.names[by_name["addressee"][0]] = "addressee"
        rest = [k for k in varying if k not in by_name["addressee"]]
        if len(rest) == 1:
            found.names[rest[0]] = "sender"
    elif len(varying) == 1:
        if calling:
            found.names[varying[0]] = "addressee"
            found.doubts.append(
                Doubt(
                    "sender",
                    f"{columns[varying[0]].label} holds general calls, so it is read as the addressee; no column is the"
                    " sender's",
                )
            )
        else:
            found.names[varying[0]] = "sender"
            if columns[varying[0]].hint.strip() and not by_name["sender"] and text is None:
                found.doubts.append(
                    Doubt(
                        "sender",
                        f"{columns[varying[0]].label} is taken as the sender, its name does not say so",
                    )
                )
    elif len(by_name["sender"]) == 1 and len(varying) == 2:
        found.names[by_name["sender"][0]] = "sender"
        other = next(k for k in varying if k not in by_name["sender"])
        found.names[other] = "addressee"
        if other not in calling:
            found.doubts.append(
                Doubt(
                    "addressee",
                    f"{columns[other].label} is taken as the addressee because the other column is the sender",
                )
            )
    elif len(varying) == 2:
        _order_of_two(found, columns, varying, calling)
    elif varying:
        labels = ", ".join(columns[k].label for k in varying)
        found.doubts.append(
            Doubt("sender, addressee", f"NOT SURE which columns are meant: {labels}; none is read")
        )
    if "addressee" not in found.names.values():
        found.values.pop("addressee", None)


def _order_of_two(found: Calls, columns: list[Column], pair: list[int], calling: list[int]) -> None:
    if len(calling) == 1:
        found.names[calling[0]] = "addressee"
        found.names[next(k for k in pair if k not in calling)] = "sender"
        return
    empty = [k for k in pair if any(not v or v in EMPTY_WORDS for v in columns[k].values)]
    locator = next((k for k, name in found.names.items() if name == "locator"), None)
    if locator is not None:
        verdict = by_locators(
            Pairs(columns[pair[0]].values, columns[pair[1]].values, columns[locator].values, [])
        )
        if verdict:
            sender = pair[0] if verdict == "first" else pair[1]
            found.names[sender] = "sender"
            found.names[pair[0] if sender == pair[1] else pair[1]] = "addressee"
            return
    first, second = pair
    labels = f"{columns[first].label} and {columns[second].label}"
    if len(empty) == 1:
        found.names[empty[0]] = "addressee"
        found.names[next(k for k in pair if k not in empty)] = "sender"
        found.doubts.append(
            Doubt(
                "sender, addressee",
                f"NOT SURE which of {labels} is which: the one that may be empty is taken as the addressee",
            )
        )
    else:
        found.names[first], found.names[second] = "addressee", "sender"
        found.doubts.append(
            Doubt(
                "sender, addressee",
                f"NOT SURE which of {labels} is which: taken is the station called first, the caller second",
            )
        )
