"""The data block of the map: safe in a script element, compact, and complete."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest

from logtool.errors import LogtoolError
from logtool.pages.map_data import MapCounts
from logtool.pages.map_json import map_payload, ring_radii_km, script_safe_json
from tests.pages.map_cases import around, small, spread

HOSTILE = (
    "</script><img src=x onerror=alert(1)>",
    "<!--<script>",
    "]]>&amp;&lt;",
    "line\u2028and\u2029separators",
    "{{ 7 * 7 }}{% raw %}{# not a template #}",
    "back\\slash \"quoted\" 'single' ${x}`",
    "not-utf8-\udc80.log",
)


@pytest.mark.parametrize("text", HOSTILE)
def test_hostile_text_comes_back_unchanged_and_never_raw(text: str) -> None:
    safe = script_safe_json([text])
    assert json.loads(safe) == [text]
    assert not set(safe) & set("<>&\u2028\u2029")
    safe.encode("utf-8")


def test_numbers_that_json_has_not_are_refused() -> None:
    with pytest.raises(ValueError, match=r"nan|Out of range"):
        script_safe_json([float("nan")])


def test_rings_go_to_the_first_that_holds_the_farthest() -> None:
    assert ring_radii_km(0.0) == (500,)
    assert ring_radii_km(3000.0) == (500, 1000, 2000, 3000)
    assert ring_radii_km(3000.1) == (500, 1000, 2000, 3000, 5000)
    assert ring_radii_km(19000.0) == (500, 1000, 2000, 3000, 5000, 10000, 15000)


def test_counts_come_as_runs_of_steps_in_any_order_of_rows() -> None:
    counts = MapCounts([1, 0, 0, 0], [0, 0, 1, 0], [5, 7, 2, 3], [9, 8, 7, 6], [None, -1.25, 2.0, 0.0])
    packed = map_payload(small(counts=counts))["counts"]
    assert packed["runs"] == [0, 0, 2, 0, 1, 1, 1, 0, 1]
    assert packed["hours"] == [3, 4, 2, 5]
    assert packed["receptions"] == [6, 8, 7, 9]
    assert packed["snr"] == [0, -1.2, 2, None]


def test_order_of_rows_changes_no_byte() -> None:
    data = around("JO74xa", spread(40), rows=300)
    c = data.counts
    turned = MapCounts(c.sender[::-1], c.group[::-1], c.hour[::-1], c.receptions[::-1], c.snr_median_db[::-1])
    assert map_payload(replace(data, counts=turned)) == map_payload(data)


def test_columns_of_different_length_are_refused() -> None:
    with pytest.raises(LogtoolError, match=r"columns of counts differ in length: \[1, 1, 1, 1, 0\]"):
        map_payload(small(counts=MapCounts([0], [0], [0], [1], [])))


def test_cells_are_those_of_the_locators() -> None:
    payload = map_payload(small())
    assert payload["senders"][0] == ["Q1AAA", "FN42", [42, -72, 43, -70], 0]
    assert payload["senders"][1][3] == 1
    assert payload["senders"][3] == ["Q4DDD", None, None, None]
