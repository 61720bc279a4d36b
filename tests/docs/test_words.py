"""No call sign that is not invented (they begin with Q), and no path of anybody's machine, in any file."""

from __future__ import annotations

import gzip
import os
import re
from collections.abc import Iterator
from pathlib import Path

import pytest

from logtool.records.layout import LOCATOR_FORM
from tests.docs.running import ROOT

LEFT_OUT = {
    ".git", ".venv", ".hypothesis", ".mypy_cache", ".ruff_cache", ".pytest_cache", "__pycache__", "demo",
    "bench", "build", "dist",
}  # fmt: skip
ENDINGS = {".py", ".md", ".ipynb", ".toml", ".txt", ".js", ".css", ".html", ".log", ".gz", ""}
# A prefix of one or two letters, or of a digit and a letter; one digit; one to four letters.
CALL = re.compile(r"(?<![\w.#%\\-])(?:[A-Z]{1,2}|[0-9][A-Z])[0-9][A-Z]{1,4}(?![\w-])")
NO_CALLS = {"W3C"}  # words of that form that are none
MACHINE_PATH = re.compile(r"(?<![\w.])/(?:work|root|home/\w\w+|tmp/\w)/")
REGISTRY = re.compile(r"pythonhosted|pypi\.org|npmjs|proxy\.golang")


def files() -> Iterator[Path]:
    for base, folders, names in os.walk(ROOT):
        folders[:] = sorted(
            name for name in folders if name not in LEFT_OUT and not name.endswith(".egg-info")
        )
        for name in sorted(names):
            path = Path(base, name)
            if path.suffix in ENDINGS and not path.is_symlink():
                yield path


def text_of(path: Path) -> str:
    stored = path.read_bytes()
    return (gzip.decompress(stored) if path.suffix == ".gz" else stored).decode(errors="replace")


def call_signs(text: str) -> list[str]:
    """The words of a text that look like a call sign which does not begin with Q."""
    return [
        word
        for word in CALL.findall(text)
        if not word.startswith("Q") and word not in NO_CALLS and not re.fullmatch(LOCATOR_FORM, word)
    ]


@pytest.mark.parametrize("word", ["X7" + "ABC", "XX9" + "X", "3X7" + "AB", "XX1" + "ABCD"])
def test_a_call_sign_is_seen(word: str) -> None:
    assert call_signs(f"CQ DE {word} JN58") == [word]


@pytest.mark.parametrize("word", ["Q1ABC", "Q0ABC/P", "JN58TD", "KB15", "U0085", "0x1F4FB", "SHA256", "h2o"])
def test_other_words_are_none(word: str) -> None:
    assert call_signs(f"CQ DE {word} JN58") == []


def test_call_signs_are_invented() -> None:
    found = {str(path.relative_to(ROOT)): calls for path in files() if (calls := call_signs(text_of(path)))}
    assert found == {}


def test_no_paths_of_a_machine_and_no_registry() -> None:
    found = [
        f"{path.relative_to(ROOT)}: {match[0]}"
        for path in files()
        if path != Path(__file__).resolve()
        for pattern in (MACHINE_PATH, REGISTRY)
        for match in pattern.finditer(text_of(path))
    ]
    assert found == []
