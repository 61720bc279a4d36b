"""The map of small logs, for the tests, and what it draws of them."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from logtool import open_logs
from logtool.pages.map import map_data_of
from logtool.pages.map_data import MapData
from logtool.tables.choice import choose
from tests.tables.making import write

SAMPLES = Path(__file__).parent.parent.parent / "sample_logs"


def made(folder: Path, *lines: str, at: str | None = None, **chosen: Any) -> MapData:
    """What the map shows of a small log."""
    with open_logs(write(folder, lines), at=at, threads=1) as logs:
        return map_data_of(logs, choose(**chosen))


def drawn_in(data: MapData, **keys: int) -> set[str]:
    """The names of the senders that are located in counts with these indices."""
    counts = data.counts
    rows = zip(counts.sender, counts.group, counts.hour, counts.located, strict=True)
    wanted = [keys.get("group"), keys.get("hour")]
    return {
        data.senders[sender].name
        for sender, *of, located in rows
        if located and all(want in (None, value) for want, value in zip(wanted, of, strict=True))
    }
