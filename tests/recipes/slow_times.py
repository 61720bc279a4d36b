"""Read written times and dates as `docs/recipes.md` says, one by one; shares nothing with the package."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from zoneinfo import ZoneInfo

EPOCH = datetime(1970, 1, 1, tzinfo=UTC)
DAY = timedelta(days=1)
NEW_DAY = timedelta(hours=12)
OVER_MIDNIGHT = timedelta(minutes=2)  # so little back over midnight is a step of the clock
NEW_YEAR = timedelta(days=182)
LEAP_YEAR = timedelta(days=366)  # times without a year are read in one
OUT_OF_ORDER = timedelta(minutes=2)  # in an hour that comes twice
_ISO = re.compile(
    r"(\d{4}-\d\d-\d\d)[T ](\d\d:\d\d)(:\d\d)?(?:[.,](\d{1,6}))?(Z|[+-]\d\d(?::?\d\d)?)?", re.ASCII
)


@dataclass(frozen=True)
class Written:
    """A time as far as it is written: an instant in UTC, a local one, one of the year 2000, or of a day."""

    instant: datetime | None = None
    local: datetime | None = None
    yearless: datetime | None = None
    of_day: timedelta | None = None


def written_time(text: str, form: str) -> Written | None:
    """Return what a text of a form says; None where it is not of the form."""
    if form in ("unix_s", "unix_ms"):
        if not re.fullmatch(r"-?\d{1,15}(\.\d{1,6})?", text, re.ASCII):
            return None
        seconds = Decimal(text) / (1 if form == "unix_s" else 1000)
        try:
            return Written(instant=EPOCH + timedelta(microseconds=int(seconds * 1_000_000)))
        except OverflowError:
            return None
    if form == "iso":
        return _iso(text)
    return _by_directives(text, form)


def _iso(text: str) -> Written | None:
    match = _ISO.fullmatch(text)
    if match is None or (match[4] and not match[3]):
        return None
    try:
        at = datetime.fromisoformat(f"{match[1]} {match[2]}{match[3] or ':00'}")
    except ValueError:
        return None
    at += timedelta(microseconds=int((match[4] or "").ljust(6, "0")))
    if match[5] is None:
        return Written(local=at)
    offset = timedelta()
    if match[5] != "Z":
        digits = match[5][1:].replace(":", "")
        offset = timedelta(hours=int(digits[:2]), minutes=int(digits[2:] or 0))
        offset = -offset if match[5][0] == "-" else offset
    return Written(instant=(at - offset).replace(tzinfo=UTC))


def _by_directives(text: str, form: str) -> Written | None:
    has_year, has_day = re.search("%[Yy]", form), re.search("%[dj]", form)
    if not has_year and has_day:
        text, form = f"2000 {text}", f"%Y {form}"
    try:
        at = datetime.strptime(text, form)
    except ValueError:
        return None
    if "%j" in form and "366" in text and at.timetuple().tm_yday != 366:  # it would go on into the next year
        return None
    if re.search("%[YymdjHIMSf]%[YymdjHIMSf]", form) and not full_length(text, form, at):
        return None
    if at.tzinfo is not None:
        return Written(instant=at.astimezone(UTC))
    if has_year:
        return Written(local=at)
    if has_day:
        return Written(yearless=at)
    return Written(of_day=at - datetime(1900, 1, 1))


def full_length(text: str, form: str, at: datetime) -> bool:
    """Return whether digits that nothing separates are all there; only their fraction may be shorter."""
    whole = len(at.strftime(form))
    return len(text) == whole or ("%f" in form and whole - 5 <= len(text) <= whole)


def written_date(text: str, form: str) -> date | None:
    """Return the date that a text of a form says; None where it is not of the form."""
    try:
        if form == "iso":
            form = "%Y-%m-%d"
        elif form.startswith("unix"):
            seconds = Decimal(text) / (1 if form == "unix_s" else 1000)
            return (EPOCH + timedelta(seconds=int(seconds))).date()
        at = datetime.strptime(text, form)
        return None if re.search("%[Yymdj]%[Yymdj]", form) and not full_length(text, form, at) else at.date()
    except (ValueError, ArithmeticError):
        return None


class Clock:
    """The times of one file in the order of its lines."""

    def __init__(self, zone: str, first_day: date | None) -> None:
        self._zone = ZoneInfo(zone)
        self.give_date(first_day)
        self._last: datetime | None = None  # in UTC
        self.steps = self.doubtful = self.skipped = 0

    def give_date(self, day: date | None) -> None:
        """Take note of a date that a line gives; None for one that cannot be read."""
        self._day = day
        self._last_of_day: timedelta | None = None
        self._year = day.year if day else None
        self._last_in_year = datetime(2000, day.month, day.day) if day else None

    def utc(self, written: Written) -> datetime | None:
        """Return the instant in UTC; None where no date is known."""
        at = written.instant
        if at is None:
            local = written.local
            if written.of_day is not None:
                local = self._with_day(written.of_day)
            elif written.yearless is not None:
                local = self._with_year(written.yearless)
            if local is None:
                return None
            at = self._from_zone(local)
        self._last = at
        return at

    def _with_day(self, of_day: timedelta) -> datetime | None:
        rise = timedelta() if self._last_of_day is None else of_day - self._last_of_day
        self._last_of_day = of_day
        days = 0
        if rise < -NEW_DAY:
            days = 1
        elif rise < timedelta() or rise > DAY - OVER_MIDNIGHT:
            self.steps += 1
            days = 0 if rise < timedelta() else -1
        if self._day is None:
            return None
        self._day += days * DAY
        return datetime.combine(self._day, datetime.min.time()) + of_day

    def _with_year(self, yearless: datetime) -> datetime | None:
        if self._year is None:
            return None
        rise = timedelta() if self._last_in_year is None else yearless - self._last_in_year
        if rise < -NEW_YEAR:
            self._year += 1
        elif rise > LEAP_YEAR - OVER_MIDNIGHT:
            self._year -= 1
        self._last_in_year = yearless
        try:
            return yearless.replace(year=self._year)
        except ValueError:  # 29 February
            return None

    def _from_zone(self, local: datetime) -> datetime:
        first, second = (local.replace(tzinfo=self._zone, fold=fold).astimezone(UTC) for fold in (0, 1))
        if first > second:
            self.skipped += 1
        elif first < second:
            self.doubtful += 1
            if self._last is not None and first < self._last - OUT_OF_ORDER:
                return second
        return first
