"""SQL that makes lines of the layout from the pieces of a block: carried values, constants, messages."""

from __future__ import annotations

from logtool.records.layout import COLUMN_NAMES, KNOWN_KEYS, MAX_LINE_BYTES
from logtool.records.marks import MARK, PASSED_OVER
from logtool.records.quick import sql_text
from logtool.records.recipes.cutting import BLANK, ENCODING, HEADER, NONE, SKIPPED
from logtool.records.recipes.names import COLUMN_TARGETS, target_of
from logtool.records.recipes.patterns import groups_of
from logtool.records.recipes.recipe import BAD_ENCODING, BAD_TIME, NO_DATE, NO_RULE, Recipe, Rule
from logtool.records.recipes.values import (
    CALLS,
    UNREADABLE,
    assisted_sql,
    column,
    constant_value,
    trimmed_sql,
    value_sql,
)

MESSAGE_PARTS = ("sender", "addressee", "locator", "report_db", "power_dbm")
_OF_SETUPS = ("place", "antenna")  # values that lines of other kinds take only from themselves
_EVERYWHERE = ("receiver", "dial_hz", "signal_hz")  # values that lines of every kind take from elsewhere too
_OF_EVENTS = ("on_s", "dbfs", "peak_dbfs", "order", "agc", "temperature_c")
_CONTROL = "[\x01-\x08\x0a-\x1f\x7f\x80-\x9f]"
_SIGNAL = "DECIMAL(24, 6)"


def said_sql(recipe: Recipe) -> str:
    """Return SQL of a relation of text and what each message of `parsed` says: sender, addressee and so on."""
    assert recipe.messages is not None
    which, cuts = [], []
    for k, pattern in enumerate(recipe.messages):
        names = ", ".join(sql_text(name or f"_{i}") for i, name in enumerate(groups_of(pattern)))
        which.append(f"WHEN regexp_full_match(message, {sql_text(pattern)}) THEN {k}")
        whole = sql_text(f"^(?:{pattern})$")
        cuts.append(f"CASE WHEN which = {k} THEN regexp_extract(message, {whole}, [{names}]) END AS s{k}")
    parts = []
    for part in MESSAGE_PARTS:
        found = [
            f"WHEN {k} THEN nullif(s{k}.{part}, '')"
            for k, pattern in enumerate(recipe.messages)
            if part in groups_of(pattern)
        ]
        raw = f"(CASE which {' '.join(found)} END)" if found else "NULL::VARCHAR"
        parts.append(f"{raw} AS raw_{part}")
    values = [f"{value_sql(f'raw_{part}', part, recipe)} AS {part}" for part in MESSAGE_PARTS]
    assisted = " OR ".join(f"coalesce({assisted_sql(f'raw_{call}')}, false)" for call in CALLS)
    return f"""
        SELECT text, {", ".join(values)}, CASE WHEN {assisted} THEN '1' END AS assisted
        FROM (SELECT text, {", ".join(parts)} FROM (
            SELECT text, which, {", ".join(cuts)} FROM (
                SELECT text, message, CASE {" ".join(which)} END AS which
                FROM (SELECT DISTINCT text, upper(text) AS message FROM parsed WHERE text IS NOT NULL))))"""


def carried_targets(recipe: Recipe) -> list[str]:
    """Return what lines carry for the lines after them."""
    return sorted({target_of(name) for rule in recipe.rules for name in rule.carry} - {"time", "date"})


def carrying(recipe: Recipe, target: str) -> list[int]:
    """Return the rules that carry a target."""
    return [k for k, rule in enumerate(recipe.rules) if target in {target_of(name) for name in rule.carry}]


def made_sql(recipe: Recipe, own: list[str], constants: dict[str, str], *, has_said: bool) -> str:
    """Return SQL of a relation of i, rule, time_us, receiver, dial_hz and out, the line in the layout.

    It reads `parsed` (see `cutting`), `timed` (i, time_us), `said`, and `carried_TARGET` (i, value).

    Parameters
    ----------
    recipe : Recipe
        What the lines become.
    own : list of str
        The targets that are columns of `parsed`.
    constants : dict
        Values that hold for the whole file: of its name and `[constants]`, by target.
    has_said : bool
        Whether there is a table `said`.
    """
    carried = carried_targets(recipe)
    joins = ["LEFT JOIN timed USING (i)"]
    if has_said:
        joins.append("LEFT JOIN said USING (text)")
    joins += [f"ASOF LEFT JOIN carried_{t} ON parsed.i >= carried_{t}.i" for t in carried]
    kept = [*COLUMN_TARGETS, *KNOWN_KEYS, *recipe.keep, "place", "signal_hz"]
    values, given = [], []
    for target in dict.fromkeys(kept):
        cases = []
        for k, rule in enumerate(recipe.rules):
            if not rule.is_record:
                continue
            value = _value_of(
                target, rule, recipe, own=own, carried=carried, constants=constants, has_said=has_said
            )
            if value != "NULL":
                cases.append((k, value))
        given += [target] if cases else []
        values.append(f"{_by_rule(cases)} AS {column(target)}")
    source = f"SELECT parsed.i, rule, stamp_us, lost_date, time_us, {', '.join(values)} FROM parsed {' '.join(joins)}"
    if "signal_hz" in given:
        source = _from_signal(source)
        given += ["dial_hz", "audio_hz"]
    columns = f"i, rule, {_time_us(recipe)} AS time_us, receiver, dial_hz, {_out(recipe, given)} AS out"
    return f"SELECT {columns} FROM ({source})"


def _by_rule(cases: list[tuple[int, str]]) -> str:
    if not cases:
        return "NULL::VARCHAR"
    return f"(CASE rule {' '.join(f'WHEN {k} THEN {value}' for k, value in cases)} END)::VARCHAR"


def _value_of(
    target: str,
    rule: Rule,
    recipe: Recipe,
    *,
    own: list[str],
    carried: list[str],
    constants: dict[str, str],
    has_said: bool,
) -> str:
    values = []
    if target in own:
        values.append(f"parsed.{column(target)}")
    if has_said and rule.kind == "heard" and target in (*MESSAGE_PARTS, "assisted"):
        values.append(f"said.{column(target)}")
    elsewhere = _takes_elsewhere(rule.kind, target)
    if elsewhere and target in carried:
        values.append(f"carried_{target}.value")
    ruled = dict(constant_value(name, value) for name, value in rule.constants.items())
    if target in ruled:
        values.append(sql_text(ruled[target]))
    elif elsewhere and target in constants:
        values.append(sql_text(constants[target]))
    if target == "locator" and rule.kind == "setup":
        values.append(
            _value_of("place", rule, recipe, own=own, carried=carried, constants=constants, has_said=False)
        )
    if target == "slot_s" and rule.kind == "setup" and recipe.slot_s:
        values.append(sql_text(recipe.slot_s))
    if not values:
        return "NULL"
    return values[0] if len(values) == 1 else f"coalesce({', '.join(values)})"


def _takes_elsewhere(kind: str, target: str) -> bool:
    """Return whether lines of a kind take a value also from earlier lines, the file's name and constants."""
    if kind == "setup":
        return target in (*_EVERYWHERE, *_OF_SETUPS, "mode", "order", "agc", "decoder", "temperature_c")
    if kind == "heard":
        return target not in (*_OF_SETUPS, *_OF_EVENTS)
    return target in _EVERYWHERE


def _from_signal(source: str) -> str:
    """Return the relation with the dial and the audio frequency that the signal's own frequency gives."""
    signal, audio = (f"try_cast({name} AS {_SIGNAL})" for name in ("signal_hz", "audio_hz"))
    below = f"try_cast(round({signal} - coalesce({audio}, 0)) AS BIGINT)::VARCHAR"
    above = trimmed_sql(f"try_cast({signal} - try_cast(dial_hz AS {_SIGNAL}) AS {_SIGNAL})")
    has_one = "dial_hz IS NULL AND signal_hz IS NOT NULL"
    dial_hz = f"CASE WHEN {has_one} THEN coalesce({below}, {UNREADABLE}) ELSE dial_hz END"
    has_both = "signal_hz IS NOT NULL AND dial_hz IS NOT NULL"
    audio_hz = (
        f"CASE WHEN audio_hz IS NULL AND {has_both} THEN coalesce({above}, {UNREADABLE}) ELSE audio_hz END"
    )
    return f"SELECT * REPLACE ({dial_hz} AS dial_hz, {audio_hz} AS audio_hz) FROM ({source})"


def _time_us(recipe: Recipe) -> str:
    """Return SQL of a record's time: the start of the slot, for heard lines whose times mark its end."""
    heard = [k for k, rule in enumerate(recipe.rules) if rule.kind == "heard"]
    if not (recipe.marks_end and recipe.slot_s and heard):
        return "time_us"
    slot_us = round(float(recipe.slot_s) * 1_000_000)
    return f"time_us - CASE WHEN rule IN ({', '.join(map(str, heard))}) THEN {slot_us} ELSE 0 END"


def _out(recipe: Recipe, given: list[str]) -> str:
    """Return SQL of the made line; the columns that nothing gives are left empty."""
    time = f"replace(make_timestamp({_time_us(recipe)})::VARCHAR, ' ', 'T') || 'Z'"
    kinds = " ".join(f"WHEN {k} THEN {sql_text(r.kind)}" for k, r in enumerate(recipe.rules) if r.is_record)
    fields = [
        time,
        f"CASE rule {kinds} END",
        *(f"coalesce({column(name)}, '')" for name in COLUMN_NAMES[2:-1]),
    ]
    # A value with `; ` in it would pass for two keys: it is made one that the judge does not take.
    keys = [
        f"{sql_text(name + '=')} || replace({column(name)}, '; ', ';;')"
        for name in (*KNOWN_KEYS, *recipe.keep)
        if name in given
    ]
    more = f"concat_ws('; ', {', '.join(keys)})" if keys else "''"
    line = f"concat_ws(chr(9), {', '.join(fields)}, {more})"
    passed_over = [k for k, rule in enumerate(recipe.rules) if not rule.is_record]
    nothing = ", ".join(map(str, [*passed_over, SKIPPED, HEADER]))
    return f"""CASE WHEN lost_date THEN {sql_text(MARK + BAD_TIME)}
        WHEN rule IN ({nothing}) THEN {sql_text(PASSED_OVER)}
        WHEN rule = {BLANK} THEN ''
        WHEN rule = {NONE} THEN {sql_text(MARK + NO_RULE)}
        WHEN rule = {ENCODING} THEN {sql_text(MARK + BAD_ENCODING)}
        WHEN stamp_us IS NULL THEN {sql_text(MARK + BAD_TIME)}
        WHEN time_us IS NULL THEN {sql_text(MARK + NO_DATE)}
        ELSE {line} END"""


def guarded_sql(made: str, *, has_control: bool) -> str:
    """Return the made relation with a mark for lines that the engine's reader would misread."""
    cases = [f"WHEN strlen(out) > {MAX_LINE_BYTES} THEN {sql_text(MARK + 'too-long')}"]
    if has_control:
        cases.append(
            f"WHEN regexp_matches(out, {sql_text(_CONTROL)}) OR contains(out, chr(0))"
            f" THEN {sql_text(MARK + 'control-character')}"
        )
    return f"SELECT * REPLACE (CASE {' '.join(cases)} ELSE out END AS out) FROM ({made})"
