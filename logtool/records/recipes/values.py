"""SQL that turns the pieces of a line into the layout's values: units, empty words, value maps."""

from __future__ import annotations

from decimal import ROUND_HALF_UP, Decimal, InvalidOperation

from logtool.records.callsigns import UNRESOLVED
from logtool.records.quick import sql_text
from logtool.records.recipes.names import INTEGER_TARGETS, NUMBER_TARGETS, PIECES, WATTS, target_of
from logtool.records.recipes.recipe import Recipe

BLANKS = sql_text(" \t")
CALLS = ("sender", "addressee")
UNREADABLE = sql_text(
    "?"
)  # stands for what is no number, so that the judge sets the line aside by its column
_DECIMAL = "DECIMAL(24, 9)"


def column(name: str) -> str:
    """Return a name as SQL takes it even where it is a word of its own, like `order`."""
    return f'"{name}"'


def trimmed(text: str) -> str:
    """Return SQL for a text without blanks round it; most have none, and to look is cheaper than to trim."""
    return (
        f"CASE WHEN {text} < '!' OR ends_with({text}, ' ') OR ends_with({text}, chr(9))"
        f" THEN trim({text}, {BLANKS}) ELSE {text} END"
    )


def is_blank_sql(text: str) -> str:
    """Return the condition that a text has nothing but spaces and TABs, which come before all that is visible."""
    return f"({text} < '!' AND trim({text}, {BLANKS}) = '')"


def cleaned_sql(raw: str, piece: str, recipe: Recipe) -> str:
    """Return SQL for a piece without blanks round it; null where it is empty or stands for nothing."""
    text = f"nullif({trimmed(raw)}, '')"
    if recipe.empty:
        text = f"CASE WHEN {text} NOT IN ({', '.join(map(sql_text, recipe.empty))}) THEN {text} END"
    if piece in recipe.values:
        cases = " ".join(f"WHEN {sql_text(a)} THEN {sql_text(b)}" for a, b in recipe.values[piece].items())
        text = f"nullif(CASE {text} {cases} ELSE {text} END, '')"
    return text


def value_sql(text: str, piece: str, recipe: Recipe) -> str:
    """Return SQL for the value, as the layout writes it, of a cleaned piece."""
    target = target_of(piece)
    if target in NUMBER_TARGETS:
        return _number_sql(text, piece, recipe.decimal)
    if target in CALLS:
        bare = f"substring({text}, 2, length({text}) - 2)"
        return (
            f"CASE WHEN starts_with({text}, '<') AND ends_with({text}, '>')"
            f" THEN nullif({bare}, {sql_text(UNRESOLVED[1:-1])}) ELSE {text} END"
        )
    if target == "text":
        escaped = f"replace(replace({text}, '\\', '\\\\'), chr(9), '\\t')"
        if any(rule.form.json for rule in recipe.rules):  # only there can a piece have more than one line
            escaped = f"replace(replace({escaped}, chr(10), '\\n'), chr(13), '\\r')"
        return escaped
    if target == "locator" and recipe.never_locators:
        words = ", ".join(sql_text(word.upper()) for word in recipe.never_locators)
        return f"CASE WHEN upper({text}) NOT IN ({words}) THEN {text} END"
    return text


def assisted_sql(text: str) -> str:
    """Return the condition that a call sign stands in brackets: a short code that the decoder resolved."""
    return f"(starts_with({text}, '<') AND {text} <> {sql_text(UNRESOLVED)})"


def constant_value(piece: str, value: str) -> tuple[str, str]:
    """Return target and value, as the layout writes it, of a constant.

    >>> constant_value("dial_khz", "7041.5")
    ('dial_hz', '7041500')
    """
    target = target_of(piece)
    if target not in NUMBER_TARGETS or (
        piece not in WATTS and PIECES[piece].factor == "1" and "." not in value
    ):
        return target, value
    places = "0.001" if piece in WATTS else "1" if target in INTEGER_TARGETS else "0.000001"
    try:
        number = Decimal(value) * Decimal(PIECES[piece].factor)
        if piece in WATTS:
            number = 10 * number.log10() + 30
        return target, f"{number.quantize(Decimal(places), ROUND_HALF_UP).normalize():f}"
    except InvalidOperation:
        return target, UNREADABLE[1:-1]


def _number_sql(text: str, piece: str, decimal: str) -> str:
    target, factor = target_of(piece), PIECES[piece].factor
    if decimal != ".":
        text = f"replace({text}, {sql_text(decimal)}, '.')"
    if piece in WATTS:
        watts = f"try_cast({text} AS DOUBLE) * {factor}"
        number = (
            f"CASE WHEN {watts} > 0 THEN try_cast(round(10 * log10({watts}) + 30, 3) AS DECIMAL(18, 3)) END"
        )
    elif target in INTEGER_TARGETS:
        if factor == "1":
            whole = f"coalesce({_whole(text, factor)}, {UNREADABLE})"
            unsigned = f"CASE WHEN starts_with({text}, '+') THEN substring({text}, 2) ELSE {text} END"
            return f"CASE WHEN contains({text}, '.') THEN {whole} ELSE {unsigned} END"
        return f"CASE WHEN {text} IS NOT NULL THEN coalesce({_whole(text, factor)}, {UNREADABLE}) END"
    elif factor == "1":
        return f"CASE WHEN starts_with({text}, '+') THEN substring({text}, 2) ELSE {text} END"
    else:
        number = f"try_cast(try_cast({text} AS {_DECIMAL}) * {factor} AS DECIMAL(24, 6))"
    return f"CASE WHEN {text} IS NOT NULL THEN coalesce({trimmed_sql(number)}, {UNREADABLE}) END"


def _whole(text: str, factor: str) -> str:
    return f"try_cast(round(try_cast({text} AS {_DECIMAL}) * {factor}) AS BIGINT)::VARCHAR"


def trimmed_sql(number: str) -> str:
    """Return SQL for a decimal number as text without zeros at its end."""
    return f"rtrim(rtrim(({number})::VARCHAR, '0'), '.')"
