"""From a file to a first recipe for it, with what is in doubt."""

from __future__ import annotations

import os
from dataclasses import dataclass, replace

from logtool.suggest.checking import doubts_by_trial
from logtool.suggest.day_order import date_in_name
from logtool.suggest.doubts import Doubt
from logtool.suggest.draft import Draft
from logtool.suggest.fixed import fixed_table
from logtool.suggest.looking import Look, look_at
from logtool.suggest.numbers import spread_of
from logtool.suggest.order_way import OrderWay
from logtool.suggest.others import find_others
from logtool.suggest.pairs import PairsWay, pairs_table
from logtool.suggest.positions import order_table
from logtool.suggest.roles import Roles, find_roles
from logtool.suggest.slots import find_slots
from logtool.suggest.structured import SEPARATORS, SeparatedWay, json_table, separated_table
from logtool.suggest.tables import Table, holds_call, score
from logtool.suggest.timeforms import shared_forms
from logtool.suggest.values import given
from logtool.suggest.writing import no_structure, settle, written

_LEAST_SCORE = 1.5
_LEAST_SECOND = 5  # lines
_FIXED_BONUS = 0.05
_SIGN_WEIGHT = 1.5
_LOGTOOL = "# logtool layout"


@dataclass(frozen=True)
class Suggestion:
    """A recipe for an unknown text.

    Attributes
    ----------
    recipe : str
        TOML with comments. Lines with `FILL IN` say what only the user knows; as long as they are not filled in,
        the recipe is refused with a message that says so.
    doubts : tuple of str
        What the text does not tell, each beginning with the names of what may come out wrong.
    sure : bool
        Whether everything is decided that the text itself could tell. The zone of the times, which end of a slot
        they mark and what has to be filled in are for the user in any case.
    trial : str
        The recipe with stand-ins for what has to be filled in: to show how lines would be read, for nothing else.
        Empty where no structure was found.
    """

    recipe: str
    doubts: tuple[str, ...]
    sure: bool
    trial: str


def suggest(path: str | os.PathLike[str]) -> Suggestion:
    """Return a first recipe for a text log.

    What is not decided by the values themselves is left out or marked `NOT SURE`, and told in `doubts`.

    Parameters
    ----------
    path : str or path
        A file, plain, `.gz` or `.zst`. A sample of it is looked at.

    Raises
    ------
    UnreadableError
        Where the file cannot be read.
    """
    look = look_at(path)
    if look.trouble:
        return _without_structure(look, look.trouble)
    if look.lines[0].text.startswith(_LOGTOOL):
        return _without_structure(look, "it is a log in logtool's own layout, which needs no recipe")
    texts = [line.text for line in look.lines]
    table = best_table(texts)
    if table is None:
        return _without_structure(
            look, "no structure was found that most lines share and that holds call signs or times"
        )
    roles = find_roles(table, [look.lines[row].part for row in table.rows], look.name)
    if roles.times.time is None:
        return _without_structure(look, "no column of times was found")
    if not any(name in ("sender", "text", "addressee") for name in roles.names.values()):
        return _without_structure(look, "no column of call signs or messages was found")
    draft = _draft(look, table, roles)
    settle(draft)
    _, trial = written(draft)
    draft.doubts += doubts_by_trial(draft, trial, path)
    recipe, trial = written(draft)
    essential = [doubt for doubt in draft.doubts if doubt.essential]
    return Suggestion(recipe, tuple(str(doubt) for doubt in draft.doubts), not essential, trial)


def _without_structure(look: Look, why: str) -> Suggestion:
    doubt = Doubt("structure", why)
    return Suggestion(no_structure(look, why), (str(doubt), *map(str, look.doubts)), False, "")


def best_table(texts: list[str]) -> Table | None:
    """Return the way of cutting lines that explains most of them, or None where none explains enough."""
    found = json_table(texts)
    if found is not None and score(found, len(texts)) >= _LEAST_SCORE:
        return found
    tables = [separated_table(texts, separator) for separator in SEPARATORS]
    tables += [pairs_table(texts, sign) for sign in ("=", ":")]
    tables.append(order_table(texts))
    fixed = fixed_table(texts)
    ranked = [(_weighed(table, len(texts)), -k, table) for k, table in enumerate(tables) if table is not None]
    best = max(ranked, key=lambda one: one[:2])[2] if ranked else None
    if fixed is not None and (best is None or _is_better(fixed, best, len(texts))):
        best = fixed
    if best is None or score(best, len(texts)) < _LEAST_SCORE:
        return None
    if not any(shared_forms(given(column.values)) for column in best.columns):
        return None
    return best


def _weighed(table: Table, total: int) -> float:
    """Return the score of a table; signs that only separate columns speak for themselves."""
    way = table.way
    clear = (isinstance(way, SeparatedWay) and way.separator != ",") or (
        isinstance(way, PairsWay) and way.sign == "="
    )
    return score(table, total) * (_SIGN_WEIGHT if clear else 1.0)


def _is_better(fixed: Table, other: Table, total: int) -> bool:
    """Return whether fixed places read more lines, or more of them, than the other way."""
    if len(fixed.rows) < len(other.rows):
        return False
    return isinstance(other.way, OrderWay) and score(fixed, total) > score(other, total) * (1 + _FIXED_BONUS)


def _second(look: Look, table: Table, roles: Roles) -> tuple[Table, Roles] | None:
    """Return the messages whose lines lack a column that the others have, where they can be read too."""
    taken = set(table.rows) | set(table.header_rows)
    left = [i for i, line in enumerate(look.lines) if i not in taken and holds_call(line.text)]
    if len(left) < _LEAST_SECOND or not isinstance(table.way, OrderWay):
        return None
    second = order_table([look.lines[i].text for i in left])
    if second is None:
        return None
    second.rows = [left[row] for row in second.rows]
    second.way = replace(second.way, strict=True) if isinstance(second.way, OrderWay) else second.way
    found = find_roles(second, [look.lines[row].part for row in second.rows], look.name)
    names = set(found.names.values())
    if not names <= set(roles.names.values()) or "time" not in names or not names & {"sender", "text"}:
        return None
    if found.times.time_form != roles.times.time_form or found.times.date_form != roles.times.date_form:
        return None
    if (
        found.where
        or second.where
        or found.decimal != roles.decimal
        or not _alike(table, roles, second, found)
    ):
        return None
    if found.calls.message != roles.calls.message or found.values.keys() - roles.values.keys():
        return None
    table.strict = True
    table.way = replace(table.way, strict=True)
    return second, found


def _alike(table: Table, roles: Roles, second: Table, found: Roles) -> bool:
    """Return whether columns of one name hold numbers of one range in both tables."""
    places = {name: k for k, name in roles.names.items()}
    for k, name in found.names.items():
        ours, theirs = spread_of(table.columns[places[name]]), spread_of(second.columns[k])
        if (ours is None) != (theirs is None):
            return False
        if ours is not None and theirs is not None:
            room = max(ours.high - ours.low, 1.0) / 2
            if theirs.low < ours.low - room or theirs.high > ours.high + room:
                return False
            if abs(theirs.middle - ours.middle) > max(ours.p95 - ours.p5, 1.0) / 2:
                return False
    return True


def _draft(look: Look, table: Table, roles: Roles) -> Draft:
    times = roles.times
    second = _second(look, table, roles)
    named = date_in_name(look.name) if not times.with_year else None
    taken = set(table.rows) | set(table.header_rows) | (set(second[0].rows) if second else set())
    dial_known = roles.has("dial_hz") or (roles.has("signal_hz") and roles.has("audio_hz"))
    others = find_others(list(look.lines), taken, times, dated=times.dated, dial_known=dial_known)
    slots = find_slots(times.moments, times.time_form, [look.lines[row].part for row in table.rows])
    doubts = [*look.doubts, *table.doubts, *roles.doubts, *slots.doubts, *others.doubts]
    if second:
        said = {str(doubt) for doubt in doubts}
        lacking = ", ".join(sorted(set(roles.names.values()) - set(second[1].names.values())))
        doubts += [doubt for doubt in second[1].doubts if str(doubt) not in said and lacking]
        doubts.append(
            Doubt(
                "lines",
                f"some lines lack {lacking or 'a part'}; they have a rule of their own",
                essential=False,
            )
        )
    return Draft(look, table, roles, others, slots, named, second, doubts)
