"""Write files whole or not at all: beside their place first, then renamed."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import IO, Any

from logtool.errors import FileError


@contextmanager
def whole_file(path: str | os.PathLike[str]) -> Iterator[IO[str]]:
    """Give a text file (UTF-8, LF) that takes the place of `path` when all is written.

    On an error or an interrupt nothing is left behind and a file that was there stays as it was.

    Parameters
    ----------
    path : str or path
        Where the file shall be.

    Raises
    ------
    FileError
        Where the file cannot be written; the message says why.
    """
    with _whole(path, "w", encoding="utf-8", errors="surrogateescape", newline="") as file:
        yield file


@contextmanager
def whole_bytes(path: str | os.PathLike[str]) -> Iterator[IO[bytes]]:
    """Give a file for bytes that takes the place of `path` when all is written; as `whole_file`."""
    with _whole(path, "wb") as file:
        yield file


@contextmanager
def _whole(path: str | os.PathLike[str], mode: str, **text: Any) -> Iterator[IO[Any]]:
    place = Path(path)
    try:
        if place.exists() and not place.is_file():  # a device or a pipe cannot be renamed to
            with place.open(mode, **text) as file:
                yield file
            return
        handle, name = tempfile.mkstemp(prefix=f".{place.name}.", dir=place.parent)
        try:
            with os.fdopen(handle, mode, **text) as file:
                yield file
                file.flush()
                os.fsync(file.fileno())
            os.chmod(name, place.stat().st_mode & 0o777 if place.exists() else 0o666 & ~_umask())
            os.replace(name, place)
        except BaseException:
            Path(name).unlink(missing_ok=True)
            raise
    except BrokenPipeError:
        raise
    except OSError as error:
        raise FileError(
            f"{place}: cannot be written ({error.strerror or error}); check the folder, its rights and the disk"
        ) from error


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
