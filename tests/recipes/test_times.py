"""Times and dates: every form, where a date comes from, new days and years, steps of the clock."""

from __future__ import annotations

from datetime import date

import pytest

from tests.recipes.comparing import compare, engine_lines, in_blocks_of, recipe, rule

COLUMNS = ["time", "sender"]
CARRIED = rule("carry", name="day", pattern=r"== (?P<date>\S+)", date_form="iso")


def times_of(
    text: str, lines: list[str], name: str = "night.txt", first_day: date | None = None
) -> list[str]:
    """Return the time or the reason of each line that is not the carry rule's, after comparing all."""
    found = compare(text, "\n".join(lines) + "\n", name, first_day)
    return [line.became.split("\t")[0] or line.reason for line in found if line.rule != "day"]


def heard(time_form: str = "iso", columns: list[str] = COLUMNS, **more: object) -> str:
    return rule(separator=",", columns=columns, time_form=time_form, **more)


@pytest.mark.parametrize(
    ("form", "good", "bad"),
    [
        ("iso", "2024-02-29T18:30:15Z", "2023-02-29T18:30:15Z"),
        ("iso", "2024-02-29 18:30:15", "2024-02-29T18:30:60Z"),
        ("iso", "2024-02-29 19:30:15+01:00", "2024-02-29T18:30:15z"),
        ("iso", "2024-02-29T15:00:15-0330", "2024-02-29"),
        ("iso", "2024-02-29T20:30:15+02", "2024-02-29T18:30:15.1234567Z"),
        ("iso", "2024-02-29T18:30:15,000", "24-02-29 18:30:15"),
        ("unix_s", "1709231415", "1709231415x"),
        ("unix_ms", "1709231415000", "seven"),
        ("%Y%m%d%H%M%S", "20240229183015", "2024022918301"),
        ("%y%m%d_%H%M%S", "240229_183015", "240230_183015"),
        ("%Y-%m-%d %H:%M:%S", "2024-02-29 18:30:15", "2024-02-29 24:00:00"),
        ("%Y-%m-%d %H:%M:%S%z", "2024-02-29 13:30:15-0500", "2024-02-29 13:30:15"),
        ("%Y-%m-%d %H:%M:%S.%f", "2024-02-29 18:30:15.000", "2024-02-29 18:30:15"),
        ("%d %b %Y %H.%M.%S", "29 FEB 2024 18.30.15", "29 Fez 2024 18.30.15"),
        ("%B %d, %Y; %I:%M:%S %p".replace(",", ""), "February 29 2024; 06:30:15 pm", "February 29 2024; 18:30:15 pm"),
        ("%j/%Y %H:%M:%S", "060/2024 18:30:15", "366/2023 18:30:15"),
        ("%H:%M:%S", "18:30:15", "18:30:61"),
        ("%H%M%S", "183015", "18301"),
        ("%m-%d %H:%M:%S", "02-29 18:30:15", "02-30 18:30:15"),
    ],
)  # fmt: skip
def test_every_form_of_time(form: str, good: str, bad: str) -> None:
    text = recipe(rule(separator=";" if ";" not in good else "|", columns=COLUMNS, time_form=form))
    ends = ["|Q1A" if ";" in good else ";Q1A"] * 2
    lines = [good + ends[0], bad + ends[1], good + ends[0]]
    wanted = ["2024-02-29T18:30:15Z", "bad-time", "2024-02-29T18:30:15Z"]
    assert times_of(text, lines, first_day=date(2024, 2, 29)) == wanted


@pytest.mark.parametrize(
    "far", ["9" * 17, "9223372036855000", "-" + "9" * 15, "253402300800000", "1" * 30, "-1e99", "inf"]
)
@pytest.mark.parametrize("form", ["unix_s", "unix_ms"])
def test_times_beyond_all_bounds_cost_their_own_line(form: str, far: str) -> None:
    text = recipe(heard(form), "zone = 'Asia/Kathmandu'\nslot_s = 15\ntime_marks = 'end'\n")
    found, _ = engine_lines(text, f"{far},Q1A\n0,Q1B\n".encode())
    assert found[0].reason in ("bad-time", "range-time")
    assert found[1].reason == "range-time"  # 15 s before 1970


def test_a_date_comes_from_its_own_line() -> None:
    text = recipe(heard("%H:%M", ["date", "time"], date_form="%d.%m.%Y"))
    lines = ["01.03.2026,23:59", "02.03.2026,00:00", "01.03.2026,12:00", ",11:59", "30.02.2026,12:30"]
    wanted = ["2026-03-01T23:59:00Z", "2026-03-02T00:00:00Z", "2026-03-01T12:00:00Z", "2026-03-01T11:59:00Z"]
    assert times_of(text, lines) == [*wanted, "bad-time"]


def test_a_date_that_cannot_be_read_is_told() -> None:
    text = recipe(CARRIED + heard("%H:%M"))
    found = compare(text, "== 2026-03-01\n18:00,Q1A\n== 2026-02-30\n18:05,Q1A\n")
    assert [line.reason for line in found] == ["", "", "bad-time", "no-date"]


def test_a_date_comes_from_a_carry_line_and_none_before_it() -> None:
    text = recipe(CARRIED + heard("%H:%M:%S"))
    lines = ["18:00:00,Q1A", "== 2026-03-01", "23:59:59,Q1A", "00:00:01,Q1A", "== 2026-03-02", "00:00:02,Q1A"]
    wanted = ["no-date", "2026-03-01T23:59:59Z", "2026-03-02T00:00:01Z", "2026-03-02T00:00:02Z"]
    assert times_of(text, lines) == wanted


def test_a_skipped_line_gives_no_date() -> None:
    text = recipe(rule("skip", pattern="x (?P<date>.*)", date_form="iso") + heard("%H:%M"))
    assert times_of(text, ["18:00,Q1A", "x 2026-03-09", "18:00,Q1A"], first_day=date(2026, 3, 1)) == [
        "2026-03-01T18:00:00Z",
        "",
        "2026-03-01T18:00:00Z",
    ]


def test_the_files_name_goes_before_the_option() -> None:
    named = "[name]\npattern = '_(?P<date>\\d{6})'\ndate_form = '%y%m%d'\n"
    text = recipe(heard("%H%M"), named)
    assert times_of(text, ["1800,Q1A"], "rx_260301.txt", date(2020, 1, 1)) == ["2026-03-01T18:00:00Z"]
    assert times_of(recipe(heard("%H%M")), ["1800,Q1A"], first_day=date(2020, 1, 1)) == [
        "2020-01-01T18:00:00Z"
    ]
    assert times_of(recipe(heard("%H%M")), ["1800,Q1A"]) == ["no-date"]


@pytest.mark.parametrize(
    ("day", "following"),
    [("2026-03-01", "2026-03-02"), ("2026-01-31", "2026-02-01"), ("2025-12-31", "2026-01-01"),
     ("2024-02-28", "2024-02-29"), ("2024-02-29", "2024-03-01"), ("2023-02-28", "2023-03-01"),
     ("2000-02-28", "2000-02-29")],
)  # fmt: skip
def test_the_day_goes_on_at_midnight(day: str, following: str) -> None:
    lines = ["23:59:45,Q1A", "00:00:00,Q1A", "23:59:59,Q1B", "00:00:15,Q1A", "12:00:00,Q1A", "23:00:00,Q1A"]
    wanted = [
        f"{day}T23:59:45Z",
        f"{following}T00:00:00Z",
        f"{day}T23:59:59Z",  # a second back over midnight is no gap of a day
        f"{following}T00:00:15Z",
        f"{following}T12:00:00Z",
        f"{following}T23:00:00Z",
    ]
    assert times_of(recipe(heard("%H:%M:%S")), lines, first_day=date.fromisoformat(day)) == wanted


@pytest.mark.parametrize(
    ("before", "after", "days", "steps"),
    [
        ("12:00:00", "00:00:00", 0, 1),  # a fall of 12 h is not over 12 h
        ("12:00:01", "00:00:00", 1, 0),
        ("23:59:59", "00:00:00", 1, 0),
        ("18:00:10", "18:00:00", 0, 1),
        ("18:00:00", "18:00:00", 0, 0),
        ("00:00:30", "23:58:31", -1, 1),  # 119 s back
        ("00:00:30", "23:58:30", 0, 0),  # 120 s back, or on by nearly a day
        ("00:00:00", "23:59:59", -1, 1),
    ],
)
def test_a_fall_is_a_new_day_or_a_step(before: str, after: str, days: int, steps: int) -> None:
    text = recipe(heard("%H:%M:%S"))
    lines = [f"{before},Q1A", f"{after},Q1B"]
    assert times_of(text, lines, first_day=date(2026, 3, 10))[1] == f"2026-03-{10 + days:02}T{after}Z"
    _, converter = engine_lines(text, "\n".join(lines).encode(), first_day=date(2026, 3, 10))
    notes = converter.notes()
    assert len(notes) == steps
    assert not steps or "first in line 2:" in notes[0]


def test_steps_are_counted_over_blocks(monkeypatch: pytest.MonkeyPatch) -> None:
    lines = [
        "18:00:00,Q1A",
        "18:10:00,Q1A",
        "18:09:00,Q1A",
        "x",
        "18:20:00,Q1A",
        "18:10:30,Q1A",
        "18:11:00,Q1A",
    ]
    in_blocks_of(monkeypatch, 13)
    _, converter = engine_lines(
        recipe(heard("%H:%M:%S")), "\n".join(lines).encode(), first_day=date(2026, 3, 1)
    )
    (note,) = converter.notes()
    assert note.startswith("the time of day falls 2 times by up to 570 s without a new day, first in line 3")


@pytest.mark.parametrize("size", [12, 1 << 20])
def test_times_without_a_year(size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    text = recipe(CARRIED + heard("%d.%m. %H:%M"))
    lines = [
        "== 2023-11-30", "30.11. 23:59,Q1A", "31.12. 23:59,Q1A", "01.01. 00:00,Q1A", "29.02. 12:00,Q1A",
        "28.02. 12:00,Q1A", "31.12. 23:00,Q1A", "01.01. 00:00,Q1A", "29.02. 12:00,Q1A", "01.03. 00:00,Q1A",
        "== 2020-01-01", "29.02. 00:00,Q1A",
    ]  # fmt: skip
    wanted = [
        "2023-11-30T23:59:00Z", "2023-12-31T23:59:00Z", "2024-01-01T00:00:00Z", "2024-02-29T12:00:00Z",
        "2024-02-28T12:00:00Z", "2024-12-31T23:00:00Z", "2025-01-01T00:00:00Z", "no-date", "2025-03-01T00:00:00Z",
        "2020-02-29T00:00:00Z",
    ]  # fmt: skip
    assert times_of(text, lines) == wanted


@pytest.mark.parametrize("size", [12, 1 << 20])
def test_a_step_back_over_new_year(size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    lines = [
        "31.12. 23:59,Q1A",
        "01.01. 00:00,Q1A",
        "31.12. 23:59,Q1B",
        "01.01. 00:01,Q1A",
        "31.12. 23:58,Q1A",
    ]
    wanted = ["2025-12-31T23:59:00Z", "2026-01-01T00:00:00Z", "2025-12-31T23:59:00Z", "2026-01-01T00:01:00Z"]
    found = times_of(recipe(heard("%d.%m. %H:%M")), lines, first_day=date(2025, 12, 31))
    assert found == [*wanted, "2026-12-31T23:58:00Z"]  # three minutes back is a year on


def test_times_that_mark_the_end_of_a_slot() -> None:
    top = "slot_s = 7.5\ntime_marks = 'end'\n"
    text = recipe(heard("iso") + rule("stop", pattern="stop (?P<time>.*)"), top)
    lines = ["2026-01-01T00:00:00Z,Q1A", "2026-03-01T00:00:07.5Z,Q1A", "stop 2026-01-01T00:00:00Z"]
    wanted = ["2025-12-31T23:59:52.5Z", "2026-03-01T00:00:00Z", "2026-01-01T00:00:00Z"]
    assert times_of(text, lines) == wanted


def test_a_file_with_dates_and_one_without_do_not_share_them() -> None:
    text = recipe(CARRIED + heard("%H:%M"))
    assert times_of(text, ["== 2026-03-01", "18:00,Q1A"]) == ["2026-03-01T18:00:00Z"]
    assert times_of(text, ["18:00,Q1A"]) == ["no-date"]
