"""GeoJSON and KML: by independent readers, by RFC 7946, and against the table of senders."""

from __future__ import annotations

import io
import json
import re
from itertools import pairwise
from pathlib import Path
from typing import Any

import fastkml
import geojson
import pytest
from fastkml.validator import validate
from pyproj import Geod

from logtool import open_logs, senders
from logtool.exports.geojson import geometry_of
from logtool.exports.places import Place, lines_of
from tests.exports.logs import export, exported, write_log
from tests.places.sources import read
from tests.tables.making import heard, setup

ROOT = Path(__file__).parents[2]
RFC_7946 = read("geojson.toml")
STEP_KM = 100.0


@pytest.fixture(scope="module")
def sample() -> dict[str, bytes]:
    with open_logs(ROOT / "sample_logs") as logs:
        return {name: exported(name, logs) for name in ("geojson", "kml")}


def features(data: bytes, what: str) -> list[dict[str, Any]]:
    return [one for one in json.loads(data)["features"] if one["properties"]["what"] == what]


def over_180(tmp_path: Path) -> Path:
    path = tmp_path / "east.log"
    lines = [
        setup("2026-03-01T18:00:00Z", "RE78ir"),
        heard("2026-03-01T18:10:00Z", "Q1ABC", locator="AG05"),
        heard("2026-03-01T18:11:00Z", "Q2ABC", locator="RE78ir"),
        heard("2026-03-01T18:12:00Z", "Q3ABC"),
        heard("2026-03-01T18:13:00Z", "Q4ABC", locator="QF56"),
    ]
    path.write_text("".join(f"{line}\n" for line in lines))
    return path


def test_geojson_is_valid(sample: dict[str, bytes], tmp_path: Path) -> None:
    for data in (sample["geojson"], export("geojson", write_log(tmp_path / "all.log"))):
        read_back = geojson.loads(data)
        assert isinstance(read_back, geojson.FeatureCollection)
        assert read_back.errors() in ([], None)
        assert all(feature.is_valid for feature in read_back["features"])
        for feature in read_back["features"]:
            for lon, lat in geojson.utils.coords(feature) if feature["geometry"] else []:
                assert -180 <= lon <= 180
                assert -90 <= lat <= 90


def test_cut_of_the_standard() -> None:
    lon, lat = zip(*RFC_7946["line"], strict=True)
    geometry = geometry_of(Place({}, lines_of(lat, lon)))
    assert geometry is not None
    assert json.loads(json.dumps(geometry)) == {"type": "MultiLineString", "coordinates": RFC_7946["cut"]}


def test_senders_have_the_figures_of_the_table(sample: dict[str, bytes]) -> None:
    with open_logs(ROOT / "sample_logs") as logs:
        table = senders(logs)
    found = {
        (one["properties"]["sender"], one["properties"]["band"]): one
        for one in features(sample["geojson"], "sender")
    }
    assert len(found) == len(table)
    for row in table.itertuples():
        one = found[row.sender, row.band]
        assert one["properties"]["receptions"] == row.receptions
        assert one["properties"]["first"] == row.first.isoformat().replace("+00:00", "Z")
        if one["geometry"] is None:
            assert not isinstance(row.locator, str)
        else:
            assert one["properties"]["locator"] == row.locator
            assert abs(one["properties"]["distance_km"] - row.distance_km) <= 0.0005 + 1e-9
            assert one["geometry"] == {"type": "Point", "coordinates": middle(row.locator)}
    (receiver,) = features(sample["geojson"], "receiver")
    assert receiver["properties"] == {
        "what": "receiver",
        "receiver": "hut",
        "locator": "IN66lm",
        "receptions": 25874,
    }
    # The middle of IN66lm by its definition: 7 degrees and 2.5 minutes west, 46 degrees and 31.25 minutes north.
    assert receiver["geometry"]["coordinates"] == [round(-7 - 2.5 / 60, 6), round(46 + 31.25 / 60, 6)]


def test_paths_are_geodesics_of_the_distances_told(sample: dict[str, bytes], tmp_path: Path) -> None:
    geod = Geod(ellps="WGS84")
    paths = [*features(sample["geojson"], "path"), *features(export("geojson", over_180(tmp_path)), "path")]
    assert len(paths) > 270
    for path in paths:
        geometry = path["geometry"]
        lines = (
            geometry["coordinates"] if geometry["type"] == "MultiLineString" else [geometry["coordinates"]]
        )
        for one, two in pairwise(lines):
            assert abs(one[-1][0]) == abs(two[0][0]) == 180
            assert one[-1][1] == two[0][1]
        steps_m = [geod.inv(*a, *b)[2] for line in lines for a, b in pairwise(line)]
        assert max(steps_m) <= STEP_KM * 1000 + 1
        # Points are rounded to 0.1 m; a cut lies on a straight line of the map, here up to 86.5 degrees south.
        slack_km = 0.1 if len(lines) > 1 else 0.005
        assert abs(sum(steps_m) / 1000 - path["properties"]["distance_km"]) < slack_km


def test_what_is_drawn_over_the_180th_meridian(tmp_path: Path) -> None:
    data = export("geojson", over_180(tmp_path))
    paths = {one["properties"]["sender"]: one["geometry"] for one in features(data, "path")}
    assert {name: geometry["type"] for name, geometry in paths.items()} == {
        "Q1ABC": "MultiLineString",
        "Q4ABC": "LineString",
    }  # not to a sender in the receiver's own cell, nor to one without a place
    east, west = paths["Q1ABC"]["coordinates"]
    assert (east[-1][0], west[0][0]) == (180, -180)
    unplaced = [one["properties"]["sender"] for one in features(data, "sender") if one["geometry"] is None]
    assert unplaced == ["Q3ABC"]


def test_kml_has_the_places_of_geojson(sample: dict[str, bytes], tmp_path: Path) -> None:
    both = {"sample": sample, "east": {name: export(name, over_180(tmp_path)) for name in ("geojson", "kml")}}
    for data in both.values():
        kml = fastkml.KML.parse(io.BytesIO(data["kml"]), strict=True)
        (document,) = kml.features
        folders = {folder.name: folder.features for folder in document.features}
        assert list(folders) == ["receivers", "senders", "paths"]
        for name, what in (("receivers", "receiver"), ("senders", "sender"), ("paths", "path")):
            wanted = features(data["geojson"], what)
            assert len(folders[name]) == len(wanted)
            for placemark, feature in zip(folders[name], wanted, strict=True):
                known = {one.name: one.value for one in placemark.extended_data.elements}
                told = {k: v for k, v in feature["properties"].items() if v is not None and k != "what"}
                assert known == {
                    k: str(v).lower() if isinstance(v, bool) else str(v) for k, v in told.items()
                }
                assert placemark.name == told.get("sender", told["receiver"])
                drawn = placemark.geometry
                assert (drawn is None) == (feature["geometry"] is None)
                if drawn is not None:
                    found = json.loads(json.dumps(drawn.__geo_interface__))
                    if what == "path" and feature["geometry"]["type"] == "LineString":
                        assert found["coordinates"] == feature["geometry"]["coordinates"]
                    elif what == "path":
                        assert coordinates_of(found) == feature["geometry"]["coordinates"]
                    else:
                        assert found["coordinates"] == feature["geometry"]["coordinates"]


def test_kml_follows_the_schema(sample: dict[str, bytes], tmp_path: Path) -> None:
    """By the schemas of OGC that come with the reader."""
    for data in (
        sample["kml"],
        export("kml", over_180(tmp_path)),
        export("kml", write_log(tmp_path / "all.log")),
    ):
        (tmp_path / "map.kml").write_bytes(data)
        assert validate(file_to_validate=tmp_path / "map.kml")


def middle(locator: str) -> list[float]:
    """The middle of a cell by the definition of the locator: two letters, digits, letters, digits."""
    lon_deg, lat_deg, width_deg, height_deg = -180.0, -90.0, 360.0, 180.0
    for pair, (base, first) in zip(
        re.findall("..", locator), [(18, "A"), (10, "0"), (24, "a"), (10, "0")], strict=False
    ):
        width_deg, height_deg = width_deg / base, height_deg / base
        lon_deg += width_deg * (ord(pair[0]) - ord(first))
        lat_deg += height_deg * (ord(pair[1]) - ord(first))
    return [round(lon_deg + width_deg / 2, 6), round(lat_deg + height_deg / 2, 6)]


def coordinates_of(geometry: dict[str, Any]) -> list[Any]:
    if geometry["type"] == "GeometryCollection":
        return [part["coordinates"] for part in geometry["geometries"]]
    return list(geometry["coordinates"])
