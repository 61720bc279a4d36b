"""Read and check a recipe: every key, name and pattern, with the line where something is wrong."""

from __future__ import annotations

import codecs
import os
import re
import tomllib
from pathlib import Path

from logtool.errors import FileError
from logtool.records.layout import KEY_FORM, KINDS
from logtool.records.recipes.fields import Fields
from logtool.records.recipes.forming import form_of
from logtool.records.recipes.names import PIECES, target_of
from logtool.records.recipes.naming import OF_LINES, check_clean, check_names, constants_of
from logtool.records.recipes.patterns import groups_of, template_pattern
from logtool.records.recipes.recipe import (
    BAD_ENCODING,
    CARRY,
    HEADER_RULE,
    NO_RULE,
    RECIPE_VERSION,
    SKIP,
    Recipe,
    Rule,
)

DEFAULT_MESSAGES = (  # common practice, no source: the station called first, the caller second
    "{sender} {locator} {power_dbm}",
    "CQ|QRZ [{word}] [DE] {sender} [{locator}] ...",
    "{addressee} [DE] {sender} [R] {locator} ...",
    "{addressee} [DE] {sender} {report_db} ...",
    "{addressee} [DE] {sender} ...",
    "DE {sender} [{locator}] ...",
)
NEVER_LOCATORS = ("RR73",)
_FORMS = ("pattern", "separator", "fixed", "json")
_RULE_NAME = r"[a-z][a-z0-9-]{0,31}"
_OF_LEDGER = (HEADER_RULE, NO_RULE, BAD_ENCODING)  # what the ledger calls lines that are of no rule
_MOST_KIB = 1024
# Columns of the engine's tables, which a kept name would hide.
_IN_USE = frozenset(["i", "rule", "stamp_us", "lacking", "day_us", "lost_date", "time_us", "whole_name"])


def load_recipe(path: str | os.PathLike[str]) -> Recipe:
    """Return the recipe in a file.

    Raises
    ------
    FileError
        Where the file cannot be read.
    RecipeError
        Where something in it cannot be used; the message names the file, the line and the key.
    """
    try:
        with Path(path).open("rb") as file:
            raw = file.read((_MOST_KIB << 10) + 1)
    except OSError as error:
        raise FileError(f"{path}: the recipe cannot be read ({error.strerror}); check the path") from error
    if len(raw) > _MOST_KIB << 10:
        raise FileError(f"{path}: it is over {_MOST_KIB} KiB, so it is no recipe; did you name the log?")
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise FileError(f"{path}: a recipe is UTF-8 text, and this is not; save it as UTF-8") from error
    return recipe_of(text, os.fspath(path))


def recipe_of(text: str, name: str) -> Recipe:
    """Return the recipe that a text is; `name` stands for it in errors. See `load_recipe`."""
    try:
        told = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise Fields({}, text, name).error(
            None, f"it is no TOML ({error}); is it the recipe? A pattern is best written in '...'"
        ) from error
    top = Fields(told, text, name)
    version = top.take("recipe", int)
    if version != RECIPE_VERSION:
        raise top.error("recipe", f"write recipe = {RECIPE_VERSION}, the version that this program reads")
    keep = top.words("keep")
    for word in keep:
        if not re.fullmatch(KEY_FORM, word) or word in PIECES or word in _IN_USE:
            raise top.error(
                "keep", f"{word!r} is no name for `more`: small letters, digits, _; not one in use"
            )
    rules = _rules(top, keep)
    named = top.table("name")
    name_pattern = named.pattern("pattern")
    name_pieces = () if name_pattern is None else tuple(name for name in groups_of(name_pattern) if name)
    check_names(named, "pattern", name_pieces, keep)
    for word in {*name_pieces} & {*OF_LINES} - {"date"}:
        raise named.error("pattern", f"{word!r} cannot come from a file's name: it belongs to a line")
    message = top.table("message") if "message" in top else None
    recipe = Recipe(
        name=name,
        text=text,
        rules=rules,
        about=top.take("about", str, ""),
        encoding=_encoding(top),
        zone=_zone(top),
        slot_s=top.number("slot_s", 0.1, 3600),
        marks_end=top.one_of("time_marks", ("start", "end")) == "end",
        time_step_s=float(step) if (step := top.number("time_step_s", 1, 3600)) else None,
        decimal=top.one_of("decimal", (".", ",")),
        empty=top.words("empty"),
        skip=top.patterns("skip"),
        keep=keep,
        constants=constants_of(top.table("constants"), keep),
        name_pattern=name_pattern,
        name_date_form=named.date_form("date_form"),
        values=_values(top, {*name_pieces, *(piece for rule in rules for piece in rule.pieces)}),
        messages=None if message is None else _messages(message),
        never_locators=NEVER_LOCATORS if message is None else message.words("never_locators", NEVER_LOCATORS),
    )
    for fields in (top, named, *([message] if message else [])):
        fields.finish()
    if "name" in top and not name_pieces:
        raise named.error("pattern", "it needs a pattern with a named group, like (?P<receiver>...)")
    _check_whole(top, recipe)
    return recipe


def _encoding(top: Fields) -> str:
    encoding: str = top.take("encoding", str, "utf-8")
    try:
        info = codecs.lookup(encoding)
        "".encode(info.name)  # some codecs are of other things than text
    except (LookupError, ValueError) as error:
        raise top.error(
            "encoding", f"there is no encoding {encoding!r}; common are utf-8, utf-16, latin-1, cp1252"
        ) from error
    return info.name


def _zone(top: Fields) -> str:
    from zoneinfo import ZoneInfo

    zone: str = top.take("zone", str, "UTC")
    try:
        ZoneInfo(zone)
    except (KeyError, ValueError, OSError) as error:
        raise top.error(
            "zone", f"{zone!r} is no time zone; write its IANA name, like UTC or Atlantic/Azores"
        ) from error
    return zone


def _rules(top: Fields, keep: tuple[str, ...]) -> tuple[Rule, ...]:
    tables = top.tables("line")
    if not tables:
        raise top.error(None, "it has no [[line]], so no line could be read; see docs/recipes.md")
    rules: list[Rule] = []
    for fields in tables:
        rule = _rule(fields, keep)
        fields.finish()
        if rule.name in {other.name for other in rules}:
            raise fields.error("kind", f"there are two rules called {rule.name!r}; give this one a name")
        rules.append(rule)
    return tuple(rules)


def _rule(fields: Fields, keep: tuple[str, ...]) -> Rule:
    kind = fields.one_of("kind", (*KINDS, CARRY, SKIP), needed=True)
    name = fields.take("name", str, kind)
    if not re.fullmatch(_RULE_NAME, name) or name in _OF_LEDGER:
        raise fields.error(
            "name", f"{name!r}: a rule's name has small letters, digits and -; not {', '.join(_OF_LEDGER)}"
        )
    given = [way for way in _FORMS if way in fields]
    if len(given) != 1:
        raise fields.error(
            "kind", f"it needs one of {', '.join(_FORMS)}; it has {' and '.join(given) or 'none'}"
        )
    form, pieces = form_of(fields, given[0])
    naming = "columns" if given[0] == "separator" else given[0]  # the key that names the pieces
    twice = sorted({piece for piece in pieces if pieces.count(piece) > 1})
    if twice:
        raise fields.error(naming, f"{twice[0]!r} stands twice; give one of them another name")
    for piece in pieces:
        if not re.fullmatch(KEY_FORM, piece):
            raise fields.error(naming, f"{piece!r}: a piece's name has small letters, digits and _")
    where = fields.strings("where")
    for piece, pattern in where.items():
        fields.check_pattern("where", pattern)
        if piece not in pieces:
            raise fields.error("where", f"{piece!r} is no piece of this line; it has {', '.join(pieces)}")
    wanted = tuple(piece for piece in pieces if piece not in where or piece in PIECES or piece in keep)
    check_names(fields, naming, wanted, keep)
    carry = fields.words("carry", wanted if kind == CARRY else ())
    for piece in carry:
        if piece not in wanted:
            raise fields.error("carry", f"{piece!r} is no piece of this line; it has {', '.join(wanted)}")
        if piece == "time" and "carry" in fields:
            raise fields.error("carry", "a time holds for its own line only; a `date` can be carried")
    if kind == CARRY and not carry:
        raise fields.error(naming, "a line of the kind `carry` needs a piece that has a name")
    time_form = fields.time_form("time_form", "iso")
    date_form = fields.date_form("date_form")
    if "date" in wanted and date_form is None:
        raise fields.error(
            naming, 'it has a piece `date`: say how it is written, like date_form = "%Y-%m-%d"'
        )
    if kind not in (CARRY, SKIP) and "time" not in wanted:
        raise fields.error(naming, f"a line of the kind `{kind}` needs a piece `time`")
    constants = constants_of(fields.table("constants"), keep)
    return Rule(name, kind, form, wanted, where, time_form, date_form, carry, constants)


def _values(top: Fields, pieces: set[str]) -> dict[str, dict[str, str]]:
    values = {}
    table = top.table("values")
    for name in list(table):
        if name not in pieces:
            raise table.error(name, f"no line has a piece {name!r}")
        values[name] = table.strings(name)
        for text in values[name].values():
            check_clean(table, name, text)
    return values


def _messages(fields: Fields) -> tuple[str, ...]:
    patterns = []
    for template in fields.words("patterns", DEFAULT_MESSAGES):
        try:
            patterns.append(template_pattern(template))
        except ValueError as error:
            raise fields.error("patterns", f"{template!r}: {error}") from error
        names = groups_of(patterns[-1])
        if len(set(names)) < len(names):
            raise fields.error("patterns", f"{template!r} names a part twice")
        if "sender" not in names:
            raise fields.error("patterns", f"{template!r} has no {{sender}}")
    return tuple(patterns)


def _check_whole(top: Fields, recipe: Recipe) -> None:
    """Stop where no line could ever become a record for want of a value that it needs."""
    anywhere = {target_of(name) for name in recipe.constants}
    if recipe.name_pattern:
        anywhere |= {target_of(name) for name in groups_of(recipe.name_pattern) if name}
    for rule in recipe.rules:
        anywhere |= {target_of(name) for name in rule.carry}
    if recipe.marks_end and recipe.slot_s is None:
        raise top.error("time_marks", 'time_marks = "end" needs slot_s, the length of a slot')
    if recipe.name_pattern and "date" in groups_of(recipe.name_pattern) and recipe.name_date_form is None:
        raise top.error("name", 'the date in the file\'s name needs date_form, like date_form = "%Y%m%d"')
    if not any(rule.is_record for rule in recipe.rules):
        raise top.error("line", 'no [[line]] makes a record; one needs kind = "heard"')
    for rule in recipe.rules:
        of_line = {target_of(name) for name in (*rule.pieces, *rule.constants)}
        own = anywhere | of_line
        if rule.is_record and "receiver" not in own:
            raise top.error(
                "constants", f'no receiver for lines {rule.name!r}: add receiver = "NAME" to [constants]'
            )
        if rule.kind in ("heard", "setup") and not own & {"dial_hz", "signal_hz"}:
            raise top.error(
                "constants",
                f"no dial for lines {rule.name!r}: add dial_hz = ... (or dial_khz) to [constants]",
            )
        if rule.kind == "watch" and "on_s" not in of_line:
            raise top.error(
                "constants", f"lines {rule.name!r} need on_s: add constants = {{ on_s = 15 }} to it"
            )
        if rule.kind == "noise" and "dbfs" not in of_line:
            raise top.error("constants", f"lines {rule.name!r} need a piece `dbfs`")
        if rule.kind == "setup" and not ("antenna" in own and (of_line & {"locator"} or "place" in own)):
            raise top.error(
                "constants",
                f"lines {rule.name!r} need a place and an antenna: add them to [constants] or to the line",
            )
