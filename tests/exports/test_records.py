"""The receptions with their places, and which records a choice exports."""

from __future__ import annotations

import csv
import io
from pathlib import Path
from typing import Any

import pytest

import logtool
from logtool import open_logs, receptions
from logtool.places.geodesic import bearing_deg, distance_km
from logtool.places.locator import uncertainty_km
from tests.exports.logs import export, raw_records, write_log
from tests.tables.making import heard, note, setup, table

ROOT = Path(__file__).parents[2]
CHOICES: list[dict[str, Any]] = [
    {},
    {"from_": "2026-03-03T21:10:00Z", "to": "2026-03-04T01:17:30Z"},
    {"antenna": "wire", "night": ("2026-03-02", "2026-03-05")},
    {"sender": "Q7XS"},
    {"mode": "KB15", "band": "40m"},
    {"receiver": "nobody"},
]


@pytest.mark.parametrize("words", CHOICES)
def test_sample_has_the_receptions_of_the_other_tables(words: dict[str, Any]) -> None:
    with open_logs(ROOT / "sample_logs") as logs:
        found = receptions(logs, **words)
        lines = table(logs, "lines", **words)
        reach = table(logs, "reach", **words)
    assert len(found) == len(lines) == sum(reach.columns["receptions"])
    assert found.time.is_monotonic_increasing
    keys = ["sender", "snr_db", "audio_hz", "text"]
    assert sorted(map(str, zip(*(lines.columns[key] for key in keys), strict=True))) == sorted(
        str(tuple(None if value != value else value for value in row))
        for row in found[keys].itertuples(index=False)
    )


def test_distances_are_those_between_the_cells() -> None:
    with open_logs(ROOT / "sample_logs") as logs:
        found = receptions(logs, night="2026-03-05")
    pairs = found.drop_duplicates(["receiver_locator", "sender_locator"])
    located = pairs[pairs.distance_km.notna()]
    assert len(located) > 100
    assert located.sender_locator.notna().all()
    assert pairs[pairs.distance_km.isna()].sender_locator.isna().all()
    for row in located.itertuples():
        assert row.distance_km == pytest.approx(
            distance_km(row.receiver_locator, row.sender_locator), abs=1e-9
        )
        assert row.uncertainty_km == pytest.approx(
            uncertainty_km(row.receiver_locator, row.sender_locator), abs=1e-9
        )
        bearing = bearing_deg(row.receiver_locator, row.sender_locator)
        assert row.bearing_deg == pytest.approx(bearing, abs=1e-9, nan_ok=True) or bearing is None


def test_places_by_hand(tmp_path: Path) -> None:
    path = tmp_path / "a.log"
    lines = [
        heard("2026-03-01T17:59:00Z", "Q1ABC", locator="JO62"),
        setup("2026-03-01T18:00:00Z", "JN58td", "wire"),
        heard("2026-03-01T18:10:00Z", "Q1ABC", locator="JO62"),
        heard("2026-03-01T18:11:00Z", "Q1ABC"),
        heard("2026-03-01T19:11:00Z", "Q1ABC"),
        heard("2026-03-01T19:12:00Z", "Q1ABC/P"),
        heard("2026-03-01T19:13:00Z", ""),
        heard("2026-03-20T19:14:00Z", "Q1ABC"),
    ]
    path.write_text("".join(f"{line}\n" for line in lines))
    with open_logs(path) as logs:
        found = receptions(logs)
    told = [
        tuple(row)
        for row in found[["antenna", "receiver_locator", "sender_locator", "borrowed"]]
        .astype(object)
        .where(lambda frame: frame.notna(), None)
        .itertuples(index=False)
    ]
    assert told == [
        (None, None, "JO62", False),  # before the first setup
        ("wire", "JN58td", "JO62", False),
        ("wire", "JN58td", "JO62", False),  # of the same hour
        ("wire", "JN58td", "JO62", True),
        ("wire", "JN58td", None, None),  # with / it may be anywhere
        ("wire", "JN58td", None, None),
        ("wire", "JN58td", None, None),  # over 14 days
    ]
    assert found.distance_km.isna().tolist() == [True, False, False, False, True, True, True]
    assert logtool.receptions is receptions


def kinds(path: Path, **words: Any) -> list[tuple[str, str]]:
    """Time and kind of each record that a choice exports."""
    rows = csv.DictReader(io.StringIO(export("csv", path, **words).decode(), newline=""))
    return [(row["time"][11:16], row["kind"]) for row in rows]


def test_choices_among_other_records(tmp_path: Path) -> None:
    path = write_log(tmp_path / "a.log", shapes=False)
    everything = kinds(path)
    assert len(everything) == len(raw_records(path))
    assert kinds(path, receiver="hut") == [one for one in everything if one != ("18:05", "heard")]
    assert kinds(path, receiver="hut@RE78ir92") == [
        ("21:00", "setup"), ("21:10", "heard"), ("21:15", "note"), ("22:00", "stop")
    ]  # fmt: skip
    assert kinds(path, from_="2026-03-01T19:00:00Z", to="2026-03-01T20:00:00Z") == [
        ("19:00", "watch"), ("19:20", "heard"), ("19:21", "heard"), ("19:22", "heard")
    ]  # fmt: skip
    assert kinds(path, antenna="none") == [("20:00", "setup"), ("20:10", "heard")]
    assert ("20:10", "heard") in everything  # with the antenna off, and yet not lost
    assert kinds(path, band="30m") == [("21:10", "heard"), ("21:15", "note"), ("22:00", "stop")]
    assert kinds(path, sender="q5a") == [("21:10", "heard")]
    assert kinds(path, mode="+K8") == [("19:22", "heard")]
    assert kinds(path, night="2026-03-01") == everything
    assert kinds(path, night="2026-03-02") == []


def test_nights_of_other_records(tmp_path: Path) -> None:
    """Solar noon at 11.6 E is at 11:26 UTC; an hour with a note alone belongs to a night as well."""
    path = tmp_path / "a.log"
    lines = [
        setup("2026-03-01T09:00:00Z"),
        note("2026-03-01T10:00:00Z"),
        heard("2026-03-01T10:30:00Z"),
        note("2026-03-01T12:30:00Z"),
        heard("2026-03-01T13:30:00Z"),
    ]
    path.write_text("".join(f"{line}\n" for line in lines))
    assert kinds(path, night="2026-02-28") == [("09:00", "setup"), ("10:00", "note"), ("10:30", "heard")]
    assert kinds(path, night="2026-03-01") == [("12:30", "note"), ("13:30", "heard")]


def test_a_choice_that_names_nothing_known_is_empty(tmp_path: Path) -> None:
    path = write_log(tmp_path / "a.log", shapes=False)
    assert kinds(path, receiver="nobody") == []
