"""Who was heard again, and from where: few lines, counted by hand."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from logtool.tables.locators import most_frequent
from tests.tables.making import heard, rows_of, setup

SETUP = setup("2026-01-01T00:00:00Z")


def again(folder: Path, first: str, second: str, **fields: Any) -> tuple[int, int]:
    """How many of the two rows of `reach` by hour and mode say heard once, and how many heard again."""
    lines = [SETUP, heard(first, mode="A"), heard(second, **{"mode": "B"} | fields)]
    rows = rows_of(folder, lines, "reach", by="mode")
    once = sum(row["heard_once"] for row in rows)
    return once, sum(row["senders"] for row in rows) - once


@pytest.mark.parametrize(
    ("second", "is_again"),
    [
        ("2026-03-01T21:00:59.999Z", False),
        ("2026-03-01T21:00:59.999999Z", False),
        ("2026-03-01T21:01:00Z", True),
        ("2026-03-01T22:30:00Z", True),
        ("2026-03-02T20:59:59.999999Z", True),
        ("2026-03-02T21:00:00Z", False),
        ("2026-03-05T21:00:00Z", False),
    ],
)
def test_heard_again_from_a_minute_to_less_than_a_day(tmp_path: Path, second: str, is_again: bool) -> None:
    first = "2026-03-01T21:00:00Z"
    expected = (0, 2) if is_again else (2, 0)
    assert again(tmp_path, first, second) == expected
    assert again(tmp_path, second, first) == expected


def test_heard_again_needs_the_same_receiver_band_and_sender(tmp_path: Path) -> None:
    first, second = "2026-03-01T21:00:00Z", "2026-03-01T21:10:00Z"
    assert again(tmp_path, first, second, dial_hz=7041500) == (0, 2)  # another dial of the band
    assert again(tmp_path, first, second, sender="q1abc") == (0, 2)
    assert again(tmp_path, first, second, dial_hz=3573000) == (2, 0)
    assert again(tmp_path, first, second, sender="Q1ABC/P") == (2, 0)
    assert again(tmp_path, first, second, receiver="isle") == (2, 0)


def test_a_third_reception_in_the_same_minute_is_heard_again_of_itself(tmp_path: Path) -> None:
    # Of 21:00:00, 21:00:30 and 21:01:15 the middle one is 45 s from the third: only the outer two were again.
    times = {"00:00": "A", "00:30": "B", "01:15": "C"}
    lines = [SETUP, *(heard(f"2026-03-01T21:{time}Z", mode=mode) for time, mode in times.items())]
    rows = rows_of(tmp_path, lines, "reach", by="mode")
    assert {row["mode"]: row["heard_once"] for row in rows} == {"A": 0, "B": 1, "C": 0}
    (row,) = rows_of(tmp_path, lines, "senders")
    assert row["heard_again"] is True


def test_a_receiver_moved_far_is_another_and_a_little_is_not(tmp_path: Path) -> None:
    for place, names in {
        "JN58te": {"hut"},
        "JN58tg": {"hut@JN58td", "hut@JN58tg"},
    }.items():  # 4.6 and 13.9 km
        lines = [
            SETUP,
            heard("2026-03-01T21:00:00Z"),
            setup("2026-03-01T21:05:00Z", place),
            heard("2026-03-01T21:10:00Z"),
        ]
        rows = rows_of(tmp_path, lines, "senders")
        assert {row["receiver"] for row in rows} == names
        assert {row["heard_again"] for row in rows} == {len(names) == 1}
    step = setup("2026-02-01T00:00:00Z", "JN58te")  # links the two: 4.6 and 9.3 km
    assert {row["receiver"] for row in rows_of(tmp_path, [*lines, step], "senders")} == {"hut"}


@pytest.mark.parametrize(
    ("counts", "expected"),
    [
        ({"JN58": 3}, "JN58"),
        ({"JN58": 3, "JN58TD": 1}, "JN58TD"),
        ({"JN58": 3, "KO02": 4}, "KO02"),
        ({"JN58": 3, "JN58TD": 1, "KO02": 3}, "JN58TD"),  # 4 against 3
        ({"JN58": 3, "JN58TD": 1, "JN58AE": 2}, "JN58AE"),  # the shorter goes to the more frequent
        (
            {"JN58": 9, "JN58TD": 1, "JN58TD25": 1, "JN59": 10},
            "JN58TD25",
        ),  # 11: through the middle one, on a tie
        ({"JN58": 2, "KO02AA": 2}, "KO02AA"),  # a tie: the longer
        ({"KO02": 2, "JN58": 2}, "JN58"),  # a tie: alphabetical
    ],
)
def test_the_most_frequent_locator(counts: dict[str, int], expected: str) -> None:
    assert most_frequent(counts) == expected
    assert most_frequent(dict(reversed(counts.items()))) == expected


def sender_row(folder: Path, given: dict[str, str], **words: Any) -> tuple[str | None, bool | None]:
    lines = [SETUP, *(heard(time, locator=locator) for time, locator in given.items())]
    (row,) = rows_of(folder, lines, "senders", **words)
    return row["locator"], row["borrowed"]


@pytest.mark.parametrize(
    ("given", "found"),
    [
        ({"2026-03-15T21:59:59Z": "JN48"}, ("JN48", True)),  # hours 336 apart: exactly 14 days
        ({"2026-03-15T22:00:00Z": "JN48"}, (None, None)),
        ({"2026-02-15T21:00:00Z": "JN48"}, ("JN48", True)),
        ({"2026-02-15T20:59:59Z": "JN48"}, (None, None)),
        ({"2026-03-01T19:00:00Z": "JN48", "2026-03-01T23:59:00Z": "KO02"}, ("JN48", True)),  # the earlier
        ({"2026-03-01T18:59:59Z": "JN48", "2026-03-01T23:59:00Z": "KO02"}, ("KO02", True)),  # the nearer
        ({"2026-03-01T22:00:00Z": "JN"}, (None, None)),  # two characters are no place
        ({"2026-03-01T21:59:00Z": "jn48AB"}, ("JN48ab", False)),  # of the same hour: its own
    ],
)
def test_borrowing(tmp_path: Path, given: dict[str, str], found: tuple[str | None, bool | None]) -> None:
    asked = {"2026-03-01T21:30:00Z": ""}
    assert (
        sender_row(tmp_path, asked | given, from_="2026-03-01T21:30:00Z", to="2026-03-01T21:31:00Z") == found
    )


def test_portable_call_signs_never_borrow(tmp_path: Path) -> None:
    for sender, located in {"Q1ABC": 2, "Q1ABC/P": 1}.items():
        lines = [
            SETUP,
            heard("2026-03-01T21:00:00Z", sender, locator="JN48"),
            heard("2026-03-01T23:00:00Z", sender),
        ]
        rows = rows_of(tmp_path, lines, "reach")
        assert sum(row["located"] for row in rows) == located
    lines = [
        SETUP,
        heard("2026-03-01T21:00:00Z", "Q1ABC", locator="JN48"),
        heard("2026-03-01T21:00:00Z", "Q1ABC/P"),
    ]
    rows = rows_of(tmp_path, lines, "senders")
    assert {row["sender"]: row["locator"] for row in rows} == {"Q1ABC": "JN48", "Q1ABC/P": None}


def test_another_receiver_lends_the_locator_of_the_hour(tmp_path: Path) -> None:
    lines = [
        SETUP,
        setup("2026-01-01T00:00:00Z", "KO02aa", receiver="isle"),
        heard("2026-03-01T21:00:00Z", locator=""),
        heard("2026-03-01T21:10:00Z", locator="JN48", receiver="isle"),
    ]
    rows = rows_of(tmp_path, lines, "senders")
    assert {row["receiver"]: (row["locator"], row["borrowed"]) for row in rows} == {
        "hut": ("JN48", False),
        "isle": ("JN48", False),
    }


def test_over_several_hours_own_locators_come_first_and_borrowed_ones_last(tmp_path: Path) -> None:
    moved = {
        "2026-03-01T20:00:00Z": "JN48",
        "2026-03-01T21:00:00Z": "",  # borrows JN48
        "2026-03-01T21:10:00Z": "",
        "2026-03-01T23:00:00Z": "KO02",
    }
    assert sender_row(tmp_path, moved) == ("JN48", False)  # one of each: alphabetical, whatever is borrowed
    assert sender_row(tmp_path, moved, from_="2026-03-01T21:00:00Z") == ("KO02", False)
    assert sender_row(tmp_path, moved, to="2026-03-01T21:30:00Z", from_="2026-03-01T21:00:00Z") == (
        "JN48",
        True,
    )


def test_hours_in_which_others_heard_a_locator_come_before_borrowed_ones(tmp_path: Path) -> None:
    lines = [
        SETUP,
        heard("2026-03-01T21:00:00Z"),
        heard("2026-03-01T21:30:00Z", locator="JN48", receiver="isle"),
        heard("2026-03-01T23:00:00Z"),  # borrows KO02, as does the next
        heard("2026-03-01T23:10:00Z"),
        heard("2026-03-02T00:30:00Z", locator="KO02", receiver="isle"),
    ]
    (row,) = rows_of(tmp_path, lines, "senders", receiver="hut")
    assert (row["receptions"], row["locator"], row["borrowed"]) == (3, "JN48", False)
    (row,) = rows_of(tmp_path, lines, "senders", receiver="hut", from_="2026-03-01T23:00:00Z")
    assert (row["receptions"], row["locator"], row["borrowed"]) == (2, "KO02", True)


def test_the_figures_of_a_sender(tmp_path: Path) -> None:
    lines = [
        SETUP,
        heard("2026-03-01T21:00:00Z", "q1abc", snr_db="-10", locator="JN48"),
        heard("2026-03-01T22:00:00Z", "Q1ABC", snr_db="-4"),
        heard("2026-03-03T22:00:00Z", "Q1ABC", snr_db=""),
        heard("2026-03-03T22:00:00Z", "Q0A", snr_db="3"),
        heard("2026-03-03T22:00:15Z", "", snr_db="30"),
    ]
    first, second = rows_of(tmp_path, lines, "senders")
    assert (first["sender"], first["receptions"], first["nights"], first["heard_again"]) == (
        "Q1ABC",
        3,
        2,
        True,
    )
    assert (first["first"], first["last"]) == ("2026-03-01T21:00:00Z", "2026-03-03T22:00:00Z")
    assert (first["snr_median_db"], first["snr_best_db"]) == (-7.0, -4.0)
    assert (second["sender"], second["heard_again"], second["locator"], second["borrowed"]) == (
        "Q0A",
        False,
        None,
        None,
    )
    assert (second["distance_km"], second["uncertainty_km"], second["bearing_deg"]) == (None, None, None)


def test_levels_of_two_modes_are_not_pooled(tmp_path: Path) -> None:
    lines = [
        SETUP,
        heard("2026-03-01T21:00:00Z", snr_db="-10"),
        heard("2026-03-01T21:10:00Z", mode="", snr_db="2"),
    ]
    (row,) = rows_of(tmp_path, lines, "senders")
    assert (row["snr_median_db"], row["snr_best_db"]) == (None, None)
    (row,) = rows_of(tmp_path, lines, "senders", mode="K8")
    assert row["snr_median_db"] == -10.0
    lines[2] = heard("2026-03-01T21:10:00Z", mode="")  # no level, so nothing to pool
    (row,) = rows_of(tmp_path, lines, "senders")
    assert row["snr_median_db"] == -10.0
