"""Distances and azimuths against published geodesics."""

from __future__ import annotations

import numpy as np
import pytest
from pyproj import Geod

from logtool.errors import PlaceError
from logtool.places import geodesic as geo
from logtool.places.locator import uncertainty_km

from .sources import degrees, read, table, turned

WGS84 = read("geodesics.toml")
VINCENTY = read("geodesics_vincenty.toml")
MEAN_RADIUS_KM = 6371.0088


def sphere_km(lat_a: float, lon_a: float, lat_b: float, lon_b: float) -> float:
    a, b = np.radians([lat_a, lon_a]), np.radians([lat_b, lon_b])
    half = np.sin((b - a) / 2) ** 2
    return float(2 * MEAN_RADIUS_KM * np.arcsin(np.sqrt(half[0] + np.cos(a[0]) * np.cos(b[0]) * half[1])))


@pytest.mark.parametrize("row", table(WGS84), ids=lambda row: row["name"])
def test_inverse_against_the_tables(row: dict) -> None:
    path = geo.inverse(row["lat_1"], row["lon_1"], row["lat_2"], row["lon_2"])
    assert path.distance_km * 1000 == pytest.approx(row["s_m"], abs=0.5e-6, rel=0)
    assert turned(path.azimuth_a_deg, row["azimuth_1_deg"]) == pytest.approx(0, abs=0.5e-9)
    assert turned(path.azimuth_b_deg, row["azimuth_2_deg"] + 180) == pytest.approx(0, abs=0.5e-9)
    assert 0 <= path.azimuth_a_deg < 360
    assert 0 <= path.azimuth_b_deg < 360


def test_inverse_takes_arrays() -> None:
    rows = table(WGS84)
    ends = [np.array([row[key] for row in rows], dtype=float) for key in ("lat_1", "lon_1", "lat_2", "lon_2")]
    path = geo.inverse(*ends)
    assert path.distance_km.shape == (len(rows),)
    for at, row in enumerate(rows):
        assert path.distance_km[at] * 1000 == pytest.approx(row["s_m"], abs=0.5e-6, rel=0)
    grid = geo.inverse(0.0, 0.0, ends[2][:, None], ends[3][None, :])
    assert grid.azimuth_a_deg.shape == (len(rows), len(rows))


def test_direct_example() -> None:
    row = WGS84["direct"]
    lat_deg, lon_deg = geo.circle_points(row["lat_1"], row["lon_1"], row["s_m"] / 1000, points=12)
    at = row["azimuth_deg"] * 12 // 360
    assert lat_deg[at] == pytest.approx(row["lat_2"], abs=0.5e-11, rel=0)
    assert lon_deg[at] == pytest.approx(row["lon_2"], abs=0.5e-11, rel=0)


def test_survey_line_that_a_sphere_fails() -> None:
    row = WGS84["survey"]
    ends = [degrees(row[key]) for key in ("lat_1", "lon_1", "lat_2", "lon_2")]
    path = geo.inverse(*ends)
    assert path.distance_km * 1000 == pytest.approx(row["s_m"], abs=0.0005, rel=0)
    assert turned(path.azimuth_a_deg, degrees(row["azimuth_1"])) * 3600 == pytest.approx(0, abs=0.005)
    assert turned(path.azimuth_b_deg, degrees(row["azimuth_back"])) * 3600 == pytest.approx(0, abs=0.005)
    assert sphere_km(*ends) == pytest.approx(row["sphere_km"], abs=0.0005)


@pytest.mark.parametrize("line", VINCENTY["line"], ids=lambda line: line["name"])
def test_engine_on_the_ellipsoids_of_vincentys_table(line: dict) -> None:
    a_m, reciprocal = VINCENTY["ellipsoids"][line["ellipsoid"]]
    engine = Geod(a=a_m, rf=reciprocal)
    lat_1, lat_2, lon = (degrees(line[key]) for key in ("lat_1", "lat_2", "lon_difference"))
    forward, back, length_m = engine.inv(0.0, lat_1, lon, lat_2)
    tolerance = line["azimuth_tolerance_arcsec"]
    end_rounding_m = 2 * 0.5e-5 / 3600 * 111_320  # both ends of the line are printed to 1e-5 arcsec
    assert length_m == pytest.approx(line["s_m"], abs=0.0005 + end_rounding_m, rel=0)
    assert turned(forward, degrees(line["azimuth_1"])) * 3600 == pytest.approx(0, abs=tolerance)
    assert turned(back, degrees(line["azimuth_2"]) + 180) * 3600 == pytest.approx(0, abs=tolerance)


def test_between_locators() -> None:
    row = WGS84["locators"]
    a, b = row["a"], row["b"]
    assert geo.distance_km(a, b) * 1000 == pytest.approx(row["s_m"], abs=0.0005, rel=0)
    assert geo.distance_km(b, a) == pytest.approx(geo.distance_km(a, b), abs=1e-9)
    assert geo.bearing_deg(a, b) == pytest.approx(row["azimuth_1_deg"] + 360, abs=0.5e-6)
    assert geo.bearing_deg(b, a) == pytest.approx((row["azimuth_2_deg"] + 180) % 360, abs=0.5e-6)


def test_centre_to_centre_not_corner_to_corner() -> None:
    assert geo.distance_km("JO62", "FN42") == pytest.approx(
        6060, abs=0.5
    )  # 6121 from the corner that the package gives
    assert geo.distance_km("jo62", "FN42") == geo.distance_km("JO62", "fn42")


def test_no_bearing_inside_the_uncertainty() -> None:
    assert geo.bearing_deg("JO62", "JO62") is None
    assert geo.distance_km("JO62", "JO62") == 0
    for near, far in (("JO62", "JO72"), ("JO62qm", "JO62rm"), ("JO62", "JO64")):
        known = geo.distance_km(near, far) >= uncertainty_km(near, far)
        assert (geo.bearing_deg(near, far) is not None) == known
    assert geo.bearing_deg("JO62", "JO63") is None  # 111 km apart, 175 km uncertain
    assert geo.bearing_deg("JO62", "JO64") == pytest.approx(0.0, abs=1e-9)


def test_points_that_coincide_have_no_azimuth() -> None:
    path = geo.inverse(10.0, 10.0, 10.0, 10.0)
    assert path.distance_km == 0
    assert np.isnan(path.azimuth_a_deg)
    assert np.isnan(path.azimuth_b_deg)


def test_what_is_not_known_stays_so_and_spoils_no_neighbour() -> None:
    path = geo.inverse(52.5, 13.0, np.array([np.nan, 42.5]), np.array([-71.0, -71.0]))
    assert np.isnan(path.distance_km).tolist() == [True, False]
    assert np.isnan(path.azimuth_a_deg).tolist() == [True, False]
    assert path.distance_km[1] == pytest.approx(geo.distance_km("JO62", "FN42"), abs=1e-9)


@pytest.mark.parametrize("ends", [(91, 0, 0, 0), (0, 181, 0, 0), (0, 0, -90.5, 0), (0, 0, 0, np.inf)])
def test_degrees_off_the_earth_are_refused(ends: tuple[float, ...]) -> None:
    with pytest.raises(PlaceError, match="is not on the Earth"):
        geo.inverse(*ends)


def test_midpoint_is_as_far_from_both_ends() -> None:
    lat_a, lon_a, lat_b, lon_b = (
        np.array(x, dtype=float) for x in ([52.5, 0, 60], [13, 179, 0], [42.5, 0, 60], [-71, -179, 90])
    )
    lat, lon = geo.midpoint(lat_a, lon_a, lat_b, lon_b)
    whole_km = geo.inverse(lat_a, lon_a, lat_b, lon_b).distance_km
    for end_lat, end_lon in ((lat_a, lon_a), (lat_b, lon_b)):
        half_km = geo.inverse(end_lat, end_lon, lat, lon).distance_km
        assert half_km == pytest.approx(whole_km / 2, abs=1e-8)
    assert abs(lon[1]) == pytest.approx(180, abs=1e-9)
    assert lat[2] > 67.5


def test_midpoint_of_one_point_is_that_point() -> None:
    lat, lon = geo.midpoint(10.0, 20.0, 10.0, 20.0)
    assert (float(lat), float(lon)) == pytest.approx((10.0, 20.0), abs=1e-14)
