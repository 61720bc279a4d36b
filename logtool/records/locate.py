"""Find where lines stand: file and line number, by the bytes of the line."""

from __future__ import annotations

from collections.abc import Container, Iterator
from pathlib import Path

from logtool.records.scan import BOM

_CHUNK_BYTES = 1 << 20  # hint to the reader of lines; our choice


def line_numbers(path: Path, wanted: Container[bytes]) -> Iterator[tuple[int, bytes]]:
    """Give number and bytes of each line of a plain text that is among `wanted`, endings left out.

    Parameters
    ----------
    path : Path
        A file as the reader keeps it: plain, with an empty line for each that was taken out.
    wanted : container of bytes
        The lines to find.
    """
    number = 0
    with path.open("rb") as file:
        while lines := file.readlines(_CHUNK_BYTES):
            if number == 0:
                lines[0] = lines[0].removeprefix(BOM)
            for number, line in enumerate(lines, number + 1):  # noqa: B020 - goes on where it stopped
                if line.endswith(b"\n"):
                    line = line[:-2] if line.endswith(b"\r\n") else line[:-1]
                if line in wanted:
                    yield number, line
