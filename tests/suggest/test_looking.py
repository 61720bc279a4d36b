"""The sample of a file: encodings, packed files, parts of a long file."""

from __future__ import annotations

import gzip
from pathlib import Path

import pytest
import zstandard

from logtool.suggest import looking
from logtool.suggest.looking import look_at

TEXT = "18:00:15 Hütte Q1ABC\n18:00:30 Hütte Q2ABC\n\n18:00:45 Hütte Q3ABC\n"


@pytest.mark.parametrize(
    ("stored", "encoding", "doubts"),
    [
        (TEXT.encode(), "utf-8", 0),
        (TEXT.encode("utf-8-sig"), "utf-8", 0),
        (TEXT.encode("utf-16"), "utf-16", 0),
        (b"\xfe\xff" + TEXT.encode("utf-16-be"), "utf-16", 0),
        (TEXT.encode("utf-16-le"), "utf-16-le", 1),
        (TEXT.encode("utf-16-be"), "utf-16-be", 1),
        (TEXT.encode("cp1252"), "cp1252", 1),
        ((TEXT + "\x81").encode("latin-1"), "latin-1", 1),
        (TEXT.replace("\n", "\r\n").encode(), "utf-8", 0),
    ],
)
def test_encodings(stored: bytes, encoding: str, doubts: int, tmp_path: Path) -> None:
    path = tmp_path / "a.log"
    path.write_bytes(stored)
    look = look_at(path)
    assert (look.encoding, len(look.doubts), look.trouble) == (encoding, doubts, "")
    assert look.lines[0].text == "18:00:15 Hütte Q1ABC"
    assert [line.number for line in look.lines[:3]] == [1, 2, 4]


def test_packed_files(tmp_path: Path) -> None:
    for name, stored in (
        ("a.gz", gzip.compress(TEXT.encode())),
        ("a.zst", zstandard.compress(TEXT.encode())),
    ):
        (tmp_path / name).write_bytes(stored)
        assert [line.text for line in look_at(tmp_path / name).lines] == [t for t in TEXT.split("\n") if t]


@pytest.mark.parametrize("packed", [False, True])
def test_a_long_file_is_looked_at_in_parts(packed: bool, tmp_path: Path) -> None:
    lines = [f"{n:08d} Q1ABC" for n in range(100_000)]
    stored = ("\n".join(lines) + "\n").encode()
    path = tmp_path / ("a.log.gz" if packed else "a.log")
    path.write_bytes(gzip.compress(stored) if packed else stored)
    look = look_at(path)
    assert not look.whole
    parts = {line.part for line in look.lines}
    assert parts == ({0, 1} if packed else {0, 1, 2})
    assert {line.text for line in look.lines} <= set(lines)  # none is cut
    assert len(look.lines) <= looking.FIRST_LINES + 2 * looking.LATER_LINES
    assert int(look.lines[-1].text[:8]) > 90_000


def test_what_is_no_text(tmp_path: Path) -> None:
    for name, stored in (
        ("empty", b""),
        ("blank", b"\n \n\t\n"),
        ("nul", b"ab\0c\n" * 9),
        ("controls", b"\x01\x02a\n" * 9),
    ):
        (tmp_path / name).write_bytes(stored)
        assert look_at(tmp_path / name).trouble, name


def test_lone_carriage_returns_are_told(tmp_path: Path) -> None:
    (tmp_path / "a.log").write_bytes(TEXT.replace("\n", "\r").encode())
    assert any("carriage return" in str(doubt) for doubt in look_at(tmp_path / "a.log").doubts)
