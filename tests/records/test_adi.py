"""ADI files as lines of the layout: entries of other programs, broken and hostile files."""

from __future__ import annotations

import gzip
import hashlib
import io
import resource
import time
from pathlib import Path

import pytest
from pyproj import Geod

from logtool import open_logs, receptions
from logtool.errors import FileError
from logtool.exports.formats import write_as
from logtool.records.adi import scan_adi
from logtool.records.adi_tags import MOST_FIELD_BYTES
from logtool.records.judge import Record, judge
from logtool.records.scan import Scan, ScanOptions
from logtool.records.sources import Source
from logtool.tables.choice import choose
from tests.records.slow_reader import COLUMNS

WHEN = "<QSO_DATE:8>20260301<TIME_ON:6>181015<FREQ:8>7.075500"
ENTRY = f"<CALL:5>Q1ABC{WHEN}"


def scanned(
    data: bytes, tmp_path: Path, name: str = "a.adi", *, anyway: bool = False
) -> tuple[Scan, list[bytes]]:
    source, path = tmp_path / name, tmp_path / "lines"
    source.write_bytes(data)
    path.unlink(missing_ok=True)
    scan = scan_adi(Source(name, source), path, ScanOptions(with_digest=True, anyway=anyway))
    lines = path.read_bytes().removeprefix(b"\xef\xbb\xbf").split(b"\n")
    assert lines.pop() == b""
    assert len(lines) == scan.lines
    assert not any(line.startswith(b"#") or not line.strip(b" \t") for line in lines)
    return scan, lines


def columns(entry: str, tmp_path: Path) -> dict[str, str]:
    """The fields that an entry gives, but for those that are empty and that all have."""
    _, (line,) = scanned(f"{ENTRY}{entry}<EOR>".encode(), tmp_path)
    record = judge(line)
    assert isinstance(record, Record), record
    return {name: value for name, value in zip(COLUMNS, record.fields, strict=True) if value}


BARE = {
    "time": "2026-03-01T18:10:15Z",
    "kind": "heard",
    "receiver": "listener",
    "dial_hz": "7075500",
    "sender": "Q1ABC",
}


FOREIGN = [
    ("", {}),
    ("<MODE:3>PSK<SUBMODE:5>PSK31", {"mode": "PSK31"}),
    ("<MODE:5>K 8/5", {"mode": "K_8/5"}),
    ("<GRIDSQUARE:6>jn58td", {"locator": "jn58td"}),
    ("<GRIDSQUARE:8>JN58td25<GRIDSQUARE_EXT:2>xe", {"locator": "JN58td25xe"}),
    ("<GRIDSQUARE:8>JN58td25<GRIDSQUARE_EXT:4>xe31", {"locator": "JN58td25xe"}),
    ("<GRIDSQUARE:4>JN58<GRIDSQUARE_EXT:2>xe", {"locator": "JN58"}),
    ("<STATION_CALLSIGN:6>q7xs/p", {"receiver": "Q7XS-P"}),
    ("<OPERATOR:4>Q7XS", {"receiver": "Q7XS"}),
    ("<OPERATOR:4>Q7XS<STATION_CALLSIGN:4>Q8AA<APP_LOGTOOL_RECEIVER:3>hut", {"receiver": "hut"}),
    ("<OPERATOR:1>/", {}),
    ("<RST_SENT:3>-12<SWL:1>Y", {"snr_db": "-12"}),
    ("<RST_SENT:3>+03<SWL:1>y", {"snr_db": "03"}),
    ("<RST_RCVD:4>-7.5<SWL:1>Y", {"snr_db": "-7.5"}),
    ("<RST_SENT:3>-12", {}),
    ("<RST_SENT:3>599<SWL:1>Y", {}),
    ("<RST_SENT:2>59<SWL:1>Y", {}),
    ("<RST_SENT:2>10<SWL:1>Y", {"snr_db": "10"}),
    ("<RST_SENT:3>-61<SWL:1>Y", {}),
    ("<RST_SENT:4>good<SWL:1>Y", {}),
    ("<RX_PWR:1>5", {"power_dbm": "36.99"}),
    ("<RX_PWR:3>100", {"power_dbm": "50"}),
    ("<RX_PWR:1>0", {}),
    ("<RX_PWR:4>much", {}),
    (
        "<APP_LOGTOOL_DIAL_HZ:7>7074000<APP_LOGTOOL_AUDIO_HZ:4>1500",
        {"dial_hz": "7074000", "audio_hz": "1500"},
    ),
    ("<APP_LOGTOOL_TIME:23>2026-03-01T18:10:15.25Z", {"time": "2026-03-01T18:10:15.25Z"}),
    ("<COMMENT:9>say <EOR>", {}),
]


@pytest.mark.parametrize(("entry", "more"), FOREIGN)
def test_foreign_entries(entry: str, more: dict[str, str], tmp_path: Path) -> None:
    assert columns(entry, tmp_path) == BARE | more


def test_time_without_seconds(tmp_path: Path) -> None:
    _, (line,) = scanned(b"<CALL:5>Q1ABC<QSO_DATE:8>20260301<TIME_ON:4>1810<FREQ:5>7.074<EOR>", tmp_path)
    assert line.split(b"\t")[0] == b"2026-03-01T18:10:00Z"


@pytest.mark.parametrize(
    ("entry", "reason"),
    [
        ("<CALL:5>Q1ABC<FREQ:5>7.074", "bad-time"),
        ("<QSO_DATE:8>20260230<TIME_ON:4>1810<FREQ:5>7.074", "bad-time"),
        ("<QSO_DATE:8>20260301<TIME_ON:4>2460<FREQ:5>7.074", "bad-time"),
        ("<QSO_DATE:8>19300301<TIME_ON:4>1810<FREQ:5>7.074", "range-time"),
        ("<QSO_DATE:8>20260301<TIME_ON:4>1810<BAND:3>40m", "missing-dial_hz"),
        ("<QSO_DATE:8>20260301<TIME_ON:4>1810<FREQ:5>7,074", "bad-dial_hz"),
        ("<QSO_DATE:8>20260301<TIME_ON:4>1810<FREQ:1>0", "range-dial_hz"),
        ("<QSO_DATE:8>20260301<TIME_ON:4>1810<FREQ:6>10e999", "bad-dial_hz"),
        (f"{WHEN}<CALL:6>Q1 ABC", "bad-sender"),
        (f"{WHEN}<CALL:6>Q1\tABC", "bad-sender"),
        (f"{WHEN}<GRIDSQUARE:4>ZZ99", "bad-locator"),
        (f"{WHEN}<APP_LOGTOOL_RECEIVER:3>a b", "bad-receiver"),
        (f"{WHEN}<APP_LOGTOOL_TEXT:2>\\x", "bad-text"),
        (f"{WHEN}<APP_LOGTOOL_TEXT:9000>{'x' * 9000}", "too-long"),
        (f"{WHEN}<APP_LOGTOOL_TEXT:18000>{'ü' * 9000}", "too-long"),
        (f"{WHEN}<APP_LOGTOOL_TEXT:6>\\u0085", "control-character"),
        (f"{WHEN}<APP_LOGTOOL_TIME:2>#1", "bad-time"),
        (f"{WHEN}<APP_LOGTOOL_TIME:23>\n026-03-01T18:10:15.25Z", "bad-time"),
        ("", "too-few-fields"),
        ("<COMMENT:2>hi", "too-few-fields"),
        (f"{WHEN}<CALL:99999999>Q1ABC", "too-few-fields"),
        (f"{WHEN}<CALL:{'9' * 30}>Q1ABC", "too-few-fields"),
    ],
)
def test_what_is_no_record_is_set_aside_and_costs_one_entry(entry: str, reason: str, tmp_path: Path) -> None:
    _, lines = scanned(f"{ENTRY}<EOR>{entry}<EOR>{ENTRY}<EOR>".encode(), tmp_path)
    first, bad, last = (judge(line) for line in lines)
    assert isinstance(first, Record)
    assert isinstance(last, Record)
    assert bad == reason


@pytest.mark.parametrize("cut", range(1, len(ENTRY) + 4))
def test_a_last_entry_that_is_cut_off_is_kept_and_set_aside(cut: int, tmp_path: Path) -> None:
    _, lines = scanned(f"{ENTRY}<EOR>\n".encode() + f"{ENTRY}<EOR>".encode()[:cut], tmp_path)
    if cut < len("<CALL:5>"):
        assert len(lines) == 1
    else:
        assert judge(lines[1]) == "too-few-fields"
        assert lines[1].startswith(b"<CALL:")


def test_place_and_antenna_become_setups_in_order_of_time(tmp_path: Path) -> None:
    def entry(clock: str, grid: str, antenna: str = "", receiver: str = "") -> str:
        return (
            f"<CALL:5>Q1ABC<QSO_DATE:8>20260301<TIME_ON:4>{clock}<FREQ:5>7.074"
            + (f"<MY_GRIDSQUARE:{len(grid)}>{grid}" if grid else "")
            + (f"<APP_LOGTOOL_ANTENNA:{len(antenna)}>{antenna}" if antenna else "")
            + (f"<OPERATOR:{len(receiver)}>{receiver}" if receiver else "")
            + "<EOR>\n"
        )

    scan, _ = scanned(
        "".join(
            [
                entry("2100", "JN58td", "loop"),
                entry("1800", "JN58td", "wire"),
                entry("1900", "JN58td", "wire"),
                entry("2000", "", "loop"),
                entry("2200", "JN58td", "wire"),
                entry("1700", "ZZ99", "wire"),
                entry("1830", "KO02", "", "Q7XS"),
                entry("1840", "KO02", "long wire", "Q7XS"),
                entry("1850", "KO", "", "Q7XS"),
                entry("99", "KP32", "", "Q7XS"),
            ]
        ).encode(),
        tmp_path,
    )
    told = [
        (
            number,
            record.field("receiver"),
            record.field("time")[11:16],
            record.field("locator"),
            record.keys["antenna"],
        )
        for number, record in scan.setups
    ]
    assert told == [
        (7, "Q7XS", "18:30", "KO02", "unknown"),
        (2, "listener", "18:00", "JN58td", "wire"),
        (1, "listener", "21:00", "JN58td", "loop"),
        (5, "listener", "22:00", "JN58td", "wire"),
    ]


def test_packed_files_and_digests(tmp_path: Path) -> None:
    data = f"\ufeffA header<EOH>{ENTRY}<EOR>".encode()
    plain, lines = scanned(data, tmp_path)
    packed, again = scanned(gzip.compress(data, mtime=0), tmp_path, "a.adi.gz")
    assert lines == again
    for scan, name in ((plain, "a.adi"), (packed, "a.adi.gz")):
        stored = (tmp_path / name).read_bytes()
        assert scan.stored_bytes == len(stored)
        assert scan.digest == f"sha256:{hashlib.sha256(stored).hexdigest()}"
    broken, lines = scanned(gzip.compress(data * 3, mtime=0)[:-9], tmp_path, "b.adi.gz")
    assert broken.broken
    assert len(lines) >= 1


@pytest.mark.parametrize(
    ("data", "lines", "refused"),
    [
        (b"", 0, False),
        (b" \r\n", 0, False),
        (b"nothing yet <EOH>\n", 0, False),
        (b"It was a dark night\n" * 100, 0, True),
        (bytes(range(256)) * 5000, 0, True),
        (b"<" * 2_000_000, 0, True),
        (b"<EOR>" * 3, 3, False),
        (b"<A:3>" * 100_000, 1, False),
        (b"<CALL:1>Q" * 300_000, 1, False),
        (b"<CALL:1048576>Q", 1, False),
        (b"<CALL:%d>%b<EOR>" % (MOST_FIELD_BYTES, b"Q" * MOST_FIELD_BYTES), 1, False),
    ],
    ids=lambda value: str(value[:12]) if isinstance(value, bytes) else "",
)
def test_hostile_files_cost_no_time_and_no_memory(
    data: bytes, lines: int, refused: bool, tmp_path: Path
) -> None:
    before_kb = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    start_s = time.process_time()
    scan, found = scanned(data, tmp_path)
    assert time.process_time() - start_s < 5
    assert resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before_kb < 64 * 1024
    assert scan.lines == lines
    assert bool(scan.refused) == refused
    assert all(isinstance(judge(line), str) for line in found)


def test_a_file_that_cannot_be_read_says_so(tmp_path: Path) -> None:
    with pytest.raises(FileError, match=r"none\.adi: cannot be read"):
        scan_adi(Source("none.adi", tmp_path / "none.adi"), tmp_path / "lines", ScanOptions())


@pytest.mark.parametrize("name", ["a.adi", "A.ADIF", "a.adi.gz"])
def test_commands_read_adi_by_its_name(name: str, tmp_path: Path) -> None:
    place = "<MY_GRIDSQUARE:6>JN58td<GRIDSQUARE:4>JO62"
    data = f"header<EOH>{ENTRY}{place}<EOR>{ENTRY}{place}<EOR><CALL:4>Q7XS<EOR>".encode()
    (tmp_path / name).write_bytes(gzip.compress(data) if name.endswith(".gz") else data)
    with open_logs(tmp_path / name) as logs:
        (file,) = logs.inputs
        assert (file.lines, file.records, file.repeated, dict(file.reasons)) == (3, 1, 1, {"bad-time": 1})
        assert [(number, reason) for _, number, reason, _ in logs.set_aside()] == [(3, "bad-time")]
        (row,) = receptions(logs).to_dict("records")
    assert (row["sender"], row["receiver_locator"], row["antenna"]) == ("Q1ABC", "JN58td", "unknown")
    # JN58td to JO62: 48.145833 N 11.625 E to 52.5 N 13 E, the middles of the cells.
    assert row["distance_km"] == pytest.approx(
        Geod(ellps="WGS84").inv(11.625, 48.145833333, 13, 52.5)[2] / 1000
    )
    assert row["uncertainty_km"] > 88


def test_layout_states_the_places_of_an_adi_file(tmp_path: Path) -> None:
    (tmp_path / "a.adi").write_text(f"{ENTRY}<MY_GRIDSQUARE:6>JN58td<APP_LOGTOOL_ANTENNA:4>loop<EOR>")
    with open_logs(tmp_path / "a.adi") as logs:
        out = io.BytesIO()
        write_as("layout", logs, choose(), out)
        wanted = receptions(logs)
    stated = b"2026-03-01T18:10:15Z\tsetup\tlistener\t7075500\t\t\t\t\t\t\tJN58td\t\t\tantenna=loop"
    assert stated in out.getvalue().splitlines()
    (tmp_path / "a.log").write_bytes(out.getvalue())
    with open_logs(tmp_path / "a.log") as logs:
        assert receptions(logs).equals(wanted)
        assert [file.records for file in logs.inputs] == [2]
