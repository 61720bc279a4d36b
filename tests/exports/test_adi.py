"""The listener's log in ADI: by an independent reader, by the values of tests/reference/adif.toml, and back."""

from __future__ import annotations

from datetime import UTC
from pathlib import Path

import adif_io
import pytest

from logtool import open_logs
from logtool.exports.adi import BANDS, VERSION
from logtool.places.bands import BANDS as OWN_BANDS
from logtool.records.adi import scan_adi
from logtool.records.scan import Scan, ScanOptions
from logtool.records.sources import Source
from tests.exports.logs import export, exported, raw_records, typed, write_log
from tests.places.sources import read
from tests.tables.making import heard, setup

ADIF = read("adif.toml")
ROOT = Path(__file__).parents[2]


def read_in(data: bytes, path: Path) -> tuple[Scan, list[bytes]]:
    """What the reader makes of an ADI file: its scan, and its lines."""
    source = path.with_suffix(".adi")
    source.write_bytes(data)
    scan = scan_adi(Source(str(source), source), path, ScanOptions(with_digest=True))
    lines = path.read_bytes().removeprefix(b"\xef\xbb\xbf").split(b"\n")
    assert lines.pop() == b""
    assert len(lines) == scan.lines
    return scan, lines


def one_entry(tmp_path: Path, *lines: str) -> adif_io.QSO:
    path = tmp_path / "one.log"
    path.write_text("".join(f"{line}\n" for line in lines), encoding="utf-8")
    (entry,), _ = adif_io.read_from_string(export("adi", path).decode("ascii"))
    return entry


def with_sender(log: Path) -> list[bytes]:
    return [raw for raw in raw_records(log) if b"\theard\t" in raw and raw.split(b"\t")[8]]


def test_another_reader_finds_every_reception_with_a_sender(tmp_path: Path) -> None:
    log = write_log(tmp_path / "all.log")
    entries, header = adif_io.read_from_string(export("adi", log).decode("ascii"))
    wanted = [typed(raw) for raw in with_sender(log)]
    assert header["ADIF_VER"] == VERSION == ADIF["version"]
    assert len(entries) == len(wanted)
    for entry, row in zip(entries, wanted, strict=True):
        assert entry["CALL"] == row["sender"]
        assert adif_io.time_on(entry) == row["time"].astimezone(UTC).replace(microsecond=0)
        signal_hz = row["dial_hz"] + (row["audio_hz"] or 0)
        assert abs(float(entry["FREQ"]) * 1e6 - signal_hz) <= 0.5 + 1e-6  # FREQ is written to the Hz
        assert entry["SWL"] == "Y"
        assert entry.get("MODE") == row["mode"]
        grid = entry.get("GRIDSQUARE", "") + entry.get("GRIDSQUARE_EXT", "")
        assert grid.upper() == (row["locator"] or "").upper()
        assert len(entry.get("GRIDSQUARE", "")) <= 8
        if row["snr_db"] is None:
            assert "RST_SENT" not in entry
        else:
            assert abs(int(entry["RST_SENT"]) - row["snr_db"]) <= 0.5  # written to the dB


def test_entry_of_a_reception(tmp_path: Path) -> None:
    entry = one_entry(
        tmp_path,
        setup("2026-03-01T18:00:00Z", "JN58td25xe"),
        heard(
            "2026-03-01T18:10:15Z", "q1abc", locator="jo62qm12ab", audio_hz="1503.4", snr_db="-7", power_dbm="37",
            late_s="0.2", addressee="Q2XYZ", text="gr\u00fc\u00dfe \\\\ 73", more="path=a\\b \U0001f4fb",
        ),
    )  # fmt: skip
    assert dict(entry) == {
        "CALL": "Q1ABC",
        "QSO_DATE": "20260301",
        "TIME_ON": "181015",
        "FREQ": "7.075503",
        "BAND": "40m",
        "MODE": "K8",
        "RST_SENT": "-07",
        "GRIDSQUARE": "jo62qm12",
        "GRIDSQUARE_EXT": "ab",
        "MY_GRIDSQUARE": "JN58td25",
        "MY_GRIDSQUARE_EXT": "xe",
        "RX_PWR": "5.011872336",
        "SWL": "Y",
        "APP_LOGTOOL_ANTENNA": "wire",
        "APP_LOGTOOL_RECEIVER": "hut",
        "APP_LOGTOOL_DIAL_HZ": "7074000",
        "APP_LOGTOOL_AUDIO_HZ": "1503.4",
        "APP_LOGTOOL_SNR_DB": "-7",
        "APP_LOGTOOL_LATE_S": "0.2",
        "APP_LOGTOOL_ADDRESSEE": "Q2XYZ",
        "APP_LOGTOOL_POWER_DBM": "37",
        "APP_LOGTOOL_TEXT": "gr\\u00fc\\u00dfe \\\\ 73",
        "APP_LOGTOOL_MORE": "path=a\\\\b \\U0001f4fb",
    }


@pytest.mark.parametrize(("power_dbm", "watts"), ADIF["powers"])
def test_power_in_watts(power_dbm: int, watts: str, tmp_path: Path) -> None:
    entry = one_entry(tmp_path, heard("2026-03-01T18:10:15Z", power_dbm=power_dbm))
    assert entry["RX_PWR"] == watts


@pytest.mark.parametrize(("name", "low_mhz", "high_mhz"), ADIF["bands"])
def test_band_is_one_of_the_enumeration(name: str, low_mhz: float, high_mhz: float, tmp_path: Path) -> None:
    middle_hz = round((low_mhz + high_mhz) * 500_000)
    entry = one_entry(tmp_path, heard("2026-03-01T18:10:15Z", dial_hz=middle_hz))
    ours = any(band.low_hz <= middle_hz <= band.high_hz for band in OWN_BANDS)
    assert entry.get("BAND") == (name if ours else None)
    assert set(BANDS.values()) <= {name for name, *_ in ADIF["bands"]}


def test_band_off_the_bands_has_none(tmp_path: Path) -> None:
    assert "BAND" not in one_entry(tmp_path, heard("2026-03-01T18:10:15Z", dial_hz=6_199_999))


def test_there_and_back_is_the_same_lines(tmp_path: Path) -> None:
    log = write_log(tmp_path / "all.log")
    _, lines = read_in(export("adi", log), tmp_path / "back")

    def upper(raw: bytes) -> bytes:  # a call sign is written in capitals
        fields = raw.split(b"\t")
        fields[8] = fields[8].upper()
        return b"\t".join(fields)

    assert lines == [upper(raw) for raw in with_sender(log)]


def test_there_and_back_gives_the_same_places(tmp_path: Path) -> None:
    """Each reception of the sample has its antenna, place, distance and bearing again."""
    columns = [
        "time",
        "sender",
        "antenna",
        "receiver_locator",
        "sender_locator",
        "distance_km",
        "bearing_deg",
    ]
    from logtool import receptions

    with open_logs(ROOT / "sample_logs") as logs:
        wanted = receptions(logs)
        data = exported("adi", logs)
    scan, lines = read_in(data, tmp_path / "back")
    setups = ["\t".join(record.fields).encode() for _, record in scan.setups]
    (tmp_path / "back.log").write_bytes(b"\n".join([*setups, *lines]))
    with open_logs(tmp_path / "back.log") as logs:
        assert [(file.set_aside, file.repeated) for file in logs.inputs] == [(0, 0)]
        found = receptions(logs)
    wanted = wanted[wanted.sender.notna()].reset_index(drop=True)
    assert len(found) == len(wanted) > 25_000
    assert found[columns].equals(wanted[columns])
