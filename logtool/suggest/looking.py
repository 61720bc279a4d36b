"""A look at a file: some of its lines, how its characters are stored, and whether it is text at all."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path

from logtool.records.sources import Source, Text, shown
from logtool.suggest.doubts import Doubt

FIRST_BYTES = 1 << 18  # looked at from the start; our choice, as the following
LATER_BYTES = 1 << 16  # from the middle and from the end
PACKED_BYTES = 1 << 26  # of a packed file, stored, at most
FIRST_LINES, LATER_LINES = 1400, 400
LONGEST_CHARACTERS = 4000  # of a line; what is longer is no line of a log that we could know
CONTROL_SHARE = 0.02  # of all characters: more control characters than that are no text
NUL_SHARE = 0.2  # of all bytes: text in 16 bits without a mark
BAD_UTF8_SHARE = 0.2  # of the lines with other characters than ASCII
_CONTROLS = frozenset(range(32)) - {9, 10, 12, 13}


@dataclass(frozen=True)
class Line:
    """One line of the sample without its ending; lines of one part follow each other in the file."""

    number: int  # 0 where it is not known
    part: int
    text: str


@dataclass(frozen=True)
class Look:
    """What was seen of a file.

    Attributes
    ----------
    name : str
        The file's name without folders.
    encoding : str
        A name that Python knows.
    lines : tuple of Line
        The sample, blank lines left out.
    trouble : str
        Why this is no text that could be a log; empty where it may be one.
    doubts : tuple of Doubt
        What is not sure about the encoding.
    whole : bool
        Whether the sample is all of the file.
    """

    name: str
    encoding: str
    lines: tuple[Line, ...]
    trouble: str = ""
    doubts: tuple[Doubt, ...] = ()
    whole: bool = True


def look_at(path: str | os.PathLike[str]) -> Look:
    """Return a look at a file, packed or plain: its first lines, some of its middle and its end.

    Raises
    ------
    UnreadableError
        Where the file cannot be read.
    """
    source = Source(shown(os.fspath(path)), Path(path))
    parts, whole = _packed_parts(source) if source.packing else _plain_parts(source)
    name = Path(source.name).name
    raw = parts[0]
    if not any(parts):
        return Look(name, "utf-8", (), "the file is empty")
    encoding, doubts = _encoding_of(parts)
    if not encoding:
        return Look(name, "utf-8", (), "it holds bytes that no text holds, so it is no text")
    lines: list[Line] = []
    for k, raw in enumerate(parts):
        lines += _lines_of(raw, encoding, k, last=whole and k == len(parts) - 1)
    if sum("\r" in line.text for line in lines) > len(lines) / 2:
        doubts = (
            *doubts,
            Doubt(
                "lines",
                "they end at a carriage return alone, which ends no line here; convert the file first",
            ),
        )
    texts = "".join(line.text for line in lines)
    if sum(ord(c) in _CONTROLS for c in texts) > CONTROL_SHARE * len(texts):
        return Look(name, encoding, (), "it holds many control characters, so it is no text")
    return Look(
        name,
        encoding,
        tuple(lines),
        "" if lines else _why_no_line(parts),
        doubts,
        whole,
    )


def _why_no_line(parts: list[bytes]) -> str:
    if not b"".join(parts).strip(b" \t\r\n\x00"):
        return "the file has no line with anything on it"
    return (
        f"its lines have over {LONGEST_CHARACTERS} characters each, so it is no log; if they end at a carriage return"
        " alone, convert the file first"
    )


def _plain_parts(source: Source) -> tuple[list[bytes], bool]:
    first = b"".join(Text(source, limit=FIRST_BYTES))
    if len(first) < FIRST_BYTES or source.path is None:
        return [first], True
    size = source.path.stat().st_size
    later = []
    with source.path.open("rb") as file:
        for start in (size // 2, size - LATER_BYTES):
            if start >= FIRST_BYTES:
                file.seek(start - start % 2)
                later.append(file.read(LATER_BYTES))
    return [first, *later], False


def _packed_parts(source: Source) -> tuple[list[bytes], bool]:
    first, last, blocks = b"", b"", 0
    for block in Text(source, limit=PACKED_BYTES):
        if not blocks:
            first = block
        last, blocks = block, blocks + 1
    if blocks < 2:
        return [first], True
    return [first[:FIRST_BYTES], last[-(LATER_BYTES // 2) * 2 :]], False


def _encoding_of(parts: list[bytes]) -> tuple[str, tuple[Doubt, ...]]:
    """Return the encoding (empty where this is no text) and the doubts about it."""
    first = parts[0]
    if first.startswith((b"\xff\xfe", b"\xfe\xff")):
        return "utf-16", ()
    joined = b"".join(parts)
    if joined.count(0) > NUL_SHARE * len(joined):
        for encoding, byte in (("utf-16-le", 1), ("utf-16-be", 0)):
            if first[byte::2].count(0) > 2 * NUL_SHARE * len(first[byte::2]) and not first[
                1 - byte :: 2
            ].count(0):
                return encoding, (
                    Doubt(
                        "encoding",
                        f"every second byte is zero and there is no byte order mark; read as {encoding}",
                    ),
                )
        return "", ()
    if b"\0" in joined:
        return "", ()
    bad = other = 0
    example = b""
    for line in joined.split(b"\n"):
        if not line.isascii():
            other += 1
            try:
                line.decode()
            except UnicodeDecodeError:
                bad += 1
                example = example or line
    if bad <= max(len(parts), BAD_UTF8_SHARE * other):  # lines that the sample cut may be broken
        return ("utf-8", ()) if bad < max(other, 2) else _single_byte(joined, bad, other, example)
    return _single_byte(joined, bad, other, example)


def _single_byte(joined: bytes, bad: int, other: int, example: bytes) -> tuple[str, tuple[Doubt, ...]]:
    try:
        joined.decode("cp1252")
        encoding = "cp1252"
    except UnicodeDecodeError:
        encoding = "latin-1"
    shown_line = example.decode("latin-1").strip()[:60]
    return encoding, (
        Doubt(
            "encoding",
            f"{bad} of {other} lines with other characters than ASCII are no UTF-8; read as {encoding}, which may show"
            f" such characters wrongly, as in {shown_line!r}",
        ),
    )


def _lines_of(raw: bytes, encoding: str, part: int, *, last: bool) -> list[Line]:
    if part and encoding == "utf-16":
        encoding = "utf-16-le"  # the mark stands at the file's start only; the other order is rare
    text = raw.decode(encoding, "replace").removeprefix("\ufeff")
    cut = text.split("\n")
    numbered = list(enumerate(cut, 1)) if not part else [(0, line) for line in cut[1:]]
    if not last and len(numbered) > 1:
        numbered.pop()
    most = LATER_LINES if part else FIRST_LINES
    return [
        Line(number, part, line.removesuffix("\r"))
        for number, line in numbered[:most]
        if line.strip(" \t\r") and len(line) <= LONGEST_CHARACTERS
    ]
