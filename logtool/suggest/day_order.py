"""In which order day, month and year stand, by the order of the lines and the file's name."""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import datetime, timedelta

from logtool.suggest.timeforms import (
    moment_of,
)

_NEAR_DAYS = 400  # a difference between neighbours that shows that the reading is wrong


_CLEARLY = 4.0  # so many times better; our choice


Moments = list[datetime | None]


def neighbours(moments: Moments, parts: list[int]) -> list[tuple[datetime, datetime]]:
    pairs = []
    last: tuple[int, datetime] | None = None
    for part, moment in zip(parts, moments, strict=True):
        if moment is None:
            continue
        if last is not None and last[0] == part:
            pairs.append((last[1], moment))
        last = (part, moment)
    return pairs


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
    (best, _, form), (second, _, _) = costs[0], costs[1]
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
    for a, b in neighbours(reading, parts):
        step = (b - a).total_seconds() / 86_400
        days += -3 * step if step < 0 else step
    known = [moment for moment in reading if moment is not None]
    return days + _NEAR_DAYS * (len(reading) - len(known))


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
        if forms:
            return written, forms, match
    return None


def name_date_of(name: str) -> datetime | None:
    """Return the date in a file's name where it can be read in one way only."""
    found = date_in_name(name)
    return moment_of(found[0], found[1][0]) if found and len(found[1]) == 1 else None
