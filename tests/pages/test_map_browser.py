"""The map page opened from disk in headless Chromium with every host blocked: hours, layers, figures."""

from __future__ import annotations

from pathlib import Path
from typing import TypeVar

import pytest

from logtool.pages.map_data import MapCounts, MapTotals
from tests.browser import Page
from tests.pages.map_cases import around, small, spread, with_island
from tests.pages.map_window import choose, drawn, open_map, pixels, select, slide, text, toggle

pytestmark = pytest.mark.browser

Columns = TypeVar("Columns", MapCounts, MapTotals)


ALL_IN_VIEW = """logtoolMap.page.layer.scene.circles
  .every(({ lat, lon }) => logtoolMap.page.map.getBounds().contains([lat, lon]))"""


def with_row(columns: Columns, **row: float) -> Columns:
    """Return counts or totals with one row more."""
    return type(columns)(**{name: [*getattr(columns, name), value] for name, value in row.items()})


def test_no_request_no_fault_and_all_senders_drawn(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    assert page.requests() == [(tmp_path / "map.html").as_uri()]
    assert page.faults() == []
    assert drawn(page) == "4"
    assert "4 senders drawn; 1 sender gave no locator and is not drawn." in text(page, "drawn")
    assert page.evaluate("document.title") == text(page, "title") == "The hut, three hours"


def test_the_policy_stops_requests(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    page.evaluate(
        "new Promise((no) => Object.assign(new Image(), {onerror: () => no(1), src: 'http://127.0.0.1:9/'}))"
    )
    assert [fault for fault in page.faults() if "Content Security Policy" in fault]


def test_slider_shows_the_senders_of_each_hour(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    seen = []
    for position in (1, 2, 3, 0):
        slide(page, position)
        seen.append(drawn(page))
    assert seen == ["2", "2", "1", "4"]
    slide(page, 1)
    # 15.958 degrees east: 1 h 3 min 50 s before UTC
    assert (
        text(page, "hour-text")
        == "2026-03-01 22:00 to 23:00 UTC \u00b7 23:03 mean solar time at hut; hut listened 60 min"
    )
    assert page.evaluate("logtoolMap.page.layer.scene.hour.sunLon") == -157.5
    slide(page, 3)
    assert "hut: listening not recorded" in text(page, "hour-text")
    page.evaluate("document.getElementById('hour-all').click()")
    assert drawn(page) == "4"


def test_the_night_side_is_shaded_only_for_an_hour(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    all_hours = pixels(page, "sea")
    slide(page, 1)
    assert pixels(page, "sea") < 0.7 * all_hours
    toggle(page, "night")
    assert pixels(page, "sea") > 0.95 * all_hours


def test_play_steps_through_the_hours(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    page.evaluate("document.getElementById('hour-play').click()")
    page.wait_for("document.getElementById('hour-slider').value === '2'")
    page.evaluate("document.getElementById('hour-play').click()")
    assert page.evaluate("document.getElementById('hour-play').getAttribute('aria-pressed')") == "false"
    assert drawn(page) == "2"


def test_layers_choose_senders(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    for key, value, expected in (
        ("antenna", "loop", "2"), ("antenna", "wire", "3"), ("band", "20m", "1"), ("antenna", "", "1"),
        ("band", "", "4"), ("night", "2026-03-01", "3"), ("night", "2026-03-02", "1"), ("night", "", "4"),
    ):  # fmt: skip
        choose(page, key, value)
        assert drawn(page) == expected, (key, value)
    choose(page, "night", "2026-03-02")
    assert page.evaluate("document.getElementById('hour-slider').max") == "1"


@pytest.mark.parametrize(
    ("layer", "ink"), [("rings", "ring"), ("outline", "reach"), ("fields", "grid"), ("paths", "path")]
)
def test_drawn_layers_switch_off(page: Page, tmp_path: Path, layer: str, ink: str) -> None:
    open_map(page, tmp_path, small())
    read = "logtoolMap.page.layer.canvas.toDataURL()"
    with_it, marks = page.evaluate(read), pixels(page, ink)
    toggle(page, layer)
    assert page.evaluate(read) != with_it
    if layer != "paths":  # their colour lets the ground through, so no pixel has it exactly
        assert pixels(page, ink) < marks / 10


def test_outline_follows_the_layers(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    read = "logtoolMap.choice.farthest(logtoolMap.page.heard, 0)"
    pairs = small().pairs
    sector = [round((pair.bearing_deg or 0) / 22.5) % 16 for pair in pairs]
    everything = page.evaluate(read)
    assert [k for k, km in enumerate(everything) if km is not None] == sorted(
        {sector[0], sector[1], sector[2]}
    )
    assert everything[sector[0]] == pytest.approx(pairs[0].distance_km, abs=0.01)
    choose(page, "antenna", "loop")
    assert [k for k, km in enumerate(page.evaluate(read)) if km is not None] == sorted({sector[0], sector[2]})


def test_snr_is_not_pooled_over_bands(page: Page, tmp_path: Path) -> None:
    data = small()
    both = small(
        counts=with_row(data.counts, sender=0, group=2, hour=2, receptions=1, snr_median_db=9.0),
        totals=with_row(data.totals, sender=0, group=2, receptions=1, snr_median_db=9.0),
    )
    open_map(page, tmp_path, both)
    read = "logtoolMap.page.heard.find((one) => one.sender.name === 'Q1AAA').snr"
    assert page.evaluate(read) is None
    choose(page, "band", "20m")
    assert page.evaluate(read) == 9.0
    choose(page, "band", "40m")
    assert page.evaluate(read) == -10.0  # four at -10 and three at -14
    page.evaluate("document.querySelector('[name=colour][value=snr]').click()")
    assert (
        page.evaluate("logtoolMap.page.layer.scene.circles.find((one) => one.name === 'Q3CCC').colour")
        is None
    )
    assert "noise in 2500 Hz" in text(page, "legend")
    assert page.faults() == []


def test_each_receiver_is_a_layer_with_its_own_middle(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, with_island(around("JO74xa", spread(80), rows=300), "QF56", 30))
    assert drawn(page) == "80"
    choose(page, "receiver", "island")
    assert drawn(page) == "30"
    assert page.evaluate("logtoolMap.page.layer.scene.receivers.map((one) => one.name)") == ["island"]
    # QF56 lies round 151 degrees east; its world reaches from 29 west to 331 east, all of it in view
    assert page.evaluate("logtoolMap.page.layer.scene.span") == {"west": -29, "east": 331}
    assert page.evaluate(ALL_IN_VIEW)
    select(page, 0)
    assert "At hut" in text(page, "sender")
    assert "At island" in text(page, "sender")
    choose(page, "receiver", "hut")
    assert drawn(page) == "80"
    assert page.faults() == []
