"""Running the command as a user does: from a folder with the sample logs, in a pipe or on a terminal."""

from __future__ import annotations

import os
import pty
import re
import subprocess
import sys
from functools import cache
from pathlib import Path

ROOT = Path(__file__).parents[2]
SAMPLES = ROOT / "sample_logs"
WIDTH = 96  # columns of the terminal on which the README's output was made
TIMEOUT_S = 60
COLOUR = re.compile(r"\x1b\[[0-9;?]*[A-Za-z]")


def environment(**more: str) -> dict[str, str]:
    """Return the environment in which `python -m logtool` is this project's."""
    return {**os.environ, "PYTHONPATH": str(ROOT), **more}


def logtool(*arguments: str, folder: Path = ROOT) -> subprocess.CompletedProcess[str]:
    """Return what `logtool` did in a pipe."""
    return subprocess.run(
        [sys.executable, "-m", "logtool", *arguments],
        cwd=folder, env=environment(), stdin=subprocess.DEVNULL, capture_output=True, text=True,
        timeout=TIMEOUT_S,
    )  # fmt: skip


@cache
def on_terminal(*arguments: str) -> str:
    """Return what `logtool` prints on a terminal in the project's folder, colours left out."""
    return on_terminal_in(ROOT, *arguments)


def on_terminal_in(folder: Path, *arguments: str) -> str:
    """Return what `logtool` prints on a terminal of `WIDTH` columns in a folder, colours left out."""
    outer, inner = pty.openpty()
    with subprocess.Popen(
        [sys.executable, "-m", "logtool", *arguments],
        cwd=folder, env=environment(COLUMNS=str(WIDTH), TERM="xterm"), stdin=subprocess.DEVNULL, stdout=inner,
        stderr=subprocess.DEVNULL,
    ) as process:  # fmt: skip
        os.close(inner)
        printed = b""
        while True:
            try:
                piece = os.read(outer, 1 << 16)
            except OSError:  # so Linux says that nobody writes any more
                break
            if not piece:
                break
            printed += piece
        process.wait(TIMEOUT_S)
    os.close(outer)
    return COLOUR.sub("", printed.decode()).replace("\r\n", "\n")
