"""Recipes and texts made at random: the engine against the slow reading, whole and in small blocks."""

from __future__ import annotations

from datetime import date
from pathlib import Path
from random import Random

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from logtool.records.recipes.loading import recipe_of
from logtool.records.recipes.trying import try_lines
from logtool.records.sources import Source
from tests.recipes.comparing import compare, compare_ledger, engine_lines, in_blocks_of
from tests.recipes.making import made_recipe, made_text

DAYS = [None, date(2026, 3, 1), date(2024, 2, 28), date(2025, 12, 31)]


@settings(max_examples=30, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.integers(0, 2**32), st.integers(1, 80))
def test_each_line_is_what_the_slow_reading_says(seed: int, lines: int) -> None:
    rng = Random(seed)
    text, rules = made_recipe(rng)
    compare(text, made_text(rng, rules, lines), first_day=rng.choice(DAYS))


@pytest.mark.parametrize("seed", range(8))
def test_blocks_and_threads_change_nothing(seed: int, monkeypatch: pytest.MonkeyPatch) -> None:
    rng = Random(f"blocks {seed}")
    text, rules = made_recipe(rng)
    data = made_text(rng, rules, 60).encode()
    day = rng.choice(DAYS)
    whole, converter = engine_lines(text, data, first_day=day)
    in_blocks_of(monkeypatch, len(data) // 9)
    pieces, again = engine_lines(text, data, first_day=day, threads=3)
    assert pieces == whole
    assert again.counts == converter.counts
    assert again.notes() == converter.notes()
    assert again.earliest == converter.earliest


@pytest.mark.parametrize("seed", range(4))
def test_ledger_and_lines_set_aside(seed: int, tmp_path: Path) -> None:
    rng = Random(f"ledger {seed}")
    text, rules = made_recipe(rng)
    files = {f"{name}.txt": made_text(rng, rules, 50).encode() for name in "ab"}
    compare_ledger(tmp_path, text, files | {"c.txt": files["a.txt"]}, "2026-03-01")


@pytest.mark.parametrize("seed", range(3))
def test_trying_shows_what_reading_does(seed: int, tmp_path: Path) -> None:
    rng = Random(f"try {seed}")
    text, rules = made_recipe(rng)
    data = made_text(rng, rules, 40)
    whole, _ = engine_lines(text, data.encode())
    path = tmp_path / "night.txt"
    path.write_text(data)
    tried = try_lines(recipe_of(text, "r.toml"), Source(str(path), path), 25)
    assert [(one.rule, one.became, one.reason) for one in tried] == [
        (line.rule, line.became, line.reason) for line in whole[:25]
    ]
    assert [(one.number, one.line) for one in tried] == list(enumerate(data.split("\n")[:25], 1))
