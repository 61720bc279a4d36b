"""How times and dates may be written: the forms that a value could be of."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable
from datetime import UTC, datetime, timedelta
from functools import lru_cache

from logtool.suggest.values import ENOUGH

FIRST_YEAR, LAST_YEAR = 2000, 2099  # no log of a computer's decoder is older
ISO, UNIX_S, UNIX_MS = "iso", "unix_s", "unix_ms"
_MONTH = "(?:Jan|Feb|Mar|Apr|May|Jun|Jul|Aug|Sep|Oct|Nov|Dec)"
_LONG_MONTH = "(?:January|February|March|April|June|July|August|September|October|November|December)"
_MOST_FORMS_SEEN = 400  # different values that are looked at; our choice
_UNIX_LOW, _UNIX_HIGH = 946_684_800, 4_102_444_800  # the years 2000 to 2099
# Patterns that begin a value, with the forms they may be; {0} is the sign between the parts.
_DATES = [
    (r"\d{4}([-/.])\d{1,2}\1\d{1,2}", ("%Y{0}%m{0}%d",)),
    (r"\d{1,2}([-/.])\d{1,2}\1\d{4}", ("%d{0}%m{0}%Y", "%m{0}%d{0}%Y")),
    (r"\d{1,2}([-/.])\d{1,2}\1\d{2}(?!\d)", ("%y{0}%m{0}%d", "%d{0}%m{0}%y", "%m{0}%d{0}%y")),
    (r"\d{4}-\d{3}(?!\d)", ("%Y-%j",)),
    (r"\d{8}", ("%Y%m%d", "%d%m%Y", "%m%d%Y")),
    (r"\d{6}", ("%y%m%d", "%d%m%y", "%m%d%y")),
    (rf"\d{{1,2}}([-/ .]?){_MONTH}\1\d{{4}}", ("%d{0}%b{0}%Y",)),
    (rf"\d{{1,2}}([-/ .]?){_MONTH}\1\d{{2}}(?!\d)", ("%d{0}%b{0}%y", "%y{0}%b{0}%d")),
    (rf"\d{{4}}([-/ .]?){_MONTH}\1\d{{1,2}}", ("%Y{0}%b{0}%d",)),
    (rf"{_MONTH} +\d{{1,2}}, ?\d{{4}}", ("%b %d, %Y",)),
    (rf"{_MONTH} +\d{{1,2}} \d{{4}}", ("%b %d %Y",)),
    (rf"{_MONTH} +\d{{1,2}}(?!\d)", ("%b %d",)),
    (rf"\d{{1,2}}([- /]){_MONTH}(?![a-z])", ("%d{0}%b",)),
    (rf"{_LONG_MONTH} +\d{{1,2}}, ?\d{{4}}", ("%B %d, %Y",)),
    (rf"\d{{1,2}} {_LONG_MONTH} \d{{4}}", ("%d %B %Y",)),
    (r"\d{1,2}([/.])\d{1,2}\1(?= )", ("%d{0}%m{0}", "%m{0}%d{0}")),
    (r"\d{1,2}([/-])\d{1,2}(?= )", ("%d{0}%m", "%m{0}%d")),
]
_TIMES = [
    (r"\d{1,2}:\d\d:\d\d[.]\d{1,6} ?[AaPp][Mm]", "%I:%M:%S.%f%p"),
    (r"\d{1,2}:\d\d:\d\d ?[AaPp][Mm]", "%I:%M:%S%p"),
    (r"\d{1,2}:\d\d ?[AaPp][Mm]", "%I:%M%p"),
    (r"\d{1,2}:\d\d:\d\d[.]\d{1,6}", "%H:%M:%S.%f"),
    (r"\d{1,2}:\d\d:\d\d,\d{1,6}", "%H:%M:%S,%f"),
    (r"\d{1,2}:\d\d:\d\d", "%H:%M:%S"),
    (r"\d{1,2}:\d\d", "%H:%M"),
    (r"\d\d[.]\d\d[.]\d\d", "%H.%M.%S"),
    (r"\d\d-\d\d-\d\d", "%H-%M-%S"),
    (r"\d{1,2}h\d\d(?:m\d\ds?)?", "%Hh%M"),
    (r"\d{6}[.]\d{1,6}", "%H%M%S.%f"),
    (r"\d{6}", "%H%M%S"),
    (r"\d{4}", "%H%M"),
]  # fmt: skip
_SIGNS = r"(T|_|-|/|@|,| at | - |, | +|)"
_ZONES = r"( ?(?:Z|z|UTC|utc|GMT|UT))?"
_ISO = re.compile(r"\d{4}-\d\d-\d\d[T ]\d\d:\d\d(?::\d\d(?:[.,]\d{1,6})?)? ?(?:Z|[+-]\d\d(?::?\d\d)?)?")
_CTIME = re.compile(rf"{_MONTH} +\d{{1,2}} \d\d:\d\d:\d\d \d{{4}}")
_OFFSET = re.compile(r":\d\d(?:[.,]\d+)? ?(?:Z|[+-]\d\d(?::?\d\d)?)$")
_UTC_WORD = re.compile(r"\d ?(?:Z|z|UTC|utc|GMT|UT)$")
_WITH_DATE = [(re.compile(pattern), forms) for pattern, forms in _DATES]
_WITH_TIME = [(re.compile(pattern + _ZONES), form) for pattern, form in _TIMES]


def has_date(form: str) -> bool:
    """Return whether a form gives a day."""
    return form in (ISO, UNIX_S, UNIX_MS) or "%d" in form or "%j" in form


def has_year(form: str) -> bool:
    """Return whether a form gives the year."""
    return form in (ISO, UNIX_S, UNIX_MS) or "%Y" in form or "%y" in form


def has_time(form: str) -> bool:
    """Return whether a form gives a time of day."""
    return form in (ISO, UNIX_S, UNIX_MS) or "%H" in form or "%I" in form


def names_utc(form: str, values: Iterable[str]) -> bool:
    """Return whether the values themselves say that they are UTC or how far from it."""
    if form in (UNIX_S, UNIX_MS):
        return True
    mark = _OFFSET if form == ISO else _UTC_WORD
    return has_time(form) and all(mark.search(value) for value in values)


@lru_cache(maxsize=20_000)
def forms_of(value: str) -> tuple[str, ...]:
    """Return every form of a time, a date or both that a value could be of; empty where it is none.

    >>> forms_of("22:15")
    ('%H:%M',)
    >>> forms_of("03/04/2026")
    ('%d/%m/%Y', '%m/%d/%Y')
    """
    if _ISO.fullmatch(value):
        return (ISO,)
    found = [form for form in _whole_forms(value) if moment_of(value, form) is not None]
    if re.fullmatch(r"\d{10}(?:\.\d{1,6})?", value) and _UNIX_LOW <= float(value) < _UNIX_HIGH:
        found.append(UNIX_S)
    if re.fullmatch(r"\d{13}", value) and _UNIX_LOW <= float(value) / 1000 < _UNIX_HIGH:
        found.append(UNIX_MS)
    return tuple(dict.fromkeys(found))


def _whole_forms(value: str) -> list[str]:
    found = []
    if _CTIME.fullmatch(value):
        found.append("%b %d %H:%M:%S %Y")
    times = _time_starts(value)
    found += [form for form, rest in times if not rest]
    for date, rest in _date_starts(value):
        if not rest:
            found.append(date)
            continue
        sign = re.match(_SIGNS, rest)
        assert sign is not None  # it may be empty
        for form, left in _time_starts(rest[sign.end() :]):
            if not left and (has_year(date) or " " in sign[0]):
                found.append(date + re.sub(" +", " ", sign[0]) + form)
    for form, rest in times:
        sign = re.match(r"( +|, ?|_|/)", rest)
        if sign:
            found += [
                form + re.sub(" +", " ", sign[0]) + date
                for date, left in _date_starts(rest[sign.end() :])
                if not left
            ]
    return found


def _date_starts(value: str) -> list[tuple[str, str]]:
    found = []
    for pattern, forms in _WITH_DATE:
        match = pattern.match(value)
        if match:
            sign = match[1] if pattern.groups else ""
            found += [(form.replace("{0}", sign), value[match.end() :]) for form in forms]
    return found


def _time_starts(value: str) -> list[tuple[str, str]]:
    found = []
    for pattern, form in _WITH_TIME:
        match = pattern.match(value)
        if not match or (match.end() < len(value) and value[match.end()].isdigit()):
            continue
        written = match[0].removesuffix(match[1] or "")
        if form.endswith("%p"):
            form = form.removesuffix("%p") + (" %p" if " " in written else "%p")
        if form == "%Hh%M" and "m" in written:
            form = "%Hh%Mm%S" + ("s" if written.endswith("s") else "")
        found.append((form + (match[1] or ""), value[match.end() :]))
    return found


def shared_forms(values: Iterable[str]) -> list[str]:
    """Return the forms that nearly all of the values could be of, in the order in which they were met."""
    counted = Counter(values)
    total = sum(counted.values())
    seen: Counter[str] = Counter()
    looked = 0
    for value, n in counted.most_common(_MOST_FORMS_SEEN):
        looked += n
        for form in forms_of(value):
            seen[form] += n
    shared = [form for form, n in seen.items() if n >= ENOUGH * looked]
    return [form for form in shared if total and not _is_covered(form, shared)]


def _is_covered(form: str, forms: list[str]) -> bool:
    """Return whether the same reading is there in a plainer form."""
    return form != ISO and ISO in forms and has_date(form) and has_time(form)


@lru_cache(maxsize=50_000)
def moment_of(value: str, form: str) -> datetime | None:
    """Return the moment that a value is by a form (a time alone on 1 January 1900), or None."""
    try:
        if form == UNIX_S:
            return datetime(1970, 1, 1) + timedelta(seconds=float(value))
        if form == UNIX_MS:
            return datetime(1970, 1, 1) + timedelta(milliseconds=int(value))
        if form == ISO:
            read = datetime.fromisoformat(value.replace(",", ".").replace(" Z", "Z"))
            return read.astimezone(UTC).replace(tzinfo=None) if read.tzinfo else read
        if not has_year(form) and has_date(form):
            return datetime.strptime("2000 " + value, "%Y " + form)
        read = datetime.strptime(value, form)
        return None if has_year(form) and not FIRST_YEAR <= read.year <= LAST_YEAR else read
    except ValueError:
        return None
