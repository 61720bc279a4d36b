"""Packed logs: whole, of several members, broken off and damaged."""

from __future__ import annotations

import gzip
import hashlib
import random
import zlib
from itertools import pairwise
from pathlib import Path

import pytest
import zstandard

from logtool.records.opening import open_logs
from logtool.records.reader import Logs
from tests.records import comparing, slow_reader
from tests.records.comparing import line

DIRTY = [b"\xff", b"a\rb", b"\x01", b"", b"# \xff", b"\xef\xbb\xbf", line(time="never"), b"x" * 9000]


def log_text(lines: int = 400) -> bytes:
    made = [*comparing.night(lines), *DIRTY, *comparing.night(30, "far")]
    return b"\xef\xbb\xbf" + b"\n".join(made) + b"\n"


def pack(data: bytes, ending: str) -> bytes:
    if ending == ".gz":
        return gzip.compress(data, mtime=0)
    return zstandard.ZstdCompressor(write_checksum=True).compress(data)


def compare_text(logs: Logs, path: Path, text: bytes) -> None:
    """Compare with the slow reader on the text that the file holds or held."""
    comparing.compare_opened(logs, slow_reader.read_files([(str(path), text)]))
    (ledger,) = logs.inputs
    stored = path.read_bytes()
    assert (ledger.bytes, ledger.digest) == (len(stored), "sha256:" + hashlib.sha256(stored).hexdigest())


ENDINGS = pytest.mark.parametrize("ending", [".gz", ".zst"])


@ENDINGS
def test_a_packed_log_is_read_as_its_text(ending: str, tmp_path: Path) -> None:
    path = tmp_path / f"night.log{ending}"
    path.write_bytes(pack(log_text(), ending))
    with open_logs(path) as logs:
        compare_text(logs, path, log_text())
        assert logs.notes == []


@ENDINGS
def test_several_members_are_one_text(ending: str, tmp_path: Path) -> None:
    text = log_text()
    chance = random.Random(1)
    cuts = [0, *sorted(chance.randrange(len(text)) for _ in range(6)), len(text)]
    parts = [text[a:b] for a, b in pairwise(cuts)] + [b""]
    path = tmp_path / f"night.log{ending}"
    path.write_bytes(b"".join(pack(part, ending) for part in parts))
    with open_logs(path) as logs:
        compare_text(logs, path, text)
        assert logs.notes == []


def test_zeros_after_a_gzip_member_are_padding(tmp_path: Path) -> None:
    path = tmp_path / "night.log.gz"
    path.write_bytes(pack(log_text(), ".gz") + b"\0" * 512)
    with open_logs(path) as logs:
        compare_text(logs, path, log_text())
        assert logs.notes == []


@ENDINGS
@pytest.mark.parametrize("stranger", [b"garbage", b"\0\0garbage"])
def test_bytes_that_are_no_member_end_the_text(ending: str, stranger: bytes, tmp_path: Path) -> None:
    path = tmp_path / f"night.log{ending}"
    path.write_bytes(pack(log_text(), ending) + stranger)
    with open_logs(path) as logs:
        compare_text(logs, path, log_text())
        assert len(logs.notes) == 1


def left_of(stored: bytes, ending: str) -> bytes:
    """All text that can be had of a packed file that breaks off."""
    if ending == ".gz":
        return zlib.decompressobj(wbits=31).decompress(stored)
    return zstandard.ZstdDecompressor().decompressobj().decompress(stored)


@ENDINGS
@pytest.mark.parametrize("share", [0.0, 0.001, 0.3, 0.5, 0.77, 0.98, 1.0])
def test_a_truncated_file_is_read_up_to_its_break_and_named(
    ending: str, share: float, tmp_path: Path
) -> None:
    whole = pack(log_text(4000), ending)
    stored = whole[: min(len(whole) - 1, 1 + int(share * len(whole)))]
    path = tmp_path / f"night.log{ending}"
    path.write_bytes(stored)
    with open_logs(path) as logs:
        compare_text(logs, path, left_of(stored, ending))
        (note,) = logs.notes
    assert note.startswith(f"{path}: read up to a break: ")


@ENDINGS
def test_a_truncated_file_of_equal_lines_loses_no_byte(ending: str, tmp_path: Path) -> None:
    """Packed a hundred to one, so that much text hangs on the last bytes before the break."""
    whole = pack((line() + b"\n") * 40_000, ending)
    for cut in range(len(whole) - 12, len(whole)):
        path = tmp_path / f"cut{cut}.log{ending}"
        path.write_bytes(whole[:cut])
        with open_logs(path) as logs:
            left = left_of(whole[:cut], ending)
            assert logs.inputs[0].lines == left.count(b"\n") + (left[-1:] not in (b"", b"\n"))
            assert logs.paths[0].read_bytes().removeprefix(b"\xef\xbb\xbf") == left


@ENDINGS
def test_a_damaged_file_is_read_up_to_a_break_and_named(ending: str, tmp_path: Path) -> None:
    chance = random.Random(2)
    lines = [line(text=chance.randbytes(60).hex(), sender=f"Q{i}A") for i in range(8000)]
    stored = bytearray(pack(b"\n".join(lines) + b"\n", ending))
    middle = len(stored) // 2
    stored[middle : middle + 40] = bytes(40)
    path = tmp_path / f"night.log{ending}"
    path.write_bytes(stored)
    with open_logs(path) as logs:
        (note,) = logs.notes
        assert "damaged" in note
        (ledger,) = logs.inputs
        kept = logs.paths[0].read_bytes().removeprefix(b"\xef\xbb\xbf").split(b"\n")
    # Before the damage nothing is lost but what one piece and a packer's block of 128 KiB hold.
    assert kept[:2000] == lines[:2000]
    assert 2000 <= ledger.records <= len(lines)
    assert ledger.lines == ledger.records + ledger.set_aside + ledger.blank


def test_an_empty_packed_file_has_no_lines(tmp_path: Path) -> None:
    for ending in (".gz", ".zst"):
        (tmp_path / f"none.log{ending}").write_bytes(b"")
        (tmp_path / f"empty.log{ending}").write_bytes(pack(b"", ending))
    with open_logs(tmp_path) as logs:
        assert [ledger.lines for ledger in logs.inputs] == [0, 0, 0, 0]
        assert logs.notes == []


@ENDINGS
def test_a_file_that_is_not_packed_as_its_name_says_is_named(ending: str, tmp_path: Path) -> None:
    (tmp_path / f"a.log{ending}").write_bytes(log_text())
    (tmp_path / "b.log").write_bytes(log_text())
    with open_logs(tmp_path) as logs:
        assert [ledger.records > 0 for ledger in logs.inputs] == [False, True]
        (note,) = logs.notes
    assert "damaged" in note


def test_one_lost_byte_at_the_end_of_a_short_file_costs_nothing(tmp_path: Path) -> None:
    text = line() + b"\n" + line("stop") + b"\n"
    path = tmp_path / "night.log.gz"
    path.write_bytes(pack(text, ".gz")[:-1])
    with open_logs(path) as logs:
        compare_text(logs, path, text)
        assert len(logs.notes) == 1


@ENDINGS
def test_a_wrong_checksum_is_named_and_costs_the_last_piece_at_most(ending: str, tmp_path: Path) -> None:
    lines = [line(text=random.Random(i).randbytes(60).hex()) for i in range(2000)]
    stored = bytearray(pack(b"\n".join(lines), ending))
    stored[-6 if ending == ".gz" else -2] ^= 1
    path = tmp_path / f"night.log{ending}"
    path.write_bytes(stored)
    with open_logs(path) as logs:
        (note,) = logs.notes
        assert "damaged" in note
        kept = logs.paths[0].read_bytes().removeprefix(b"\xef\xbb\xbf").split(b"\n")
        assert logs.inputs[0].records >= 1000
    assert kept[:1000] == lines[:1000]
