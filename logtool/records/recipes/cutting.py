"""SQL that cuts each line of a block into the pieces that the first matching rule names."""

from __future__ import annotations

from logtool.records.quick import sql_text
from logtool.records.recipes.names import target_of
from logtool.records.recipes.patterns import groups_of
from logtool.records.recipes.recipe import BAD_ENCODING, NO_RULE, SKIP, SPACE, Recipe, Rule
from logtool.records.recipes.timeforms import date_sql, time_sql
from logtool.records.recipes.values import (
    BLANKS,
    CALLS,
    assisted_sql,
    cleaned_sql,
    column,
    is_blank_sql,
    value_sql,
)

# What a line is where it is none of the rules, which count from 0.
BLANK, NONE, ENCODING, SKIPPED, HEADER = -1, -2, -3, -4, -5
REASON_OF = {NONE: NO_RULE, ENCODING: BAD_ENCODING}
NO_COLUMN = "''"  # SQL for a piece whose column this file does not have
_ASSISTED = "assisted"
_WHOLE = "_whole"  # names the whole line among a pattern's groups, and no piece
_ANY_BLANKS = r"[ \t]+"


def targets_of(recipe: Recipe) -> list[str]:
    """Return what the pieces of all rules become, without times and dates, in the order of their names."""
    pieces = {piece for rule in recipe.rules for piece in rule.pieces}
    targets = {target_of(piece) for piece in pieces}
    if targets & set(CALLS):
        targets.add(_ASSISTED)
    return sorted(targets - {"time", "date"})


def parsed_sql(recipe: Recipe, headers: dict[int, list[str]], header_line: str | None) -> str:
    """Return SQL of a relation of i, rule, stamp_us, lacking, day_us, lost_date and the targets, of `block`.

    Parameters
    ----------
    recipe : Recipe
        What the lines are.
    headers : dict
        For each rule whose columns a header names, the piece of each column of this file.
    header_line : str, optional
        That header, to be told from the other lines.
    """
    first = [f"WHEN {is_blank_sql('line')} THEN {BLANK}", f"WHEN bad THEN {ENCODING}"]
    if header_line is not None:
        first.append(f"WHEN line = {sql_text(header_line)} THEN {HEADER}")
    first += [f"WHEN regexp_matches(line, {sql_text(pattern)}) THEN {SKIPPED}" for pattern in recipe.skip]
    relation = f"SELECT i, line, (CASE {' '.join(first)} END)::INTEGER AS rule FROM block"
    cuts = [_Cut(rule, f"m{k}", headers.get(k)) for k, rule in enumerate(recipe.rules)]
    for k, (rule, cut) in enumerate(zip(recipe.rules, cuts, strict=True)):
        relation = f"SELECT *, CASE WHEN rule IS NULL THEN {cut.sql} END AS m{k} FROM ({relation})"
        holds = " AND ".join([cut.holds, *_conditions(rule, cut, recipe)])
        relation = f"""SELECT * REPLACE (
            CASE WHEN rule IS NULL AND coalesce({holds}, false) THEN {k} ELSE rule END AS rule) FROM ({relation})"""
    pieces = [
        f"{cleaned_sql(cut.piece(piece), piece, recipe)} AS {_cleaned(k, piece)}"
        for k, (rule, cut) in enumerate(zip(recipe.rules, cuts, strict=True))
        for piece in rule.pieces
    ]
    relation = f"SELECT {', '.join(['i', f'coalesce(rule, {NONE}) AS rule', *pieces])} FROM ({relation})"
    times = [_time_of(k, rule) for k, rule in enumerate(recipe.rules)]
    lost_date = _by_rule([_lost_date(k, rule) for k, rule in enumerate(recipe.rules)], "BOOLEAN")
    columns = [
        "i",
        "rule",
        f"{_by_rule([time for time, _ in times], 'BIGINT')} AS stamp_us",
        f"{_by_rule([lacking for _, lacking in times], 'INTEGER')} AS lacking",
        f"{_by_rule([_day_of(k, rule) for k, rule in enumerate(recipe.rules)], 'BIGINT')} AS day_us",
        f"coalesce({lost_date}, false) AS lost_date",
    ]
    for target in targets_of(recipe):
        values = [_value_of(target, k, rule, recipe) for k, rule in enumerate(recipe.rules)]
        columns.append(f"{_by_rule(values, 'VARCHAR')} AS {column(target)}")
    return f"SELECT {', '.join(columns)} FROM ({relation})"


def _cleaned(k: int, piece: str) -> str:
    """Return the name of the column of a rule's cleaned piece."""
    return column(f"p{k}_{piece}")


class _Cut:
    """One rule's way of cutting a line: SQL of the whole, of the condition that it holds, and of each piece."""

    def __init__(self, rule: Rule, name: str, header: list[str] | None) -> None:
        self._raw: dict[str, str] = {}
        form = rule.form
        if form.pattern is not None:
            names = [group or f"_{i}" for i, group in enumerate(groups_of(form.pattern))]
            self._cut_by_pattern(name, form.pattern, names)
        elif form.separator == SPACE:
            self._cut_by_blanks(name, list(form.columns), more=form.more_columns)
        elif form.separator is not None:
            columns = header if header is not None else list(form.columns)
            self.sql = _split_sql(form.separator)
            self.holds = f"len({name}) {'>=' if form.more_columns else '='} {len(columns)}"
            self._raw = {piece: f"{name}[{i}]" for i, piece in enumerate(columns, 1) if piece}
        elif form.fixed:
            spans = {
                piece: f"substring(line, {first}" + (f", {last - first + 1})" if last else ")")
                for piece, (first, last) in form.fixed.items()
            }
            self.sql = (
                f"struct_pack({', '.join(f'{column(piece)} := {span}' for piece, span in spans.items())})"
            )
            self.holds = f"{name} IS NOT NULL"
            self._raw = {piece: f"{name}.{column(piece)}" for piece in spans}
        else:
            paths = [sql_text("$" + "".join(f'."{part}"' for part in path)) for path in form.json.values()]
            is_object = f"starts_with(ltrim(line, {BLANKS}), '{{') AND json_valid(line)"
            self.sql = f"CASE WHEN {is_object} THEN json_extract_string(line, [{', '.join(paths)}]) END"
            self.holds = f"{name} IS NOT NULL"
            self._raw = {piece: f"{name}[{i}]" for i, piece in enumerate(form.json, 1)}

    def _cut_by_pattern(self, name: str, pattern: str, groups: list[str]) -> None:
        listed = ", ".join(sql_text(group) for group in [_WHOLE, *groups])
        self.sql = f"regexp_extract(line, {sql_text(f'^({pattern})$')}, [{listed}])"
        self.holds = f"{name}.{_WHOLE} <> ''"
        self._raw = {group: f"{name}.{column(group)}" for group in groups}

    def _cut_by_blanks(self, name: str, columns: list[str], *, more: bool) -> None:
        words = [r"([^ \t]+)"] * len(columns)
        if not more:
            words[-1] = r"([^ \t].*)"
        pattern = r"[ \t]*" + _ANY_BLANKS.join(words) + (r"(?:[ \t].*)?" if more else "")
        self._cut_by_pattern(name, pattern, [column or f"_{i}" for i, column in enumerate(columns)])

    def piece(self, name: str) -> str:
        """Return SQL of a piece as it stands in the line."""
        return self._raw.get(name, NO_COLUMN)


def _split_sql(separator: str) -> str:
    """Return SQL that splits a line at a character, fields in double quotes after RFC 4180."""
    escaped = "\\" + separator if separator in "|.^$*+?()[]{}\\" else separator
    in_class = "\\" + separator if separator in "^]\\-" else separator
    field = f'{escaped}("(?:[^"]|"")*"|(?:[^"{in_class}][^{in_class}]*)?)'
    quoted = f"{sql_text(separator)} || line"
    return f"""CASE WHEN NOT contains(line, '"') THEN string_split(line, {sql_text(separator)})
        WHEN regexp_full_match({quoted}, {sql_text(f"({field})*")}) THEN list_transform(
        regexp_extract_all({quoted}, {sql_text(field)}, 1),
        lambda x: CASE WHEN starts_with(x, '"') THEN replace(substring(x, 2, length(x) - 2), '""', '"') ELSE x END)
        END"""


def _conditions(rule: Rule, cut: _Cut, recipe: Recipe) -> list[str]:
    """Return the further SQL conditions that a line is of a rule's kind."""
    conditions = [
        f"regexp_full_match(trim({cut.piece(piece)}, {BLANKS}), {sql_text(pattern)})"
        for piece, pattern in rule.where.items()
    ]
    if rule.form.fixed and "time" in rule.pieces:
        conditions.append(
            f"{time_sql(cleaned_sql(cut.piece('time'), 'time', recipe), rule.time_form)[0]} IS NOT NULL"
        )
    if rule.form.json and "time" in rule.pieces:
        conditions.append(f"{cut.piece('time')} IS NOT NULL")
    return conditions


def _by_rule(values: list[str | None], kind: str) -> str:
    cases = " ".join(f"WHEN {k} THEN {value}" for k, value in enumerate(values) if value is not None)
    return f"(CASE rule {cases} END)::{kind}" if cases else f"NULL::{kind}"


def _time_of(k: int, rule: Rule) -> tuple[str | None, str | None]:
    if "time" not in rule.pieces or not rule.is_record:
        return None, None
    time, lacking = time_sql(_cleaned(k, "time"), rule.time_form)
    lost = _lost_date(k, rule)
    return (f"CASE WHEN NOT coalesce({lost}, false) THEN {time} END" if lost else time), lacking


def _day_of(k: int, rule: Rule) -> str | None:
    if "date" not in rule.pieces or rule.date_form is None or rule.kind == SKIP:
        return None
    return date_sql(_cleaned(k, "date"), rule.date_form)


def _lost_date(k: int, rule: Rule) -> str | None:
    """Return the condition that a line has a date which cannot be read."""
    day_us = _day_of(k, rule)
    return None if day_us is None else f"{_cleaned(k, 'date')} IS NOT NULL AND {day_us} IS NULL"


def _value_of(target: str, k: int, rule: Rule, recipe: Recipe) -> str | None:
    values = [
        value_sql(_cleaned(k, piece), piece, recipe) for piece in rule.pieces if target_of(piece) == target
    ]
    if target == _ASSISTED:
        values += [
            f"CASE WHEN {assisted_sql(_cleaned(k, call))} THEN '1' END"
            for call in CALLS
            if call in rule.pieces
        ]
    if not values:
        return None
    return values[0] if len(values) == 1 else f"coalesce({', '.join(values)})"
