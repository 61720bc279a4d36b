"""From the times of one file, in the order of its lines, to UTC: dates, new days, new years and zones."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from logtool.records.recipes.timeforms import ABSOLUTE, OF_DAY, YEARLESS
from logtool.records.recipes.zones import SECOND_US, both_utc_us

DAY_US = 86_400 * SECOND_US
_EPOCH_YEAR = 1970
NEW_DAY_US = DAY_US // 2  # a fall by more is a new day, a smaller one a step of the clock
BACK_US = (
    120 * SECOND_US
)  # so little back over midnight is a step of the clock and no gap of a day; our choice
_NEW_YEAR_US = 182 * DAY_US  # a fall by more, in times without a year, is a new year
_ORDER_SLACK_US = 120 * SECOND_US  # lines may be so much out of order in an hour that comes twice; our choice
_LEAP_YEAR_US = 366 * DAY_US  # times without a year are read in one
NO_TIME = np.iinfo(np.int64).min
LOST_DATE = (
    NO_TIME + 1
)  # stands for a date that a line gives and nobody can read: none is known from there on


@dataclass
class ClockNotes:
    """What was met in a file's times: how often, and the number of the first line."""

    steps: int = 0  # falls of the time of day that are no new day
    first_step: int = 0
    largest_step_s: float = 0.0
    doubtful: int = 0  # in an hour that the clock had twice
    first_doubtful: int = 0
    skipped: int = 0  # in an hour that the clock never had


class FileClock:
    """The times of one file; holds what goes from one block of its lines to the next.

    Parameters
    ----------
    zone : str
        IANA name of the zone of all times that name no offset.
    day_us : int, optional
        The date at which the file begins, as midnight in microseconds since 1970.
    """

    def __init__(self, zone: str, day_us: int | None) -> None:
        self.notes = ClockNotes()
        self._zone = zone
        self._day_us: int | None = None
        self._last_of_day_us: int | None = None
        self._year: int | None = None
        self._last_in_year_us: int | None = None
        self._last_utc_us = NO_TIME
        if day_us is not None:
            self._day_us = day_us
            self._begin_year(day_us)

    def utc_us(
        self, lines: np.ndarray, lacking: np.ndarray, stamps_us: np.ndarray, days_us: np.ndarray
    ) -> np.ndarray:
        """Return UTC in microseconds since 1970; `NO_TIME` where no date is known.

        Parameters
        ----------
        lines : ndarray of int64, shape (n,)
            Line numbers, rising.
        lacking : ndarray of int, shape (n,)
            What each time lacks, see `timeforms`; -1 where the line has no time.
        stamps_us : ndarray of int64, shape (n,)
            The times as far as they are written.
        days_us : ndarray of int64, shape (n,)
            Dates that lines give, `NO_TIME` where they give none, `LOST_DATE` where one cannot be read.
        """
        local_us = np.where(lacking >= 0, stamps_us, NO_TIME)
        of_day, yearless = lacking == OF_DAY, lacking == YEARLESS
        has_days = bool((days_us != NO_TIME).any())
        if has_days or of_day.any():
            local_us[of_day] = self._with_days(lines, of_day, stamps_us, days_us)
        if has_days or yearless.any():
            local_us[yearless] = self._with_years(yearless, stamps_us, days_us)
        known = local_us != NO_TIME
        shifted = known & (lacking != ABSOLUTE)
        utc_us = local_us
        if self._zone != "UTC" and shifted.any():
            utc_us[known] = self._from_zone(lines[known], local_us[known], shifted[known])
        if known.any():
            self._last_utc_us = int(utc_us[known][-1])
        return utc_us

    def _with_days(
        self, lines: np.ndarray, of_day: np.ndarray, stamps_us: np.ndarray, days_us: np.ndarray
    ) -> np.ndarray:
        """Return times of day with their days: each goes on from the last date that a line gave."""
        given = np.flatnonzero(days_us != NO_TIME)
        at = np.flatnonzero(of_day)
        if not len(at):
            self._day_us, self._last_of_day_us = _known(days_us[given[-1]]), None
            return stamps_us[at]
        segment = np.searchsorted(given, at, side="right")  # 0: goes on from the block before
        start_us = NO_TIME if self._day_us is None else self._day_us
        bases_us = np.concatenate(([start_us], days_us[given]))
        bases_us[bases_us == LOST_DATE] = NO_TIME
        times_us = stamps_us[at]
        before_us = np.concatenate(
            ([self._last_of_day_us if self._last_of_day_us is not None else -1], times_us[:-1])
        )
        fresh = np.concatenate(([0], segment[:-1])) != segment
        fresh |= before_us < 0
        rise_us = np.where(fresh, 0, times_us - before_us)
        new_day = rise_us < -NEW_DAY_US
        back = rise_us > DAY_US - BACK_US
        steps = ((rise_us < 0) & ~new_day) | back
        self._note_steps(lines[at], np.where(back, rise_us - DAY_US, rise_us), steps)
        days = np.cumsum(new_day.astype(np.int64) - back)
        starts = np.searchsorted(segment, np.arange(len(bases_us)))  # the first time of each segment
        before_days = np.concatenate(([0], days))[starts]
        days = days - before_days[segment]
        with_days = np.where(
            bases_us[segment] == NO_TIME, NO_TIME, bases_us[segment] + days * DAY_US + times_us
        )
        if segment[-1] != len(given):
            self._day_us, self._last_of_day_us = _known(days_us[given[-1]]), None
        else:
            base_us = bases_us[segment[-1]]
            self._day_us = None if base_us == NO_TIME else int(base_us + days[-1] * DAY_US)
            self._last_of_day_us = int(times_us[-1])
        return with_days

    def _note_steps(self, lines: np.ndarray, rise_us: np.ndarray, steps: np.ndarray) -> None:
        if steps.any():
            self.notes.first_step = self.notes.first_step or int(lines[steps][0])
            self.notes.steps += int(steps.sum())
            largest_s = float(-rise_us[steps].min() / SECOND_US)
            self.notes.largest_step_s = max(self.notes.largest_step_s, largest_s)

    def _with_years(self, yearless: np.ndarray, stamps_us: np.ndarray, days_us: np.ndarray) -> np.ndarray:
        """Return times that were read in the year 2000 with their years: each goes on from the last date given."""
        given = np.flatnonzero(days_us != NO_TIME)
        given = given if yearless.any() else given[-1:]
        starts = [0, *given.tolist(), len(stamps_us)]
        found = []
        for k, (start, stop) in enumerate(pairwise(starts)):
            if k:
                self._begin_year(_known(days_us[start]))
            found.append(self._going_on(stamps_us[start:stop][yearless[start:stop]]))
        return np.concatenate(found)

    def _begin_year(self, day_us: int | None) -> None:
        """Go on from a date, as if there had been a time at its midnight."""
        if day_us is None:
            self._year = self._last_in_year_us = None
            return
        day = np.datetime64(day_us, "us")
        self._year = int(day.astype("M8[Y]").astype(np.int64)) + _EPOCH_YEAR
        self._last_in_year_us = int(_in_years(np.array([day]), np.array([2000]))[0].astype(np.int64))

    def _going_on(self, stamps_us: np.ndarray) -> np.ndarray:
        """Return times that were read in the year 2000 with their years, from the last year on."""
        if self._year is None or not len(stamps_us):
            return np.full(len(stamps_us), NO_TIME)
        first = stamps_us[0] if self._last_in_year_us is None else self._last_in_year_us
        rise_us = np.diff(stamps_us, prepend=first)
        back = rise_us > _LEAP_YEAR_US - BACK_US
        years = self._year + np.cumsum((rise_us < -_NEW_YEAR_US).astype(np.int64) - back)
        self._year, self._last_in_year_us = int(years[-1]), int(stamps_us[-1])
        moved = _in_years(stamps_us.astype("M8[us]"), years)
        return np.where(np.isnat(moved), NO_TIME, moved.astype(np.int64))

    def _from_zone(self, lines: np.ndarray, local_us: np.ndarray, shifted: np.ndarray) -> np.ndarray:
        """Return the instants of local times, where `shifted`; the others are UTC already."""
        earlier_us, later_us = local_us.copy(), local_us.copy()
        earlier_us[shifted], later_us[shifted], skipped = both_utc_us(local_us[shifted], self._zone)
        self.notes.skipped += int(skipped.sum())
        doubtful = np.flatnonzero(earlier_us != later_us)
        utc_us = earlier_us
        if len(doubtful):
            self.notes.first_doubtful = self.notes.first_doubtful or int(lines[doubtful[0]])
            self.notes.doubtful += len(doubtful)
        for i in doubtful.tolist():  # in order: each is read by the line before
            last_us = int(utc_us[i - 1]) if i else self._last_utc_us
            if earlier_us[i] < last_us - _ORDER_SLACK_US and last_us != NO_TIME:
                utc_us[i] = later_us[i]
        return utc_us


def _known(day_us: np.int64) -> int | None:
    return None if day_us == LOST_DATE else int(day_us)


def _in_years(instants: np.ndarray, years: np.ndarray) -> np.ndarray:
    """Return the same month, day and time in other years; NaT for a 29 February that there is not."""
    month = instants.astype("M8[M]")
    months = (years - _EPOCH_YEAR).astype("M8[Y]").astype("M8[M]") + (
        month - instants.astype("M8[Y]").astype("M8[M]")
    )
    moved = months.astype("M8[us]") + (instants - month.astype("M8[us]"))
    return np.where(moved.astype("M8[M]") == months, moved, np.datetime64("NaT"))
