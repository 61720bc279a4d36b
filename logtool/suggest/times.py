"""Which columns are times and dates, and in which order day, month and year stand."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from datetime import datetime, timedelta
from itertools import pairwise

from logtool.suggest.day_order import Moments, best_form, neighbours
from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of, words_of
from logtool.suggest.tables import Column
from logtool.suggest.timeforms import (
    ISO,
    UNIX_MS,
    UNIX_S,
    has_date,
    has_time,
    has_year,
    moment_of,
    names_utc,
    shared_forms,
)
from logtool.suggest.values import given, quoted

_BARE = re.compile(r"[0-9.]+")
_FALLS_SHARE = 0.05
_HALF_DAY = timedelta(hours=12)
_HALVES = {"AM", "PM", "A.M.", "P.M."}
_UTC_WORDS = {"utc", "gmt", "z"}


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
        others = [one for one in full if one.column != chosen.column and one.rank[:2] == chosen.rank[:2]]
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
        others = [one for one in clocks if one.column != chosen.column and one.rank[:3] == chosen.rank[:3]]
        if others:
            labels = ", ".join(columns[one.column].label for one in others)
            found.doubts.append(
                Doubt(
                    "time",
                    f"there are further columns that could be times ({labels});"
                    f" {columns[chosen.column].label} is taken",
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
        for column in columns:
            if {value.upper() for value in given(column.values)} & _HALVES and "%H" in found.time_form:
                found.doubts.append(
                    Doubt(
                        "time",
                        f"{column.label} says AM or PM, which is not read: half of the times are wrong",
                    )
                )
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
            full.append(_Candidate(k, whole, (unnamed, not _UTC_WORDS & set(words_of(column.hint)), k)))
        of_day = tuple(form for form in forms if has_time(form) and not has_date(form))
        if of_day and (not bare or (unnamed < 2 and _runs(column.values, of_day[0], parts))):
            utc = bool(_UTC_WORDS & set(words_of(column.hint)))
            clocks.append(_Candidate(k, of_day, (unnamed, int(bare), not utc, k)))
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
    steps = [b - a for a, b in neighbours([moment_of(value, form) for value in values], parts)]
    if not steps:
        return len(values) == 1
    falls = sum(-_HALF_DAY < step < timedelta() for step in steps)
    leaps = sum(step > _HALF_DAY for step in steps)
    return falls + leaps <= _FALLS_SHARE * len(steps) and len(set(values)) > 1


def _holds(values: list[str]) -> bool:
    """Return whether values stay as they are for many lines, as a date does."""
    changes = sum(a != b for a, b in pairwise(values))
    return changes <= 0.1 * len(values) or len(set(values)) == 1


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


def _doubt_twelve_hours(found: Times, parts: list[int]) -> None:
    if "%H" not in found.time_form:
        return
    known = [moment for moment in found.moments if moment is not None]
    if any(moment.hour > 12 or moment.hour == 0 for moment in known):
        return
    if any(a.hour == 12 and b.hour == 1 for a, b in neighbours(found.moments, parts)):
        found.doubts.append(
            Doubt(
                "time",
                "the hours go from 12 to 1 and never over 12: this is a clock of twelve hours without AM and PM; such"
                " times cannot be read",
            )
        )
