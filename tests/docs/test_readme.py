"""The README's commands run, its output is the program's, and its example gives what it says."""

from __future__ import annotations

import doctest
import re
import shlex
import struct
from pathlib import Path

import pytest

from tests.docs.blocks import blocks_of, filled_in, missing_part, put_program, run_in
from tests.docs.running import ROOT, SAMPLES, on_terminal

TEXT = (ROOT / "README.md").read_text(encoding="utf-8")
BLOCKS = blocks_of(TEXT)
COMMANDS = [command for block in BLOCKS for command in block.commands]
DECODED = ROOT / "docs" / "tutorial" / "night.txt"
FILLED_IN = 'receiver = "hut"\ndial_hz = 7041500\nplace = "IN66lm"\nantenna = "wire"\n'
PICTURE_BYTES = 400_000
PICTURE_SIZE = (1400, 900)
PNG_SIZE_AT = 16  # width and height in the first chunk: PNG specification, W3C, 11.2.2 (from memory)


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with `sample_logs`, `my_logs` without a setup, `my_text.txt`, and `logtool` on the path."""
    place = tmp_path_factory.mktemp("readme")
    (place / "sample_logs").symlink_to(SAMPLES)
    (place / "my_logs").mkdir()
    lines = (SAMPLES / "2026-03-02.log").read_text(encoding="utf-8", errors="replace").splitlines()
    heard = "".join(line + "\n" for line in lines if "\theard\t" in line)
    (place / "my_logs" / "night.log").write_text(heard, encoding="utf-8")
    (place / "my_text.txt").symlink_to(DECODED)
    put_program(place)
    suggest(place)
    return place


def suggest(folder: Path) -> str:
    """Write a suggested recipe to `my.toml` and fill in what no text says; return what was told."""
    done = run_in(folder, "logtool convert --suggest my_text.txt --out my.toml")
    recipe = folder / "my.toml"
    recipe.write_text(filled_in(recipe.read_text(encoding="utf-8"), FILLED_IN), encoding="utf-8")
    return done.stderr


@pytest.mark.parametrize("command", COMMANDS)
def test_command_runs(command: str, folder: Path) -> None:
    """Every command of the bash blocks; those on maps of logs without a setup tell to use --at."""
    if "--suggest" in command:
        assert "recipe written to my.toml" in suggest(folder)
        return
    done = run_in(folder, command)
    needs_a_place = command == "logtool map --out my_map.html my_logs"
    if needs_a_place:
        assert "--at" in done.stderr
        done = run_in(folder, command + " --at IN66lm")
    assert done.returncode == 0, done.stderr
    assert "Traceback" not in done.stderr
    for option in ("--out",):
        words = shlex.split(command)
        if option in words:
            assert (folder / words[words.index(option) + 1]).stat().st_size > 0


def test_the_recipe_command_is_the_one_that_is_run() -> None:
    assert [command for command in COMMANDS if "--suggest" in command] == [
        "logtool convert --suggest my_text.txt --out my.toml"
    ]


def test_output_is_what_the_program_prints() -> None:
    """Each block shows, in order, what the commands before it print; three points stand for what is left out."""
    commands: list[str] = []
    shown = 0
    for block in BLOCKS:
        commands += [command for command in block.commands if "sample_logs" in command]
        if block.kind == "text":
            tables = [words for command in commands if (words := shlex.split(command)[1:])[0] != "map"]
            assert missing_part(block.text, "".join(on_terminal(*words) for words in tables)) is None
            shown += block.text.count("\n")
            commands = []
    assert shown > 20


def test_python_example(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    result = doctest.testfile(
        str(ROOT / "README.md"), module_relative=False, optionflags=doctest.REPORT_NDIFF
    )
    assert result.attempted >= 4
    assert result.failed == 0


def test_make_targets_exist() -> None:
    makefile = (ROOT / "Makefile").read_text(encoding="utf-8")
    for document in ("README.md", "DEVELOPERS.md"):
        targets = re.findall(r"\bmake ([a-z]+)\b", (ROOT / document).read_text(encoding="utf-8"))
        assert targets
        for target in targets:
            if target not in ("of", "places"):
                assert re.search(rf"^{target}:", makefile, flags=re.MULTILINE), f"{document}: make {target}"


@pytest.mark.parametrize("shell", ["bash", "zsh", "fish"])
def test_completion_script(shell: str, folder: Path) -> None:
    done = run_in(folder, f"_LOGTOOL_COMPLETE={shell}_source logtool")
    assert done.returncode == 0
    assert "_LOGTOOL_COMPLETE" in done.stdout


def test_completion_completes(folder: Path) -> None:
    script = 'eval "$(_LOGTOOL_COMPLETE=bash_source logtool)"; COMP_WORDS=(logtool se); COMP_CWORD=1'
    done = run_in(folder, f'{script}; _logtool_completion logtool; echo "${{COMPREPLY[@]}}"')
    assert done.stdout.split() == ["senders", "sectors"]


def test_picture_is_small_and_of_the_size_told() -> None:
    picture = (ROOT / "docs" / "pictures" / "map.png").read_bytes()
    assert len(picture) < PICTURE_BYTES
    assert struct.unpack_from(">II", picture, PNG_SIZE_AT) == PICTURE_SIZE
