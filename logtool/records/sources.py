"""From what the user names to the files that are read, and their bytes as lines' text."""

from __future__ import annotations

import os
import stat
import sys
import zlib
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import IO, Any

from logtool.errors import FileError, UsageError

STDIN = "-"
LOG_ENDINGS = (".log", ".txt", ".tsv")
TABLE_ENDINGS = (".csv", ".json", ".jsonl")  # of logs that only a recipe can read
PACKED_ENDINGS = (".gz", ".zst")
ADI_ENDINGS = (".adi", ".adif")
BLOCK_BYTES = 1 << 19  # a block of text that is looked at in one go; our choice
PIECE_BYTES = 1 << 12  # fed to an unpacker at a time, so that damage costs little good text; our choice


@dataclass(frozen=True)
class Source:
    """One input file: the name shown to the user, and where its bytes are (None: standard input)."""

    name: str
    path: Path | None

    @property
    def packing(self) -> str:
        """How the bytes are packed by the name's ending: `.gz`, `.zst` or an empty text."""
        return next((end for end in PACKED_ENDINGS if self.name.lower().endswith(end)), "")

    @property
    def is_adi(self) -> bool:
        """Whether the name says that the file is ADI, packed or not."""
        return self.name.lower().removesuffix(self.packing).endswith(ADI_ENDINGS)


class UnreadableError(FileError):
    """A file or folder that is not there or may not be read; the others can be."""


def sources_of(
    paths: tuple[str | os.PathLike[str], ...], unread: list[str] | None = None, *, with_tables: bool = False
) -> list[Source]:
    """Return the files behind the paths: sorted by path, standard input last, each real file once.

    A folder stands for all files in it, deeper ones too, that end in `.log`, `.txt` or `.tsv`, or in
    these with `.gz` or `.zst`.

    Parameters
    ----------
    paths : tuple of str or path
        What the user names.
    unread : list of str, optional
        Takes a message for each path that does not exist and folder that cannot be listed.
    with_tables : bool
        Folders stand for files that end in `.csv`, `.json` or `.jsonl` as well: a recipe will read them.

    Raises
    ------
    UnreadableError
        Where there is such a path and no list for it.
    UsageError
        Where no path is given.
    """
    if not paths:
        raise UsageError("no log is named; give files, folders, or - for standard input")

    def refuse(message: str) -> None:
        if unread is None:
            raise UnreadableError(message)
        unread.append(message)

    endings = LOG_ENDINGS + (TABLE_ENDINGS if with_tables else ())
    names: list[str] = []
    for path in paths:
        name = os.fspath(path)
        if name != STDIN and os.path.isdir(name):  # not by `Path`, to which an empty name is the folder here
            names += _files_in(Path(name), endings, refuse)
        else:
            names.append(name)
    sources: list[Source] = []
    seen: set[str] = set()
    for name in sorted(set(names) - {STDIN}):
        file = Path(name)
        if not os.path.exists(name):
            refuse(f"{shown(name)}: there is no such file or folder, or no right to look; check the path")
            continue
        real = str(file.resolve())
        if real not in seen:
            seen.add(real)
            sources.append(Source(shown(name), file))
    return sources + ([Source(STDIN, None)] if STDIN in names else [])


def shown(name: str) -> str:
    """Return a file's name as text that can be written: bytes that are not UTF-8 as escapes."""
    return os.fsencode(name).decode("utf-8", "backslashreplace") if name else "''"


def _files_in(folder: Path, endings: tuple[str, ...], refuse: Callable[[str], None]) -> list[str]:
    def unlisted(error: OSError) -> None:
        refuse(f"{shown(str(error.filename))}: the folder cannot be listed ({error.strerror})")

    found = []
    for base, _, files in os.walk(folder, onerror=unlisted):
        for file in files:
            if _is_special(Path(base) / file):
                continue
            stem = file.lower()
            for ending in PACKED_ENDINGS:
                stem = stem.removesuffix(ending)
            if stem.endswith(endings):
                found.append(str(Path(base) / file))
    return found


def _is_special(path: Path) -> bool:
    """Return whether a name in a folder is a pipe, a socket or a device, which are no logs."""
    try:
        mode = path.stat().st_mode
    except OSError:
        return False  # the user is told when it is opened
    return not stat.S_ISREG(mode)


class Text:
    """The text of a source as bytes, unpacked, with a count of the stored bytes and their digest.

    Iterating gives blocks of about `BLOCK_BYTES`. Where a packed file breaks off, the text up to the
    break is given and `broken` says what was wrong.
    """

    def __init__(self, source: Source, *, limit: int | None = None) -> None:
        self.source = source
        self.stored_bytes = 0
        self.broken: str | None = None
        self.digest: Any | None = None  # a hashlib object that is to be fed the stored bytes
        self._limit = limit

    def __iter__(self) -> Iterator[bytes]:
        try:
            with self._open() as file:
                if self.source.packing == ".gz":
                    yield from self._unpacked(file, _Gunzip())
                elif self.source.packing == ".zst":
                    yield from self._unpacked(file, _Unzstd())
                else:
                    yield from self._stored(file)
        except OSError as error:
            raise UnreadableError(
                f"{self.source.name}: cannot be read ({error.strerror or error}); "
                "check the file and its rights"
            ) from error

    def _open(self) -> IO[bytes]:
        if self.source.path is None:
            if sys.stdin is None:
                raise OSError("standard input is closed")
            return os.fdopen(os.dup(sys.stdin.fileno()), "rb")
        return self.source.path.open("rb", buffering=0)

    def _stored(self, file: IO[bytes]) -> Iterator[bytes]:
        while self._limit is None or self.stored_bytes < self._limit:
            room = BLOCK_BYTES if self._limit is None else min(BLOCK_BYTES, self._limit - self.stored_bytes)
            block = file.read(room)
            if not block:
                return
            self.stored_bytes += len(block)
            if self.digest is not None:
                self.digest.update(block)
            yield block

    def _unpacked(self, file: IO[bytes], unpacker: _Gunzip | _Unzstd) -> Iterator[bytes]:
        waiting: list[bytes] = []
        size = 0
        for stored in self._stored(file):
            if self.broken:
                continue  # the digest is of the whole file
            try:
                for start in range(0, len(stored), PIECE_BYTES):
                    for piece in unpacker.pieces(stored[start : start + PIECE_BYTES]):
                        waiting.append(piece)
                        size += len(piece)
                        if size >= BLOCK_BYTES:
                            yield b"".join(waiting)
                            waiting, size = [], 0
            except _BrokenError as error:
                self.broken = str(error)
        if not self.broken and not unpacker.finished:
            self.broken = "the file ends before its packed text does"
        if waiting:
            yield b"".join(waiting)


class _BrokenError(Exception):
    """The packed bytes are damaged."""


class _Gunzip:
    """Unpack gzip members one after the other (RFC 1952), piece by piece."""

    def __init__(self) -> None:
        self._new()
        self.finished = True

    def _new(self) -> None:
        self._unpacker = zlib.decompressobj(wbits=zlib.MAX_WBITS | 16)

    def pieces(self, stored: bytes) -> Iterator[bytes]:
        while stored:
            if self.finished:
                stored = stored.lstrip(b"\0")  # padding after a member
                if not stored:
                    return
                self._new()
                self.finished = False
            try:
                piece = self._unpacker.decompress(stored, PIECE_BYTES)
            except zlib.error as error:
                raise _BrokenError(f"the packed text is damaged ({error})") from error
            if piece:
                yield piece
            if self._unpacker.eof:
                self.finished = True
                stored = self._unpacker.unused_data
            else:
                stored = self._unpacker.unconsumed_tail


class _Unzstd:
    """Unpack Zstandard frames one after the other (RFC 8878), piece by piece."""

    def __init__(self) -> None:
        self.finished = True

    def pieces(self, stored: bytes) -> Iterator[bytes]:
        import zstandard

        while stored:
            if self.finished:
                self._unpacker = zstandard.ZstdDecompressor().decompressobj()
                self.finished = False
            try:
                piece = self._unpacker.decompress(stored)
            except zstandard.ZstdError as error:
                raise _BrokenError(f"the packed text is damaged ({error})") from error
            if piece:
                yield piece
            self.finished = self._unpacker.eof
            stored = self._unpacker.unused_data if self.finished else b""
