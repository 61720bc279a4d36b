"""The text of a recipe's rules."""

from __future__ import annotations

import re

from logtool.suggest.clusters import OtherRule
from logtool.suggest.draft import Draft
from logtool.suggest.order_way import OrderWay
from logtool.suggest.pairs import PairsWay
from logtool.suggest.roles import Roles
from logtool.suggest.structured import JsonWay
from logtool.suggest.tables import Table
from logtool.suggest.timeforms import ISO
from logtool.suggest.toml import comment, inline, plain, text_of
from logtool.suggest.values import quoted

_CLOCK_PATTERNS = {"%H": "[0-9]{1,2}", "%I": "[0-9]{1,2}", "%M": "[0-9]{2}", "%S": "[0-9]{2}", "%f": "[0-9]{1,6}",
                   "%p": "[AaPp][Mm]", "%Y": "[0-9]{4}", "%y": "[0-9]{2}", "%m": "[0-9]{1,2}", "%d": " ?[0-9]{1,2}",
                   "%b": "[A-Za-z]{3}", "%B": "[A-Za-z]+", "%j": "[0-9]{3}"}  # fmt: skip


_ISO_PATTERN = (
    "[0-9]{4}-[0-9]{2}-[0-9]{2}[T ][0-9]{2}:[0-9]{2}(?::[0-9]{2})?(?:[.,][0-9]+)?"
    "(?: ?Z| ?[+-][0-9]{2}:?[0-9]*)?"
)


def literal(text: str) -> str:
    return "".join("\\" + c if c in ".^$*+?()[]{}|\\" else r"\t" if c == "\t" else c for c in text)


def rules_text(draft: Draft) -> list[str]:
    out: list[str] = []
    for rule in draft.others.rules:
        out += _other_rule(rule)
    out += _heard(draft, draft.table, draft.roles, "")
    if draft.second:
        out += _heard(draft, *draft.second, "heard-shorter")
    return out


def _other_rule(rule: OtherRule) -> list[str]:
    out = ["", "[[line]]"]
    for remark in rule.remarks:
        out += comment(remark)
    out.append(f"kind = {plain(rule.kind)}")
    if rule.name != rule.kind:
        out.append(f"name = {plain(rule.name)}")
    return out + rule.lines


def _heard(draft: Draft, table: Table, roles: Roles, rule_name: str) -> list[str]:
    names = dict(sorted(roles.names.items()))
    where = table.where | roles.where
    for n, k in enumerate(k for k in where if k not in names):
        names[k] = f"state_{n + 1}" if n else "state"
    forms: dict[int, str] = {}
    for k, name in names.items():
        if k in where and isinstance(table.way, OrderWay):
            forms[k] = where[k]
        if name == "time" and roles.times.time_form not in ("unix_s", "unix_ms"):
            forms[k] = _clock_pattern(roles.times.time_form)
        if name == "date":
            forms[k] = _clock_pattern(roles.times.date_form)
    way = table.way
    variants = way.rules(names) if isinstance(way, PairsWay) else [way.rule(names, forms)]
    out: list[str] = []
    for number, lines in enumerate(variants, 1):
        out += ["", "[[line]]"]
        if number == 1:
            out += _remarks(draft, table, roles)
        out.append('kind = "heard"')
        if rule_name:
            out.append(f"name = {plain(rule_name)}")
        if number > 1:
            out.append(f'name = "heard-{number}"  # the same with its parts in another order')
        out += lines
        if roles.times.time_form != ISO:
            out.append(f"time_form = {plain(roles.times.time_form)}")
        if "date" in names.values():
            out.append(f"date_form = {plain(roles.times.date_form)}")
        guards = {names[k]: text_of(form) for k, form in where.items()}
        if (
            "time" not in guards
            and draft.others.left
            and not lines[0].startswith("pattern")
            and "time" in names.values()
        ):
            k = next(k for k, name in names.items() if name == "time")
            if k in forms and not isinstance(way, JsonWay):
                guards["time"] = text_of(forms[k])
        if guards:
            out.append(f"where = {inline(guards)}")
    return out


def _clock_pattern(form: str) -> str:
    if form == ISO:
        return _ISO_PATTERN
    out = ""
    for piece in re.split(r"(%[A-Za-z])", form):
        if piece in _CLOCK_PATTERNS:
            out += _CLOCK_PATTERNS[piece]
        else:
            out += literal(piece).replace(" ", " +")
    return out


def _remarks(draft: Draft, table: Table, roles: Roles) -> list[str]:
    out = []
    example = draft.look.lines[table.rows[0]].text.strip()
    shown = "".join(c if c.isprintable() else "?" for c in example)
    out.append(f"# as: {shown[:100]}")
    for k, column in enumerate(table.columns):
        name = roles.names.get(k, "")
        note = roles.notes.get(k, "")
        if name:
            unsure = any(d.essential and name.split("_")[0] in d.about for d in draft.doubts)
            out += comment(
                f"{column.label} is {name}"
                + (f": {note}" if note else "")
                + (" (NOT SURE, see above)" if unsure else "")
            )
        elif any(column.values) and not column.literal:
            out += comment(f"{column.label} is not read: {note or 'see above'} ({quoted(column.values, 2)})")
    return out
