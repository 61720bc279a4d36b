"""The bare scripts of the benchmark do the same work: their rows are those of `reach`.

They know nothing of logtool but the names of the columns, so they are an outside check of it as well.
"""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from logtool.records.opening import open_logs
from logtool.tables.choice import choose
from logtool.tables.reach import reach_table
from tests.benchmarks.make_foreign import make_foreign
from tests.benchmarks.make_log import make_log
from tests.cli.calling import ROOT

LINES = 30_000


@pytest.fixture(scope="module")
def log(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """An invented log of a day."""
    path = tmp_path_factory.mktemp("peers") / "day.log"
    make_log(LINES, path)
    return path


@pytest.mark.parametrize("peer", ["duckdb", "polars"])
def test_a_bare_script_gives_the_same_rows(peer: str, log: Path) -> None:
    pytest.importorskip(peer)
    done = subprocess.run(
        [sys.executable, "-m", f"tests.benchmarks.peer_{peer}", str(log)],
        capture_output=True,
        check=True,
        cwd=ROOT,
    )
    theirs = json.loads(done.stdout)
    with open_logs(log) as logs:
        ours = [row for row in reach_table(logs, choose()).rows() if row["receptions"]]
    assert len(theirs) == 24
    assert sum(row["receptions"] for row in theirs) == LINES
    assert theirs == [{name: row[name] for name in theirs[0]} for row in ours]


def test_the_same_records_by_a_recipe_give_the_same_rows(log: Path, tmp_path: Path) -> None:
    text, recipe = tmp_path / "day.txt", tmp_path / "day.toml"
    make_foreign(log, text, recipe)
    with open_logs(log) as logs, open_logs(text, recipe=recipe) as foreign:
        wanted, found = (list(reach_table(one, choose()).rows()) for one in (logs, foreign))
        assert foreign.inputs[0].rules == {"carry": 1, "heard": LINES}
    assert found == wanted
