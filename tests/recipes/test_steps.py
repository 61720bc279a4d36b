"""Equal lines: a log read twice counts once, and lines within one step of the text's times are all kept."""

from __future__ import annotations

import gzip
import shutil
from pathlib import Path

import pytest

from logtool.records.opening import open_logs
from logtool.records.recipes.loading import recipe_of
from tests.recipes.comparing import compare, compare_ledger, in_blocks_of, recipe, rule

RULE = rule(separator=",", columns=["time", "sender", "sure"], time_form="%Y-%m-%d %H:%M")
PLAIN, STEPPED = recipe(RULE), recipe(RULE, "time_step_s = 60\n")
MINUTE = "2026-03-01 18:00,Q1A,\n2026-03-01 18:00,Q1B,\n2026-03-01 18:00,Q1A,\n2026-03-01 18:00,Q1A,\n"
NEXT = "2026-03-01 18:01,Q1A,\n2026-03-01 18:01,Q1A,0.5\n2026-03-01 18:01,Q1A,0.5\n"


def counts(folder: Path, text: str) -> list[tuple[int, int]]:
    """Return records and repeated lines of each file in a folder."""
    with open_logs(folder, recipe=recipe_of(text, "r.toml")) as logs:
        return [(file.records, file.repeated) for file in logs.inputs]


def test_without_a_step_equal_lines_are_one_record(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_text(MINUTE + NEXT)
    assert counts(tmp_path, PLAIN) == [(4, 3)]


@pytest.mark.parametrize("size", [24, 60, 1 << 20])
def test_with_a_step_they_are_numbered(size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    found = compare(STEPPED, MINUTE + "no line\n" + NEXT)
    more = [line.became.split("\t")[-1] for line in found if line.became]
    assert more == ["", "", "nth=2", "nth=3", "", "sure=0.5", "sure=0.5; nth=2"]


@pytest.mark.parametrize("size", [24, 1 << 20])
def test_a_log_given_twice_counts_once(size: int, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    (tmp_path / "a.txt").write_text(MINUTE + NEXT)
    shutil.copy(tmp_path / "a.txt", tmp_path / "b.txt")
    (tmp_path / "c.txt.gz").write_bytes(gzip.compress((MINUTE + NEXT).encode()))
    assert counts(tmp_path, STEPPED) == [(7, 0), (0, 7), (0, 7)]


def test_a_log_joined_to_itself_counts_once(tmp_path: Path) -> None:
    compare_ledger(tmp_path, STEPPED, {"a.txt": (2 * (MINUTE + NEXT)).encode()})
    assert counts(tmp_path / "logs", STEPPED) == [(7, 7)]


def test_a_longer_copy_adds_what_is_new(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_text(MINUTE)
    (tmp_path / "b.txt").write_text(MINUTE + NEXT)
    assert counts(tmp_path, STEPPED) == [(4, 0), (3, 4)]


def test_a_step_with_no_record_in_a_block(monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, 8)
    assert [line.reason for line in compare(STEPPED, "\nx\n")] == ["", "no-rule"]
