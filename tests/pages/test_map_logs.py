"""The map gathered from logs: its figures are those of the tables, its choices those of the command line."""

from __future__ import annotations

import time
from collections import defaultdict
from pathlib import Path

import pytest

from logtool import NoRecordsError, UsageError, open_logs
from logtool.pages.map import map_data_of, map_text
from logtool.pages.map_data import MapData
from logtool.places.geodesic import bearing_deg, distance_km
from logtool.tables.choice import choose
from tests.pages.map_made import SAMPLES, drawn_in, made
from tests.tables.making import heard, setup, stop, table, watch, write

AT, TO = "JN58td", "RE78ir"


@pytest.fixture(scope="module")
def sample() -> MapData:
    with open_logs(SAMPLES) as logs:
        return map_data_of(logs, choose())


def test_the_sample_has_the_figures_of_the_table_of_senders(sample: MapData) -> None:
    with open_logs(SAMPLES) as logs:
        rows = list(table(logs, "senders").rows())
    receptions: dict[int, int] = defaultdict(int)
    for sender, count in zip(sample.totals.sender, sample.totals.receptions, strict=True):
        receptions[sender] += count
    shown = {}
    for pair in sample.pairs:
        sender = sample.senders[pair.sender]
        shown[sender.name] = (
            sender.locator, sender.borrowed, pair.distance_km, pair.uncertainty_km, pair.bearing_deg,
            receptions[pair.sender], pair.heard_again, pair.first, pair.last,
        )  # fmt: skip
        assert pair.locator is None  # one receiver: the place over all is its own
    assert len(rows) == len(shown) > 200
    keys = (
        "locator", "borrowed", "distance_km", "uncertainty_km", "bearing_deg",
        "receptions", "heard_again", "first", "last",
    )  # fmt: skip
    assert {row["sender"]: tuple(row[key] for key in keys) for row in rows} == shown


def test_the_sample_has_the_medians_of_the_tables(sample: MapData) -> None:
    with open_logs(SAMPLES) as logs:
        rows = list(table(logs, "senders", by=("antenna", "mode")).rows())
    totals = sample.totals
    shown = {}
    for sender, group, count, median in zip(
        totals.sender, totals.group, totals.receptions, totals.snr_median_db, strict=True
    ):
        of = sample.groups[group]
        shown[sample.senders[sender].name, of.antenna, of.band, of.mode] = (count, median)
    keys = ("sender", "antenna", "band", "mode")
    assert shown == {tuple(row[k] for k in keys): (row["receptions"], row["snr_median_db"]) for row in rows}


def test_the_hours_of_the_sample_are_those_of_reach(sample: MapData) -> None:
    with open_logs(SAMPLES) as logs:
        rows = list(table(logs, "reach").rows())
        nights = {row["night"] for row in table(logs, "nights").rows()}
    hours = [time.strftime("%Y-%m-%dT%H:00:00Z", time.gmtime(hour.start_unix_s)) for hour in sample.hours]
    assert hours == sorted({row["hour"] for row in rows})
    assert {night for hour in sample.hours for night in hour.nights} == nights
    minutes: dict[str, float] = defaultdict(float)
    for row in rows:
        minutes[row["hour"]] += row["listening_min"]
        group = [group.antenna for group in sample.groups].index(row["antenna"])
        located = drawn_in(sample, group=group, hour=hours.index(row["hour"]))
        assert len(located) == row["located"], row
    for hour, name in zip(sample.hours, hours, strict=True):
        assert hour.listening_min == (pytest.approx(minutes[name], abs=0.0015),), name  # each row is rounded


def test_hours_off_are_told_from_hours_not_recorded(tmp_path: Path) -> None:
    lines = [
        *(setup("2026-03-01T00:00:00Z", receiver=name) for name in ("hut", "isle", "pier")),
        watch("2026-03-01T01:00:00Z", 1800),
        watch("2026-03-01T01:00:00Z", 2400, dial_hz=3573000),  # at the same time: 40 minutes, not 70
        heard("2026-03-01T02:10:00Z"),  # outside every watch
        watch("2026-03-01T04:00:00Z", 60),
        *(heard(f"2026-03-01T0{hour}:10:00Z", receiver="isle") for hour in range(6)),
        heard("2026-03-01T03:12:00Z", receiver="isle"),
        watch("2026-03-01T01:30:00Z", 60, receiver="pier"),
    ]
    data = made(tmp_path, *lines)
    assert [receiver.name for receiver in data.receivers] == ["hut", "isle", "pier"]
    assert [receiver.assumed for receiver in data.receivers] == [False, True, False]
    assert [hour.listening_min for hour in data.hours] == [
        (40.0, 10.0, None),
        (0.0, None, 1.0),
        (None, None, None),
        (1.0, 2.0, None),
        (None, None, None),
        (None, None, None),
    ]
    assert any("isle: no watch line" in note for note in data.notes)


def test_two_receivers_share_a_sender_at_one_place(tmp_path: Path) -> None:
    data = made(
        tmp_path,
        setup("2026-03-01T20:00:00Z", AT),
        setup("2026-03-01T20:00:00Z", TO, receiver="isle"),
        heard("2026-03-01T20:10:00Z", locator="KO02"),
        heard("2026-03-01T21:10:00Z", locator="KO02"),
        heard("2026-03-01T21:10:00Z", locator="JO62", receiver="isle"),
    )
    assert [(r.name, r.locator) for r in data.receivers] == [("hut", AT), ("isle", TO)]
    assert [(s.name, s.locator) for s in data.senders] == [("Q1ABC", "KO02")]
    hut, isle = data.pairs
    assert (hut.locator, isle.locator) == (None, "JO62")
    assert hut.distance_km == round(distance_km(AT, "KO02"), 3)
    assert isle.distance_km == round(distance_km(TO, "JO62"), 3)
    assert any("1 sender with locators in several squares" in note for note in data.notes)


def test_the_short_way_leads_over_the_180th_meridian(tmp_path: Path) -> None:
    (pair,) = made(tmp_path, heard("2026-03-01T20:10:00Z", locator="AG08"), at=TO).pairs
    assert pair.distance_km == round(distance_km(TO, "AG08"), 3) < 5000
    assert pair.bearing_deg == round(bearing_deg(TO, "AG08") or 0, 4) < 180  # eastwards


def test_a_receiver_that_moved_is_two(tmp_path: Path) -> None:
    data = made(
        tmp_path,
        setup("2026-03-01T20:00:00Z", AT),
        heard("2026-03-01T20:10:00Z", locator="KO02"),
        setup("2026-03-02T20:00:00Z", TO),
        heard("2026-03-02T20:10:00Z", locator="KO02"),
    )
    assert [(r.name, r.locator) for r in data.receivers] == [(f"hut@{AT}", AT), (f"hut@{TO}", TO)]
    assert [pair.distance_km for pair in data.pairs] == [
        round(distance_km(place, "KO02"), 3) for place in (AT, TO)
    ]


def test_without_any_place_it_says_what_to_give(tmp_path: Path) -> None:
    with pytest.raises(UsageError, match=r"no receiver has a place \(hut\): give --at LOCATOR"):
        made(tmp_path, heard("2026-03-01T20:10:00Z", locator="KO02"))
    (receiver,) = made(tmp_path, heard("2026-03-01T20:10:00Z", locator="KO02"), at="jn58TD").receivers
    assert receiver.locator == AT


def test_a_receiver_without_a_place_is_left_out_and_told(tmp_path: Path) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z"),
        heard("2026-03-01T20:10:00Z", locator="KO02"),
        heard("2026-03-01T20:10:00Z", "Q2X", locator="KO02", receiver="isle"),
    ]
    data = made(tmp_path, *lines)
    assert [sender.name for sender in data.senders] == ["Q1ABC"]
    assert data.notes[0].startswith("isle has no place, so its receptions (1) are not on this map: give --at")
    with pytest.raises(UsageError, match=r"no receiver has a place \(isle\)"):
        made(tmp_path, *lines, receiver="isle")


def test_receptions_before_the_first_setup_have_no_distance(tmp_path: Path) -> None:
    before = heard("2026-03-01T19:10:00Z", locator="KO02")
    after = heard("2026-03-01T20:10:00Z", "Q2X", locator="KO02")
    data = made(tmp_path, before, setup("2026-03-01T20:00:00Z"), after)
    assert data.receivers[0].locator == AT
    assert [sender.locator for sender in data.senders] == ["KO02", "KO02"]
    assert [pair.distance_km for pair in data.pairs] == [None, round(distance_km(AT, "KO02"), 3)]
    with pytest.raises(UsageError, match="a setup line before the first reception"):
        made(tmp_path, before, setup("2026-03-01T20:00:00Z"))


def test_senders_without_a_place_are_passed_on_and_unnamed_ones_told(tmp_path: Path) -> None:
    data = made(
        tmp_path,
        setup("2026-03-01T20:00:00Z"),
        heard("2026-03-01T20:10:00Z", locator="JN"),
        heard("2026-03-01T20:11:00Z", "", locator="KO02"),
    )
    assert [(s.name, s.locator, s.borrowed) for s in data.senders] == [("Q1ABC", None, None)]
    assert (data.pairs[0].distance_km, data.pairs[0].uncertainty_km) == (None, None)
    assert "1 reception without a sender: not on the map" in data.notes


def test_a_portable_sender_is_drawn_only_in_hours_with_its_own_locator(tmp_path: Path) -> None:
    times = ("2026-03-01T20:10:00Z", "2026-03-01T21:10:00Z")
    data = made(
        tmp_path,
        setup("2026-03-01T20:00:00Z"),
        *(heard(times[0], call, locator="KO02") for call in ("Q1ABC", "Q3Z/P")),
        *(heard(times[1], call) for call in ("Q1ABC", "Q3Z/P")),
    )
    assert drawn_in(data, hour=0) == {"Q1ABC", "Q3Z/P"}
    assert drawn_in(data, hour=1) == {"Q1ABC"}  # borrowed from the hour before


@pytest.mark.parametrize(
    ("chosen", "senders", "hours"),
    [
        ({}, ["Q1ABC", "Q2X", "Q4U"], 3),
        ({"antenna": "loop"}, ["Q2X"], 1),
        ({"antenna": "none"}, ["Q5V"], 1),
        ({"band": "80m"}, ["Q4U"], 1),
        ({"night": "2026-03-01"}, ["Q1ABC", "Q2X"], 2),
        ({"from_": "2026-03-01T21:00:00Z", "to": "2026-03-02T00:00:00Z"}, ["Q2X"], 1),
        ({"sender": "q4u"}, ["Q4U"], 3),  # the hours listened are there, empty
        ({"antenna": "beam"}, [], 0),
        ({"receiver": "nobody"}, [], 0),
    ],
)
def test_filters(tmp_path: Path, chosen: dict[str, str], senders: list[str], hours: int) -> None:
    data = made(
        tmp_path,
        setup("2026-03-01T20:00:00Z"),
        watch("2026-03-01T21:00:00Z", 3600),
        heard("2026-03-01T20:10:00Z", locator="KO02"),
        setup("2026-03-01T21:00:00Z", antenna="loop"),
        heard("2026-03-01T21:10:00Z", "Q2X", locator="KO02"),
        watch("2026-03-01T22:00:00Z", 3600),
        setup("2026-03-01T22:00:00Z", antenna="none"),
        heard("2026-03-01T22:10:00Z", "Q5V", locator="KO02"),
        setup("2026-03-02T20:00:00Z"),
        watch("2026-03-02T21:00:00Z", 3600, dial_hz=3573000),
        heard("2026-03-02T20:10:00Z", "Q4U", locator="KO02", dial_hz=3573000),
        **chosen,
    )
    assert [sender.name for sender in data.senders] == senders
    assert len(data.hours) == hours
    assert [receiver.name for receiver in data.receivers] == ["hut"]


def test_nothing_chosen_gives_a_page_and_nothing_read_an_error(tmp_path: Path) -> None:
    with open_logs(write(tmp_path, [setup("2026-03-01T20:00:00Z"), stop("2026-03-01T20:30:00Z")])) as logs:
        page = map_text(logs, choose(antenna="beam"), options=[("antenna", "beam")])
    assert '"senders":[]' in page
    assert "no antenna 'beam' in the inputs" in page
    assert '"options":[["antenna","beam"]]' in page
    assert "<title>Heard at hut</title>" in page
    with pytest.raises(NoRecordsError, match="hold no record"):
        made(tmp_path, "# logtool layout 1")


def test_ledger_and_refusals_are_told_without_folders(tmp_path: Path) -> None:
    folder = write(tmp_path / "private", [setup("2026-03-01T20:00:00Z"), "nonsense", "# x"], [])
    (folder / "new.log").write_text("# logtool layout 9\n")
    with open_logs(folder) as logs:
        data, page = map_data_of(logs, choose(), title="Seven </title><b>nights"), map_text(logs, choose())
    assert data.title == "Seven </title><b>nights"
    assert data.files == ("000.log", "001.log")
    assert data.ledger == (
        "000.log: 3 lines: 1 record, 1 comment, 1 set aside (1 too-few-fields)",
        "001.log: 0 lines: 0 records",
    )
    assert any(note.startswith("not read: new.log: ") for note in data.notes)
    assert "private" not in page
