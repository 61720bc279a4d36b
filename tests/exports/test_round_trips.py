"""What a format can hold comes back equal: by other readers, held against the slow reader of the layout."""

from __future__ import annotations

import csv
import io
import json
from datetime import datetime
from pathlib import Path
from typing import Any

import pandas as pd
import pyarrow as pa
import pytest
from pyarrow import ipc, parquet

from logtool import open_logs
from logtool.exports.cells import plain_text
from logtool.records.arrow import BATCH_ROWS, records_arrow
from tests.exports.logs import NUMBERS, export, exported, raw_records, typed, write_log
from tests.records.slow_reader import COLUMNS
from tests.tables.making import heard, table

DERIVED = [
    "band", "antenna", "receiver_locator", "sender_locator", "borrowed", "distance_km", "uncertainty_km",
    "bearing_deg",
]  # fmt: skip
ROOT = Path(__file__).parents[2]


@pytest.fixture(scope="module")
def log(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_log(tmp_path_factory.mktemp("logs") / "all.log")


@pytest.fixture(scope="module")
def expected(log: Path) -> list[dict[str, Any]]:
    return [typed(raw) for raw in raw_records(log)]


def layout_part(rows: list[dict[str, Any]]) -> list[dict[str, Any]]:
    assert all(list(row) == [*COLUMNS, *DERIVED] for row in rows)
    return [{name: row[name] for name in COLUMNS} for row in rows]


def test_layout_has_the_lines_themselves_in_order(log: Path) -> None:
    first, names, *lines = export("layout", log).split(b"\n")
    assert first == b"# logtool layout 1"
    assert names == b"# " + "\t".join(COLUMNS).encode()
    assert lines == [*raw_records(log), b""]


def test_layout_of_the_sample_gives_the_same_tables(tmp_path: Path) -> None:
    with open_logs(ROOT / "sample_logs") as logs:
        (tmp_path / "one.log").write_bytes(exported("layout", logs))
        wanted = [list(table(logs, name).rows()) for name in ("reach", "senders")]
        records = sum(file.records for file in logs.inputs)
    with open_logs(tmp_path / "one.log") as logs:
        assert [(file.records, file.repeated, file.set_aside) for file in logs.inputs] == [(records, 0, 0)]
        assert [list(table(logs, name).rows()) for name in ("reach", "senders")] == wanted


def test_csv_reads_back(log: Path, expected: list[dict[str, Any]]) -> None:
    text = export("csv", log).decode()
    assert text.count("\r\n") == len(expected) + 1 == text.count("\n")
    rows = []
    for cells in csv.DictReader(io.StringIO(text, newline=""), strict=True):
        row: dict[str, Any] = {name: plain_text(value) or None for name, value in cells.items()}
        for name in NUMBERS:
            row[name] = row[name] and float(row[name])
        row["dial_hz"] = row["dial_hz"] and int(row["dial_hz"])
        row["time"] = datetime.fromisoformat(cells["time"])
        rows.append(row)
    assert layout_part(rows) == expected


def test_json_lines_read_back(log: Path, expected: list[dict[str, Any]]) -> None:
    data = export("jsonl", log)
    assert data.isascii()
    rows = [json.loads(line) for line in data.splitlines()]
    for row in rows:
        assert row["time"].endswith("Z")
        row["time"] = datetime.fromisoformat(row["time"])
    assert layout_part(rows) == expected


def test_parquet_reads_back(log: Path, expected: list[dict[str, Any]]) -> None:
    table = parquet.read_table(io.BytesIO(export("parquet", log)))
    assert layout_part(table.to_pylist()) == expected
    assert str(table.schema.field("time").type) == "timestamp[us, tz=UTC]"


def test_arrow_file_is_the_parquet_files_table(log: Path) -> None:
    table = ipc.open_file(io.BytesIO(export("arrow", log))).read_all()
    assert table.equals(parquet.read_table(io.BytesIO(export("parquet", log))), check_metadata=True)
    assert table.schema.metadata == {b"logtool": b"0.1.0", b"layout": b"1"}


def test_pandas_reads_parquet_and_csv_alike(log: Path) -> None:
    of_parquet = pd.read_parquet(io.BytesIO(export("parquet", log)))
    of_csv = pd.read_csv(io.BytesIO(export("csv", log)), parse_dates=["time"])
    for name in (*NUMBERS, "dial_hz", "distance_km"):
        assert of_csv[name].equals(of_parquet[name].astype(of_csv[name].dtype)), name
    assert (pd.to_datetime(of_csv["time"], format="ISO8601") == of_parquet["time"]).all()


def test_records_as_arrow(log: Path, expected: list[dict[str, Any]]) -> None:
    with open_logs(log) as logs:
        assert records_arrow(logs).to_pylist() == expected


def test_batches_do_not_depend_on_the_engine(tmp_path: Path) -> None:
    """Over 65 536 records, so two row groups, in order, whatever the threads do."""
    count = BATCH_ROWS + 1000
    path = tmp_path / "many.log"
    lines = [
        heard(f"2026-03-{i % 28 + 1:02d}T{i % 24:02d}:00:00Z", audio_hz=i % 3000, text=i)
        for i in range(count)
    ]
    path.write_text("".join(f"{line}\n" for line in lines))
    made = []
    for threads in (1, 4):
        with open_logs(path, threads=threads) as logs:
            made.append(exported("parquet", logs))
    assert made[0] == made[1]
    file = parquet.ParquetFile(io.BytesIO(made[0]))
    assert [file.metadata.row_group(i).num_rows for i in range(file.num_row_groups)] == [BATCH_ROWS, 1000]
    in_order = sorted(lines)  # all times are written alike, and stand first
    assert file.read()["text"].to_pylist() == [line.split("\t")[12] for line in in_order]


@pytest.mark.parametrize("name", ["layout", "csv", "jsonl", "parquet", "arrow", "adi", "geojson", "kml"])
def test_same_bytes_however_the_lines_are_spread(name: str, tmp_path: Path) -> None:
    log = write_log(
        tmp_path / "one", shapes=False
    )  # the others have two setups at one time: the later read holds
    lines = log.read_bytes().splitlines(keepends=True)
    (tmp_path / "a.log").write_bytes(b"".join(lines[::2]))
    (tmp_path / "b.log").write_bytes(b"".join(lines[1::2]))
    with open_logs(tmp_path, threads=2) as logs:
        assert exported(name, logs) == export(name, log)


def test_an_empty_log_is_an_empty_file_of_each_format(tmp_path: Path) -> None:
    path = tmp_path / "none.log"
    path.write_bytes(b"# nothing\n")
    assert export("layout", path).count(b"\n") == 2
    assert export("csv", path).count(b"\r\n") == 1
    assert export("jsonl", path) == b""
    empty = parquet.read_table(io.BytesIO(export("parquet", path)))
    assert (empty.num_rows, empty.column_names) == (0, [*COLUMNS, *DERIVED])
    assert ipc.open_file(io.BytesIO(export("arrow", path))).read_all().num_rows == 0
    assert isinstance(empty, pa.Table)
    assert json.loads(export("geojson", path))["features"] == []
    assert export("kml", path).count(b"<Placemark>") == 0
    assert b"<EOR>" not in export("adi", path)
