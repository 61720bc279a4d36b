"""`docs/tutorial.md` done from top to bottom: its commands run, and show what the page shows."""

from __future__ import annotations

import json
import shlex
import shutil
from pathlib import Path
from typing import NamedTuple

import pytest

from tests.docs.blocks import Block, blocks_of, filled_in, missing_part, put_program, run_in
from tests.docs.running import ROOT, logtool, on_terminal_in

BLOCKS = blocks_of((ROOT / "docs" / "tutorial.md").read_text(encoding="utf-8"))
TEXT = ROOT / "docs" / "tutorial" / "night.txt"
RECIPE = "my.toml"
SHOWN, FILLED_IN, PUT_AT_THE_TOP = range(3)  # what the page does with the recipe, in the order of its blocks
TOP = "recipe = 1\n"


class Done(NamedTuple):
    """The folder after all steps, and for each block that shows something what was missing."""

    folder: Path
    missing: list[str | None]


@pytest.fixture(scope="module")
def done(tmp_path_factory: pytest.TempPathFactory) -> Done:
    """All steps of the page, one after another, in a folder with the text and `logtool`."""
    folder = tmp_path_factory.mktemp("tutorial")
    shutil.copy(TEXT, folder)
    put_program(folder)
    missing, printed, recipes = [], "", 0
    for block in BLOCKS:
        for command in block.commands:
            printed += ran(folder, command)
        if block.kind == "text":
            missing.append(missing_part(block.text, printed))
            printed = ""
        if block.kind == "toml":
            missing.append(with_recipe(folder / RECIPE, block, recipes))
            recipes += 1
    return Done(folder, missing)


def ran(folder: Path, command: str) -> str:
    """Run a command; return what it shows, `logtool` as on a terminal."""
    result = run_in(folder, command)
    assert "Traceback" not in result.stderr
    if "--suggest" in command:  # its recipe is yet to be filled in
        assert (folder / RECIPE).exists(), result.stderr
        return ""
    assert result.returncode == 0, result.stderr
    words = shlex.split(command)
    return on_terminal_in(folder, *words[1:]) if words[0] == "logtool" else result.stdout


def with_recipe(path: Path, block: Block, step: int) -> str | None:
    """Compare the recipe with what the page shows of it, or change it as the page says."""
    recipe = path.read_text(encoding="utf-8")
    if step == SHOWN:
        return missing_part(block.text, recipe)
    if step == FILLED_IN:
        recipe = filled_in(recipe, block.text)
    if step == PUT_AT_THE_TOP:
        assert recipe.count(TOP) == 1
        recipe = recipe.replace(TOP, TOP + block.text)
    path.write_text(recipe, encoding="utf-8")
    return None


def test_page_shows_what_is_there(done: Done) -> None:
    assert done.missing == [None] * len(done.missing)
    assert [block.kind for block in BLOCKS].count("toml") == PUT_AT_THE_TOP + 1
    assert sum(block.text.count("\n") for block in BLOCKS if block.kind == "text") > 20


def test_every_line_is_read(done: Done) -> None:
    told = logtool("check", "--json", "--recipe", RECIPE, "night.txt", folder=done.folder)
    (ledger,) = json.loads(told.stdout)["inputs"]
    assert ledger["rules"] == {"heard": 46, "skip": 4, "no-rule": 1}
    assert (ledger["lines"], ledger["records"], ledger["reasons"]) == (51, 46, {"no-rule": 1})


def test_kept_log_gives_the_same_figures(done: Done) -> None:
    by_recipe = logtool("reach", "--csv", "--recipe", RECIPE, "night.txt", folder=done.folder).stdout
    assert by_recipe.count("\n") == 5  # the hours from 21 to 0, and the heading
    assert logtool("reach", "--csv", "night.log", folder=done.folder).stdout == by_recipe


def test_map_draws_the_senders(done: Done) -> None:
    page = (done.folder / "map.html").read_text(encoding="utf-8")
    for sender in ("Q1ABC", "Q7GHI/P", "Q0BCD"):
        assert f'"{sender}"' in page
    assert '"JO62qm"' in page
