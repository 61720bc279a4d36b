"""The lines behind a sender on the map: they stand where the page says, and hold what it says."""

from __future__ import annotations

import gzip
from pathlib import Path

import pytest

from logtool import open_logs
from logtool.pages.map import map_data_of, map_text
from logtool.pages.map_data import MapData
from logtool.pages.map_lines import short_names
from logtool.places.locator import written
from logtool.records.judge import Record, judge
from logtool.records.tally import HOUR_US
from logtool.tables.choice import choose, instant
from logtool.tables.result import written_time
from tests.browser import Page
from tests.pages.map_made import SAMPLES
from tests.pages.map_window import choose as choose_layer
from tests.pages.map_window import drawn, select, slide, text
from tests.tables.making import heard, setup, table, write

BOM = b"\xef\xbb\xbf"


@pytest.fixture(scope="module")
def sample() -> MapData:
    with open_logs(SAMPLES) as logs:
        return map_data_of(logs, choose())


def lines_of(path: Path) -> list[bytes]:
    """The lines of a file without their endings, the first at index 0."""
    data = gzip.decompress(path.read_bytes()) if path.suffix == ".gz" else path.read_bytes()
    return [line.removesuffix(b"\r") for line in data.removeprefix(BOM).split(b"\n")]


@pytest.fixture(scope="module")
def heard_in_sample() -> dict[str, list[Record]]:
    """Every reception of each sender in the sample, each line once, as the judge sees it."""
    found: dict[str, list[Record]] = {}
    every = {line for path in SAMPLES.glob("*.log*") for line in lines_of(path)}
    for record in map(judge, every):
        if isinstance(record, Record) and record.kind == "heard":
            found.setdefault(record.field("sender").upper(), []).append(record)
    return found


def test_the_lines_of_the_sample_stand_there(
    sample: MapData, heard_in_sample: dict[str, list[Record]]
) -> None:
    texts = [lines_of(SAMPLES / name) for name in sample.files]
    assert len(texts) == 7
    for pair in sample.pairs:
        sender = sample.senders[pair.sender]
        shown = []
        for line in pair.lines:
            record = judge(texts[line.file][line.line - 1])
            assert isinstance(record, Record)
            assert (record.kind, record.field("sender").upper()) == ("heard", sender.name)
            assert record.field("time") == line.time
            shown.append(record)
        every = heard_in_sample[sender.name]
        assert min(2, len(every)) <= len(shown) <= 5
        assert [record.time_us for record in shown] == sorted(record.time_us for record in shown)
        assert shown[0].field("time") == pair.first
        assert shown[-1].field("time") == pair.last
        levels = [float(record.field("snr_db")) for record in every if record.field("snr_db")]
        told = [float(record.field("snr_db")) for record in shown if record.field("snr_db")]
        assert not levels or (max(told), min(told)) == (max(levels), min(levels))
        if sender.borrowed is False:
            assert sender.locator in [written(own) for record in shown if (own := record.field("locator"))]


def hour_after(written_hour: str) -> str:
    """The next hour, written in the same way."""
    return written_time(instant(written_hour, "--from") + HOUR_US)


def shown_in(folder: Path) -> list[tuple[str, int, str]]:
    """File, number and time of the lines behind the only sender."""
    with open_logs(folder, threads=1) as logs:
        data = map_data_of(logs, choose())
    (pair,) = data.pairs
    return [(data.files[line.file], line.line, line.time) for line in pair.lines]


def test_first_last_strongest_weakest_and_the_one_with_the_locator(tmp_path: Path) -> None:
    values = [
        ("21:00", 0, "KO02"), ("21:01", 1, ""), ("21:02", 9, ""), ("21:03", 2, "KO02"), ("21:04", 3, "JO62"),
        ("21:05", -9, ""), ("21:06", 4, ""), ("21:07", 5, ""),
    ]  # fmt: skip
    lines = [heard(f"2026-03-01T{at}:00.5Z", snr_db=snr, locator=own) for at, snr, own in values]
    assert shown_in(write(tmp_path, [setup("2026-03-01T20:00:00Z"), *lines])) == [
        ("000.log", number, f"2026-03-01T{at}:00.5Z")
        for number, at in ((2, "21:00"), (4, "21:02"), (5, "21:03"), (7, "21:05"), (9, "21:07"))
    ]


def test_a_line_that_only_looks_the_same_is_not_shown(tmp_path: Path) -> None:
    good = heard("2026-03-01T21:00:00Z", snr_db=3, audio_hz=2500)
    bad = heard("2026-03-01T21:00:00Z", snr_db=3, audio_hz=1500, power_dbm=99)
    other = heard("2026-03-01T21:00:00Z", snr_db=3, audio_hz=2500, receiver="den", locator="KO02")
    lines = [setup("2026-03-01T20:00:00Z"), bad, other, good, "", "", good]
    assert shown_in(write(tmp_path, lines[:2] + lines[3:])) == [("000.log", 3, "2026-03-01T21:00:00Z")]
    folder = write(tmp_path, lines[:1] + lines[2:])
    with open_logs(folder, threads=1) as logs:
        data = map_data_of(logs, choose(receiver="hut"))
    assert [line.line for line in data.pairs[0].lines] == [3]


def test_lines_that_only_the_judge_accepts_are_shown(tmp_path: Path) -> None:
    lines = [setup("2026-03-01T20:00:00Z"), heard("2026-03-01T21:00:00Z", dial_hz="07074000", snr_db="007")]
    assert shown_in(write(tmp_path, lines)) == [("000.log", 2, "2026-03-01T21:00:00Z")]


def test_lines_keep_their_numbers_behind_a_mark_and_broken_bytes(tmp_path: Path) -> None:
    line = heard("2026-03-01T21:00:00Z", "q1abc", locator="ko02").encode()
    body = [b"", setup("2026-03-01T20:00:00Z").encode(), b"\xff\xff", b"a\rb", line]
    (tmp_path / "a.log").write_bytes(BOM + b"\r\n".join(body))
    assert shown_in(tmp_path) == [("a.log", 5, "2026-03-01T21:00:00Z")]


@pytest.mark.parametrize(
    ("names", "short"),
    [
        (["/a/b/1.log"], ["1.log"]),
        (["/a/b/1.log", "/a/c/1.log"], ["b/1.log", "c/1.log"]),
        (["/a/1.log", "/a/b/c/1.log", "-"], ["1.log", "b/c/1.log", "standard input"]),
        (["/home/x/1.log", "/media/y/2.log"], ["1.log", "2.log"]),
        (["/home/x/1.log", "/media/x/1.log", "/media/2.log"], ["home/x/1.log", "media/x/1.log", "2.log"]),
        (["x/../1.log", "./2.log"], ["1.log", "2.log"]),
        (["-"], ["standard input"]),
    ],
)
def test_short_names_hold_no_more_folders_than_they_need(names: list[str], short: list[str]) -> None:
    assert short_names(names) == short


@pytest.mark.browser
def test_the_map_of_the_sample_in_the_browser(page: Page, tmp_path: Path, sample: MapData) -> None:
    path = tmp_path / "map.html"
    with open_logs(SAMPLES) as logs:
        path.write_text(map_text(logs, choose()), "utf-8")
        rows = list(table(logs, "reach").rows())
        senders = list(table(logs, "senders").rows())
        in_hour = {
            i: table(logs, "reach", from_=row["hour"], to=hour_after(row["hour"])).summary
            for i, row in enumerate(rows)
            if i % 29 == 0
        }
        of_wire = table(logs, "senders", antenna="wire").columns["locator"]
    page.open(path)
    assert page.requests() == [path.as_uri()]
    assert drawn(page) == str(sum(row["locator"] is not None for row in senders))
    farthest_km: list[float | None] = [None] * 16
    for row in senders:
        if row["heard_again"] and row["bearing_deg"] is not None:
            k = int((row["bearing_deg"] + 11.25) / 22.5) % 16
            farthest_km[k] = max(farthest_km[k] or 0, round(row["distance_km"], 2))
    assert page.evaluate("logtoolMap.choice.farthest(logtoolMap.page.heard, 0)") == farthest_km
    hours = sorted({row["hour"] for row in rows})
    for i, summary in in_hour.items():
        slide(page, 1 + hours.index(rows[i]["hour"]))
        assert summary is not None
        assert drawn(page) == str(summary["located"])
    choose_layer(page, "antenna", "wire")
    for row in rows[::17]:
        slide(page, 1 + hours.index(row["hour"]))
        if row["antenna"] == "wire":
            assert drawn(page) == str(row["located"])
            minutes = sample.hours[hours.index(row["hour"])].listening_min[0]
            assert minutes is not None
            assert f"hut listened {round(minutes)} min" in text(page, "hour-text")
    slide(page, 0)
    assert drawn(page) == str(sum(own is not None for own in of_wire))
    assert page.faults() == []
    assert page.requests() == [path.as_uri()]


@pytest.mark.browser
def test_assumed_listening_and_a_place_heard_here_are_said(page: Page, tmp_path: Path) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z"),
        setup("2026-03-01T20:00:00Z", "RE78ir", receiver="isle"),
        *(heard(f"2026-03-01T20:{minute:02d}:00Z", locator="KO02") for minute in range(6)),
        heard("2026-03-01T20:02:00Z", locator="JO62", receiver="isle"),
    ]
    path = tmp_path / "map.html"
    with open_logs(write(tmp_path / "logs", lines), threads=1) as logs:
        path.write_text(map_text(logs, choose()), "utf-8")
    page.open(path)
    select(page, 0)
    shown = text(page, "sender")
    assert shown.index("At isle") < shown.index("Locator heard hereJO62")
    assert shown.count("Locator heard here") == 1
    slide(page, 1)
    assert "hut listened 5 min (assumed)" in text(page, "hour-text")
    assert page.faults() == []
