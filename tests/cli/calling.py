"""Call the command as a user's shell does."""

from __future__ import annotations

import os
import pty
import signal
import subprocess
import sys
from pathlib import Path
from typing import Any

ROOT = Path(__file__).parents[2]
COMMAND = [sys.executable, "-m", "logtool"]
HEADER = "# logtool layout 1\n"


def call(*words: str | os.PathLike[str], **more: Any) -> subprocess.CompletedProcess[str]:
    """Return what a call printed and how it ended."""
    given = [os.fspath(word) for word in words]
    return subprocess.run(
        [*COMMAND, *given], capture_output=True, text=True, cwd=more.pop("cwd", ROOT), timeout=120, **more
    )


def heeding_interrupts() -> None:
    """Let a process that starts heed Ctrl-C, which one that runs in a shell's background does not."""
    signal.signal(signal.SIGINT, signal.SIG_DFL)


def call_on_terminal(*words: str | os.PathLike[str], columns: int = 100) -> str:
    """Return what a call shows on a terminal of so many columns."""
    here, there = pty.openpty()
    environment = {**os.environ, "COLUMNS": str(columns), "TERM": "xterm"}
    process = subprocess.Popen(
        [*COMMAND, *map(os.fspath, words)], stdout=there, stderr=there, cwd=ROOT, env=environment
    )
    os.close(there)
    shown = b""
    while True:
        try:
            piece = os.read(here, 65536)
        except OSError:  # the other end is closed
            break
        if not piece:
            break
        shown += piece
    process.wait(timeout=120)
    os.close(here)
    return shown.decode()


def heard(time: str, sender: str = "Q1ABC", *, locator: str = "", snr_db: str = "-3", more: str = "") -> str:
    """Return a heard line."""
    return f"{time}\theard\thut\t7041500\t1000\t{snr_db}\t0.1\tKB\t{sender}\t\t{locator}\t\tCQ {sender}\t{more}\n"


def setup(time: str, locator: str = "JO74xa", antenna: str = "wire") -> str:
    """Return a setup line."""
    return f"{time}\tsetup\thut\t7041500\t\t\t\t\t\t\t{locator}\t\t\tantenna={antenna}\n"
