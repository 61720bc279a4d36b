"""Bytes: encodings, endings of lines, marks of byte order, control characters, long lines, packed files."""

from __future__ import annotations

import codecs
import encodings.aliases
import gzip
import io
import os
import sys
from pathlib import Path

import pytest
import zstandard

from logtool.errors import FileError
from logtool.records.opening import open_logs
from logtool.records.recipes.blocks import blocks_of
from logtool.records.recipes.loading import recipe_of
from logtool.records.recipes.recipe import RecipeError
from logtool.records.sources import Source, Text
from tests.recipes.comparing import compare, compare_ledger, engine_lines, in_blocks_of, recipe, rule, toml

RULE = rule(pattern=r"(?P<time>\S+) (?P<sender>\S+) ?(?P<text>.*)")
TEXT = recipe(RULE)
GOOD = b"2026-03-01T18:00:00Z Q1A "


def encoded(encoding: str) -> str:
    return recipe(RULE, f"encoding = '{encoding}'\n")


@pytest.mark.parametrize("size", [40, 1 << 20])
@pytest.mark.parametrize(
    ("encoding", "data"),
    [
        ("utf-8", GOOD + "\u00e9\u20ac\n".encode() + GOOD + b"\xe9\n" + GOOD + b"x\n\xed\xa0\x80\n" + GOOD + b"\xc3"),
        ("latin-1", GOOD + b"\xe9\xff\n" + GOOD + b"\x85\n" + GOOD + b"x"),
        ("cp1252", GOOD + b"\x80 \x81\n" + GOOD + b"\x80\n" + GOOD + b"\xe9"),
        ("latin-1", b"\xe9"),
        ("ascii", GOOD + b"\xe9\n" + GOOD + b"x\n"),
        ("cp437", GOOD + b"\x9b\n"),
        ("utf-8-sig", b"\xef\xbb\xbf" + GOOD + b"x\n"),
        ("latin-1", "2026-03-01T18:00:00Z Q1A \u0a0d\u0d0a x\n\u20ac\n".encode("utf-16")),
        ("utf-8", codecs.BOM_UTF16_BE + "2026-03-01T18:00:00Z Q1A \u0a0a\r\nx".encode("utf-16-be")),
        ("utf-16", codecs.BOM_UTF16_LE + GOOD.decode().encode("utf-16-le") + b"\x00\xd8x\x00\n\x00"),
        ("utf-16-le", GOOD.decode().encode("utf-16-le") + "\n".encode("utf-16-le")),
        ("utf-16", codecs.BOM_UTF16_LE + GOOD.decode().encode("utf-16-le") + b"\n\x00x"),  # half a character
    ],
)  # fmt: skip
def test_encodings(encoding: str, data: bytes, size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    compare(encoded(encoding), data)


def test_lines_of_another_encoding_cost_their_own_line() -> None:
    found = compare(TEXT, GOOD + b"a\n" + GOOD + b"\xff\n" + GOOD + b"b\n")
    assert [line.reason for line in found] == ["", "bad-encoding", ""]


@pytest.mark.filterwarnings("ignore:invalid escape sequence")
def test_every_encoding_that_python_knows_is_read_or_refused(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_bytes(GOOD + b"\xff\xfe\x80 \\x \\u12\n")
    source = Source("a.txt", tmp_path / "a.txt")
    read = 0
    for encoding in sorted({*encodings.aliases.aliases.values(), "undefined", "idna", "punycode", "a\0b"}):
        try:
            loaded = recipe_of(recipe(RULE, f"encoding = {toml(encoding)}\n"), "r.toml")
        except RecipeError as error:
            assert "`encoding`" in str(error)  # noqa: PT017 - the others are read
            continue
        try:
            block = b"".join(blocks_of(Text(source), loaded.encoding))
        except FileError as error:
            assert str(error).startswith("a.txt: it cannot be read as")  # noqa: PT017
            continue
        block.decode(errors="strict" if loaded.encoding != "utf-8" else "replace")
        read += 1
    assert read > 80


def test_utf16_without_its_mark_is_named(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_bytes("2026-03-01T18:00:00Z Q1A".encode("utf-16-le"))
    made = recipe_of(encoded("utf-16"), "r.toml")
    with pytest.raises(FileError, match=r"a\.txt: it cannot be read as utf-16 .*like utf-16-le"):
        open_logs(tmp_path, recipe=made)


@pytest.mark.parametrize("size", [30, 1 << 20])
@pytest.mark.parametrize(
    "data",
    [
        GOOD + b"x\r\n" + GOOD + b"y\r\r\n" + GOOD + b"z\r",
        GOOD + b"a\rb\n" + b"\r\n\r\n \r\n\t\n",
        GOOD
        + b"\x00\n"
        + GOOD
        + b"\x01\n"
        + GOOD
        + b"\x7f\n"
        + GOOD
        + "\u0080\n".encode()
        + GOOD
        + b"\x1b[0m\n",
        b"\x00" + GOOD + b"\n" + b"\x01\n" + b"\x00\n",
        b"\xef\xbb\xbf" + GOOD + b"\n" + b"\xef\xbb\xbf" + GOOD + b"\n",
        b"\xef\xbb\xbf\xef\xbb\xbf" + GOOD + b"\n",
        b"\xef\xbb\xbf",
        b"\xef",
        b"",
        b"\n",
        b"\n\n\n",
        b" \t \n\t",
        b"\r",
        b"\x0b\n\x0c\n\xc2\x85\n\xe2\x80\xa8\n\xc2\xa0\n",
        GOOD + b"a\tb \\ \\n\n",
        GOOD + "\u2028x\u2029\u0130\u00df\n".encode(),
        GOOD + b"'; DROP TABLE made; --\n" + GOOD + b"{}$1?%s\\1\n",
    ],
)
def test_odd_bytes(data: bytes, size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    compare(TEXT, data)


@pytest.mark.parametrize("length", [3900, 4000, 4001, 8100, 8192, 9000, 100_000, 2_000_000])
def test_long_lines(length: int, tmp_path: Path) -> None:
    data = (
        GOOD
        + b"x" * length
        + b"\n"
        + GOOD
        + b"y\n"
        + b"z" * length
        + b"\n"
        + GOOD
        + b"\\" * (length // 2)
        + b"\n"
    )
    compare_ledger(tmp_path, TEXT, {"a.txt": data})


def test_a_line_without_end_is_refused(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_bytes(b"x" * (66 << 20))
    with open_logs(tmp_path / "a.txt", recipe=recipe_of(TEXT, "r.toml")) as logs:
        assert logs.refused[0].startswith(f"{tmp_path / 'a.txt'}: it has a line of over 64 MB")


def test_packed_files_are_the_same_text(tmp_path: Path) -> None:
    data = GOOD + b"a\r\n\nx\n" + GOOD + b"\xff\n"
    wanted, _ = engine_lines(TEXT, data)
    assert engine_lines(TEXT, gzip.compress(data), "night.txt.gz")[0] == wanted
    assert (
        engine_lines(TEXT, gzip.compress(data[:30]) + gzip.compress(data[30:]), "night.txt.gz")[0] == wanted
    )
    assert engine_lines(TEXT, zstandard.compress(data), "night.txt.zst")[0] == wanted
    utf16 = data[:30].decode().encode("utf-16")
    assert engine_lines(TEXT, zstandard.compress(utf16), "n.zst")[0] == engine_lines(TEXT, utf16)[0]


def test_a_packed_file_that_breaks_off_is_read_to_the_break(tmp_path: Path) -> None:
    lines = b"".join(b"2026-03-01T18:%02d:%02dZ Q1A x\n" % (i // 60, i % 60) for i in range(600))
    packed = gzip.compress(lines)
    (tmp_path / "a.txt.gz").write_bytes(packed[: len(packed) // 2])
    with open_logs(tmp_path, recipe=recipe_of(TEXT, "r.toml")) as logs:
        assert 0 < logs.inputs[0].records < 600
        assert any("read up to a break" in note for note in logs.notes)


def test_digest_and_bytes_are_those_of_the_stored_file(tmp_path: Path) -> None:
    import hashlib

    packed = gzip.compress("2026-03-01T18:00:00Z Q1A \u20ac\n".encode("utf-16"))
    (tmp_path / "a.txt.gz").write_bytes(packed)
    with open_logs(tmp_path, recipe=recipe_of(TEXT, "r.toml")) as logs:
        (ledger,) = logs.inputs
        assert (ledger.bytes, ledger.records) == (len(packed), 1)
        assert ledger.digest == "sha256:" + hashlib.sha256(packed).hexdigest()


def test_standard_input(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "in").write_bytes(GOOD + b"a\nx\n")
    with (tmp_path / "in").open("rb") as file:
        saved = os.dup(0)
        try:
            os.dup2(file.fileno(), 0)
            monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.FileIO(os.dup(0))))
            with open_logs("-", recipe=recipe_of(TEXT, "r.toml")) as logs:
                assert logs.inputs[0].records == 1
                assert [row[:3] for row in logs.set_aside()] == [("-", 2, "no-rule")]
        finally:
            os.dup2(saved, 0)
            os.close(saved)


def test_a_recipe_that_is_not_utf8_is_refused(tmp_path: Path) -> None:
    (tmp_path / "r.toml").write_bytes(b"recipe = 1\nabout = '\xe9'\n")
    with pytest.raises(
        FileError, match=r"r\.toml: a recipe is UTF-8 text, and this is not; save it as UTF-8"
    ):
        open_logs(tmp_path, recipe=tmp_path / "r.toml")
