"""Locators: the published pairs, sizes of cells, messages, and the edges."""

from __future__ import annotations

import re
import time

import maidenhead
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from logtool.errors import PlaceError
from logtool.places import locator as loc
from logtool.places.wgs84 import inverse

from .sources import read, table

PUBLISHED = read("locators.toml")
LAST_CELL_DEG = 180 / (18 * 10 * 24 * 10 * 24)
PAIRS = (
    "ABCDEFGHIJKLMNOPQR",
    "0123456789",
    "abcdefghijklmnopqrstuvwx",
    "0123456789",
    "abcdefghijklmnopqrstuvwx",
)


@st.composite
def locators(draw: st.DrawFn, lengths: tuple[int, ...] = loc.LENGTHS) -> str:
    length = draw(st.sampled_from(lengths))
    return "".join(draw(st.sampled_from(PAIRS[at // 2])) for at in range(length))


@pytest.mark.parametrize("row", PUBLISHED["at"], ids=lambda row: row["locator"])
def test_locator_of_a_published_place(row: dict) -> None:
    for characters in range(2, len(row["locator"]) + 1, 2):
        assert loc.locator_at(row["lat_deg"], row["lon_deg"], characters) == row["locator"][:characters]


def test_six_characters_unless_asked() -> None:
    assert loc.locator_at(48.14666, 11.60833) == "JN58td"


@pytest.mark.parametrize("row", PUBLISHED["centre"], ids=lambda row: row["locator"])
def test_centre_of_a_published_cell(row: dict) -> None:
    found = loc.centre(row["locator"])
    assert found == pytest.approx((row["lat_deg"], row["lon_deg"]), abs=row["tolerance_deg"], rel=0)


@pytest.mark.parametrize("row", table(read("cell_sizes.toml")), ids=lambda row: f"{row['lat_deg']} deg")
@pytest.mark.parametrize(("kind", "characters"), [("square", 4), ("subsquare", 6)])
def test_size_of_cells(row: dict, kind: str, characters: int) -> None:
    box = loc.cell(loc.locator_at(row["lat_deg"], 12.0, characters))
    half_deg = (box.north_deg - box.south_deg) / 2
    north_south_km = inverse(row["lat_deg"] - half_deg, 12.0, row["lat_deg"] + half_deg, 12.0).distance_km
    assert box.south_deg == row["lat_deg"]
    # 0.001 km: the source takes the degree's middle here up to 0.02 degrees beside the parallel
    assert north_south_km == pytest.approx(row[f"{kind}_ns_km"], abs=0.001)
    parallel_km = parallel_arc_km(box.south_deg, box.east_deg - box.west_deg)
    assert parallel_km == pytest.approx(row[f"{kind}_ew_km"], abs=0.0005)


@pytest.mark.parametrize("row", table(read("cell_sizes.toml")), ids=lambda row: f"{row['lat_deg']} deg")
def test_half_diagonal_of_cells(row: dict) -> None:
    square = loc.locator_at(row["lat_deg"], 12.0, 4)
    assert loc.half_diagonal_km(square) == pytest.approx(row["square_half_diagonal_km"], abs=0.005)
    # The source's box has its middle on the parallel: it lies between the cells on either side of it.
    smaller_km, greater_km = sorted(
        loc.half_diagonal_km(loc.locator_at(lat_deg, 12.0, 6))
        for lat_deg in (row["lat_deg"], row["lat_deg"] - 0.01)
    )
    assert smaller_km - 0.005 <= row["subsquare_half_diagonal_km"] <= greater_km + 0.005
    assert greater_km - smaller_km < 0.003


def parallel_arc_km(lat_deg: float, width_deg: float) -> float:
    """The arc of a parallel from the ellipsoid's own constants, apart from the engine."""
    a_km, f = 6378.137, 1 / 298.257223563
    e2 = f * (2 - f)
    lat = np.radians(lat_deg)
    return float(np.radians(width_deg) * a_km * np.cos(lat) / np.sqrt(1 - e2 * np.sin(lat) ** 2))


def test_half_diagonal_is_the_greatest_of_the_four_corners() -> None:
    for name in ("JO62qm", "GF15", "RR", "AA00aa"):
        box, middle = loc.cell(name), loc.centre(name)
        corners = [
            (lat, lon) for lat in (box.south_deg, box.north_deg) for lon in (box.west_deg, box.east_deg)
        ]
        farthest_km = max(float(inverse(*middle, *corner).distance_km) for corner in corners)
        assert loc.half_diagonal_km(name) == pytest.approx(farthest_km, rel=1e-12)


def test_uncertainty_adds_both_cells() -> None:
    both = loc.half_diagonal_km("JO62qm") + loc.half_diagonal_km("FN31")
    assert loc.uncertainty_km("JO62qm", "FN31") == pytest.approx(both, rel=1e-12)
    assert loc.uncertainty_km("JO62", "JO62") == pytest.approx(2 * 88.09, abs=0.01)  # twice half a digit


@pytest.mark.parametrize(
    ("word", "message"),
    [
        ("ZZ99", "'ZZ99' is not a locator: its first two letters go from A to R (as in JN58td)"),
        ("SA00", "'SA00' is not a locator: its first two letters go from A to R (as in JN58td)"),
        ("JNA8", "'JNA8' is not a locator: its third and fourth characters are digits (as in JN58td)"),
        ("JN58ty", "'JN58ty' is not a locator: its fifth and sixth letters go from A to X (as in JN58td)"),
        (
            "JN58tdx5",
            "'JN58tdx5' is not a locator: its seventh and eighth characters are digits (as in JN58td25xe)",
        ),
        (
            "JN58td25YA",
            "'JN58td25YA' is not a locator: its ninth and tenth letters go from A to X (as in JN58td25xe)",
        ),
        ("", "'' is not a locator: it has 0 characters, a locator has 2, 4, 6, 8 or 10 (as in JN58td)"),
        ("J", "'J' is not a locator: it has 1 character, a locator has 2, 4, 6, 8 or 10 (as in JN58td)"),
        (
            " JN58",
            "' JN58' is not a locator: it has 5 characters, a locator has 2, 4, 6, 8 or 10 (as in JN58td)",
        ),
        (
            "JN58\n",
            "'JN58\\n' is not a locator: it has 5 characters, a locator has 2, 4, 6, 8 or 10 (as in JN58td)",
        ),
        ("\u212aN58", "'\u212aN58' is not a locator: its first two letters go from A to R (as in JN58td)"),
        (
            "JN\u0665\u0668",
            "'JN\u0665\u0668' is not a locator: its third and fourth characters are digits (as in JN58td)",
        ),
    ],
)
def test_message_says_which_characters_are_wrong(word: str, message: str) -> None:
    for ask in (loc.check, loc.written, loc.cell, loc.centre, loc.half_diagonal_km):
        with pytest.raises(PlaceError) as caught:
            ask(word)
        assert str(caught.value) == message


def test_a_long_word_is_shown_in_part() -> None:
    with pytest.raises(PlaceError, match=r"^'J{20}\.\.\.' is not a locator: it has 4000 characters"):
        loc.check("J" * 4000)


def test_one_bad_word_among_many_is_named() -> None:
    with pytest.raises(PlaceError, match="'ZZ99'"):
        loc.centres(["JO62", "ZZ99", "YY99"])


@given(st.text(max_size=11))
def test_pattern_and_check_agree(word: str) -> None:
    if re.fullmatch(loc.LOCATOR_PATTERN, word):
        loc.check(word)
    else:
        with pytest.raises(PlaceError):
            loc.check(word)


@given(locators(), st.data())
def test_any_case_is_read_and_one_is_written(name: str, data: st.DataObject) -> None:
    mixed = "".join(data.draw(st.sampled_from((sign.upper(), sign.lower()))) for sign in name)
    assert re.fullmatch(loc.LOCATOR_PATTERN, mixed)
    assert loc.written(mixed) == name
    assert loc.cell(mixed) == loc.cell(name)


@given(locators())
def test_the_centre_lies_in_its_own_cell(name: str) -> None:
    assert loc.locator_at(*loc.centre(name), len(name)) == name


@given(locators(lengths=(2, 4)))
def test_edges_belong_to_the_cell_north_and_east(name: str) -> None:
    box = loc.cell(name)
    assert loc.locator_at(box.south_deg, box.west_deg, len(name)) == name
    if box.north_deg < 90:
        assert loc.cell(loc.locator_at(box.north_deg, box.west_deg, len(name))).south_deg == box.north_deg
    east_deg = loc.cell(loc.locator_at(box.south_deg, box.east_deg, len(name))).west_deg
    assert east_deg == (box.east_deg if box.east_deg < 180 else -180)


def test_an_edge_written_in_decimals_is_met_exactly() -> None:
    """Every third edge of 8 characters is a decimal of four places, though most have no exact float."""
    for count in range(-7200, 7200):
        lat_deg = float(f"{count * 0.0125:.4f}")
        assert loc.cell(loc.locator_at(lat_deg, 0.0, 8)).south_deg == lat_deg


@given(st.floats(-90, 90), st.floats(-180, 180), st.sampled_from(loc.LENGTHS))
def test_a_cell_holds_the_places_that_get_its_name(lat_deg: float, lon_deg: float, characters: int) -> None:
    box = loc.cell(loc.locator_at(lat_deg, lon_deg, characters))
    assert box.south_deg <= lat_deg + 1e-13  # an edge of thirds of a degree is no exact float
    assert lat_deg <= box.north_deg + 1e-13
    if lon_deg < 180:
        assert box.west_deg <= lon_deg + 1e-13
        assert lon_deg <= box.east_deg + 1e-13
    assert box.north_deg - box.south_deg >= LAST_CELL_DEG - 1e-12


@pytest.mark.parametrize(
    ("lat_deg", "lon_deg", "message"),
    [
        (90.1, 0.0, "latitude 90.1 is not on the Earth: give degrees from -90 to 90"),
        (float("nan"), 0.0, "latitude nan is not on the Earth: give degrees from -90 to 90"),
        (0.0, 180.5, "longitude 180.5 is not on the Earth: give degrees from -180 to 180"),
        (0.0, float("-inf"), "longitude -inf is not on the Earth: give degrees from -180 to 180"),
    ],
)
def test_numbers_that_are_no_place(lat_deg: float, lon_deg: float, message: str) -> None:
    with pytest.raises(PlaceError) as caught:
        loc.locator_at(lat_deg, lon_deg)
    assert str(caught.value) == message


def test_other_numbers_of_characters_are_refused() -> None:
    with pytest.raises(PlaceError, match="2, 4, 6, 8 or 10 characters, not 5"):
        loc.locator_at(0.0, 0.0, 5)


@pytest.mark.parametrize(
    ("lat_deg", "lon_deg", "characters", "right", "package"),
    [
        (-0.0001, -0.0001, 4, "II99", "JJ00"),
        (89.9999, 179.9999, 4, "RR99", "AA00"),
        (89.9999, 179.9999, 6, "RR99xx", "AA00aa"),
        (-90, 179.9999, 4, "RA90", "AA00"),
        (48.14666, 11.60833, 8, "JN58td25", "JN58td35"),
    ],
)
def test_the_maidenhead_package_rounds_over_edges_and_we_do_not(
    lat_deg: float, lon_deg: float, characters: int, right: str, package: str
) -> None:
    """When the package is mended, the second line fails, and `locator_at` can use it."""
    assert loc.locator_at(lat_deg, lon_deg, characters) == right
    assert maidenhead.to_maiden(lat_deg, lon_deg, characters // 2) == package


def test_the_maidenhead_package_gives_the_corner_and_takes_letters_beyond_x() -> None:
    assert maidenhead.to_location("JO62") == (52.0, 12.0)
    assert loc.centre("JO62") == (52.5, 13.0)
    assert maidenhead.to_location("JO62zz")[0] > loc.cell("JO62").north_deg
    with pytest.raises(PlaceError):
        loc.centre("JO62zz")


def test_centres_are_those_of_the_single_ones() -> None:
    names = ["JO62", "JN58td25xe", "AA", "rr99XX", "GF15vc41"]
    lat_deg, lon_deg = loc.centres(names)
    assert list(zip(lat_deg.tolist(), lon_deg.tolist(), strict=True)) == [loc.centre(name) for name in names]


def test_no_locators_give_empty_arrays() -> None:
    lat_deg, lon_deg = loc.centres([])
    assert lat_deg.shape == lon_deg.shape == loc.half_diagonals_km([]).shape == (0,)


def test_ten_thousand_centres_take_under_a_tenth_of_a_second() -> None:
    first, second, third = PAIRS[:3]
    names = [
        f"{a}N{d}{e}{s}{t}" for a in first for d in second for e in "0369" for s in third[:4] for t in third
    ]
    names = names[:10_000]
    best_s = 1.0
    for _ in range(3):
        loc._corners_and_centre.cache_clear()
        start_s = time.perf_counter()
        loc.centres(names)
        best_s = min(best_s, time.perf_counter() - start_s)
    assert len(set(names)) == len(names) > 9_000
    assert best_s < 0.1
