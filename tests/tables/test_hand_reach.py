"""The figures of reach, sectors and nights: by hand, by numpy, by simulation."""

from __future__ import annotations

from pathlib import Path
from random import Random
from typing import Any

import numpy as np
import pytest

from logtool import open_logs
from logtool.places.geodesic import bearing_deg, distance_km
from logtool.places.locator import uncertainty_km
from logtool.tables.result import output_value
from tests.tables.making import TABLES, heard, note, rows_of, setup, stop, table, watch, write

SETUP = setup("2026-03-01T20:00:00Z")
SQUARES = ("JN48", "KO02", "IO91", "FN31", "RE78", "GF15", "JN59")


def reach_of(folder: Path, lines: list[str], **words: Any) -> dict[str, Any]:
    (row,) = rows_of(folder, [SETUP, *lines], "reach", **words)
    return row


def at_minute(minute: int) -> str:
    return f"2026-03-01T21:{minute:02d}:00Z"


@pytest.mark.parametrize("count", [1, 2, 4, 5, 6, 7])
def test_percentiles_are_numpys(tmp_path: Path, count: int) -> None:
    lines = [heard(at_minute(i), f"Q{i}", locator=square) for i, square in enumerate(SQUARES[:count])]
    row = reach_of(tmp_path, lines)
    distances = [distance_km("JN58td", square) for square in SQUARES[:count]]
    assert row["located"] == row["squares"] == count
    assert row["median_km"] == round(float(np.percentile(distances, 50, method="linear")), 3)
    p90_km = round(float(np.percentile(distances, 90, method="linear")), 3)
    assert row["p90_km"] == (p90_km if count >= 5 else None)
    assert row["farthest_km"] is None
    assert row["farthest_once_km"] == round(max(distances), 3)


def test_the_farthest_is_one_heard_again_and_the_first_by_name(tmp_path: Path) -> None:
    lines = [heard(at_minute(0), "Q9FAR", locator="RE78")]
    for sender in ("Q2X", "Q1X", "Q3X"):
        lines += [heard(at_minute(i), sender, locator="FN31") for i in (0, 5)]
    row = reach_of(tmp_path, lines)
    assert (row["farthest_sender"], row["heard_once"]) == ("Q1X", 1)
    assert row["farthest_km"] == round(distance_km("JN58td", "FN31"), 3)
    assert row["farthest_once_km"] == round(distance_km("JN58td", "RE78"), 3)


def test_the_nearest_is_sure_to_a_half(tmp_path: Path) -> None:
    # Seen from JN58td, JN48 is 198.6 km off and JN59 100.9 km: the one by more, the other by less than twice
    # what it may be off.
    near = [heard(at_minute(0), "Q1", locator="JN59"), heard(at_minute(0), "Q2", locator="JN48")]
    for place in ("JN59", "JN48"):
        assert (uncertainty_km("JN58td", place) <= distance_km("JN58td", place) / 2) == (place == "JN48")
    assert reach_of(tmp_path, near)["nearest_km"] == round(distance_km("JN58td", "JN48"), 3)
    assert reach_of(tmp_path, near[:1])["nearest_km"] is None


def test_nearer_than_the_uncertainty_there_is_no_bearing(tmp_path: Path) -> None:
    lines = [SETUP, heard(at_minute(0), "Q1", locator="JN58"), heard(at_minute(0), "Q2", locator="JN48")]
    by_name = {row["sender"]: row for row in rows_of(tmp_path, lines, "senders")}
    assert by_name["Q1"]["distance_km"] < by_name["Q1"]["uncertainty_km"]
    assert by_name["Q1"]["bearing_deg"] is None
    assert by_name["Q2"]["bearing_deg"] == round(bearing_deg("JN58td", "JN48") or 0, 4)
    sectors = rows_of(tmp_path, lines, "sectors")
    assert sum(row["receptions"] for row in sectors) == sum(row["senders"] for row in sectors) == 1
    assert output_value("bearing_deg", 359.99996) == 0.0


def test_a_sector_begins_at_its_lower_bound(tmp_path: Path) -> None:
    # Bearings near all sixteen bounds, from cells of ten characters round a receiver on the equator.
    rng = Random(16)
    symbols = ("AR", "09", "ax", "09", "ax")
    near: dict[int, list[tuple[float, str]]] = {}
    for _ in range(20_000):
        word = "".join(chr(rng.randint(ord(a), ord(b))) for a, b in symbols for _ in range(2))
        bearing = bearing_deg("JJ00aa00aa", word)
        if bearing is not None:
            bound = round((bearing - 11.25) / 22.5)
            near.setdefault(bound % 16, []).append((abs(bearing - 11.25 - 22.5 * bound), word))
    words = [word for found in near.values() for _, word in sorted(found)[:6]]
    assert len(words) == 96
    lines = [heard(at_minute(0), f"Q{i}", locator=word) for i, word in enumerate(words)]
    place = setup("2026-03-01T20:00:00Z", "JJ00aa00aa")
    rows = rows_of(tmp_path, [place, *lines], "sectors")
    assert [row["sector_deg"] for row in rows] == [22.5 * k for k in range(16)]
    counted = np.zeros(16, dtype=int)
    for word in words:
        counted[int(((bearing_deg("JJ00aa00aa", word) or 0) + 11.25) % 360 // 22.5)] += 1
    assert [row["senders"] for row in rows] == counted.tolist()
    assert sorted(set(counted)) != [6]  # the bounds do tell them apart


def test_due_north_is_sector_zero_and_empty_sectors_have_rows(tmp_path: Path) -> None:
    lines = [
        SETUP,
        heard(at_minute(0), "Q1", locator="JN59td"),
        heard(at_minute(5), "Q1"),
        heard(at_minute(0), ""),
    ]
    rows = rows_of(tmp_path, lines, "sectors")
    assert [(row["sector_deg"], row["receptions"]) for row in rows] == [(0.0, 2)] + [
        (22.5 * k, 0) for k in range(1, 16)
    ]
    assert rows[0]["farthest_km"] == rows[0]["median_km"] == round(distance_km("JN58td", "JN59td"), 3)
    assert {rows[k]["farthest_km"] for k in range(1, 16)} == {None}
    only_unnamed = rows_of(tmp_path, [SETUP, heard(at_minute(0), "")], "sectors")
    assert [row["senders"] for row in only_unnamed] == [0] * 16


def test_rarefied_senders_against_drawing_minutes(tmp_path: Path) -> None:
    # Rarefaction, after Hurlbert (1971), from memory; but each reception is thinned by itself where he draws a
    # fixed number: in 30 of L minutes each stays with a chance of 30/L, and a sender with any that stays.
    counts, listening_min = {"Q1": 1, "Q2": 3, "Q3": 10}, 48.0
    lines = [heard(at_minute(5 * i), name) for name, n in counts.items() for i in range(n)]
    row = reach_of(tmp_path, [*lines, watch("2026-03-01T21:48:00Z", 2880)])
    assert row["listening_min"] == listening_min
    drawn = np.random.default_rng(30).random((200_000, sum(counts.values()))) < 30 / listening_min
    parts = np.split(drawn, np.cumsum(list(counts.values()))[:-1], axis=1)
    simulated = sum(part.any(axis=1) for part in parts)
    # Four standard errors of the mean of the simulation.
    assert row["senders_in_30"] == pytest.approx(simulated.mean(), abs=4 * simulated.std() / 200_000**0.5)
    # The chance that none of n stays is the binomial's P(0), by hand: 0.375, 0.375**3, 0.375**10.
    assert row["senders_in_30"] == round(3 - 0.375 - 0.052734375 - 0.375**10, 3)


def test_rarefied_senders_need_half_an_hour(tmp_path: Path) -> None:
    lines = [heard(at_minute(0), "Q1"), heard(at_minute(1), "Q2")]
    for on_s, expected in {1800: 2.0, 1799.999999: None, 3600: 1.0}.items():
        row = reach_of(tmp_path, [*lines, watch("2026-03-01T22:00:00Z", on_s)])
        assert row["senders_in_30"] == expected


def test_the_median_level_is_of_senders_not_of_receptions(tmp_path: Path) -> None:
    lines = [heard(at_minute(i), "Q1", snr_db=str(i)) for i in range(9)]  # median 4
    lines += [heard(at_minute(0), "Q2", snr_db="-20"), heard(at_minute(0), "Q3", snr_db="-21")]
    lines += [heard(at_minute(0), "", snr_db="50", mode="S2")]
    assert reach_of(tmp_path, lines)["snr_median_db"] == -20.0


def test_levels_are_pooled_over_neither_bands_nor_modes(tmp_path: Path) -> None:
    lines = [
        SETUP,
        heard(at_minute(0), "Q1", snr_db="4"),
        heard(at_minute(0), "Q2", snr_db="8", dial_hz=3573000),
    ]
    with open_logs(write(tmp_path, lines)) as logs:
        made = table(logs, "reach")
        assert [row["snr_median_db"] for row in made.rows()] == [4.0, 8.0]
        assert (made.summary or {})["snr_median_db"] is None
        assert (table(logs, "reach", band="80m").summary or {})["snr_median_db"] == 8.0
    assert (
        reach_of(tmp_path, [lines[1], heard(at_minute(0), "Q2", snr_db="8", mode="S2")])["snr_median_db"]
        is None
    )


def test_heard_lines_before_a_setup_have_no_place(tmp_path: Path) -> None:
    lines = [
        SETUP,
        heard("2026-03-01T19:59:59.999999Z", locator="JN48"),
        heard("2026-03-01T20:00:00Z", locator="JN48"),
    ]
    before, after = rows_of(tmp_path, lines, "reach")
    assert (before["antenna"], before["located"], before["squares"], before["sun_zenith_deg"]) == (
        None,
        0,
        1,
        None,
    )
    assert (after["antenna"], after["located"]) == ("wire", 1)
    # What the user gives stands in for receivers without any setup only.
    assert rows_of(tmp_path, lines, "reach", at="KO02")[0]["located"] == 0
    (row,) = rows_of(tmp_path, lines[1:2], "reach", at="KO02")
    assert (row["antenna"], row["located"]) == (None, 1)


def test_a_night_across_midnight_and_new_year(tmp_path: Path) -> None:
    lines = [
        setup("2026-12-01T00:00:00Z"),
        heard("2026-12-31T10:59:00Z", "Q0"),
        heard("2026-12-31T12:05:00Z", "Q1"),
        heard("2026-12-31T23:59:59.999999Z", "Q2"),
        heard("2027-01-01T00:00:00Z", "Q3"),
        heard("2027-01-01T10:59:00Z", "Q4"),
        heard("2027-01-01T12:05:00Z", "Q5"),
    ]
    rows = rows_of(tmp_path, lines, "nights")
    assert [(row["night"], row["receptions"]) for row in rows] == [
        ("2026-12-30", 1),
        ("2026-12-31", 4),
        ("2027-01-01", 1),
    ]
    assert [row["to"] for row in rows[:2]] == [row["from"] for row in rows[1:]]
    assert rows[1]["from"].startswith(
        "2026-12-31T11:16"
    )  # noon at 11.6 E, 3 minutes late by the equation of time
    assert len(rows_of(tmp_path, lines, "lines", night="2026-12-31")) == 4


def test_nights_without_a_place_go_from_noon_to_noon_utc(tmp_path: Path) -> None:
    lines = [heard("2026-12-31T11:59:00Z", "Q0"), heard("2026-12-31T12:00:00Z", "Q1")]
    rows = rows_of(tmp_path, lines, "nights")
    assert [(row["night"], row["from"]) for row in rows] == [
        ("2026-12-30", "2026-12-30T12:00:00Z"),
        ("2026-12-31", "2026-12-31T12:00:00Z"),
    ]


def test_a_nights_share_is_the_mean_over_its_hours(tmp_path: Path) -> None:
    lines = [
        SETUP,
        *(watch(f"2026-03-01T{hour}:00:00Z", on_s) for hour, on_s in {21: 3600, 22: 1800, 23: 3600}.items()),
        watch("2026-03-02T00:00:00Z", 1700),  # less than half an hour: not counted
        heard("2026-03-01T20:30:00Z", "Q1"),  # 0.5 in the first hour, of 60 minutes
        heard("2026-03-01T21:30:00Z", "Q1"),  # 1 and 1 in the second, of 30
        heard("2026-03-01T21:31:00Z", "Q2", mode="S2"),
        heard("2026-03-01T23:31:00Z", "Q3"),
        heard("2026-03-01T23:40:00Z", "Q3", mode="T3"),
    ]
    (row,) = rows_of(tmp_path, lines, "nights")
    assert row["senders_in_30"] == round((0.5 + 2 + 0) / 3, 3)
    split = {row["mode"]: row["senders_in_30"] for row in rows_of(tmp_path, lines, "nights", by="mode")}
    assert split == {
        "K8": 0.5,
        "S2": 0.333,
        "T3": 0.0,
    }  # an hour in which a mode was not heard counts as any other
    assert split["S2"] == rows_of(tmp_path, lines, "nights", mode="S2")[0]["senders_in_30"]


@pytest.mark.parametrize(
    "lines",
    [[], ["# logtool layout 1"], [note(at_minute(0))], [stop(at_minute(0))], [SETUP]],
    ids=["empty", "comment", "note", "stop", "setup"],
)
def test_nothing_heard_gives_no_rows(tmp_path: Path, lines: list[str]) -> None:
    assert {name: rows_of(tmp_path, lines, name) for name in TABLES} == {name: [] for name in TABLES}
    with open_logs(write(tmp_path, lines), threads=1) as logs:
        for name in TABLES:
            frame = table(logs, name).to_pandas()
            assert len(frame) == 0
            assert len(frame.columns) > 7
