"""The lines of a text in another encoding as blocks of UTF-8 that end where a line ends."""

from __future__ import annotations

import codecs
from collections.abc import Iterator
from itertools import chain

from logtool.records.scan import whole_lines
from logtool.records.sources import Text, UnreadableError

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
    pieces = iter(text)
    start = b""
    while len(start) < _MARK_BYTES and (piece := next(pieces, b"")):
        start += piece
    if start.startswith(_UTF16_MARKS):
        encoding = "utf-16"
    if encoding == "utf-8":
        yield from chain([start], pieces)
        return
    decoder = codecs.getincrementaldecoder(encoding)("replace")
    for piece in chain([start], pieces, [b""]):
        try:
            recoded = decoder.decode(piece, final=not piece)
        except UnicodeError as error:
            raise UnreadableError(
                f"{text.source.name}: it cannot be read as {encoding} ({error}); name another encoding in the recipe, "
                "like utf-16-le"
            ) from error
        yield recoded.encode("utf-8", "replace")
