"""Lines and circles for maps, and where they are cut."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from logtool.errors import PlaceError
from logtool.places.geodesic import circle_points, inverse, line_points, split_at_antimeridian


def as_lists(pieces: list) -> list:
    return [(lat.tolist(), lon.tolist()) for lat, lon in pieces]


def test_line_points_lie_evenly_on_the_geodesic() -> None:
    lat, lon = line_points(52.5, 13.0, 42.5, -71.0, step_km=250.0)
    whole = inverse(52.5, 13.0, 42.5, -71.0)
    steps_km = inverse(lat[:-1], lon[:-1], lat[1:], lon[1:]).distance_km
    assert len(steps_km) == np.ceil(whole.distance_km / 250)
    assert steps_km == pytest.approx(np.full(len(steps_km), whole.distance_km / len(steps_km)), abs=1e-8)
    starts = inverse(52.5, 13.0, lat[1:], lon[1:]).azimuth_a_deg
    assert starts == pytest.approx(np.full(len(starts), float(whole.azimuth_a_deg)), abs=1e-8)
    assert (lat[0], lon[0], lat[-1], lon[-1]) == (52.5, 13.0, 42.5, -71.0)


def test_a_line_without_length_has_two_points() -> None:
    lat, lon = line_points(1.0, 2.0, 1.0, 2.0)
    assert (lat.tolist(), lon.tolist()) == ([1.0, 1.0], [2.0, 2.0])


@pytest.mark.parametrize(
    ("lat", "lon", "radius_km"), [(52.5, 13.0, 1000), (89.0, 0.0, 500), (0.0, 179.0, 9000)]
)
def test_every_point_of_a_circle_is_at_the_radius(lat: float, lon: float, radius_km: float) -> None:
    ring_lat, ring_lon = circle_points(lat, lon, radius_km, points=36)
    assert ring_lat.shape == (37,)
    assert (ring_lat[0], ring_lon[0]) == (ring_lat[-1], ring_lon[-1])
    path = inverse(lat, lon, ring_lat[:-1], ring_lon[:-1])
    assert path.distance_km == pytest.approx(np.full(36, radius_km), abs=1e-8)
    around = (path.azimuth_a_deg - np.arange(36) * 10 + 180) % 360 - 180
    assert around == pytest.approx(np.zeros(36), abs=1e-8)


def test_what_cannot_be_drawn_is_refused() -> None:
    with pytest.raises(PlaceError, match="radius above 0"):
        circle_points(0.0, 0.0, 0.0)
    with pytest.raises(PlaceError, match="radius above 0"):
        circle_points(0.0, 0.0, 20_100.0)
    with pytest.raises(PlaceError, match="3 points or more, not 2"):
        circle_points(0.0, 0.0, 100.0, points=2)
    with pytest.raises(PlaceError, match="latitude 95"):
        circle_points(95.0, 0.0, 100.0)
    with pytest.raises(PlaceError, match="step above 0 km, not 0"):
        line_points(0.0, 0.0, 1.0, 1.0, step_km=0)
    with pytest.raises(PlaceError, match="as many latitudes as longitudes"):
        split_at_antimeridian([0.0, 1.0], [0.0])


def test_rfc_7946_example_of_a_cut_line() -> None:
    """RFC 7946, 3.1.9: 45 N from 170 E to 170 W."""
    pieces = split_at_antimeridian([45.0, 45.0], [170.0, -170.0])
    assert as_lists(pieces) == [([45.0, 45.0], [170.0, 180.0]), ([45.0, 45.0], [-180.0, -170.0])]


def test_latitude_is_interpolated_at_the_cut() -> None:
    pieces = split_at_antimeridian([10.0, 14.0], [-179.0, 178.0])
    assert as_lists(pieces) == [
        ([10.0, pytest.approx(10 + 4 / 3)], [-179.0, -180.0]),
        ([pytest.approx(10 + 4 / 3), 14.0], [180.0, 178.0]),
    ]


@pytest.mark.parametrize("edge", [180.0, -180.0])
def test_a_point_on_the_edge_ends_one_piece_and_begins_the_next(edge: float) -> None:
    pieces = split_at_antimeridian([0.0, 1.0, 2.0], [175.0, edge, -175.0])
    assert as_lists(pieces) == [([0.0, 1.0], [175.0, 180.0]), ([1.0, 2.0], [-180.0, -175.0])]


def test_a_line_that_only_touches_the_edge_stays_whole() -> None:
    lat, lon = [0.0, 1.0, 2.0, 3.0], [175.0, 180.0, -180.0, 175.0]
    assert as_lists(split_at_antimeridian(lat, lon)) == [(lat, [175.0, 180.0, 180.0, 175.0])]


def test_a_line_away_from_the_edge_stays_as_it_is() -> None:
    lat, lon = [0.0, 10.0, 20.0], [-100.0, 30.0, 160.0]
    assert as_lists(split_at_antimeridian(lat, lon)) == [(lat, lon)]
    assert split_at_antimeridian([], []) == []
    assert split_at_antimeridian([1.0], [2.0]) == []


def test_twice_over_the_edge_gives_three_pieces() -> None:
    lat, lon = circle_points(10.0, 178.0, 1500.0)
    pieces = split_at_antimeridian(lat, lon)
    assert [float(np.sign(piece[1][len(piece[1]) // 2])) for piece in pieces] == [1.0, -1.0, 1.0]


def test_over_the_pole_the_line_goes_up_one_meridian_and_down_the_other() -> None:
    pieces = split_at_antimeridian([80.0, 89.0, 88.0, 80.0], [20.0, 20.0, -160.0, -160.0])
    assert as_lists(pieces) == [
        ([80.0, 89.0, 90.0], [20.0, 20.0, 20.0]),
        ([90.0, 88.0, 80.0], [-160.0, -160.0, -160.0]),
    ]
    south = split_at_antimeridian([-89.0, -88.0], [-30.0, 150.0])
    assert as_lists(south) == [([-89.0, -90.0], [-30.0, -30.0]), ([-90.0, -88.0], [150.0, 150.0])]


def test_a_point_at_the_pole_takes_the_meridians_beside_it() -> None:
    pieces = split_at_antimeridian([85.0, 90.0, 85.0], [20.0, 77.0, -160.0])
    assert as_lists(pieces) == [([85.0, 90.0], [20.0, 20.0]), ([90.0, 85.0], [-160.0, -160.0])]
    start = split_at_antimeridian([90.0, 85.0], [0.0, 40.0])
    assert as_lists(start) == [([90.0, 85.0], [40.0, 40.0])]


def test_a_geodesic_over_the_pole_is_cut_there() -> None:
    lat, lon = line_points(60.0, 10.0, 55.0, -170.0)
    pieces = split_at_antimeridian(lat, lon)
    assert len(pieces) == 2
    assert pieces[0][0][-1] == pieces[1][0][0] == 90.0
    for piece_lat, piece_lon in pieces:
        assert np.abs(np.diff(piece_lon)).max() < 1e-6
        assert piece_lat.min() >= 55.0


def test_a_ring_round_a_pole_runs_from_edge_to_edge() -> None:
    lat, lon = circle_points(85.0, 30.0, 1500.0)
    pieces = split_at_antimeridian(lat, lon)
    edges = [(piece[1][0], piece[1][-1]) for piece in pieces]
    assert len(pieces) == 2
    assert edges[0][1] == -180.0  # clockwise round the pole is westward
    assert edges[1][0] == 180.0
    assert (edges[0][0], edges[1][1]) == pytest.approx((lon[0], lon[0]), abs=1e-12)


places = st.tuples(st.floats(-89, 89), st.floats(-180, 180))


@given(st.lists(places, min_size=2, max_size=12))
def test_pieces_stay_on_the_map_hold_every_point_and_join(points: list[tuple[float, float]]) -> None:
    lat, lon = (np.array(values) for values in zip(*points, strict=True))
    pieces = split_at_antimeridian(lat, lon)
    for piece_lat, piece_lon in pieces:
        assert len(piece_lat) == len(piece_lon) >= 2
        assert np.abs(piece_lon).max() <= 180 + 1e-9  # unrolling longitudes rounds
        assert np.abs(np.diff(piece_lon)).max() <= 180 + 1e-9
    for (lat_a, lon_a), (lat_b, lon_b) in pairwise(pieces):
        assert lat_a[-1] == lat_b[0]
        at_pole = abs(lat_a[-1]) == 90
        assert at_pole or abs(lon_a[-1] - lon_b[0]) == pytest.approx(360)
    kept = {round(float(value), 9) for piece in pieces for value in piece[0]}
    assert {round(float(value), 9) for value in lat} <= kept
