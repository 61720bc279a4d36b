"""A map that leaves things out: nothing of them is anywhere in the page, and its figures go by what is left."""

from __future__ import annotations

import gzip
import hashlib
import os
import re
from collections.abc import Callable, Sequence
from dataclasses import fields, replace
from pathlib import Path

import maidenhead
import pytest
from pyproj import Geod

from logtool.pages.map import map_text
from logtool.pages.map_data import MapCounts, MapTotals
from logtool.pages.map_privacy import CELLS
from logtool.records.judge import Record, judge
from logtool.records.layout import COLUMN_NAMES
from logtool.records.opening import open_with
from logtool.records.privacy import COARSE_CHARACTERS, Privacy
from logtool.records.reader import OpenOptions
from logtool.tables.choice import choose
from tests.browser import Page
from tests.pages.map_made import SAMPLES
from tests.pages.map_private import (
    ADDRESSEES,
    AT,
    FILES,
    HUT,
    KEY,
    SENDERS,
    WORDS,
    data_of,
    finer,
    found,
    of_files,
    page_of,
    payload_of,
    write_logs,
)
from tests.pages.map_window import chosen, drawn, open_map, select, text
from tests.places.sources import read, table
from tests.tables.making import heard, setup

HALF_LAST_DIGIT_KM, HALF_LAST_DIGIT_DEG = 0.0005, 0.00005
COARSE = [*COARSE_CHARACTERS]


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("jane-doe")
    write_logs(folder)
    return folder


CHOICES = {
    "all": (),
    "receiver": ("--receiver", "hut"),
    "moved": ("--receiver", f"hut@{HUT[0]}", "--receiver", f"hut@{HUT[1].lower()}", "--receiver", "x@IO91wm05"),
    "senders": ("--sender", "Q1ABC", "--sender", "q3foo/p", "--sender", "Q2GONE"),
    "nobody": ("--sender", "Q2GONE"),
    "words": ("--mode", "X9", "--night", "2026-03-02", "--antenna", "wire"),
}  # fmt: skip


def test_the_search_finds_what_a_plain_page_holds(folder: Path) -> None:
    page = page_of(folder)
    assert {name.upper() for name in SENDERS} == found(page, *(name.upper() for name in SENDERS))
    assert len(found(page, *finer(8))) > len(found(page, "nothing of this"))
    assert {*FILES} == found(page, *FILES)
    assert "line" not in found(page, "grandma")


@pytest.mark.parametrize("words", CHOICES.values(), ids=CHOICES)
@pytest.mark.parametrize("characters", COARSE)
def test_no_place_is_finer_than_asked_for(folder: Path, characters: int, words: tuple[str, ...]) -> None:
    page = page_of(folder, "--coarsen", str(characters), *words)
    assert found(page, *finer(characters), *of_files(folder), *WORDS, *ADDRESSEES) == set()
    assert f"places are cut to {characters} characters" in page


@pytest.mark.parametrize("words", CHOICES.values(), ids=CHOICES)
def test_no_sender_is_named(folder: Path, words: tuple[str, ...]) -> None:
    page = page_of(folder, "--hide-senders", *words)
    bases = [part for name in (*SENDERS, *ADDRESSEES, "Q2GONE") for part in name.split("/") if len(part) > 2]
    assert found(page, *bases, *of_files(folder), *WORDS, KEY.decode(), KEY.hex()) == set()
    assert "senders have other names here" in page


@pytest.mark.parametrize(
    "words", [("--without-text",), ("--coarsen", "4", "--without-text", "--hide-senders")]
)
def test_no_file_and_no_text_is_left(folder: Path, words: tuple[str, ...]) -> None:
    page = page_of(folder, *words)
    assert found(page, *of_files(folder), *WORDS, *ADDRESSEES) == set()
    payload = payload_of(page)
    assert payload["files"] == []
    assert all(pair[8] == [] for pair in payload["pairs"])
    assert any(note.startswith("left out of this page: files and their names") for note in payload["notes"])
    assert "1 note on the reading left out" in payload["notes"]
    assert "1 input not read" in payload["notes"]
    ((ledger),) = payload["ledger"]
    assert re.fullmatch(
        r"2 files: 1\d\d lines: 1\d\d records, 1 comment, 1 repeated, 1 set aside \(.*\)", ledger
    )


def test_options_are_told_as_far_as_they_may(folder: Path) -> None:
    words = ("--coarsen", "6", "--hide-senders", *CHOICES["senders"], "--receiver", f"hut@{HUT[0]}")
    payload = payload_of(page_of(folder, *words, "--quiet", "--title", "Ours"))
    assert payload["title"] == "Ours"
    assert payload["options"] == [
        ["at", AT[:6]], ["coarsen", "6"], ["gap_min", "10.0"], ["hide_senders", "True"],
        ["receiver", f"hut@{HUT[0][:6]}"], ["sender", "some, not named here"],
    ]  # fmt: skip
    assert "1 of 3 senders chosen: not in the inputs" in payload["notes"]


def test_a_receiver_that_moved_goes_by_its_coarse_places(folder: Path) -> None:
    paths = tuple(folder / name for name in FILES[:2])
    data = data_of(paths, Privacy(coarsen=4), AT)
    assert [(receiver.name, receiver.locator) for receiver in data.receivers] == [
        ("hut@JN58", "JN58"), ("hut@JO74", "JO74"), ("isle", "RE78"), ("pier", "QF56"),
    ]  # fmt: skip
    one = data_of(paths, Privacy(coarsen=4), AT, receiver=f"hut@{HUT[0]}")
    assert [receiver.name for receiver in one.receivers] == ["hut@JO74"]


def test_places_in_one_coarse_cell_are_one(tmp_path: Path) -> None:
    log = tmp_path / "a.log"
    moves = [setup("2026-03-01T19:00:00Z", "JN58ta"), setup("2026-03-01T20:30:00Z", "JN58tx")]  # over 100 km
    log.write_text("".join(f"{line}\n" for line in [*moves, heard("2026-03-01T20:40:00Z", locator="KO02mc")]))
    assert len(data_of((log,), Privacy(coarsen=6), receiver="hut").receivers) == 1
    assert [receiver.name for receiver in data_of((log,), Privacy()).receivers] == ["hut@JN58tx"]
    assert [receiver.name for receiver in data_of((log,), Privacy(coarsen=4)).receivers] == ["hut"]


@pytest.mark.parametrize("characters", COARSE)
def test_distances_are_those_between_coarse_centres(folder: Path, characters: int) -> None:
    """By pyproj between the centres of the cut locators by the package maidenhead."""
    data = data_of(tuple(folder / name for name in FILES[:2]), Privacy(coarsen=characters), AT)
    geod, measured = Geod(ellps="WGS84"), 0
    for pair in data.pairs:
        own = pair.locator or data.senders[pair.sender].locator
        if own is None:
            assert pair.distance_km is None
            continue
        assert len(own) <= characters
        here = maidenhead.to_location(data.receivers[pair.receiver].locator[:characters], center=True)
        there = maidenhead.to_location(own, center=True)
        bearing_deg, _, distance_m = geod.inv(here[1], here[0], there[1], there[0])
        assert pair.distance_km == pytest.approx(distance_m / 1000, abs=HALF_LAST_DIGIT_KM)
        if pair.distance_km < pair.uncertainty_km:
            assert pair.bearing_deg is None
        else:
            assert pair.bearing_deg == pytest.approx(bearing_deg % 360, abs=HALF_LAST_DIGIT_DEG)
        measured += 1
    assert measured == len({receiver.name for receiver in data.receivers}) * 5


def test_places_are_cut_before_anything_is_learned_from_them(tmp_path: Path) -> None:
    log = tmp_path / "a.log"
    given = ("KO02aa", "KO02aa", "JN58td", "JN58tx", "JN58ta")
    lines = [heard(f"2026-03-01T20:{10 + i}:00Z", locator=own) for i, own in enumerate(given)]
    log.write_text("".join(f"{line}\n" for line in [*lines, lines[0]]))
    (plain,) = data_of((log,), Privacy(), "JO74").senders
    (coarse,) = data_of((log,), Privacy(coarsen=4), "JO74").senders
    assert (plain.locator, coarse.locator) == ("KO02aa", "JN58")


def rewritten(log: Path, folder: Path, change: Callable[[dict[str, str], str], None]) -> Path:
    """A log like another with a change to each record, which is told its values and the digest of its line."""
    lines, data = [], log.read_bytes()
    for line in (gzip.decompress(data) if log.suffix == ".gz" else data).split(b"\n"):
        bare = line.removesuffix(b"\r")
        if isinstance(judge(bare), Record):
            given = bare.decode().split("\t")
            values = dict.fromkeys(COLUMN_NAMES, "") | dict(zip(COLUMN_NAMES, given, strict=False))
            change(values, hashlib.sha256(bare).hexdigest())
            line = "\t".join(values.values()).encode()
        lines.append(line)
    out = folder / log.name.removesuffix(".gz")
    out.write_bytes(b"\n".join(lines))
    return out


@pytest.fixture(scope="module")
def fine_sample(tmp_path_factory: pytest.TempPathFactory) -> list[Path]:
    """The sample logs with two or four characters more of each sender's locator; equal lines stay equal."""
    letters, folder = "abcdefghijklmnopqrstuvwx", tmp_path_factory.mktemp("fine")

    def finer(values: dict[str, str], digest: str) -> None:
        if values["kind"] == "heard" and len(values["locator"]) == 4:
            most, least = divmod(int(digest[0], 16), 4)
            values["locator"] += letters[most] + letters[least] + ("", digest[1:3])[digest[1:3].isdigit()]

    return [rewritten(log, folder, finer) for log in sorted(SAMPLES.glob("*.log*"))]


@pytest.mark.parametrize("characters", COARSE)
def test_the_sample_is_as_if_its_places_had_been_sent_coarse(
    fine_sample: list[Path], tmp_path: Path, characters: int
) -> None:
    """Repeated lines too: they are told by the whole lines, and taken out with the cut places."""

    def cut(values: dict[str, str], digest: str) -> None:
        values["locator"] = values["locator"][:characters]
        values["more"] = "; ".join(filter(None, [values["more"], f"was={digest}"]))  # unequal lines stay so

    by_hand = data_of(tuple(rewritten(log, tmp_path, cut) for log in fine_sample), Privacy())
    bare = replace(by_hand, pairs=tuple(replace(pair, lines=()) for pair in by_hand.pairs))
    data = data_of(tuple(fine_sample), Privacy(coarsen=characters))
    assert "44 repeated" in data.ledger[0]
    assert (data.receivers, data.senders, data.pairs) == (bare.receivers, bare.senders, bare.pairs)
    assert (data.groups, data.hours, data.title) == (bare.groups, bare.hours, bare.title)
    assert rows_of(data.counts) == rows_of(bare.counts)
    assert rows_of(data.totals) == rows_of(bare.totals)


def rows_of(columns: MapCounts | MapTotals, at: Sequence[int] | None = None) -> list[tuple[object, ...]]:
    """The rows in one order; with the senders by other indices."""
    rows = zip(*(getattr(columns, field.name) for field in fields(columns)), strict=True)
    return sorted(((at[sender] if at else sender, *rest) for sender, *rest in rows), key=repr)


def test_the_cells_have_the_sizes_that_the_page_tells() -> None:
    """By tests/reference/cell_sizes.toml, at the equator; ten by ten of the smallest make a subsquare."""
    (row,) = [row for row in table(read("cell_sizes.toml")) if row["lat_deg"] == 0]
    sizes_km = {
        4: (row["square_ns_km"], row["square_ew_km"]),
        6: (row["subsquare_ns_km"], row["subsquare_ew_km"]),
        8: (row["subsquare_ns_km"] / 10, row["subsquare_ew_km"] / 10),
    }
    for characters, told in CELLS.items():
        numbers = [float(number) for number in re.findall(r"[0-9.]+", told)]
        assert numbers == [float(f"{size_km:.2g}") for size_km in sizes_km[characters]]


def test_hidden_senders_keep_their_figures_and_not_their_order(folder: Path) -> None:
    paths = tuple(folder / name for name in FILES[:2])
    plain, hidden = data_of(paths, Privacy(), AT), data_of(paths, Privacy(key=KEY), AT)
    names = [sender.name for sender in hidden.senders]
    shown = {Privacy(key=KEY).call(sender.name): i for i, sender in enumerate(plain.senders)}
    assert names == sorted(shown) != list(shown)
    assert [name.endswith("/C") for name in shown] == ["/" in sender.name for sender in plain.senders]
    order = [(pair.sender, pair.receiver) for pair in hidden.pairs]
    assert order == sorted(order)
    at = [shown[name] for name in names]
    assert {replace(pair, sender=at[pair.sender]) for pair in hidden.pairs} == {
        replace(pair, lines=()) for pair in plain.pairs
    }
    assert rows_of(hidden.counts, at) == rows_of(plain.counts)
    assert rows_of(hidden.totals, at) == rows_of(plain.totals)


def test_without_these_options_a_page_is_as_before(folder: Path) -> None:
    options = OpenOptions(threads=1, privacy=Privacy())
    with open_with((folder / FILES[0],), AT, None, options) as logs:
        page = map_text(logs, choose(), options=[("sender", "Q1ABC"), ("out", "x.html")])
    assert payload_of(page)["options"] == [["sender", "Q1ABC"], ["out", "x.html"]]
    assert payload_of(page)["files"] == [FILES[0]]


@pytest.mark.browser
def test_the_page_draws_and_says_what_was_left_out(page: Page, folder: Path, tmp_path: Path) -> None:
    data = data_of(tuple(folder / name for name in FILES[:2]), Privacy(4, True, KEY), AT)
    open_map(page, tmp_path, data)
    assert page.faults() == []
    assert drawn(page) == "5"
    assert "lines behind" not in text(page, "sender")
    select(page, 0)
    assert chosen(page) == data.senders[0].name
    assert "behind this" not in text(page, "sender")
    assert "At hut@JN58" in text(page, "sender")
    assert "places are cut to 4 characters (cells of about 110 by up to 220 km)" in text(page, "read")
    assert "senders have other names here" in text(page, "read")
    assert found(page.evaluate("document.documentElement.outerHTML"), *finer(4), *SENDERS) == set()
    assert os.path.basename(folder) not in page.evaluate("document.documentElement.outerHTML")
