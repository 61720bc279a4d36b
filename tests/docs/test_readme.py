"""The README's commands run, its output is the program's, and its example gives what it says."""

from __future__ import annotations

import doctest
import re
import shlex
import struct
import subprocess
import sys
from pathlib import Path

import pytest

from tests.docs.running import ROOT, SAMPLES, TIMEOUT_S, environment, on_terminal

README = ROOT / "README.md"
TEXT = README.read_text(encoding="utf-8")
BLOCKS = re.findall(r"^( *)```(\w+)\n(.*?)^ *```$", TEXT, flags=re.DOTALL | re.MULTILINE)
COMMANDS = [
    line.strip() for _, kind, block in BLOCKS if kind == "bash" for line in block.splitlines() if line.strip()
]
OUTPUTS = [block for _, kind, block in BLOCKS if kind == "text"]
LEFT_OUT = "..."
PICTURE_BYTES = 400_000
PICTURE_SIZE = (1400, 900)
PNG_SIZE_AT = 16  # width and height in the first chunk: PNG specification, W3C, 11.2.2 (from memory)


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with `sample_logs`, `my_logs` without a setup, and `logtool` on the path."""
    place = tmp_path_factory.mktemp("readme")
    (place / "sample_logs").symlink_to(SAMPLES)
    (place / "my_logs").mkdir()
    lines = (SAMPLES / "2026-03-02.log").read_text(encoding="utf-8", errors="replace").splitlines()
    heard = "".join(line + "\n" for line in lines if "\theard\t" in line)
    (place / "my_logs" / "night.log").write_text(heard, encoding="utf-8")
    program = place / "bin" / "logtool"
    program.parent.mkdir()
    program.write_text(f'#!/bin/sh\nexec "{sys.executable}" -m logtool "$@"\n', encoding="utf-8")
    program.chmod(0o755)
    return place


def run(command: str, folder: Path) -> subprocess.CompletedProcess[str]:
    path = f"{folder / 'bin'}:{environment()['PATH']}"
    return subprocess.run(
        ["bash", "-e", "-c", command], cwd=folder, env=environment(PATH=path), stdin=subprocess.DEVNULL,
        capture_output=True, text=True, timeout=TIMEOUT_S,
    )  # fmt: skip


@pytest.mark.parametrize("command", COMMANDS)
def test_command_runs(command: str, folder: Path) -> None:
    """Every command of the bash blocks; those on maps of logs without a setup tell to use --at."""
    done = run(command, folder)
    needs_a_place = command == "logtool map --out my_map.html my_logs"
    if needs_a_place:
        assert "--at" in done.stderr
        done = run(command + " --at IN66lm", folder)
    assert done.returncode == 0, done.stderr
    assert "Traceback" not in done.stderr
    for option in ("--out",):
        words = shlex.split(command)
        if option in words:
            assert (folder / words[words.index(option) + 1]).stat().st_size > 0


def test_output_is_what_the_program_prints() -> None:
    """All lines shown are printed in that order; a line of three points stands for lines left out."""
    sampled = [shlex.split(command)[1:] for command in COMMANDS if "sample_logs" in command]
    tables = [words for words in sampled if words[0] != "map"]
    printed = [line.rstrip() for words in tables for line in on_terminal(*words).splitlines()]
    shown = [line.rstrip() for block in OUTPUTS for line in block.splitlines()]
    assert len(shown) > 20
    at = 0
    for line in shown:
        if line != LEFT_OUT:
            assert line in printed[at:], f"not printed, or not there: {line}"
            at = printed.index(line, at) + 1


def test_lines_next_to_each_other_are_so_in_the_output() -> None:
    """Nothing is left out without three points: the block of `reach` but for its gap."""
    words = next(
        shlex.split(command)[1:] for command in COMMANDS if command.startswith("logtool reach --from")
    )
    printed = "\n".join(line.rstrip() for line in on_terminal(*words).splitlines())
    for part in OUTPUTS[0].strip("\n").split(f"\n{LEFT_OUT}\n"):
        assert part in printed


def test_python_example(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    result = doctest.testfile(str(README), module_relative=False, optionflags=doctest.REPORT_NDIFF)
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
    done = run(f"_LOGTOOL_COMPLETE={shell}_source logtool", folder)
    assert done.returncode == 0
    assert "_LOGTOOL_COMPLETE" in done.stdout


def test_completion_completes(folder: Path) -> None:
    script = 'eval "$(_LOGTOOL_COMPLETE=bash_source logtool)"; COMP_WORDS=(logtool se); COMP_CWORD=1'
    done = run(f'{script}; _logtool_completion logtool; echo "${{COMPREPLY[@]}}"', folder)
    assert done.stdout.split() == ["senders", "sectors"]


def test_picture_is_small_and_of_the_size_told() -> None:
    picture = (ROOT / "docs" / "pictures" / "map.png").read_bytes()
    assert len(picture) < PICTURE_BYTES
    assert struct.unpack_from(">II", picture, PNG_SIZE_AT) == PICTURE_SIZE
