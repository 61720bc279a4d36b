"""The sample logs: made again to the byte, counted alike by reader and script, and true to their scenario."""

from __future__ import annotations

import gzip
import json
import os
import subprocess
import sys
from collections import Counter, defaultdict
from pathlib import Path
from statistics import fmean, quantiles
from typing import Any

import pytest

from logtool import open_logs
from logtool.places import geodesic
from logtool.places.locator import centre
from logtool.places.sun import zenith_deg
from logtool.records.judge import Record, is_blank, is_comment, judge
from logtool.records.layout import REASONS

ROOT = Path(__file__).parent.parent
SAMPLES = ROOT / "sample_logs"
SITE = "IN66lm"
MOST_BYTES = 3_000_000
BOM = b"\xef\xbb\xbf"
GZIP_HEAD = (
    b"\x1f\x8b\x08\x00\x00\x00\x00\x00"  # RFC 1952: deflate, no flags so no name, no time (from memory)
)
DARK_ZENITH_DEG, LIGHT_ZENITH_DEG = 108, 70


def text_of(path: Path) -> bytes:
    return gzip.decompress(path.read_bytes()) if path.suffix == ".gz" else path.read_bytes()


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, list[dict[str, Any]]]:
    """A folder made anew, and what the script says of it."""
    folder = tmp_path_factory.mktemp("made")
    run = subprocess.run(
        [sys.executable, ROOT / "scripts" / "make_sample_logs.py", folder],
        env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONHASHSEED": "1"},
        capture_output=True, check=True, timeout=60,
    )  # fmt: skip
    return folder, json.loads(run.stdout)["files"]


@pytest.fixture(scope="module")
def judged() -> list[tuple[Path, Record | str]]:
    """Every line of the sample that is neither blank nor a comment, as the judge sees it."""
    found = []
    for path in sorted(SAMPLES.glob("*.log*")):
        for line in text_of(path).removeprefix(BOM).split(b"\n"):
            line = line.removesuffix(b"\r")
            if not is_blank(line) and not is_comment(line):
                found.append((path, judge(line)))
    return found


@pytest.fixture(scope="module")
def records(judged: list[tuple[Path, Record | str]]) -> list[Record]:
    """The records of the sample, each once, in the order of time."""
    once = {record.fields: record for _, record in judged if isinstance(record, Record)}
    return sorted(once.values(), key=lambda record: record.time_us)


@pytest.fixture(scope="module")
def distances_km(records: list[Record]) -> dict[str, float]:
    """The distance of each sender that is heard more than once: the others may be false decodes."""
    heard = Counter(record.field("sender") for record in records)
    locators = {
        r.field("sender"): r.field("locator") for r in records if r.kind == "heard" and r.field("locator")
    }
    return {name: geodesic.distance_km(SITE, place) for name, place in locators.items() if heard[name] > 1}


def test_script_makes_the_same_bytes(made: tuple[Path, list[dict[str, Any]]]) -> None:
    folder, _ = made
    names = sorted(path.name for path in folder.iterdir())
    assert names == sorted(path.name for path in SAMPLES.iterdir() if path.name != "README.md")
    assert len(names) == 7
    for name in names:
        assert text_of(folder / name) == text_of(SAMPLES / name), (
            name
        )  # packed bytes are up to zlib's version


def test_one_file_is_packed_without_name_and_time() -> None:
    packed = list(SAMPLES.glob("*.gz"))
    assert [path.name for path in packed] == ["2026-03-04.log.gz"]
    assert packed[0].read_bytes().startswith(GZIP_HEAD)


def test_sample_is_small() -> None:
    assert sum(path.stat().st_size for path in SAMPLES.iterdir()) < MOST_BYTES


def test_ledger_is_what_the_script_states(made: tuple[Path, list[dict[str, Any]]]) -> None:
    _, stated = made
    with open_logs(SAMPLES) as logs:
        ledgers = [ledger.as_dict() for ledger in logs.inputs]
        assert logs.refused == []
    assert len(ledgers) == len(stated)
    for ledger, said in zip(ledgers, stated, strict=True):
        assert Path(ledger["file"]).name == said["file"]
        for count in ("lines", "blank", "comments", "records", "repeated", "set_aside", "reasons"):
            assert ledger[count] == said[count], (said["file"], count)


def test_judge_finds_the_kinds_and_reasons_that_the_script_states(
    made: tuple[Path, list[dict[str, Any]]], judged: list[tuple[Path, Record | str]]
) -> None:
    _, stated = made
    for said in stated:
        own = [found for path, found in judged if path.name == said["file"]]
        assert Counter(found for found in own if isinstance(found, str)) == said["reasons"]
        kinds = Counter(found.kind for found in own if isinstance(found, Record))
        assert kinds.total() == said["records"] + said["repeated"]
        repeats = kinds - Counter(said["kinds"])
        assert repeats.total() == said["repeated"]


def test_every_reason_of_the_layout_occurs(judged: list[tuple[Path, Record | str]]) -> None:
    reasons = Counter(found for _, found in judged if isinstance(found, str))
    assert set(reasons) == set(REASONS)
    assert 40 <= reasons.total() <= 50


def test_call_signs_are_invented(records: list[Record]) -> None:
    names = {record.field(column) for record in records for column in ("sender", "addressee")} - {""}
    assert len(names) > 250
    assert {name[0] for name in names} == {"Q"}
    assert all(name[1].isdigit() for name in names)


def test_receptions_number_as_announced(records: list[Record]) -> None:
    kinds = Counter(record.kind for record in records)
    assert 20_000 <= kinds["heard"] <= 30_000
    unnamed = sum(record.kind == "heard" and not record.field("sender") for record in records)
    assert 0.005 < unnamed / kinds["heard"] < 0.05


def test_reach_is_farther_by_night(records: list[Record], distances_km: dict[str, float]) -> None:
    dark, light = defaultdict(set), defaultdict(set)
    at_site = centre(SITE)
    hours = {record.time_us // 3_600_000_000 for record in records}
    zenith = {hour: float(zenith_deg(hour * 3_600 + 1_800, *at_site)) for hour in hours}
    for record in records:
        if record.kind == "heard" and record.field("sender") in distances_km:
            hour = record.time_us // 3_600_000_000
            side = (
                dark if zenith[hour] > DARK_ZENITH_DEG else light if zenith[hour] < LIGHT_ZENITH_DEG else None
            )
            if side is not None:
                side[hour].add(distances_km[record.field("sender")])
    assert len(dark) > 40
    assert len(light) > 25
    p90_km = {
        hour: quantiles(km, n=10, method="inclusive")[-1]
        for hour, km in (dark | light).items()
        if len(km) > 4
    }
    assert fmean(p90_km[h] for h in dark if h in p90_km) > 2 * fmean(p90_km[h] for h in light if h in p90_km)
    assert max(max(km) for km in dark.values()) > 10_000
    nearest_km = [fmean(min(km) for km in side.values()) for side in (dark, light)]
    assert nearest_km[0] > 1.5 * nearest_km[1]  # the skip zone


def test_each_antenna_is_better_where_it_should_be(records: list[Record]) -> None:
    locators = {
        r.field("sender"): r.field("locator") for r in records if r.kind == "heard" and r.field("locator")
    }
    bearings_deg = {name: geodesic.bearing_deg(SITE, place) for name, place in locators.items()}
    snr_db: dict[tuple[str, str], dict[str, list[float]]] = defaultdict(lambda: defaultdict(list))
    antenna = ""
    for record in sorted(records, key=lambda r: (r.time_us, r.kind != "setup")):
        if record.kind == "setup":
            antenna = record.keys["antenna"]
        elif record.kind == "heard" and (bearing_deg := bearings_deg.get(record.field("sender"))) is not None:
            assert antenna != "none"
            along = "east-west" if 45 <= bearing_deg % 180 < 135 else "north-south"
            snr_db[along, record.field("sender")][antenna].append(float(record.field("snr_db")))
    gains_db: dict[str, list[float]] = defaultdict(list)
    for (along, _), by_antenna in snr_db.items():
        if all(len(by_antenna[name]) >= 20 for name in ("wire", "dipole")):
            gains_db[along].append(fmean(by_antenna["wire"]) - fmean(by_antenna["dipole"]))
    assert min(len(gains) for gains in gains_db.values()) >= 20
    assert fmean(gains_db["east-west"]) > 1
    assert fmean(gains_db["north-south"]) < -1


def test_noise_falls_when_the_antenna_is_off_and_rises_at_night(records: list[Record]) -> None:
    antenna, off_dbfs, on_dbfs = "", [], defaultdict(list)
    for record in sorted(records, key=lambda r: (r.time_us, r.kind != "setup")):
        antenna = record.keys.get("antenna", antenna)
        if record.kind == "noise":
            hour = int(record.field("time")[11:13])
            (off_dbfs if antenna == "none" else on_dbfs[hour]).append(float(record.keys["dbfs"]))
    assert len(off_dbfs) == 2
    assert max(off_dbfs) < min(min(dbfs) for dbfs in on_dbfs.values()) - 5
    assert fmean(on_dbfs[2]) > fmean(on_dbfs[12]) + 5


def test_conversations_are_heard_from_both_ends(records: list[Record]) -> None:
    pairs = {(r.field("sender"), r.field("addressee")) for r in records if r.field("addressee")}
    assert sum((b, a) in pairs for a, b in pairs) > 1_000


def test_hours_off_have_no_records(records: list[Record]) -> None:
    hours = Counter(record.field("time")[:13] for record in records)
    off = [
        "2026-03-04T00",
        "2026-03-04T01",
        "2026-03-04T02",
        "2026-03-05T13",
        "2026-03-05T16",
        "2026-03-08T03",
    ]
    assert [hours[hour] for hour in off] == [0] * len(off)
    before = [record for record in records if record.field("time") < "2026-03-08T07:05"]
    assert before[-1].kind != "stop"  # the recording broke off
    assert sum(record.kind == "stop" for record in records) == 3
