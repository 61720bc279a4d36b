"""The numbers that `docs/methods.md` and `docs/conventions.md` write out are those of the program."""

from __future__ import annotations

import re

import pytest

from logtool.pages import map_json
from logtool.places import almanac, bands, sun
from logtool.records import layout, scan
from logtool.tables import checks, choice, locators, reach, rollup, sectors, stations
from tests.docs.running import ROOT

SECOND_US = 1_000_000
HOUR_US = 3600 * SECOND_US


def words(name: str) -> str:
    return " ".join((ROOT / "docs" / name).read_text(encoding="utf-8").split())


def constant(script: str, name: str) -> str:
    text = (ROOT / "logtool" / "pages" / "assets" / script).read_text(encoding="utf-8")
    found = re.search(rf"\b{name} = ([\d.]+)", text)
    assert found is not None
    return found[1]


METHODS = [
    f"first {scan.STRANGER_LINES // 1000} 000 lines hold no record",
    f"{checks.STEP_S} s earlier",
    f"at least {rollup.AGAIN_FROM_US // SECOND_US} s and less than {rollup.AGAIN_BELOW_US // HOUR_US} h",
    f"{choice.GAP_MIN:g} minutes by default",
    f"in {reach.SHARE_MIN:g} of the L minutes",
    f"for L ≥ {reach.SHARE_MIN:g}",
    f'({almanac.PARALLAX_DEG * 3600:.3f}", IAU 1976',
    f"passes 90°{round((sun.SUNRISE_ZENITH_DEG - 90) * 60)}'",
    f"twilight** {sun.CIVIL_ZENITH_DEG:g}°, {sun.NAUTICAL_ZENITH_DEG:g}° and",
    f"{sun.ASTRONOMICAL_ZENITH_DEG:g}°, all geometric",
    f"Sixteen, of {sectors.SECTOR_DEG:g}°",
    "Rings** at 500, 1000, 2000, 3000, 5000, 10 000 and 15 000 km",
    f"circles of {map_json.RING_POINTS} points each",
    f"parallels of {constant('map_geo.js', 'TRUE_LAT_DEG')}° true",
    f"points every {constant('map_geo.js', 'STEP_KM')} km",
    f"Over {constant('map_choice.js', 'CIRCLES')} senders",
    f"{constant('map_ramp.js', 'STEPS')} steps at equal distances",
]
CONVENTIONS = [
    f"over {stations.APART_KM:g} km apart",
    f"at most {locators.BORROW_HOURS // 24} days away",
    f"at least {rollup.AGAIN_FROM_US // SECOND_US} s and less than 24 h",
    f"null under {reach.SHARE_MIN:g} minutes",
    {5: "needs five located senders"}[reach.P90_SENDERS],
    {100: "`N kHz` (hundreds, rounded down)"}[bands.UNNAMED_STEP_KHZ],
    f"first {scan.STRANGER_LINES // 1000} 000 lines hold no record",
    f"0001 to {layout.FIRST_YEAR - 1} and {layout.LAST_YEAR + 1} to 9999",
]


@pytest.mark.parametrize("told", METHODS)
def test_methods(told: str) -> None:
    assert told in words("methods.md")


@pytest.mark.parametrize("told", CONVENTIONS)
def test_conventions(told: str) -> None:
    assert told in words("conventions.md")


def test_rings_are_those_named() -> None:
    assert map_json.RING_RADII_KM == (500, 1000, 2000, 3000, 5000, 10000, 15000)


def test_keys_to_split_by_are_those_named() -> None:
    listed = ", ".join(f"`{key}`" for key in choice.BY_KEYS[:-1]) + f" or `{choice.BY_KEYS[-1]}`"
    assert f"splits the rows further by {listed}" in words("conventions.md")
