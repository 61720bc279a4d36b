"""What is suggested for invented logs, held against the truth of each line."""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from pathlib import Path

import pytest

from logtool.records.recipes.loading import recipe_of
from logtool.records.recipes.recipe import RecipeError
from logtool.suggest import suggest
from tests.suggest.comparing import Outcome, filled_in, outcome_of
from tests.suggest.held_out import HELD_OUT
from tests.suggest.later import LATER
from tests.suggest.shape import Shape
from tests.suggest.shapes import DEVELOPED, binary, carried, name_dated, no_log, status

SHAPES = (*DEVELOPED, *HELD_OUT, *LATER)
# Read right once the recipe's blanks are filled in; the others are told to be in doubt.
NOT_RIGHT = {"commas_in_text", "halves_apart"}
NO_LOGS = (no_log, binary)
_known: dict[str, Outcome] = {}


def outcome(make: Callable[[], Shape], folder: Path) -> Outcome:
    if make.__name__ not in _known:
        _known[make.__name__] = outcome_of(make(), folder)
    return _known[make.__name__]


@pytest.mark.parametrize("make", SHAPES, ids=lambda make: make.__name__)
def test_nothing_is_wrong_without_a_doubt(make: Callable[[], Shape], tmp_path: Path) -> None:
    found = outcome(make, tmp_path)
    assert not found.silent, (found.wrong, found.examples, found.suggestion.doubts)
    assert found.right or not found.suggestion.sure, found.wrong


@pytest.mark.parametrize("make", SHAPES, ids=lambda make: make.__name__)
def test_most_are_right_at_once(make: Callable[[], Shape], tmp_path: Path) -> None:
    found = outcome(make, tmp_path)
    assert found.right == (make.__name__ not in NOT_RIGHT), (found.wrong, found.examples)


@pytest.mark.parametrize("make", SHAPES, ids=lambda make: make.__name__)
def test_every_doubt_stands_in_the_recipe(make: Callable[[], Shape], tmp_path: Path) -> None:
    found = outcome(make, tmp_path).suggestion
    comments = " ".join(line.lstrip("# ") for line in found.recipe.splitlines() if line.startswith("#"))
    for doubt in found.doubts:
        said = doubt.split(": ", 1)[1] if not found.trial else doubt
        assert " ".join(said.split()) in " ".join(comments.split())


def test_a_wrong_field_would_be_seen(tmp_path: Path) -> None:
    shape = name_dated()
    shape.truth[5]["snr_db"] = 99
    del shape.truth[7]
    found = outcome_of(shape, tmp_path)
    assert dict(found.wrong) == {"snr_db": 1, "extra": 1}
    assert found.silent == {"snr_db", "extra"}


def test_what_is_not_filled_in_is_refused(tmp_path: Path) -> None:
    shape = name_dated()
    path = tmp_path / shape.file
    path.write_bytes(shape.stored)
    found = suggest(path)
    with pytest.raises(RecipeError, match="receiver"):
        recipe_of(found.recipe, "r")
    with pytest.raises(RecipeError, match="dial"):
        recipe_of(found.recipe.replace("#receiver", "receiver"), "r")
    recipe_of(filled_in(found.recipe, shape.fill), "r")
    recipe_of(found.trial, "r")


@pytest.mark.parametrize("make", NO_LOGS, ids=lambda make: make.__name__)
def test_what_is_no_log_is_told_so(make: Callable[[], Shape], tmp_path: Path) -> None:
    shape = make()
    path = tmp_path / shape.file
    path.write_bytes(shape.stored)
    found = suggest(path)
    assert "No recipe could be found" in found.recipe
    assert tomllib.loads(found.recipe) == {}
    assert (found.trial, found.sure) == ("", False)
    assert found.doubts[0].startswith("structure: ")


def test_the_lines_of_an_unknown_text_are_shown(tmp_path: Path) -> None:
    path = tmp_path / "hut.txt"
    path.write_bytes(no_log().stored)
    assert "#   The hut stands on the north side" in suggest(path).recipe


def test_an_own_log_needs_no_recipe(tmp_path: Path) -> None:
    path = tmp_path / "own.log"
    path.write_text(
        "# logtool layout 1\n2026-03-01T18:00:00Z\tstop\thut" + "\t" * 11 + "\n", encoding="utf-8"
    )
    assert "own layout" in suggest(path).doubts[0]


def test_status_lines_become_watches(tmp_path: Path) -> None:
    minutes = sum(b"listened 60 s" in line for line in status().stored.splitlines())
    assert outcome(status, tmp_path).watches == minutes


def test_lines_between_carry_date_and_dial(tmp_path: Path) -> None:
    recipe = tomllib.loads(outcome(carried, tmp_path).recipe)
    carry = [line for line in recipe["line"] if line["kind"] == "carry"]
    assert sorted(line["name"] for line in carry) == ["date-lines", "dial-lines"]
