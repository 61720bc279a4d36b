"""The examples of `docs/recipes/` are read as the logs beside them say, and the page names what there is.

The logs were written from the scenario of each text, not by the program.
"""

from __future__ import annotations

import re
import tomllib
from pathlib import Path

import pytest

from logtool import open_logs
from logtool.records.callsigns import UNRESOLVED
from logtool.records.layout import COLUMN_NAMES, KNOWN_KEYS
from logtool.records.recipes.loading import DEFAULT_MESSAGES, NEVER_LOCATORS, load_recipe
from logtool.records.recipes.names import PIECES
from logtool.records.recipes.patterns import SLOTS
from logtool.records.recipes.recipe import CARRY, REASONS, SKIP, RecipeError
from logtool.records.recipes.timeforms import DIRECTIVES
from tests.docs.running import ROOT, logtool

FOLDER = ROOT / "docs" / "recipes"
RECIPES = sorted(FOLDER.glob("*.toml"))
PAGE = (ROOT / "docs" / "recipes.md").read_text(encoding="utf-8")
ASIDE = re.compile(r"# line (\d+) of the text is set aside: ([\w-]+)")
LEAST_LINES, MOST_LINES = 20, 60
SHAPES = 8


def text_of(recipe: Path) -> Path:
    """The text beside a recipe: of its name, or of a name that begins so."""
    (text,) = FOLDER.glob(f"{recipe.stem}*.txt")
    return text


def expected(recipe: Path) -> list[str]:
    return recipe.with_suffix(".log").read_text(encoding="utf-8").splitlines()


def records(lines: list[str]) -> list[str]:
    return [line for line in lines if not line.startswith("#")]


def by_name(paths: list[Path]) -> pytest.MarkDecorator:
    return pytest.mark.parametrize("recipe", paths, ids=lambda path: path.stem)


def test_every_shape_has_its_files() -> None:
    assert len(RECIPES) == SHAPES
    texts = {text_of(recipe) for recipe in RECIPES}
    logs = {recipe.with_suffix(".log") for recipe in RECIPES}
    assert set(FOLDER.iterdir()) == {*RECIPES, *texts, *logs}


@by_name(RECIPES)
def test_command_writes_the_log_beside_it(recipe: Path, tmp_path: Path) -> None:
    """Records and setups in order, byte for byte; the texts have 20 to 60 lines."""
    out = tmp_path / "out.log"
    done = logtool("convert", "--recipe", str(recipe), str(text_of(recipe)), "-o", str(out))
    assert done.returncode == 0, done.stderr
    written = out.read_text(encoding="utf-8").splitlines()
    assert records(written) == records(expected(recipe))
    assert written[:2] == expected(recipe)[:2]
    assert LEAST_LINES <= text_of(recipe).read_bytes().count(b"\n") <= MOST_LINES


@by_name(RECIPES)
def test_library_reads_what_is_in_the_log(recipe: Path) -> None:
    """The same records, typed, the same setups, and each damaged line with its number and reason."""
    wanted = [(int(number), reason) for number, reason in ASIDE.findall("\n".join(expected(recipe)))]
    assert wanted
    with (
        open_logs(text_of(recipe), recipe=recipe) as read,
        open_logs(recipe.with_suffix(".log")) as log,
    ):
        assert read.setups == log.setups
        assert read.setups
        of_text, of_log = (logs.to_arrow().to_pylist() for logs in (read, log))
        heard = [row for row in of_log if row["kind"] != "setup"]
        assert [row for row in of_text if row["kind"] != "setup"] == heard
        assert heard
        (ledger,) = read.inputs
        assert [(number, reason) for _, number, reason, _ in read.set_aside()] == wanted
        assert ledger.set_aside == len(wanted)
        assert ledger.repeated == 0
        assert ledger.lines == ledger.blank + ledger.comments + ledger.records + ledger.set_aside


@by_name(RECIPES)
def test_try_shows_every_line(recipe: Path) -> None:
    done = logtool("convert", "--recipe", str(recipe), "--try", "--lines", "60", str(text_of(recipe)))
    assert done.returncode == 0, done.stderr
    with open_logs(text_of(recipe), recipe=recipe) as logs:
        (ledger,) = logs.inputs
    assert f"{ledger.lines} lines: {ledger.records} records" in done.stdout
    for reason, count in ledger.reasons.items():
        assert f"{count} {reason}" in done.stdout


@by_name(RECIPES)
def test_example_tells_how_to_try_it(recipe: Path) -> None:
    told = f"logtool convert --recipe {recipe.name} --try {text_of(recipe).name}"
    assert told in recipe.read_text(encoding="utf-8")


def test_smallest_recipe_reads_the_line_shown(tmp_path: Path) -> None:
    (block,) = re.findall(r"```toml\n(.*?)```", PAGE, flags=re.DOTALL)
    shown = re.search(r"for lines like `(.*?)`", PAGE)
    assert shown is not None
    recipe, text = tmp_path / "my.toml", tmp_path / "my.txt"
    recipe.write_text(block, encoding="utf-8")
    text.write_text(shown[1] + "\n", encoding="utf-8")
    with open_logs(text, recipe=recipe) as logs:
        (row,) = logs.to_arrow().to_pylist()
        assert [setup.antenna for setup in logs.setups["hut"]] == ["wire"]
    assert (row["sender"], row["locator"], row["snr_db"], row["dial_hz"]) == ("Q1ABC", "JO62", -12, 7041500)


def section(heading: str) -> str:
    _, _, rest = PAGE.partition(f"\n## {heading}")
    assert rest, heading
    return rest.partition("\n## ")[0]


def named(text: str) -> set[str]:
    return set(re.findall(r"`([^`\n]+)`", text))


def first_cells(text: str) -> set[str]:
    """What stands in the first column of a section's tables."""
    return {word for row in re.findall(r"^\| (.+?) \|", text, flags=re.MULTILINE) for word in named(row)}


def test_page_names_every_name() -> None:
    told = named(section("Names"))
    own = set(PIECES) - set(KNOWN_KEYS)
    assert own <= told
    assert not {name for name in told if re.fullmatch(r"[a-z]+_[a-z]+", name)} - set(PIECES) - {"bad-snr_db"}
    assert set(COLUMN_NAMES) - {"kind", "more"} <= own


def test_page_names_every_key_of_a_recipe(tmp_path: Path) -> None:
    """A key that the page names is one that the loader takes, and it takes no other."""
    small = re.findall(r"```toml\n(.*?)```", PAGE, flags=re.DOTALL)[0]
    for heading, start, table in (
        ("At the top", "", f"wrong = 1\n{small}"),
        ("`[[line]]`", "", small.replace("[[line]]", "[[line]]\nwrong = 1")),
    ):
        path = tmp_path / "wrong.toml"
        path.write_text(start + table, encoding="utf-8")
        with pytest.raises(RecipeError, match="there is no such key") as error:
            load_recipe(path)
        taken = set(re.findall(r"\w+", str(error.value).partition("there are ")[2]))
        assert taken
        told = {word.partition(" ")[0] for word in first_cells(section(heading))}
        assert taken - {"line", "constants", "values", "name", "message"} <= told
        assert heading != "At the top" or told == taken - {"line", "constants", "values", "name", "message"}


def test_page_gives_the_messages_that_are_used() -> None:
    shown = re.findall(r"^    (.+)$", section("`[message]`"), flags=re.MULTILINE)
    assert tuple(shown) == DEFAULT_MESSAGES
    assert f"never_locators = {list(NEVER_LOCATORS)}".replace("'", '"') in section("`[message]`")
    told = named(section("`[message]`"))
    assert {f"{{{slot}}}" for slot in SLOTS} <= told
    assert UNRESOLVED in told


def test_page_gives_the_forms_of_times_kinds_and_reasons() -> None:
    assert {f"%{directive}" for directive in DIRECTIVES} == {
        word for word in first_cells(section("Times")) if word.startswith("%")
    }
    assert {CARRY, SKIP} <= named(section("`[[line]]`"))
    own = {"no-rule", "bad-time", "no-date", "bad-encoding"}
    assert first_cells(section("What becomes of each line")) == own <= set(REASONS)


@by_name(RECIPES)
def test_page_says_what_an_example_shows(recipe: Path) -> None:
    """Each key that the table names for an example stands in it."""
    (row,) = re.findall(rf"^\|.*\({FOLDER.name}/{recipe.name}\).*$", PAGE, flags=re.MULTILINE)
    text = recipe.read_text(encoding="utf-8")
    keys = {key.strip('[]"') for key in named(row.rsplit("|", 2)[1])}
    assert keys
    for key in keys:
        assert re.search(rf"\b{key}\b", text), key
    assert f"({FOLDER.name}/{text_of(recipe).name})" in row
    assert tomllib.loads(text)["recipe"] == 1
