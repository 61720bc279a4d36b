"""A bar with the time left, for anything that takes over a second on a terminal."""

from __future__ import annotations

import sys
import time
from types import TracebackType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from rich.progress import Progress, TaskID

PATIENCE_S = 1.0  # nothing is shown before


class ProgressBar:
    """Told what is being done and the share done, it shows a bar on standard error after a second."""

    def __init__(self, *, quiet: bool) -> None:
        self._silent = quiet or not sys.stderr.isatty()
        self._since = time.monotonic()
        self._bar: Progress | None = None
        self._task: TaskID | None = None

    def __enter__(self) -> ProgressBar:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, value: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    def close(self) -> None:
        """Take the bar away."""
        if self._bar is not None:
            self._bar.stop()
            self._bar = None

    def __call__(self, what: str, share: float) -> None:
        """Show that `share` (0 to 1) of the work is done; 1 takes the bar away."""
        if self._silent or time.monotonic() - self._since < PATIENCE_S:
            return
        if share >= 1:
            self.close()
            return
        if self._bar is None:
            self._start()
        if self._bar is not None and self._task is not None:
            self._bar.update(self._task, completed=share, description=what)

    def _start(self) -> None:
        from rich.console import Console
        from rich.progress import BarColumn, Progress, TaskProgressColumn, TextColumn, TimeRemainingColumn

        self._bar = Progress(
            TextColumn("{task.description}"),
            BarColumn(),
            TaskProgressColumn(),
            TimeRemainingColumn(),
            console=Console(stderr=True),
            transient=True,
        )
        self._task = self._bar.add_task("", total=1.0)
        self._bar.start()
