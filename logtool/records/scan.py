"""Look over a file's bytes before the engine reads it, and keep from the engine what it would misread.

The engine's line reader ends a line at a lone CR, cuts one at its delimiter, stops at a byte that is not
UTF-8 and at a very long line. A file with none of these is read where it is. Else its lines go into a copy
in which an empty line stands for each that was taken out and judged here, so that line numbers stay.
"""

from __future__ import annotations

import hashlib
import re
from collections import Counter, deque
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import Future, ThreadPoolExecutor
from dataclasses import dataclass, field
from pathlib import Path
from typing import IO

import numpy as np

from logtool.errors import FileError
from logtool.records.judge import Record, is_blank, is_comment, judge
from logtool.records.layout import LAYOUT_LINE, LAYOUT_VERSION, MAX_LINE_BYTES
from logtool.records.sources import Source, Text

BOM = b"\xef\xbb\xbf"
ENGINE_DELIMITER = "\x01"  # a byte that no record can hold
STRANGER_LINES = 10_000  # a file with so many lines and no record is something else altogether
LEAST_MEMORY_MB = 880  # ten million lines then stay under 1 GB and are not spilled, measured
LONGEST_LINE_BYTES = 64 << 20  # held in memory at most; our choice
_WINDOW_BYTES = MAX_LINE_BYTES // 2  # a line over the limit covers at least one whole window with no LF
_SHOWN_CHARACTERS = 60
_LINE_BREAKER = re.compile(rb"(?:\x01|\r(?!\n))[^\n]*")  # to the line's end: one a line is enough
_LF, _CR = b"\n\r"
_S, _E, _T = b"set"  # of `setup`: looked for by byte, since a search of text is five times slower
_LOOKERS = 2  # threads that look at blocks


class EndlessLineError(FileError):
    """A file with a line too long to be held."""


@dataclass
class Scan:
    """What was seen in one file, and the path under which the engine reads its clean lines."""

    source: Source
    path: Path
    copied: bool
    lines: int = 0
    stored_bytes: int = 0
    digest: str | None = None
    broken: str | None = None
    refused: str | None = None
    blank: int = 0  # among the lines taken out, as are the next two
    comments: int = 0
    set_aside: list[tuple[int, str, bytes]] = field(default_factory=list)  # line number, reason, line
    setups: list[tuple[int, Record]] = field(default_factory=list)  # line number and record, as read
    rules: dict[str, int] | None = None  # lines by the rule of a recipe, where the file was read by one
    notes: list[str] = field(default_factory=list)


@dataclass(frozen=True)
class ScanOptions:
    """How files are looked over: digests or not, strangers or not, and who is told of the progress."""

    with_digest: bool = False
    anyway: bool = False
    progress: Callable[[int], None] | None = None
    threads: int | None = None  # of the engine, where a recipe needs it
    memory_mb: int = LEAST_MEMORY_MB


def scan(source: Source, path: Path, options: ScanOptions, *, only_bytes: int | None = None) -> Scan:
    """Return what a file holds, and make `path` a link to it or a copy of its clean lines.

    Parameters
    ----------
    source : Source
        The file.
    path : Path
        Where the engine shall find the text; must not exist.
    options : ScanOptions
        How to look.
    only_bytes : int, optional
        Copy so many stored bytes and no more: for a file that grows while it is read.

    Raises
    ------
    FileError
        Where the file cannot be read or the copy not be written, or a line is too long to be held.
    """
    if source.path is not None and source.path.is_file() and not source.packing and only_bytes is None:
        found = _look(Scan(source, path, copied=False), Text(source), options, None)
        if found is not None:
            if not found.refused:
                path.symlink_to(source.path.resolve())
            return found
    found = Scan(source, path, copied=True)
    try:
        with path.open("wb") as copy:
            copy.write(BOM)  # the engine drops one, so that a second one in the file stays in its line
            _look(found, Text(source, limit=only_bytes), options, copy)
    except OSError as error:
        raise FileError(
            f"{source.name}: its text cannot be copied to {path.parent} ({error.strerror}); "
            "free some space there or set TMPDIR to a folder with more"
        ) from error
    return found


def _look(found: Scan, text: Text, options: ScanOptions, copy: IO[bytes] | None) -> Scan | None:
    """Fill `found`; None where the file has to be copied and `copy` is not there."""
    text.digest = hashlib.sha256() if options.with_digest else None
    stranger = None if options.anyway else _Stranger()
    for block, facts in _with_facts(whole_lines(text, text.source.name)):
        if found.lines == 0:
            found.refused = _higher_layout(block)
        if stranger is not None and not found.refused:
            found.refused = stranger.verdict(block)
        if found.refused:
            return found
        if not facts.clean:
            if copy is None:
                return None
            block = _taken_out(found, block)
        if facts.may_set_up:
            note_setups(found, block)
        if copy is not None:
            copy.write(block)
        found.lines += facts.lines
        if options.progress is not None:
            options.progress(text.stored_bytes)
    found.stored_bytes, found.broken = text.stored_bytes, text.broken
    if text.digest is not None:
        found.digest = f"sha256:{text.digest.hexdigest()}"
    return found


@dataclass(frozen=True)
class _Facts:
    lines: int
    clean: bool  # the engine reads the lines as they are
    may_set_up: bool  # there may be a setup among them


def _facts(block: bytes) -> _Facts:
    """Look at a block; nearly all of it is done without Python's lock, so blocks go side by side."""
    values = np.frombuffer(block, np.uint8)
    ends = values == _LF
    return _Facts(
        lines=int(np.count_nonzero(ends)) + (not ends[-1]),
        clean=_is_clean(block, values, ends),
        may_set_up=bool(((values[:-2] == _S) & (values[1:-1] == _E) & (values[2:] == _T)).any()),
    )


def _with_facts(blocks: Iterator[bytes]) -> Iterator[tuple[bytes, _Facts]]:
    """Give each block with its facts, in order, the next ones being looked at meanwhile."""
    waiting: deque[tuple[bytes, Future[_Facts]]] = deque()
    with ThreadPoolExecutor(_LOOKERS) as pool:
        for block in blocks:
            waiting.append((block, pool.submit(_facts, block)))
            if len(waiting) > _LOOKERS:
                first, facts = waiting.popleft()
                yield first, facts.result()
        while waiting:
            first, facts = waiting.popleft()
            yield first, facts.result()


def _without_bom(text: Iterable[bytes]) -> Iterator[bytes]:
    blocks = iter(text)
    start = b""
    while len(start) < len(BOM) and (block := next(blocks, b"")):
        start += block
    if start.removeprefix(BOM):
        yield start.removeprefix(BOM)
    yield from blocks


def whole_lines(text: Iterable[bytes], name: str) -> Iterator[bytes]:
    """Give a text, without a BOM at its start, in blocks that end where a line ends.

    Raises
    ------
    EndlessLineError
        Where a line is too long to be held; `name` stands for the file.
    """
    kept: list[bytes] = []
    kept_bytes = 0
    for block in _without_bom(text):
        cut = block.rfind(b"\n") + 1
        if cut:
            yield b"".join([*kept, block[:cut]]) if kept else block[:cut]
            kept, kept_bytes = [], 0
        if cut < len(block):
            kept.append(block[cut:])
            kept_bytes += len(block) - cut
        if kept_bytes > LONGEST_LINE_BYTES:
            raise EndlessLineError(
                f"{name}: it has a line of over {LONGEST_LINE_BYTES >> 20} MB, "
                "so it is no text log; name the logs alone"
            )
    if kept:
        yield b"".join(kept)


def _is_clean(block: bytes, values: np.ndarray, ends: np.ndarray) -> bool:
    """Return whether the engine reads the block's lines as they are."""
    if ENGINE_DELIMITER.encode() in block:
        return False
    if b"\r" in block:
        returns = values == _CR
        if returns[-1] or (returns[:-1] & ~ends[1:]).any():
            return False
    windows = len(ends) // _WINDOW_BYTES
    if windows and not ends[: windows * _WINDOW_BYTES].reshape(windows, _WINDOW_BYTES).any(axis=1).all():
        return False
    return is_utf8(block)


def is_utf8(block: bytes) -> bool:
    """Return whether bytes are UTF-8; most are ASCII, which is quicker to see."""
    if block.isascii():
        return True
    try:
        block.decode()
    except UnicodeDecodeError:
        return False
    return True


def _taken_out(found: Scan, block: bytes) -> bytes:
    """Judge the block's lines that the engine would misread and return the block without their text."""
    after = np.flatnonzero(np.frombuffer(block, np.uint8) == _LF) + 1  # the starts of all lines but one
    starts = np.concatenate(([0], after[after < len(block)]))
    stops = np.concatenate((starts[1:], [len(block)]))
    spots = [match.start() for match in _LINE_BREAKER.finditer(block)]
    taken = set((np.searchsorted(starts, spots, side="right") - 1).tolist())
    if not is_utf8(block):
        bounds = enumerate(zip(starts.tolist(), stops.tolist(), strict=True))
        taken |= {i for i, (start, stop) in bounds if not is_utf8(block[start:stop])}
    taken |= set(np.flatnonzero(stops - starts > MAX_LINE_BYTES + len(b"\r\n")).tolist())
    pieces = []
    kept_from = 0
    for i in sorted(taken):
        start, stop = int(starts[i]), int(stops[i])
        ending = b"\r\n" if block.endswith(b"\r\n", start, stop) else b"\n"
        line = block[start:stop].removesuffix(ending)
        _settle(found, found.lines + i + 1, line)
        pieces += [block[kept_from:start], b"\n"]
        kept_from = stop
    return b"".join([*pieces, block[kept_from:]])


def _settle(found: Scan, number: int, line: bytes) -> None:
    if is_comment(line):
        found.comments += 1
    elif is_blank(line):
        found.blank += 1
    else:
        reason = judge(line)
        assert isinstance(reason, str)  # a record holds none of what a line is taken out for
        found.set_aside.append((number, reason, line))


def note_setups(found: Scan, block: bytes) -> None:
    """Add the setups in a block of whole lines to `found.setups`, numbered from `found.lines` on."""
    at = block.find(b"\tsetup\t")
    number, counted_to = found.lines + 1, 0
    while at >= 0:
        start = block.rfind(b"\n", 0, at) + 1
        end = block.find(b"\n", at)
        end = len(block) if end < 0 else end
        number += block.count(b"\n", counted_to, start)
        counted_to = start
        record = judge(block[start:end].removesuffix(b"\r")) if block[start : start + 1] != b"#" else ""
        if isinstance(record, Record) and record.kind == "setup":
            found.setups.append((number, record))
        at = block.find(b"\tsetup\t", end)


def _higher_layout(block: bytes) -> str | None:
    first = block[: block.find(b"\n")] if b"\n" in block else block
    match = re.fullmatch(re.escape(LAYOUT_LINE).encode() + rb"([0-9]{1,9})\s*", first)
    if match and int(match[1]) > LAYOUT_VERSION:
        return (
            f"its first line names layout {int(match[1])}, and this program reads layout {LAYOUT_VERSION}; "
            "get a newer version of logtool"
        )
    return None


class _Stranger:
    """Tell from a file's first lines whether it is something else altogether."""

    def __init__(self) -> None:
        self.lines = 0
        self.known = False
        self.reasons: Counter[str] = Counter()
        self.shown = ""

    def verdict(self, block: bytes) -> str | None:
        """Return why the file is refused, or None as long as it may be a log."""
        if self.known:
            return None
        for raw in block.removesuffix(b"\n").split(b"\n", STRANGER_LINES):
            line = raw.removesuffix(b"\r")
            self.lines += 1
            if self.lines > STRANGER_LINES:
                break
            if is_blank(line) or is_comment(line):
                continue
            judged = judge(line)
            if isinstance(judged, Record):
                self.known = True
                return None
            self.reasons[judged] += 1
            self.shown = self.shown or line[:_SHOWN_CHARACTERS].decode(errors="backslashreplace")
        if self.lines < STRANGER_LINES or not self.reasons:
            return None
        reason, count = self.reasons.most_common(1)[0]
        return (
            f"none of its first {STRANGER_LINES} lines is a record ({count} are {reason}; "
            f"the first is {self.shown!r}): it does not follow the log layout. A recipe reads "
            "other programs' text: `logtool convert --suggest FILE` writes a first one; or read it with --anyway"
        )
