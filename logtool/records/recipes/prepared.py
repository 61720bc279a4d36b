"""A block of lines made ready for the engine, without a copy: numbered, with the wrongly encoded ones marked."""

from __future__ import annotations

from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from logtool.records.recipes.blocks import blocks_of
from logtool.records.scan import is_utf8
from logtool.records.sources import Text

if TYPE_CHECKING:
    import pyarrow as pa

_LF = ord("\n")
_C1_LEAD = b"\xc2"  # begins the characters U+0080 to U+009F in UTF-8, and some others
_BATCH_LINES = 1 << 16  # the engine's threads take so many at a time; our choice
_REPLACED = "\ufffd".encode()


@dataclass
class Prepared:
    """The lines of a block as a table of i, raw (the line with its ending) and bad (not of the encoding)."""

    block: bytes
    lines: int
    table: pa.Table
    has_return: bool
    has_control: bool


def prepared_blocks(text: Text, encoding: str) -> Iterator[Prepared]:
    """Give the blocks of a text, each made ready while the engine works on the one before."""
    blocks = iter(blocks_of(text, encoding))

    def following() -> Prepared | None:
        block = next(blocks, None)
        return None if block is None else prepare(block, encoding)

    with ThreadPoolExecutor(1) as ahead:
        waiting = ahead.submit(following)
        while (block := waiting.result()) is not None:
            waiting = ahead.submit(following)
            yield block


def prepare(block: bytes, encoding: str) -> Prepared:
    """Return a block of whole lines in UTF-8, with U+FFFD for what was not of another encoding."""
    import pyarrow as pa

    values = np.frombuffer(block, np.uint8)
    ends = np.flatnonzero(values == _LF) + 1
    if not len(ends) or ends[-1] != len(block):
        ends = np.append(ends, len(block))
    bad = np.zeros(len(ends), bool)
    kept = block
    if (encoding == "utf-8" and not is_utf8(block)) or (encoding != "utf-8" and _REPLACED in block):
        starts = [0, *ends[:-1].tolist()]
        lines = [block[start:stop] for start, stop in zip(starts, ends.tolist(), strict=True)]
        for i, line in enumerate(lines):
            if not is_utf8(line) if encoding == "utf-8" else _REPLACED in line:
                bad[i] = True
                lines[i] = b"?\n"
        kept = b"".join(lines)
        ends = np.cumsum([len(line) for line in lines])
        values = np.frombuffer(kept, np.uint8)
    offsets = np.concatenate(([0], ends)).astype(np.int32)
    raw = pa.StringArray.from_buffers(len(ends), pa.py_buffer(offsets), pa.py_buffer(kept))
    table = pa.table({"i": np.arange(len(ends), dtype=np.int64), "raw": raw, "bad": bad})
    batches = table.to_batches(max_chunksize=_BATCH_LINES)
    has_return = b"\r" in kept
    allowed = kept.count(b"\n") + kept.count(b"\t")
    has_control = bool(np.count_nonzero(values < ord(" ")) > allowed) or b"\x7f" in kept or _C1_LEAD in kept
    return Prepared(block, len(ends), pa.Table.from_batches(batches), has_return, has_return or has_control)
