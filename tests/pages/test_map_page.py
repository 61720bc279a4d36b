"""The map page as text: one file, no address outside, the same bytes each time, small."""

from __future__ import annotations

import os
import re
import subprocess
import sys
import time
from dataclasses import replace
from pathlib import Path

import pytest

from logtool.pages.map_page import POLICY, map_html
from tests.pages.map_cases import around, small, spread

MB = 1_000_000
WEEK_LIMIT_BYTES = 2 * MB  # the page of a week of 300 000 lines; 4 MB is the most allowed
BIG_LIMIT_BYTES = 4 * MB
WEEK = {"rows": 60000, "hours": 168}
SECONDS = 2.0  # what is measured is about 0.1; the limit is for a loaded machine

PRINT_DIGEST = """
import hashlib, sys
sys.path.insert(0, sys.argv[1])
from tests.pages.map_cases import around, spread
from logtool.pages.map_page import map_html
print(hashlib.sha256(map_html(around("JO74xa", spread(50, unplaced=2))).encode()).hexdigest())
"""


def test_two_processes_give_the_same_bytes() -> None:
    digests = {
        subprocess.run(
            [sys.executable, "-c", PRINT_DIGEST, str(Path(__file__).parent)],
            env={**os.environ, "PYTHONHASHSEED": seed},
            check=True,
            capture_output=True,
            text=True,
        ).stdout
        for seed in ("1", "2")
    }
    assert len(digests) == 1
    assert re.fullmatch(r"[0-9a-f]{64}\n", digests.pop())


def test_nothing_is_fetched() -> None:
    page = map_html(small())
    code = re.sub(r'<script type="application/json".*?</script>', "", page, flags=re.S)
    assert not re.search(r"<(?:script|img|iframe|link|source)[^>]*(?:src|href)=[\"'](?!data:)", code)
    assert not re.search(r"url\((?!#)", code)
    assert "@import" not in code
    assert "sourceMappingURL" not in code
    assert POLICY in page


def test_the_terms_of_what_is_carried_go_with_it() -> None:
    """The BSD 2-Clause licence, from memory."""
    page = map_html(small())
    for words in (
        "Vladimir Agafonkin",
        "Redistributions of source code must retain",
        "PROVIDED BY THE COPYRIGHT HOLDERS",
    ):
        assert words in page


def test_the_script_that_is_carried_is_the_one_that_folium_asks_for() -> None:
    import folium
    import xstatic.pkg.leaflet

    assert f"leaflet@{xstatic.pkg.leaflet.VERSION}/" in dict(folium.Map.default_js)["leaflet"]
    assert f"Leaflet {xstatic.pkg.leaflet.VERSION}" in map_html(small())


def test_folium_stays_as_it_was_for_others() -> None:
    import folium

    before = list(folium.Map.default_js)
    map_html(small())
    assert folium.Map.default_js == before


def test_text_from_logs_is_no_template_and_no_markup() -> None:
    hostile = "{{ 7 * 7 }}</script><b>x</b></title><img src=x onerror=alert(1)>{% for %}"
    page = map_html(small(title=hostile, files=(hostile,), notes=(hostile,)))
    assert page.count("7 * 7") == 4  # title of the tab, and title, file and note in the data
    assert "<b>x" not in page
    assert "<img" not in page


def test_one_may_zoom_in_by_hand() -> None:
    page = map_html(small())
    assert page.count('name="viewport"') == 1
    assert "user-scalable" not in page
    assert "maximum-scale" not in page


def test_a_week_is_small_and_quick() -> None:
    data = around("JO74xa", spread(800, unplaced=10), **WEEK)
    map_html(small())  # imports folium
    start = time.perf_counter()
    page = map_html(data)
    assert time.perf_counter() - start < SECONDS
    assert len(page.encode()) < WEEK_LIMIT_BYTES


@pytest.mark.slow
def test_eight_thousand_senders_stay_under_the_limit() -> None:
    assert len(map_html(around("JO74xa", spread(8000), **WEEK)).encode()) < BIG_LIMIT_BYTES


def test_no_receiver_and_no_sender_make_a_page_too() -> None:
    data = small(
        pairs=(),
        senders=(),
        counts=replace(small().counts, sender=[], group=[], hour=[], receptions=[], snr_median_db=[]),
    )
    data = replace(data, totals=replace(data.totals, sender=[], group=[], receptions=[], snr_median_db=[]))
    assert '"senders":[]' in map_html(data)
