"""Blocks of commands and output in a document: run as a reader would, and compared."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path
from typing import NamedTuple

from tests.docs.running import TIMEOUT_S, environment

LEFT_OUT = "..."  # a line that stands for lines left out
_BLOCK = re.compile(r"^( *)```(\w+)\n(.*?)^ *```$", flags=re.DOTALL | re.MULTILINE)


class Block(NamedTuple):
    """A block of a document: what it is written in, and its text."""

    kind: str
    text: str

    @property
    def commands(self) -> list[str]:
        """The commands of a block for the shell, one a line."""
        return (
            [line.strip() for line in self.text.splitlines() if line.strip()] if self.kind == "bash" else []
        )


def blocks_of(document: str) -> list[Block]:
    """Return the blocks of a document in order."""
    return [Block(kind, text) for _, kind, text in _BLOCK.findall(document)]


def put_program(folder: Path) -> None:
    """Put `logtool` into a folder's `bin`, for `run_in`."""
    program = folder / "bin" / "logtool"
    program.parent.mkdir()
    program.write_text(f'#!/bin/sh\nexec "{sys.executable}" -m logtool "$@"\n', encoding="utf-8")
    program.chmod(0o755)


def run_in(folder: Path, command: str) -> subprocess.CompletedProcess[str]:
    """Return what a command for the shell did in a folder with `logtool` in its `bin`."""
    path = f"{folder / 'bin'}:{environment()['PATH']}"
    return subprocess.run(
        ["bash", "-e", "-c", command], cwd=folder, env=environment(PATH=path), stdin=subprocess.DEVNULL,
        capture_output=True, text=True, timeout=TIMEOUT_S,
    )  # fmt: skip


def missing_part(shown: str, printed: str) -> str | None:
    """Return the first part of a shown text that was not printed, in order and as a whole; None if all was.

    Parts are what stands between lines of three points. Blanks at the ends of lines do not count.

    >>> missing_part("a\\n...\\nc", "a\\nb\\nc"), missing_part("a\\nc", "a\\nb\\nc")
    (None, 'a\\nc')
    """
    left = _bare(printed)
    for part in re.split(rf"^{re.escape(LEFT_OUT)}\n", _bare(shown), flags=re.MULTILINE):
        _, found, left = ("\n" + left).partition("\n" + part)
        if not found:
            return part.strip("\n")
    return None


def _bare(text: str) -> str:
    return "".join(line.rstrip() + "\n" for line in text.splitlines())


def filled_in(suggested: str, told: str) -> str:
    """Return a suggested recipe with lines in the place of its own, which it may have behind a `#`.

    Raises
    ------
    AssertionError
        Where the recipe has no such line, or several.
    """
    for line in told.splitlines():
        key = line.partition(" = ")[0]
        suggested, found = re.subn(
            rf"^#?{re.escape(key)} = .*$", lambda _, line=line: line, suggested, flags=re.MULTILINE
        )
        assert found == 1, f"{found} lines {key!r} in the suggested recipe"
    return suggested
