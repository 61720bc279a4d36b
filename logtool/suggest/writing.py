"""The recipe's text: what was found, why, what is not sure, and what has to be filled in."""

from __future__ import annotations

import re

from logtool.suggest.doubts import Doubt
from logtool.suggest.draft import Draft
from logtool.suggest.looking import Look
from logtool.suggest.rule_text import literal, rules_text
from logtool.suggest.structured import SeparatedWay
from logtool.suggest.tables import Table
from logtool.suggest.toml import comment, listed, plain, text_of

FILL_IN = "FILL IN"
_STAND_INS = {"receiver": '"receiver"', "dial_hz": "1", "dial_khz": "1", "date": ""}
_SHOWN_LINES = 5


def written(draft: Draft) -> tuple[str, str]:
    """Return the recipe's text, and the same with stand-ins for what has to be filled in."""
    head = _head(draft)
    body = [
        *_top(draft),
        *_constants(draft),
        *_name(draft),
        *_values(draft),
        *rules_text(draft),
        *_message(draft),
    ]
    recipe = "\n".join([*head, *body]) + "\n"
    trial = recipe
    for key, value in _STAND_INS.items():
        if value:
            trial = re.sub(rf"(?m)^#{key} = .*{FILL_IN}.*$", f"{key} = {value}", trial)
    return recipe, trial


def no_structure(look: Look, why: str) -> str:
    """Return a text that says plainly that there is no recipe yet, with the first lines and what to write by hand."""
    out = [
        "# No recipe could be found for this text.",
        *comment(f"Why: {why}."),
        "#",
        "# The first lines:",
    ]
    out += [
        f"#   {''.join(c if c.isprintable() else '?' for c in line.text[:100])}"
        for line in look.lines[:_SHOWN_LINES]
    ]
    out += [
        "#",
        "# To write one by hand, see docs/recipes.md. A recipe needs at least: the receiver's name and the dial in",
        "# [constants], and one [[line]] that says how a line of a message is cut, such as",
        "#",
        "#   recipe = 1",
        "#   [constants]",
        '#   receiver = "..."',
        "#   dial_hz = ...",
        "#   [[line]]",
        '#   kind = "heard"',
        '#   separator = "space"',
        '#   columns = ["time", "snr_db", "text"]',
        "#   [message]",
    ]
    return "\n".join(out) + "\n"


def settle(draft: Draft) -> None:
    """Add to the doubts what no text of this kind could tell."""
    roles, times = draft.roles, draft.roles.times
    doubts = draft.doubts
    if not times.zone_known:
        why = (
            "its column is called local: give the zone"
            if times.local
            else "the text does not say whether times are UTC or local; read as UTC"
        )
        doubts.append(Doubt("zone", why, essential=times.local))
    doubts.append(
        Doubt(
            "time_marks",
            "no text tells whether a time marks the start or the end of its slot; read as the start",
            essential=False,
        )
    )
    if draft.needs_date:
        what = "day" if not times.dated else "year"
        doubts.append(
            Doubt(
                "date",
                f"the text does not tell the {what}; give --date YYYY-MM-DD, the day of the file's first line; a day"
                " without any line cannot be seen",
                essential=False,
            )
        )
    if draft.name_date and "date" not in draft.others.carried:
        doubts.append(
            Doubt(
                "date",
                f"the day of the first line is taken to be that in the file's name, {draft.name_date[0]}",
                essential=False,
            )
        )
    if draft.name_date and len(draft.name_date[1]) > 1 and "date" not in draft.others.carried:
        doubts.append(
            Doubt(
                "time",
                f"NOT SURE of the order in the date {draft.name_date[0]!r} of the file's name:"
                f" {' or '.join(draft.name_date[1])}",
            )
        )
    if not draft.dial_known:
        varying = " of each line" if roles.has("signal_hz") else ""
        doubts.append(
            Doubt("dial_hz", f"the text does not give the dial{varying}; fill it in", essential=False)
        )


def _head(draft: Draft) -> list[str]:
    name = "".join(c if c.isprintable() else "?" for c in draft.look.name)
    out = [
        f"# A first recipe for {name}, suggested from {'all' if draft.look.whole else 'some'} of its lines.",
        "#",
    ]
    out.append(
        f"# Search for {FILL_IN} and NOT SURE, then see what it reads: logtool convert --recipe THIS --try FILE"
    )
    if draft.doubts:
        out += ["#", "# What the text does not tell:"]
        for doubt in draft.doubts:
            mark = "NOT SURE: " if doubt.essential and "NOT SURE" not in doubt.why else ""
            out += comment(f"- {mark}{doubt}", first="# ", rest="#   ")
    return out


def _top(draft: Draft) -> list[str]:
    look, roles, slots = draft.look, draft.roles, draft.slots
    out = ["", "recipe = 1"]
    if look.encoding != "utf-8":
        out.append(f"encoding = {plain(look.encoding)}")
    if not roles.times.zone_known:
        out.append(
            f'#zone = "UTC"  # {FILL_IN} where the times are local: an IANA name, like "Atlantic/Azores"'
        )
    if slots.slot_s is not None:
        out.append(f"slot_s = {slots.slot_s:g}  # by the differences of the times")
    else:
        out.append(f"#slot_s = 15  # {FILL_IN} if you know it: the length of a time slot in seconds")
    out.append(f'#time_marks = "end"  # {FILL_IN} where the times mark the end of a slot')
    if slots.step_s is not None:
        out.append(f"time_step_s = {slots.step_s:g}  # the times have no seconds")
    if roles.decimal != ".":
        out.append(f"decimal = {plain(roles.decimal)}")
    empty = roles.empty | (draft.second[1].empty if draft.second else set())
    if empty:
        out.append(f"empty = {listed(sorted(empty))}")
    skipped = draft.table.header_rows and not _has_header(draft.table)
    if skipped:
        header = look.lines[draft.table.header_rows[0]].text
        out.append(f"skip = {listed(['^' + literal(header) + '$'])}  # the line that names the columns")
    return out


def _has_header(table: Table) -> bool:
    return (
        isinstance(table.way, SeparatedWay)
        and bool(table.way.header)
        and not table.way.rest
        and not any(table.way.suffixes)
    )


def _constants(draft: Draft) -> list[str]:
    roles = draft.roles
    out = ["", "[constants]"]
    if "receiver" not in roles.names.values():
        out.append(f'#receiver = "hut"  # {FILL_IN}: your name for the receiver')
    if not draft.dial_known:
        out.append(f"#dial_hz = 7078000  # {FILL_IN}: the dial in Hz (or dial_khz, dial_mhz)")
    out.append('#place = "JN58td"  # if you like: the receiver\'s locator; with it and')
    out.append('#antenna = "wire"  # the antenna each file begins with a setup')
    return out


def _name(draft: Draft) -> list[str]:
    if draft.name_date is None or "date" in draft.others.carried:
        return []
    date, forms, _ = draft.name_date
    pattern = re.sub(r"[0-9]+", lambda digits: f"[0-9]{{{len(digits[0])}}}", literal(date))
    out = ["", "[name]  # the date in the file's name", f"pattern = {text_of(f'(?P<date>{pattern})')}"]
    out.append(
        f"date_form = {plain(forms[0])}"
        + (f"  # NOT SURE: or {' or '.join(forms[1:])}" if len(forms) > 1 else "")
    )
    return out


def _values(draft: Draft) -> list[str]:
    out: list[str] = []
    for name, table in draft.roles.values.items():
        if name in draft.roles.names.values():
            out += ["", f"[values.{name}]"]
            out += [f"{plain(word)} = {plain(meaning)}" for word, meaning in sorted(table.items())]
    return out


def _message(draft: Draft) -> list[str]:
    calls = draft.roles.calls
    if not calls.message:
        return []
    out = ["", "[message]  # how the text gives sender, addressee and locator"]
    if calls.patterns:
        out.append("# The sender comes first here, by the locators or by the column of senders.")
        out.append("patterns = [")
        out += [f"    {plain(pattern)}," for pattern in calls.patterns]
        out.append("]")
    return out
