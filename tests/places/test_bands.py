"""Names of bands, and quick imports."""

from __future__ import annotations

import subprocess
import sys
from itertools import pairwise

import pytest

from logtool.places.bands import BANDS, band_name

from .sources import read, table

ALLOCATIONS = table(read("bands.toml"))


@pytest.mark.parametrize("row", ALLOCATIONS, ids=lambda row: row["name"])
def test_bands_are_the_widest_of_the_regions(row: dict) -> None:
    limits_khz = [row[region] for region in ("region_1", "region_2", "region_3")]
    low_hz = round(1000 * min(low for low, _ in limits_khz))
    high_hz = round(1000 * max(high for _, high in limits_khz))
    assert [(band.low_hz, band.high_hz) for band in BANDS if band.name == row["name"]] == [(low_hz, high_hz)]
    assert band_name(low_hz) == band_name(high_hz) == row["name"]
    assert band_name(low_hz - 1) != row["name"]
    assert band_name(high_hz + 1) != row["name"]


def test_bands_rise_and_do_not_overlap() -> None:
    assert all(band.low_hz < band.high_hz for band in BANDS)
    assert all(lower.high_hz < upper.low_hz for lower, upper in pairwise(BANDS))
    assert (BANDS[0].name, BANDS[-1].name) == ("2200m", "23cm")
    assert len({band.name for band in BANDS}) == len(BANDS)


@pytest.mark.parametrize(
    ("dial_hz", "name"),
    [
        (6_100_000, "6100 kHz"),
        (6_199_999, "6100 kHz"),
        (6_099_999, "6000 kHz"),
        (6_999_000, "6900 kHz"),  # the dial names the band, though 1.5 kHz of audio lies inside it
        (99_999, "0 kHz"),
        (1, "0 kHz"),
        (3_000_000_000, "3000000 kHz"),
        (3_573_000, "80m"),
        (28_074_000, "10m"),
        (50_313_000, "6m"),
        (144_174_000, "2m"),
    ],
)
def test_names_by_the_dial(dial_hz: int, name: str) -> None:
    assert band_name(dial_hz) == name


@pytest.mark.parametrize("module", ["locator", "geodesic", "sun", "nights", "bands"])
def test_imports_leave_heavy_packages_alone(module: str) -> None:
    code = (
        f"import sys, logtool.places.{module}; print(*(set(sys.modules) & {{'pandas', 'pyproj', 'scipy'}}))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == ""
