"""Which columns are times and dates, and in which order day, month and year stand."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import datetime, timedelta

from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of, words_of
from logtool.suggest.tables import Column
from logtool.suggest.timeforms import (
    ISO,
    UNIX_MS,
    UNIX_S,
    forms_of,
    has_date,
    has_time,
    has_year,
    moment_of,
    names_utc,
    shared_forms,
)
from logtool.suggest.values import given, quoted

FIRST_YEAR = 2000  # no log of a computer's decoder is older
_BARE = re.compile(r"[0-9.]+")
_NEAR_DAYS = 400  # a difference between neighbours that shows that the reading is wrong
_CLEARLY = 4.0  # so many times better; our choice
_FALLS_SHARE = 0.05
_HALF_DAY = timedelta(hours=12)
_UTC_WORDS = {"utc", "gmt", "z"}

Moments = list[datetime | None]


@dataclass
class Times:
    """What was found of the times of a table's rows."""

    time: int | None = None
    time_form: str = ""
    date: int | None = None
    date_form: str = ""
    zone_known: bool = False
    local: bool = False
    moments: Moments = field(default_factory=list)
    doubts: list[Doubt] = field(default_factory=list)

    @property
    def dated(self) -> bool:
        """Whether the lines themselves give the day."""
        return self.date is not None or has_date(self.time_form)

    @property
    def with_year(self) -> bool:
        """Whether the lines themselves give the year."""
        return has_year(self.time_form) or (self.date is not None and has_year(self.date_form))


@dataclass(frozen=True)
class _Candidate:
    column: int
    forms: tuple[str, ...]
    rank: tuple[int, ...]  # the lower the better


def find_times(columns: list[Column], parts: list[int], name_date: datetime | None) -> Times:
    """Return the columns of times and dates.

    Parameters
    ----------
    columns : list of Column
    parts : list of int
        The part of the file to which each row belongs; only rows of one part follow each other.
    name_date : datetime, optional
        A date in the file's name that can be read in one way only.
    """
    found = Times()
    full, clocks, dates = _candidates(columns, parts)
    if full:
        chosen = min(full, key=lambda one: one.rank)
        others = [one for one in full if one.column != chosen.column and one.rank[:1] == chosen.rank[:1]]
        if others:
            labels = ", ".join(columns[one.column].label for one in others)
            found.doubts.append(
                Doubt(
                    "time",
                    f"there are further columns of times ({labels}); {columns[chosen.column].label} is taken",
                )
            )
        _settle_full(found, columns[chosen.column], chosen, parts, name_date)
    elif clocks:
        chosen = min(clocks, key=lambda one: one.rank)
        others = [one for one in clocks if one.column != chosen.column and one.rank[:2] == chosen.rank[:2]]
        if others:
            labels = ", ".join(columns[one.column].label for one in others)
            found.doubts.append(
                Doubt(
                    "time",
                    f"there are further columns that could be times ({labels}); {columns[chosen.column].label} is taken",
                )
            )
        found.time, found.time_form = chosen.column, chosen.forms[0]
        dates = [one for one in dates if one.column != chosen.column]
        values = columns[chosen.column].values
        found.moments = [moment_of(value, chosen.forms[0]) for value in values]
        if dates:
            _settle_date(found, columns, min(dates, key=lambda one: one.rank), parts, name_date)
        _doubt_twelve_hours(found, parts)
    if found.time is not None:
        column = columns[found.time]
        found.zone_known = names_utc(found.time_form, given(column.values)) or bool(
            set(words_of(column.hint)) & _UTC_WORDS
        )
        found.local = "local" in words_of(column.hint)
    return found


def _candidates(
    columns: list[Column], parts: list[int]
) -> tuple[list[_Candidate], list[_Candidate], list[_Candidate]]:
    full, clocks, dates = [], [], []
    for k, column in enumerate(columns):
        values = given(column.values)
        forms = shared_forms(values)
        if not forms:
            continue
        means = meanings_of(column.hint)
        unnamed = 0 if means & {"time", "date"} else 2 if means else 1
        bare = all(_BARE.fullmatch(value) for value in set(values))
        whole = tuple(form for form in forms if has_date(form) and has_time(form))
        if whole and (not bare or unnamed < 2):
            full.append(_Candidate(k, whole, (unnamed, k)))
        of_day = tuple(form for form in forms if has_time(form) and not has_date(form))
        if of_day and (not bare or (unnamed < 2 and _runs(column.values, of_day[0], parts))):
            clocks.append(_Candidate(k, of_day, (unnamed, int(bare), k)))
        days = tuple(form for form in forms if has_date(form) and not has_time(form))
        if days and (not bare or (unnamed < 2 and _holds(column.values))):
            dates.append(_Candidate(k, days, (unnamed, int(bare), k)))
    # Six digits may be a date and a time: what changes less often is the date.
    for one in list(clocks):
        if any(day.column == one.column for day in dates) and len(clocks) > 1:
            fewer = len(set(columns[one.column].values))
            if any(len(set(columns[other.column].values)) > fewer for other in clocks):
                clocks.remove(one)
    return full, clocks, dates


def _runs(values: list[str], form: str, parts: list[int]) -> bool:
    """Return whether times of day go forwards as the lines do."""
    steps = [b - a for a, b in _neighbours([moment_of(value, form) for value in values], parts)]
    if not steps:
        return len(values) == 1
    falls = sum(-_HALF_DAY < step < timedelta() for step in steps)
    leaps = sum(step > _HALF_DAY for step in steps)
    return falls + leaps <= _FALLS_SHARE * len(steps) and len(set(values)) > 1


def _holds(values: list[str]) -> bool:
    """Return whether values stay as they are for many lines, as a date does."""
    changes = sum(a != b for a, b in zip(values, values[1:], strict=False))
    return changes <= 0.1 * len(values) or len(set(values)) == 1


def _neighbours(moments: Moments, parts: list[int]) -> list[tuple[datetime, datetime]]:
    pairs = []
    last: tuple[int, datetime] | None = None
    for part, moment in zip(parts, moments, strict=True):
        if moment is None:
            continue
        if last is not None and last[0] == part:
            pairs.append((last[1], moment))
        last = (part, moment)
    return pairs


def _settle_full(
    found: Times, column: Column, chosen: _Candidate, parts: list[int], name_date: datetime | None
) -> None:
    found.time = chosen.column
    if chosen.forms[0] in (ISO, UNIX_S, UNIX_MS):
        found.time_form = chosen.forms[0]
    else:
        found.time_form, doubt = best_form(
            list(chosen.forms),
            lambda form: [moment_of(value, form) for value in column.values],
            parts,
            name_date,
        )
        if doubt:
            found.doubts.append(Doubt("time", f"{doubt} ({quoted(column.values)})"))
    found.moments = [moment_of(value, found.time_form) for value in column.values]


def _settle_date(
    found: Times, columns: list[Column], chosen: _Candidate, parts: list[int], name_date: datetime | None
) -> None:
    found.date = chosen.column
    values = columns[chosen.column].values
    clocks = list(found.moments)

    def read(form: str) -> Moments:
        days = [moment_of(value, form) for value in values]
        return [
            None if day is None or clock is None else datetime.combine(day.date(), clock.time())
            for day, clock in zip(days, clocks, strict=True)
        ]

    found.date_form, doubt = best_form(list(chosen.forms), read, parts, name_date)
    if doubt:
        found.doubts.append(Doubt("time", f"{doubt} ({quoted(values)})"))
    found.moments = read(found.date_form)


def best_form(
    forms: list[str], read: Callable[[str], Moments], parts: list[int], name_date: datetime | None
) -> tuple[str, str]:
    """Return the form that the order of the lines speaks for, and what is to doubt about it (or an empty text)."""
    readings = {form: read(form) for form in forms}
    different = {tuple(reading) for reading in readings.values()}
    if len(different) == 1:
        return forms[0], ""
    if name_date is not None:
        near = [form for form, reading in readings.items() if _is_near(reading, name_date)]
        if len(near) == 1:
            return near[0], ""
    costs = sorted((_cost(reading, parts), k, form) for k, (form, reading) in enumerate(readings.items()))
    (best, _, form), (second, _, other) = costs[0], costs[1]
    if second > best * _CLEARLY + 1.0:
        return form, ""
    tied = [form for cost, _, form in costs if cost <= best * _CLEARLY + 1.0]
    top_year = datetime.now().year + 1
    likely = [
        form for form in tied if all(m is None or top_year - 12 <= m.year <= top_year for m in readings[form])
    ]
    if len(likely) == 1:
        return likely[0], (
            f"day, month and year are read as {likely[0]}, the only order that gives a year of these days;"
            " the dates themselves would allow another"
        )
    kept = likely or tied
    return kept[0], (
        f"NOT SURE of the order of day, month and year: it could be {' or '.join(kept)}; nothing in the text tells"
    )


def _is_near(reading: Moments, day: datetime) -> bool:
    known = [moment for moment in reading if moment is not None]
    return bool(known) and abs(known[0] - day) <= timedelta(days=2)


def _cost(reading: Moments, parts: list[int]) -> float:
    """Return the sum of steps between neighbours in days, those backwards and unreadable ones counted dearly."""
    days = 0.0
    for a, b in _neighbours(reading, parts):
        step = (b - a).total_seconds() / 86_400
        days += -3 * step if step < 0 else step
    known = [moment for moment in reading if moment is not None]
    days += _NEAR_DAYS * sum(moment.year < FIRST_YEAR for moment in known)
    return days + _NEAR_DAYS * (len(reading) - len(known))


def _doubt_twelve_hours(found: Times, parts: list[int]) -> None:
    if "%H" not in found.time_form:
        return
    known = [moment for moment in found.moments if moment is not None]
    if any(moment.hour > 12 or moment.hour == 0 for moment in known):
        return
    if any(a.hour == 12 and b.hour == 1 for a, b in _neighbours(found.moments, parts)):
        found.doubts.append(
            Doubt("time", "the hours go from 12 to 1 and never over 12: this is a clock of twelve hours without AM and PM;"
                  " such times cannot be read")
        )  # fmt: skip


NAME_DATE = re.compile(
    r"(?<!\d)(?:\d{4}([-_.]?)\d\d\1\d\d|\d\d([-_.]?)\d\d\2\d{4}|\d{6}|\d\d([-_.])\d\d\3\d\d)(?!\d)"
)


def date_in_name(name: str) -> tuple[str, list[str], re.Match[str]] | None:
    """Return the date as it stands in a file's name, the forms that it could be of, and where; None if there is none.

    >>> found = date_in_name("hut-2026-03-01.log")
    >>> found and found[:2]
    ('2026-03-01', ['%Y-%m-%d'])
    """
    for match in NAME_DATE.finditer(name):
        written = match[0]
        sign = next((c for c in written if not c.isdigit()), "")
        if len(re.split(r"\D", written)[0]) == 4 or (
            not sign and len(written) == 8 and written[:2] in ("19", "20")
        ):
            forms = [f"%Y{sign}%m{sign}%d"]
        elif len(written.replace(sign, "") if sign else written) == 8:
            forms = [f"%d{sign}%m{sign}%Y", f"%m{sign}%d{sign}%Y"]
        else:
            forms = [f"%y{sign}%m{sign}%d", f"%d{sign}%m{sign}%y", f"%m{sign}%d{sign}%y"]
        forms = [form for form in forms if moment_of(written, form) is not None]
        forms = [form for form in forms if moment_of(written, form).year >= FIRST_YEAR]  # type: ignore[union-attr]
        if forms:
            return written, forms, match
    return None


def name_date_of(name: str) -> datetime | None:
    """Return the date in a file's name where it can be read in one way only."""
    found = date_in_name(name)
    return moment_of(found[0], found[1][0]) if found and len(found[1]) == 1 else None


__all__ = ["Times", "best_form", "date_in_name", "find_times", "forms_of", "name_date_of"]
