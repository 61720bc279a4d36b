"""Random shapes of logs: whatever is wrong is in doubt, and most are right."""

from __future__ import annotations

from pathlib import Path

from tests.suggest.comparing import outcome_of
from tests.suggest.random_shapes import plan_of, shape_of

SEEDS = range(60)
LEAST_RIGHT = 0.75  # of 1000 seeds 89 % were right; in the rest mostly day and month cannot be told apart


def test_random_shapes_are_right_or_in_doubt(tmp_path: Path) -> None:
    right = 0
    for seed in SEEDS:
        found = outcome_of(shape_of(seed), tmp_path)
        assert not found.silent, (seed, plan_of(seed), found.wrong, found.examples, found.suggestion.doubts)
        assert found.right or not found.suggestion.sure, (seed, found.wrong)
        right += found.right
    assert right >= LEAST_RIGHT * len(SEEDS)


def test_the_random_shapes_are_of_all_ways() -> None:
    plans = [plan_of(seed) for seed in SEEDS]
    assert {plan.way for plan in plans} == {
        "tab",
        "semicolon",
        "bar",
        "comma",
        "space",
        "json",
        "pairs",
        "fixed",
    }
    assert {plan.date_from for plan in plans} == {"column", "name", "lines", "told"}
