"""How far the reading is: told to whoever shows it."""

from __future__ import annotations

import threading
from collections.abc import Callable
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import duckdb

LOOK_SHARE = 0.2  # of the time of reading, about, goes into looking over the bytes
RECIPE_SHARE = 0.6  # and so much where a recipe makes records of them
_POLL_S = 0.2  # between two looks at the engine's progress

Progress = Callable[[str, float], None]  # told what is being done, and the share done


class Polled:
    """While it is entered, ask the engine from a thread how far it is, and tell the progress."""

    def __init__(self, connection: duckdb.DuckDBPyConnection, progress: Progress | None, done: float) -> None:
        self._connection = connection
        self._share = done  # of the whole, before
        self._progress = progress
        self._done = threading.Event()
        self._thread = threading.Thread(target=self._poll, daemon=True)

    def __enter__(self) -> None:
        if self._progress is not None:
            self._thread.start()

    def __exit__(self, *_: object) -> None:
        self._done.set()
        if self._progress is not None:
            self._thread.join()

    def _poll(self) -> None:
        assert self._progress is not None
        while not self._done.wait(_POLL_S):
            percent = self._connection.query_progress()
            if percent >= 0:
                self._progress("reading", self._share + (1 - self._share) * percent / 100)
