"""Conversations and the lines behind a figure, counted by hand."""

from __future__ import annotations

from pathlib import Path

from logtool import open_logs
from logtool.places.geodesic import distance_km
from tests.tables.making import heard, rows_of, setup, table, write

SETUP = setup("2026-03-01T20:00:00Z")
TALK = [
    heard("2026-03-01T21:00:00Z", "Q2B", addressee="", locator="KO02", text="CQ"),
    heard("2026-03-01T21:00:15Z", "Q1A", addressee="Q2B", locator="JN48", text="Q2B DE Q1A"),
    heard("2026-03-01T21:00:30Z", "q2b", addressee="q1a", text="Q1A DE Q2B"),
    heard("2026-03-01T21:00:45Z", "Q1A", addressee="Q2B", text="73"),
    heard("2026-03-01T21:01:00Z", "Q1A", addressee="Q1A", text="to itself"),
    heard("2026-03-01T21:01:00Z", "", addressee="Q1A", text="unnamed"),
]


def test_a_conversation(tmp_path: Path) -> None:
    (row,) = rows_of(tmp_path, [SETUP, *TALK], "between")
    assert row == {
        "a": "Q1A",
        "b": "Q2B",
        "band": "40m",
        "first": "2026-03-01T21:00:15Z",
        "last": "2026-03-01T21:00:45Z",
        "from_a": 2,
        "from_b": 1,
        "locator_a": "JN48",
        "locator_b": "KO02",
        "between_km": round(distance_km("JN48", "KO02"), 3),
    }


def test_one_message_on_two_receivers_counts_once(tmp_path: Path) -> None:
    twice = [text.replace("\thut\t", "\tisle\t") for text in TALK]
    rows = rows_of(tmp_path / "twice", [SETUP, *TALK, *twice], "between")
    assert rows == rows_of(tmp_path / "once", [SETUP, *TALK], "between")
    other_band = [text.replace("7074000", "3573000") for text in twice]
    rows = rows_of(tmp_path / "bands", [SETUP, *TALK, *other_band], "between")
    assert [(row["band"], row["from_a"]) for row in rows] == [("40m", 2), ("80m", 2)]


def test_a_side_out_of_reach_has_no_place(tmp_path: Path) -> None:
    (row,) = rows_of(tmp_path, [SETUP, *TALK[1:2]], "between")
    assert (row["from_a"], row["from_b"]) == (1, 0)
    assert (row["locator_a"], row["locator_b"], row["between_km"]) == ("JN48", None, None)


def test_long_lines_and_padded_numbers_are_there_too(tmp_path: Path) -> None:
    long = heard("2026-03-01T21:02:00Z", "Q1A", addressee="Q2B", text="x" * 3000)
    padded = heard("2026-03-01T21:03:00Z", "Q1A", addressee="Q2B", dial_hz="007074000")
    lines = [SETUP, *TALK, long, padded, long]
    (row,) = rows_of(tmp_path, lines, "between")
    assert (row["from_a"], row["last"]) == (4, "2026-03-01T21:03:00Z")
    shown = rows_of(tmp_path, lines, "lines")
    assert [row["line"] for row in shown] == [2, 3, 4, 5, 6, 7, 8, 9]
    assert [row["dial_hz"] for row in shown] == [7074000] * 8


def test_a_line_is_shown_where_it_stands_first(tmp_path: Path) -> None:
    write(tmp_path, [SETUP, TALK[1]], [TALK[0], TALK[1], "", "# rain", TALK[2]])
    with open_logs(tmp_path) as logs:
        rows = list(table(logs, "lines").rows())
        assert [(Path(row["file"]).name, row["line"]) for row in rows] == [
            ("000.log", 2),
            ("001.log", 1),
            ("001.log", 5),
        ]
        (only,) = table(logs, "lines", sender="q2b", from_="2026-03-01T21:00:30Z").rows()
    assert (only["sender"], only["addressee"], only["text"]) == ("Q2B", "Q1A", "Q1A DE Q2B")
    assert (only["snr_db"], only["locator"], only["more"]) == (None, None, None)
