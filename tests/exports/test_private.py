"""What the options for privacy leave out of each format: looked for in the bytes themselves."""

from __future__ import annotations

import csv
import io
import json
import re
from pathlib import Path

import pytest
from pyarrow import ipc, parquet

from logtool import open_logs
from logtool.records.arrow import records_arrow
from logtool.records.opening import open_with
from logtool.records.privacy import Privacy
from logtool.records.reader import OpenOptions
from tests.exports.logs import export, raw_records, write_log

KEY = b"a secret key of 24 bytes"
FORMATS = ["layout", "csv", "jsonl", "parquet", "arrow", "adi", "geojson", "kml"]
CALLS = [b"Q1ABC", b"Q2XYZ", b"Q7XS", b"Q5A", b"-Q1"]


@pytest.fixture(scope="module")
def log(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The story alone: its texts hold no call sign, so none may be left."""
    return write_log(tmp_path_factory.mktemp("logs") / "all.log", shapes=False)


def plain(name: str, data: bytes) -> bytes:
    """All values of a format as text."""
    if name == "parquet":
        return json.dumps(parquet.read_table(io.BytesIO(data)).to_pylist(), default=str).encode()
    if name == "arrow":
        return json.dumps(ipc.open_file(io.BytesIO(data)).read_all().to_pylist(), default=str).encode()
    return data


@pytest.mark.parametrize("name", FORMATS)
def test_hidden_senders_are_nowhere(name: str, log: Path) -> None:
    data = plain(name, export(name, log, privacy=Privacy(key=KEY)))
    assert any(call in plain(name, export(name, log)) for call in CALLS)
    for call in CALLS:
        assert not re.search(rb"(?<![A-Z0-9])" + call + rb"(?![A-Z0-9])", data), call
    assert Privacy(key=KEY).call("Q1ABC").encode() in data
    assert Privacy(key=KEY).call("Q1ABC/P").encode() in data
    if name not in ("geojson", "kml"):
        assert Privacy(key=KEY).call("Q2XYZ").encode() in data  # an addressee


@pytest.mark.parametrize("name", FORMATS)
@pytest.mark.parametrize("privacy", [Privacy(coarsen=8), Privacy(without_text=True), Privacy(key=KEY)])
def test_no_text_no_path_no_digest(name: str, privacy: Privacy, log: Path) -> None:
    data = plain(name, export(name, log, privacy=privacy))
    for word in (
        b"@home",
        b"TNX",
        b"rain",
        b"1+1",
        b"<EOR> gr",
        str(log).encode(),
        log.name.encode(),
        b"sha256",
    ):
        assert word not in data
    if name not in ("geojson", "kml"):
        assert b"sure=0.5" in data  # details are never dropped


@pytest.mark.parametrize("name", FORMATS)
@pytest.mark.parametrize("characters", [4, 6, 8])
def test_no_locator_is_finer(name: str, characters: int, log: Path) -> None:
    def locators(data: bytes) -> set[bytes]:
        if name == "adi":  # a locator is in two fields there
            data = re.sub(rb"<(?:MY_)?GRIDSQUARE(?:_EXT)?:\d+>", b" ", data).replace(
                b"jo62QM12 ", b"jo62QM12"
            )
        found = re.findall(
            rb"(?i)(?<![a-z0-9])[a-r]{2}[0-9]{2}(?:[a-x]{2}(?:[0-9]{2}(?:[a-x]{2})?)?)?(?![a-z0-9])", data
        )
        return {one.lower() for one in found}

    exact = locators(plain(name, export(name, log)))
    coarse = locators(plain(name, export(name, log, privacy=Privacy(coarsen=characters))))
    assert max(map(len, exact)) > 6
    assert {one[:characters] for one in exact} == coarse


def test_layout_is_still_a_log_with_every_record(log: Path, tmp_path: Path) -> None:
    privacy = Privacy(coarsen=4, without_text=True, key=KEY)
    (tmp_path / "shown.log").write_bytes(export("layout", log, privacy=privacy))
    with open_logs(tmp_path / "shown.log") as logs:
        (file,) = logs.inputs
        assert file.records + file.repeated == len(raw_records(log))
        assert file.set_aside == 0


def test_distances_are_those_of_coarse_places(log: Path) -> None:
    rows = list(
        csv.DictReader(io.StringIO(export("csv", log, privacy=Privacy(coarsen=4)).decode(), newline=""))
    )
    located = [row for row in rows if row["distance_km"]]
    assert located
    assert all(len(row["receiver_locator"]) == len(row["sender_locator"]) == 4 for row in located)
    assert all(float(row["uncertainty_km"]) > 150 for row in located)  # two squares of at least 75 km each


def test_order_does_not_tell_hidden_names(tmp_path: Path) -> None:
    """Lines of one time are in the order of what is shown, not of the names behind."""
    log = tmp_path / "a.log"
    line = "2026-03-01T22:00:00Z\theard\thut\t7041500\t\t\t\t\t{}\t\t\t\t\t\n"
    log.write_text("".join(line.format(f"Q{i}ABC") for i in range(10)))
    shown = export("layout", log, privacy=Privacy(key=KEY)).splitlines()[2:]
    assert shown == sorted(shown)
    assert [raw.split(b"\t")[8].decode() for raw in shown] != [
        Privacy(key=KEY).call(f"Q{i}ABC") for i in range(10)
    ]
    senders = [
        one["properties"]["sender"]
        for one in json.loads(export("geojson", log, privacy=Privacy(key=KEY)))["features"][1:]
    ]
    assert senders == sorted(senders)


def test_arrow_tables_leave_out_the_same(log: Path) -> None:
    options = OpenOptions(privacy=Privacy(coarsen=4, key=KEY))
    with open_with((log,), None, None, options) as logs:
        rows = records_arrow(logs).to_pylist()
    assert {row["text"] for row in rows} == {None}
    assert {len(row["locator"]) for row in rows if row["locator"]} == {4}
    assert {row["sender"] for row in rows} >= {Privacy(key=KEY).call("Q1ABC"), None}
    assert not {row["sender"] for row in rows} & {call.decode() for call in CALLS}
