"""Hold every row and column of the tables against the reference."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from logtool import open_logs
from tests.tables import reference_tables
from tests.tables.making import TABLES, read_back, table
from tests.tables.reference_records import World, make_world


def compare(folder: Path, *, at: str | None = None, antenna_name: str | None = None, **words: Any) -> None:
    """Compare all tables of the files in a folder."""
    gap_min = words.get("gap_min", 10.0)
    world = make_world(read_back(folder), at=at, antenna_name=antenna_name, gap_min=gap_min)
    compare_with(world, folder, at=at, antenna_name=antenna_name, **words)


def compare_with(
    world: World, folder: Path, *, at: str | None = None, antenna_name: str | None = None, **words: Any
) -> None:
    """Compare all tables with those of a world that was made of the same files."""
    with open_logs(folder, at=at, antenna_name=antenna_name, threads=1, anyway=True) as logs:
        for name in TABLES:
            made = table(logs, name, **words)
            expected = getattr(reference_tables, name)(world, words)
            if name == "reach":
                expected, summary = expected
                if summary:
                    assert list((made.written_summary() or {}).items()) == summary
            rows = [list(row.items()) for row in made.rows()]
            assert rows == expected, f"{name} with {words}"
            assert len(rows) == len(made)
