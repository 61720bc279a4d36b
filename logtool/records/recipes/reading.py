"""Look over a file by a recipe: its text in the layout takes the place of the file's own."""

from __future__ import annotations

import hashlib
from collections import Counter
from concurrent.futures import Future, ThreadPoolExecutor
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import IO

from logtool.errors import FileError
from logtool.records.judge import EPOCH, Record, judge
from logtool.records.layout import COLUMN_NAMES, LAYOUT_LINE
from logtool.records.marks import MARK
from logtool.records.recipes.blocks import blocks_of
from logtool.records.recipes.converter import Converter, Made
from logtool.records.recipes.recipe import Recipe, RecipeError
from logtool.records.scan import BOM, STRANGER_LINES, Scan, ScanOptions, note_setups
from logtool.records.sources import Source, Text

_SHOWN_LINES = 3
_SHOWN_CHARACTERS = 60


def in_layout(source: Source) -> bool:
    """Return whether a file's first line says that it follows the layout, so that no recipe is needed."""
    start = b""
    for block in Text(source):
        start += block
        if len(start) >= len(BOM) + len(LAYOUT_LINE):
            break
    return start.removeprefix(BOM).startswith(LAYOUT_LINE.encode())


def scan_by(
    recipe: Recipe, source: Source, path: Path, options: ScanOptions, *, day_us: int | None = None
) -> Scan:
    """Return what a file holds by a recipe, and write its lines in the layout to `path`, one for each.

    Parameters
    ----------
    recipe : Recipe
        What the lines are.
    source : Source
        The file.
    path : Path
        Where the text in the layout shall be.
    options : ScanOptions
        How to look.
    day_us : int, optional
        The date at which a file begins that names none, as midnight in microseconds since 1970.

    Raises
    ------
    FileError
        Where the file cannot be read or the copy not be written.
    RecipeError
        Where the recipe does not fit the file's name or header.
    """
    from logtool.records.engine import connect

    found = Scan(source, path, copied=True)
    text = Text(source)
    text.digest = hashlib.sha256() if options.with_digest else None
    connection = connect(path.parent.parent, options.threads, options.memory_mb)
    try:
        converter = Converter(connection, recipe, source.name, day_us)
        with path.open("wb") as copy:
            copy.write(BOM)
            _write(found, converter, text, options, copy)
    except OSError as error:
        raise FileError(
            f"{source.name}: its text cannot be written to {path.parent} ({error.strerror}); "
            "free some space there or set TMPDIR to a folder with more"
        ) from error
    finally:
        connection.close()
    found.stored_bytes, found.broken = text.stored_bytes, text.broken
    if text.digest is not None:
        found.digest = f"sha256:{text.digest.hexdigest()}"
    found.rules = dict(converter.counts)
    found.notes = converter.notes()
    found.setups = [*_own_setups(converter), *found.setups]
    return found


def _write(found: Scan, converter: Converter, text: Text, options: ScanOptions, copy: IO[bytes]) -> None:
    stranger = None if options.anyway else _Stranger(converter.recipe)

    def take(block: bytes, made: Made) -> bool:
        """Write a block's lines; return whether the file is something else altogether."""
        lines = joined(made)
        if stranger is not None and stranger.may_be:
            stranger.look(block, lines)
            if stranger.may_be and stranger.lines >= STRANGER_LINES:
                return True
        if b"\tsetup\t" in lines:
            note_setups(found, lines)
        copy.write(lines)
        found.lines += len(made.rules)
        if options.progress is not None:
            options.progress(text.stored_bytes)
        return False

    with ThreadPoolExecutor(1) as behind:  # a block is written while the engine works on the next
        taking: Future[bool] | None = None
        for block, made in converter.blocks(text):
            if taking is None and block.startswith(LAYOUT_LINE.encode()):
                raise RecipeError(
                    f"{found.source.name}: it follows the log layout already; leave --recipe away"
                )
            if taking is not None and taking.result():
                break
            taking = behind.submit(take, block, made)
        if taking is not None:
            taking.result()
    if stranger is not None and stranger.may_be and stranger.reasons:
        found.refused = stranger.told()


def joined(made: Made) -> bytes:
    """Return the made lines as bytes, each with its ending."""
    pieces = []
    for chunk in made.out.chunks:
        _, offsets, data = chunk.buffers()
        if data is not None:
            bounds = memoryview(offsets).cast("i")
            first, last = bounds[chunk.offset], bounds[chunk.offset + len(chunk)]
            pieces.append(memoryview(data)[first:last])
    return b"".join(pieces)


def _own_setups(converter: Converter) -> list[tuple[int, Record]]:
    """Return the setups that the recipe's place and antenna are: one for each receiver, at its first record."""
    if converter.place_and_antenna is None:
        return []
    place, antenna = converter.place_and_antenna
    slot = f"; slot_s={converter.recipe.slot_s}" if converter.recipe.slot_s else ""
    setups = []
    for receiver, (time_us, dial_hz) in sorted(converter.earliest.items()):
        values = {
            "time": written_time(time_us),
            "kind": "setup",
            "receiver": receiver,
            "dial_hz": dial_hz,
            "locator": place,
            "more": f"antenna={antenna}{slot}",
        }
        record = judge("\t".join(values.get(name, "") for name in COLUMN_NAMES).encode())
        if isinstance(record, Record):
            setups.append((0, record))
    return setups


def written_time(time_us: int) -> str:
    """Return an instant as the layout writes it.

    >>> written_time(1_500_000)
    '1970-01-01T00:00:01.500000Z'
    """
    at: datetime = EPOCH + timedelta(microseconds=time_us)
    return at.astimezone(UTC).replace(tzinfo=None).isoformat() + "Z"


class _Stranger:
    """Tell from a file's first lines whether the recipe makes a record of any."""

    def __init__(self, recipe: Recipe) -> None:
        self.lines = 0
        self.may_be = True
        self.reasons: Counter[str] = Counter()
        self._recipe = recipe
        self._shown: list[str] = []

    def look(self, block: bytes, made: bytes) -> None:
        """Look at lines and what was made of them."""
        raw_lines = block.removesuffix(b"\n").split(b"\n", STRANGER_LINES)
        for raw, line in zip(raw_lines, made.split(b"\n", STRANGER_LINES)[:STRANGER_LINES], strict=False):
            self.lines += 1
            if not line or line.startswith(b"#"):
                continue
            judged = line[len(MARK) :].decode() if line.startswith(MARK.encode()) else judge(line)
            if isinstance(judged, Record):
                self.may_be = False
                return
            self.reasons[judged] += 1
            if len(self._shown) < _SHOWN_LINES:
                shown = raw.removesuffix(b"\r")[:_SHOWN_CHARACTERS].decode(errors="backslashreplace")
                self._shown.append(f"line {self.lines} ({judged}): {shown!r}")

    def told(self) -> str:
        """Return why the file is refused."""
        count = sum(self.reasons.values())
        return (
            f"the recipe {self._recipe.name} makes no record of its first {self.lines} lines "
            f"({', '.join(f'{n} {reason}' for reason, n in self.reasons.most_common())} of {count}):\n  "
            + "\n  ".join(self._shown)
            + "\n  `logtool convert --recipe ... --try` shows more; --anyway reads on"
        )


def source_lines(recipe: Recipe, source: Source, numbers: set[int]) -> dict[int, bytes]:
    """Return lines of a file, as UTF-8 without their endings, by their numbers from 1.

    Standard input can be read only once, so that it gives none.
    """
    if source.path is None or not numbers:
        return {}
    found = {}
    before = 0
    for block in blocks_of(Text(source), recipe.encoding):
        lines = block.removesuffix(b"\n").split(b"\n")
        for number in sorted(n for n in numbers if before < n <= before + len(lines)):
            found[number] = lines[number - before - 1].removesuffix(b"\r")
        before += len(lines)
    return found
