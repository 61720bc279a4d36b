"""The order of day, month and year: decided by evidence or not at all."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime

import pytest

from logtool.suggest.day_order import best_form, date_in_name, name_date_of
from logtool.suggest.tables import Column
from logtool.suggest.timeforms import forms_of, moment_of
from logtool.suggest.times import find_times

DMY, MDY = "%d/%m/%Y %H:%M", "%m/%d/%Y %H:%M"


def reading(values: list[str]) -> Callable[[str], list[datetime | None]]:
    return lambda form: [moment_of(value, form) for value in values]


def decided(values: list[str], name: datetime | None = None) -> tuple[str, str]:
    return best_form([DMY, MDY], reading(values), [0] * len(values), name)


def test_order_of_the_lines_tells_the_day() -> None:
    assert decided(["03/04/2026 23:58", "04/04/2026 00:02", "05/04/2026 01:00"]) == (DMY, "")
    assert decided(["03/04/2026 23:58", "03/05/2026 00:02", "03/06/2026 01:00"]) == (MDY, "")


def test_a_value_over_12_tells_the_day() -> None:
    column = Column("column 1", ["11/04/2026 10:00", "12/04/2026 10:00", "13/04/2026 10:00"])
    assert find_times([column], [0] * 3, None).time_form == DMY


def test_one_day_alone_tells_nothing() -> None:
    form, why = decided(["03/04/2026 10:00", "03/04/2026 10:15"])
    assert "NOT SURE" in why
    assert form in (DMY, MDY)


def test_a_date_in_the_files_name_tells() -> None:
    values = ["03/04/2026 10:00", "03/04/2026 10:15"]
    assert decided(values, datetime(2026, 4, 3)) == (DMY, "")
    assert decided(values, datetime(2026, 3, 4)) == (MDY, "")


def test_where_day_and_month_are_equal_there_is_no_doubt() -> None:
    assert decided(["04/04/2026 10:00", "04/04/2026 10:15"])[1] == ""


@pytest.mark.parametrize(
    ("name", "date"),
    [
        ("hut-2026-03-01.log", datetime(2026, 3, 1)),
        ("20260301.txt", datetime(2026, 3, 1)),
        ("a_31.12.2026_b", datetime(2026, 12, 31)),
        ("a_03.04.2026_b", None),
        ("260301.log", None),
        ("build1234567.log", None),
    ],
)
def test_dates_in_names(name: str, date: datetime | None) -> None:
    assert name_date_of(name) == date


def test_an_undecided_date_in_a_name_keeps_its_forms() -> None:
    found = date_in_name("a_03.04.2026_b")
    assert found is not None
    assert found[:2] == ("03.04.2026", ["%d.%m.%Y", "%m.%d.%Y"])


@pytest.mark.parametrize(
    "value", ["25:00:00", "22:60", "2026-13-01", "31.02.2026", "Q1ABC", "-12", "7078.5", "10138500", ""]
)
def test_what_is_no_time(value: str) -> None:
    assert forms_of(value) == ()


def test_twelve_hours_without_a_mark_are_told() -> None:
    values = [f"{hour}:{minute:02d}:00" for hour in (11, 12, 1, 2) for minute in range(0, 60, 5)]
    found = find_times([Column("column 1", values)], [0] * len(values), None)
    assert any("twelve hours" in doubt.why for doubt in found.doubts)


def test_a_counter_is_no_time() -> None:
    values = [f"{1000 + 7 * n % 1300:04d}" for n in range(200)]
    assert find_times([Column("column 1", values)], [0] * 200, None).time is None
