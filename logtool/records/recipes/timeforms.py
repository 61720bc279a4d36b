"""How times and dates are written: their forms, and the SQL that reads them strictly."""

from __future__ import annotations

import re

from logtool.records.quick import sql_text

# A directive and how many characters it has, None where that varies.
DIRECTIVES = {
    "Y": 4, "y": 2, "m": 2, "d": 2, "j": 3, "H": 2, "I": 2, "M": 2, "S": 2, "f": None, "b": 3, "B": None, "p": 2,
    "z": None,
}  # fmt: skip
ISO, UNIX_S, UNIX_MS = "iso", "unix_s", "unix_ms"
WORD_FORMS = {UNIX_S: 1_000_000, UNIX_MS: 1_000}  # to microseconds
ABSOLUTE, LOCAL, YEARLESS, OF_DAY = range(
    4
)  # what a time lacks: nothing, its zone, its year too, its date too
_ISO = (
    r"[0-9]{4}-[0-9]{2}-[0-9]{2}[T ]([01][0-9]|2[0-3]):[0-9]{2}(:[0-9]{2}([.,][0-9]{1,6})?)?"
    r"(Z|[+-][0-9]{2}(:?[0-9]{2})?)?"
)
_ISO_DATE = "%Y-%m-%d"
_LEAP_YEAR = "2000"  # stands in for a year that is not written, so that 29 February can be read
_FRACTION_DIGITS = 6
_FAR_US = 253_402_300_800_000_000  # the year 10000; the engine cannot count much further
_DIRECTIVE = re.compile(r"%(.)", re.DOTALL)
_DIGITS = "YymdjHIMSf"


def form_fault(form: str) -> str | None:
    """Return what is wrong with the form of a time or date, or None.

    >>> form_fault("%H:%M:%Q")
    '%Q is no directive; there are %Y %y %m %d %j %H %I %M %S %f %b %B %p %z'
    >>> form_fault("%H%M%S") is None
    True
    """
    if form == ISO or form in WORD_FORMS:
        return None
    found = _DIRECTIVE.findall(form)
    for one in found:
        if one not in DIRECTIVES:
            return f"%{one} is no directive; there are {' '.join('%' + name for name in DIRECTIVES)}"
        if found.count(one) > 1:
            return f"%{one} stands twice"
    if not found:
        return (
            f"it names no part of a time; write it like %H:%M:%S, or one of {', '.join((ISO, *WORD_FORMS))}"
        )
    if form.endswith("%"):
        return "a % at its end"
    if ("I" in found) != ("p" in found):
        return "%I, the hour of twelve, and %p belong together"
    has_hour, has_date = {"H", "I"} & set(found), {"d", "j"} & set(found)
    if not has_hour and ({"M", "S", "f"} & set(found)):
        return "it has minutes or seconds and no hour"
    if has_hour and not has_date and ({"Y", "y", "m", "b", "B"} & set(found)):
        return "it has a part of a date and no day"
    if "d" in found and not ({"m", "b", "B"} & set(found)):
        return "it has a day and no month"
    if "j" in found and not ({"Y", "y"} & set(found)):
        return "%j, the day of the year, needs a year"
    if "z" in found and not (has_hour and has_date and {"Y", "y"} & set(found)):
        return "%z, the offset from UTC, needs a date with its year and a time"
    return None


def date_fault(form: str) -> str | None:
    """Return what is wrong with the form of a date that stands alone, or None.

    >>> date_fault("%d.%m.")
    'a date needs its day and year; one without a year goes into time_form, with its time'
    """
    found = set(_DIRECTIVE.findall(form))
    if form == ISO or form in WORD_FORMS or form_fault(form):
        return form_fault(form)
    if not (found & {"d", "j"} and found & {"Y", "y"}):
        return "a date needs its day and year; one without a year goes into time_form, with its time"
    return "%z belongs to a time" if "z" in found else None


def time_fault(form: str) -> str | None:
    """Return what is wrong with the form of a time, or None.

    >>> time_fault("%Y-%m-%d")
    'it has no hour'
    """
    if form == ISO or form in WORD_FORMS or form_fault(form):
        return form_fault(form)
    return None if {"H", "I"} & set(_DIRECTIVE.findall(form)) else "it has no hour"


def lacks(form: str) -> int:
    """Return what a time of this form lacks: `ABSOLUTE`, `LOCAL`, `YEARLESS` or `OF_DAY`."""
    found = set(_DIRECTIVE.findall(form))
    if form in WORD_FORMS or "z" in found:
        return ABSOLUTE
    if form == ISO or found & {"Y", "y"}:
        return LOCAL
    return YEARLESS if found & {"d"} else OF_DAY


def time_sql(text: str, form: str) -> tuple[str, str]:
    """Return SQL for a written time in microseconds (null where it is not of the form) and for what it lacks.

    A time that lacks its year is given in the year 2000, one that lacks its date since midnight.

    Parameters
    ----------
    text : str
        SQL of the text.
    form : str
        A form that `form_fault` finds nothing against.
    """
    if form in WORD_FORMS:
        number = f"try_cast({text} AS DECIMAL(24, 6))"
        within = f"abs({number}) < {_FAR_US // WORD_FORMS[form]}"
        return f"CASE WHEN {within} THEN ({number} * {WORD_FORMS[form]})::BIGINT END", str(ABSOLUTE)
    if form == ISO:
        read = f"epoch_us(try_cast(replace({text}, ',', '.') AS TIMESTAMPTZ))"
        zoned = f"regexp_matches({text}, '(Z|[+-][0-9]{{2}}(:?[0-9]{{2}})?)$')"
        return (
            f"CASE WHEN regexp_full_match({text}, {sql_text(_ISO)}) THEN {read} END",
            f"CASE WHEN regexp_matches({text}, ':.*(Z|[+-])') AND {zoned} THEN {ABSOLUTE} ELSE {LOCAL} END",
        )
    missing = lacks(form)
    if missing == YEARLESS:
        read = f"epoch_us(try_strptime({sql_text(_LEAP_YEAR + ' ')} || {text}, {sql_text('%Y ' + form)}))"
    else:
        read = f"epoch_us(try_strptime({text}, {sql_text(form)}))"
    if missing == OF_DAY:
        read = f"{read} - epoch_us(TIMESTAMP '1900-01-01')"
    strict = _length_sql(text, form)
    return (f"CASE WHEN {strict} THEN {read} END" if strict else read), str(missing)


def date_sql(text: str, form: str) -> str:
    """Return SQL for the midnight of a written date in microseconds, null where it is not of the form."""
    form = _ISO_DATE if form == ISO else form
    if form in WORD_FORMS:
        return f"{time_sql(text, form)[0]} // 86400000000 * 86400000000"
    strict = _length_sql(text, form)
    read = f"epoch_us(date_trunc('day', try_strptime({text}, {sql_text(form)})::TIMESTAMP))"
    return f"CASE WHEN {strict} THEN {read} END" if strict else read


def _length_sql(text: str, form: str) -> str | None:
    """Return the condition on the length of a text whose digits are not separated: the engine would guess there.

    >>> _length_sql("x", "%H%M%S")
    'strlen(x) BETWEEN 6 AND 6'
    >>> _length_sql("x", "%H:%M:%S") is None
    True
    """
    digits = f"%[{_DIGITS}]"
    if not re.search(digits + digits, form):
        return None
    found = _DIRECTIVE.findall(form)
    if any(DIRECTIVES[one] is None and one != "f" for one in found):
        return f"regexp_matches({text}, '[0-9]{{4}}')"
    least = len(_DIRECTIVE.sub("", form).encode()) + sum(DIRECTIVES[one] or 1 for one in found)
    most = least + (_FRACTION_DIGITS - 1 if "f" in found else 0)
    return f"strlen({text}) BETWEEN {least} AND {most}"
