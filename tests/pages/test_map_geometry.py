"""The page's own geometry, asked in the browser and held against PROJ, which the page does not use."""

from __future__ import annotations

import json

import numpy as np
import pytest
from pyproj import Geod

from logtool.pages.map_page import map_html
from logtool.places.geodesic import circle_points
from tests.browser import Page
from tests.pages.map_cases import small
from tests.pages.test_map_style import EDGE_LIGHT, MARK_CONTRAST, colours, contrast

pytestmark = pytest.mark.browser

EARTH = Geod(ellps="WGS84")
PLACE_DEG = 1e-7  # 1 cm; Vincenty's series are good to a millimetre
STEP_LON_DEG = (
    4.0  # the most that two neighbours of a line differ in longitude, where it does not cross a pole
)
POLE_ROW_DEG = 88.0  # above it a line may run along the edge of the map, which is the pole
STARTS = ((54.0, 15.9), (-33.5, 178.4), (67.2, -179.9), (89.6, 20.0), (-88.9, -40.0), (0.0, 0.0))


@pytest.fixture(scope="module")
def geo(page: Page, tmp_path_factory: pytest.TempPathFactory) -> Page:
    path = tmp_path_factory.mktemp("geo") / "map.html"
    path.write_text(map_html(small()), "utf-8")
    page.open(path)
    return page


def ask(page: Page, expression: str) -> np.ndarray:
    """Return points from the page, shape (n, 2): latitude, longitude. [deg]"""
    return np.array(page.evaluate(f"(({expression}))"))


def turn(lon: np.ndarray) -> np.ndarray:
    """Return longitudes from -180 up to 180. [deg]"""
    return (lon + 180) % 360 - 180


@pytest.mark.parametrize(("lat", "lon"), STARTS)
@pytest.mark.parametrize("bearing", [0.0, 37.5, 90.0, 181.0, 300.0])
@pytest.mark.parametrize("km", [10.0, 5000.0, 15000.0])
def test_direct_problem_against_proj(geo: Page, lat: float, lon: float, bearing: float, km: float) -> None:
    there = ask(geo, f"logtoolMap.geo.direct({lat}, {lon}, {bearing}, {km})")
    lon_there, lat_there, _ = EARTH.fwd(lon, lat, bearing, km * 1000)
    assert there[0] == pytest.approx(lat_there, abs=PLACE_DEG)
    narrower = np.cos(np.radians(lat_there))
    assert turn(there[1] - lon_there) * narrower == pytest.approx(0, abs=PLACE_DEG)


@pytest.mark.parametrize(("lat", "lon"), STARTS)
@pytest.mark.parametrize("bearing", [1.0, 45.0, 120.0, 275.0, 359.0])
def test_paths_run_on_over_180_and_the_poles(geo: Page, lat: float, lon: float, bearing: float) -> None:
    path = ask(geo, f"logtoolMap.geo.path({lat}, {lon}, {bearing}, 14000)")
    steps = np.abs(np.diff(path[:, 1]))
    inside = np.abs(path[:, 0]).clip(max=90)
    away = np.maximum(inside[1:], inside[:-1]) < POLE_ROW_DEG
    assert (steps[away] <= STEP_LON_DEG + 1e-9).all()
    assert (steps <= 180).all()
    lon_end, lat_end, _ = EARTH.fwd(lon, lat, bearing, 14_000_000)
    assert path[-1, 0] == pytest.approx(lat_end, abs=PLACE_DEG)
    assert turn(path[-1, 1] - lon_end) == pytest.approx(0, abs=PLACE_DEG * 10)  # ends up to 80 degrees north
    _, _, metres = EARTH.inv(np.full(len(path), lon), np.full(len(path), lat), turn(path[:, 1]), path[:, 0])
    assert (np.diff(metres) > 0).all()


@pytest.mark.parametrize(("lat", "lon"), STARTS)
@pytest.mark.parametrize("km", [500, 5000, 10000, 15000])
def test_rings_are_closed_or_go_once_round_the_pole(geo: Page, lat: float, lon: float, km: int) -> None:
    lats, lons = circle_points(lat, lon, km, points=180)
    given = json.dumps([lats[:-1].tolist(), lons[:-1].tolist()])
    ring = ask(geo, f"logtoolMap.geo.ring({lat}, {lon}, {km}, ...{given})")
    _, _, to_north = EARTH.inv(lon, lat, 0, 90)
    _, _, to_south = EARTH.inv(lon, lat, 0, -90)
    poles = (to_north < km * 1000) + (to_south < km * 1000)
    goes_on = ring[-1, 1] - ring[0, 1]
    assert abs(goes_on) == pytest.approx(360 if poles == 1 else 0, abs=1e-6)
    assert ring[-1, 0] == pytest.approx(ring[0, 0], abs=1e-9)
    steps = np.abs(np.diff(ring[:, 1]))
    away = np.maximum(np.abs(ring[1:, 0]), np.abs(ring[:-1, 0])) < POLE_ROW_DEG
    assert (steps[away] <= STEP_LON_DEG + 1e-6).all()
    _, _, metres = EARTH.inv(np.full(len(ring), lon), np.full(len(ring), lat), turn(ring[:, 1]), ring[:, 0])
    assert metres == pytest.approx(np.full(len(ring), km * 1000.0), abs=0.01)


def test_outline_is_open_where_a_sector_has_none(geo: Page) -> None:
    far = [2000.0, 3000.0, *[None] * 13, 2000.0]
    lines = geo.evaluate(f"logtoolMap.geo.outline(50, 10, {json.dumps(far)})")
    arcs = [np.array(line) for line in lines]
    assert len(arcs) == 4  # arcs of sectors 0, 1 and 15, and the step from 0 to 1; 15 and 0 are equally far
    bearings, _, metres = EARTH.inv(np.full(1, 10.0), np.full(1, 50.0), arcs[0][:1, 1], arcs[0][:1, 0])
    assert metres == pytest.approx([2_000_000], abs=0.01)
    assert bearings == pytest.approx([-11.25], abs=1e-6)
    everything = np.concatenate(arcs)
    _, _, metres = EARTH.inv(
        np.full(len(everything), 10.0), np.full(len(everything), 50.0), everything[:, 1], everything[:, 0]
    )
    assert metres.min() > 1_999_999  # no line goes in to the receiver


@pytest.mark.parametrize(("lat", "lon"), STARTS)
def test_an_outline_round_a_pole_runs_on(geo: Page, lat: float, lon: float) -> None:
    arcs = geo.evaluate(f"logtoolMap.geo.outline({lat}, {lon}, new Array(16).fill(12000))")
    assert len(arcs) == 16
    for arc in map(np.array, arcs):
        away = np.maximum(np.abs(arc[1:, 0]), np.abs(arc[:-1, 0])) < POLE_ROW_DEG
        assert (np.abs(np.diff(arc[:, 1]))[away] <= STEP_LON_DEG + 1e-9).all()


@pytest.mark.parametrize(("sun_lat", "sun_lon"), [(23.4, 0.0), (-23.4, 100.0), (5.0, -170.0)])
def test_terminator_is_a_quarter_turn_from_the_sun(geo: Page, sun_lat: float, sun_lon: float) -> None:
    line = ask(geo, f"logtoolMap.geo.terminator({sun_lat}, {sun_lon}, -200)")
    assert line[0, 1] == -200
    assert line[-1, 1] == 160
    sphere = Geod(a=1.0, b=1.0)
    _, _, radians = sphere.inv(
        np.full(len(line), sun_lon), np.full(len(line), sun_lat), turn(line[:, 1]), line[:, 0]
    )
    assert radians == pytest.approx(np.full(len(line), np.pi / 2), abs=1e-9)


def test_land_is_whole(geo: Page) -> None:
    expression = """(() => {
      const rings = logtoolMap.geo.land(JSON.parse(document.getElementById("logtool-map-land").textContent));
      const ctx = document.createElement("canvas").getContext("2d"), path = new Path2D();
      for (const ring of rings) {
        path.moveTo(ring[0], ring[1]);
        for (let i = 2; i < ring.length; i += 2) path.lineTo(ring[i], ring[i + 1]);
        path.closePath();
      }
      const on = (lat, lon) => ctx.isPointInPath(path, lon, lat, "evenodd");
      return PLACES.map(([lat, lon]) => [-360, 0, 360].some((shift) => on(lat, lon + shift)));
    })()"""
    # common knowledge of the globe: the Sahara, Siberia on both sides of 180, the South Pole; then open sea
    dry = [
        (23, 10),
        (66, 179),
        (67, -179),
        (-89.9, 0),
        (-85, 179),
        (-85, -179),
        (40, -100),
        (-25, 135),
        (75, -40),
    ]
    wet = [(0, -30), (30, -40), (-50, 100), (89, 0), (20, 180), (-55, -170), (42, 51)]
    answer = geo.evaluate(expression.replace("PLACES", json.dumps(dry + wet)))
    assert answer == [True] * len(dry) + [False] * len(wet)


# B. Ottosson, "A perceptual color space for image processing", 2020: sRGB to OKLab; from memory.
TO_LMS = np.array(
    [
        [0.4122214708, 0.5363325363, 0.0514459929],
        [0.2119034982, 0.6806995451, 0.1073969566],
        [0.0883024619, 0.2817188376, 0.6299787005],
    ]
)
TO_LAB = np.array(
    [
        [0.2104542553, 0.7936177850, -0.0040720468],
        [1.9779984951, -2.4285922050, 0.4505937099],
        [0.0259040371, 0.7827717662, -0.8086757660],
    ]
)


def oklab(colours: list[str]) -> np.ndarray:
    """Return colours written `rgb(1,2,3)` in OKLab, shape (n, 3)."""
    coded = np.array([[int(part) for part in colour[4:-1].split(",")] for colour in colours]) / 255
    linear = np.where(coded <= 0.04045, coded / 12.92, ((coded + 0.055) / 1.055) ** 2.4)
    return np.cbrt(linear @ TO_LMS.T) @ TO_LAB.T


@pytest.mark.parametrize(("theme", "direction"), [("light", -1), ("dark", 1)])
def test_colours_are_even_and_run_one_way_in_lightness(geo: Page, theme: str, direction: int) -> None:
    lab = oklab(geo.evaluate(f"logtoolMap.ramp.colours('{theme}')"))
    lightness = lab[:, 0] * direction
    assert (np.diff(lightness) > 0).all()  # so the order shows without colour vision, and in print
    assert np.ptp(lightness) > 0.3
    steps = np.linalg.norm(np.diff(lab, axis=0), axis=1)
    assert steps.max() / steps.min() < 1.35  # even but for the rounding to 8 bits, and corners at the anchors


def test_circles_stand_out_from_land_and_sea(geo: Page) -> None:
    for ground in ("sea", "land"):
        known = colours("dark")[ground]
        for colour in geo.evaluate("logtoolMap.ramp.colours('dark')"):
            red, green, blue = (int(part) / 255 for part in colour[4:-1].split(","))
            assert contrast((red, green, blue), known) >= MARK_CONTRAST
        # in the light theme amber is as light as land, so the dark edge of each circle has to tell them apart
        *edge, opacity = (float(part) for part in EDGE_LIGHT)
        bright = colours("light")[ground]
        red, green, blue = (opacity * e / 255 + (1 - opacity) * b for e, b in zip(edge, bright, strict=True))
        assert contrast((red, green, blue), bright) >= MARK_CONTRAST


def test_radius_gives_areas_by_receptions(geo: Page) -> None:
    large, quarter, one = geo.evaluate("[3600, 900, 1].map((n) => logtoolMap.ramp.radius(n, 3600, 1))")
    assert large**2 == pytest.approx(4 * quarter**2)
    assert one == geo.evaluate("logtoolMap.ramp.SMALLEST_PX")


def test_weighted_median_against_numpy(geo: Page) -> None:
    rng = np.random.default_rng(5)
    for _ in range(20):
        values, weights = rng.integers(-30, 10, 7), rng.integers(1, 5, 7)
        rows = json.dumps([[int(v), int(w)] for v, w in zip(values, weights, strict=True)] + [[None, 9]])
        assert geo.evaluate(f"logtoolMap.choice.weightedMedian({rows})") == np.median(
            np.repeat(values, weights)
        )
