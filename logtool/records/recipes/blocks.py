"""The lines of a text in another encoding as blocks of UTF-8 that end where a line ends."""

from __future__ import annotations

import codecs
from collections.abc import Iterator

from logtool.records.scan import whole_lines
from logtool.records.sources import Text

JOINED_BYTES = 24 << 20  # text that the engine is given at a time; our choice
_UTF16_MARKS = (codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)
_MARK_BYTES = 2


def blocks_of(text: Text, encoding: str, *, joined_bytes: int = JOINED_BYTES) -> Iterator[bytes]:
    """Give the text of whole lines in blocks of at least `joined_bytes`; as UTF-8 unless it is said to be that.

    What is not of the encoding becomes U+FFFD; a text that is said to be UTF-8 is given as it is. A UTF-16 file
    with a byte order mark is recognised whatever is said.
    """
    waiting: list[bytes] = []
    size = 0
    for block in whole_lines(_recoded(text, encoding), text.source.name):
        waiting.append(block)
        size += len(block)
        if size >= joined_bytes:
            yield b"".join(waiting)
            waiting, size = [], 0
    if waiting:
        yield b"".join(waiting)


def _recoded(text: Text, encoding: str) -> Iterator[bytes]:
    decoder = None
    first = True
    start = b""
    for piece in text:
        if first:
            start += piece
            if len(start) < _MARK_BYTES:
                continue
            if start.startswith(_UTF16_MARKS):
                encoding = "utf-16"
            if encoding != "utf-8":
                decoder = codecs.getincrementaldecoder(encoding)("replace")
            piece, first = start, False
        yield decoder.decode(piece).encode("utf-8", "replace") if decoder else piece
    if first and start:
        yield start
    if decoder:
        yield decoder.decode(b"", final=True).encode("utf-8", "replace")
