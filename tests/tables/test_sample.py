"""The sample logs: every row and column against the reference, and counts against a plain pandas script."""

from __future__ import annotations

import shutil
from pathlib import Path
from typing import Any

import pandas as pd
import pytest

from logtool import between, lines, nights, open_logs, reach, sectors, senders
from logtool.records.reader import Logs
from tests.records.slow_reader import COLUMNS, read_line
from tests.tables.comparing import compare_with
from tests.tables.making import read_back
from tests.tables.reference_records import World, make_world

SAMPLES = Path(__file__).parents[2] / "sample_logs"


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the logs of the sample alone."""
    copy = tmp_path_factory.mktemp("sample")
    for path in SAMPLES.glob("*.log*"):
        shutil.copy(path, copy)
    return copy


@pytest.fixture(scope="module")
def world(folder: Path) -> World:
    return make_world(read_back(folder))


@pytest.fixture(scope="module")
def logs(folder: Path) -> Any:
    with open_logs(folder) as opened:
        yield opened


@pytest.fixture(scope="module")
def heard(folder: Path) -> pd.DataFrame:
    """The heard lines of the sample, each once, as text."""
    data = b"\n".join(data.removeprefix(b"\xef\xbb\xbf") for _, data in read_back(folder))
    found = {line.removesuffix(b"\r") for line in data.split(b"\n")}
    good = [line.decode().split("\t") for line in found if not isinstance(read_line(line), str)]
    frame = pd.DataFrame(good, columns=COLUMNS)
    frame = frame[frame.kind == "heard"].copy()
    frame["time"] = pd.to_datetime(frame.time, format="ISO8601", utc=True)
    return frame


@pytest.mark.parametrize(
    "words",
    [
        {},
        {"antenna": "none"},
        {"from_": "2026-03-03T21:17:30Z", "to": "2026-03-04T04:05:06.5Z"},
        {"night": "2026-03-06", "by": ("mode",)},
    ],
    ids=str,
)
def test_sample_is_the_references(world: World, folder: Path, words: dict[str, Any]) -> None:
    compare_with(world, folder, **words)


def test_counts_are_those_of_a_pandas_script(logs: Logs, heard: pd.DataFrame) -> None:
    hourly = reach(logs)
    counted = heard.groupby(heard.time.dt.floor("h"))
    named = heard[heard.sender != ""]
    by_hour = hourly.groupby("hour")
    pd.testing.assert_series_equal(
        by_hour.receptions.sum()[counted.size().index], counted.size(), check_names=False
    )
    unnamed = by_hour.unnamed.sum()
    assert unnamed[unnamed > 0].to_dict() == heard[heard.sender == ""].groupby(
        heard.time.dt.floor("h")
    ).size().to_dict()  # fmt: skip
    assert hourly.receptions.sum() == len(heard)
    assert hourly.attrs["summary"]["receptions"] == len(heard)
    assert hourly.attrs["summary"]["senders"] == named.sender.nunique()
    assert senders(logs).set_index("sender").receptions.to_dict() == named.groupby("sender").size().to_dict()
    assert nights(logs).receptions.sum() == len(heard)
    assert len(lines(logs)) == len(heard)
    talk = heard[(heard.sender != "") & (heard.addressee != "") & (heard.sender != heard.addressee)]
    pairs = {tuple(sorted(pair)) for pair in zip(talk.sender, talk.addressee, strict=True)}
    found = between(logs)
    assert set(zip(found.a, found.b, strict=True)) == pairs
    assert found.from_a.sum() + found.from_b.sum() == len(talk)


def test_medians_are_those_of_a_pandas_script(logs: Logs, heard: pd.DataFrame) -> None:
    found = senders(logs).set_index("sender")
    levels = heard[(heard.sender != "") & (heard.snr_db != "")]
    expected = levels.snr_db.astype(float).groupby(levels.sender).agg(["median", "max"])
    known = found.snr_median_db.dropna()
    assert known.sort_index().to_dict() == expected["median"].to_dict()
    assert found.snr_best_db.dropna().sort_index().to_dict() == expected["max"].to_dict()


def test_sums_agree_between_tables(logs: Logs) -> None:
    by_night = nights(logs)
    by_hour = reach(logs, by="night")
    keys = ["night", "receiver", "antenna", "band"]
    summed = by_hour.groupby(keys)[["receptions", "listening_min"]].sum()
    pd.testing.assert_frame_equal(
        by_night.set_index(keys)[["receptions", "listening_min"]].sort_index(), summed.sort_index()
    )
    of_sectors = sectors(logs)
    assert len(of_sectors) == 16 * of_sectors.groupby(["receiver", "antenna", "band"]).ngroups
    assert by_hour.attrs["summary"]["listening_min"] == pytest.approx(by_hour.listening_min.sum(), abs=5e-4)
    per_antenna = senders(logs, by="antenna")
    placed = per_antenna[per_antenna.bearing_deg.notna()]
    assert of_sectors.receptions.sum() == placed.receptions.sum()
    assert of_sectors.senders.sum() == len(placed)
