"""Choosing senders on the map page by mouse and keyboard, small windows, and text from logs as data."""

from __future__ import annotations

from pathlib import Path

import pytest

from logtool.pages.map_data import MapLine
from tests.browser import Page
from tests.pages.map_cases import around, small
from tests.pages.map_window import chosen, circle, open_map, select, slide, text

pytestmark = pytest.mark.browser

HOSTILE = "</script><img src=x onerror='window.hit=1'><svg onload='window.hit=1'>{{ 7 * 7 }}\u2028&amp;.log"
UNHARMED = "window.hit === undefined && !document.querySelector('img, svg')"
BEYOND = """[...document.querySelectorAll("body *")]
  .filter((element) => !element.closest(".folium-map") && element.getClientRects().length)
  .filter((element) => {
    const { left, right } = element.getBoundingClientRect();
    return right > innerWidth + 0.5 || left < -0.5;
  })
  .map((element) => element.outerHTML.slice(0, 80))"""
CUT = """[...document.querySelectorAll(".side .box, .masthead, .time")]
  .filter((element) => element.scrollWidth > element.clientWidth)
  .map((element) => element.className)"""


def test_a_click_on_a_circle_shows_its_figures(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    page.click(*circle(page, "Q1AAA"))
    shown = text(page, "sender")
    km, off_km = small().pairs[0].distance_km, small().pairs[0].uncertainty_km
    assert km is not None
    assert off_km is not None
    for part in (
        "Q1AAA", "FN42 (its own)", f"{km:,.0f} \u00b1 {off_km:,.0f} km".replace(",", "\u202f"),
        "Antenna wire, 40m, M1", "4 receptions, SNR median -10 dB",
        "Antenna loop, 40m, M1", "3 receptions, SNR median -14 dB",
        "2026-03-01 00:00:15 UTC", "again within a day", "night-1.log, line 10, 2026-03-01 00:00:15 UTC",
    ):  # fmt: skip
        assert part in shown
    page.evaluate("document.getElementById('sender-close').click()")
    assert "Q1AAA" not in text(page, "sender")
    page.click(*circle(page, "Q2BBB"))
    assert "borrowed from another hour" in text(page, "sender")
    assert page.faults() == []


def test_a_sender_within_the_uncertainty_has_no_distance_and_no_bearing(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    select(page, 4)
    shown = text(page, "sender")
    assert f"Distance< {small().pairs[4].uncertainty_km:.0f} km" in shown
    assert "Bearingnot known" in shown


def test_senders_under_one_point_can_all_be_reached(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, around("JO74xa", ["FN42", "FN42", "FN42", "KP20"], rows=200))
    page.click(*circle(page, "Q0AAA"))
    assert "2 other senders under the same point" in text(page, "sender")
    names = page.evaluate("[...document.querySelectorAll('.others button')].map((b) => b.textContent)")
    page.evaluate("document.querySelector('.others button').click()")
    assert chosen(page) == names[0]


def test_the_keyboard_finds_and_chooses_a_sender(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    page.evaluate("document.getElementById('search').focus()")
    page.command("Input.insertText", text="q3c")
    page.wait_for("document.querySelectorAll('#list button').length === 1")
    page.key("Enter")
    assert chosen(page) == "Q3CCC"
    page.key("Escape")
    assert chosen(page) is None
    page.evaluate("document.getElementById('search').select()")
    page.key("Backspace")
    page.wait_for("document.querySelectorAll('#list button').length === 5")
    page.key("ArrowDown")
    page.key("ArrowDown")
    second = page.evaluate("document.activeElement.firstChild.textContent")
    page.key("Enter")
    assert chosen(page) == second
    assert page.faults() == []


def test_everything_to_press_can_be_reached_by_tab(page: Page, tmp_path: Path) -> None:
    open_map(page, tmp_path, small())
    reached = set()
    for _ in range(40):
        page.key("Tab")
        reached.add(page.evaluate("document.activeElement.id || document.activeElement.tagName"))
    assert {"hour-all", "hour-play", "hour-slider", "search", "order", "SUMMARY", "map_1"} <= reached


@pytest.mark.parametrize("dark", [False, True])
@pytest.mark.parametrize(("width", "height"), [(360, 740), (1400, 900)])
def test_nothing_overflows(page: Page, tmp_path: Path, width: int, height: int, dark: bool) -> None:
    long = "a-name-of-a-file-that-has-no-place-to-break-" * 4
    data = small(title=long, files=(long,), notes=(long,), ledger=(long,))
    open_map(page, tmp_path, data, width=width, height=height, dark=dark, mobile=width < 400)
    page.evaluate("document.querySelector('details').open = true")
    select(page, 0)
    assert page.evaluate(BEYOND) == []
    assert page.evaluate("document.documentElement.scrollWidth") == width
    assert page.evaluate(CUT) == []
    assert page.evaluate("logtoolMap.page.map.getSize().y") > 200


def test_hostile_text_is_shown_and_never_run(page: Page, tmp_path: Path) -> None:
    data = small(
        title=HOSTILE, files=(HOSTILE,), notes=(HOSTILE,), ledger=(HOSTILE,), options=((HOSTILE, HOSTILE),)
    )
    open_map(page, tmp_path, data)
    page.click(*circle(page, "Q1AAA"))
    assert HOSTILE in text(page, "sender")
    assert text(page, "title") == HOSTILE
    assert text(page, "read").count(HOSTILE) == 4
    assert page.evaluate("window.hit === undefined && !document.querySelector('img, svg')")
    assert page.faults() == []
    assert len(page.requests()) == 1


def test_hostile_names_of_receivers_and_antennas_are_text(page: Page, tmp_path: Path) -> None:
    data = small()
    receiver = type(data.receivers[0])(HOSTILE, "JO74xa")
    groups = tuple(
        type(group)(0, HOSTILE + str(i), group.band, group.mode) for i, group in enumerate(data.groups)
    )
    open_map(page, tmp_path, small(receivers=(receiver,), groups=groups))
    slide(page, 1)
    select(page, 0)
    assert HOSTILE in text(page, "hour-text")
    assert HOSTILE in text(page, "choices")
    assert page.evaluate("window.hit === undefined && !document.querySelector('img, svg')")


def test_lines_with_fractions_of_seconds_keep_them(page: Page, tmp_path: Path) -> None:
    data = small()
    first = data.pairs[0]
    line = MapLine(0, 77, "2026-03-01T00:00:15.25Z")
    changed = type(first)(
        0,
        0,
        first.distance_km,
        first.uncertainty_km,
        first.bearing_deg,
        first.first,
        line.time,
        True,
        (line,),
    )
    open_map(page, tmp_path, small(pairs=(changed, *data.pairs[1:])))
    select(page, 0)
    assert "line 77, 2026-03-01 00:00:15.25 UTC" in text(page, "sender")
