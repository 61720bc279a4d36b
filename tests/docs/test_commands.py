"""`docs/commands.md` is what the commands say of themselves, and their JSON has the keys that it names."""

from __future__ import annotations

import importlib.util
import json
import re
from types import ModuleType

import pytest

from logtool.cli.main import COMMANDS
from tests.docs.running import ROOT, logtool


@pytest.fixture(scope="module")
def writer() -> ModuleType:
    path = ROOT / "scripts" / "write_command_docs.py"
    spec = importlib.util.spec_from_file_location("write_command_docs", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def test_page_is_written_anew(writer: ModuleType) -> None:
    page = writer.PAGE.read_text(encoding="utf-8")
    assert page == writer.page(), "write it anew with: python scripts/write_command_docs.py"
    assert re.findall(r"^## (.+)$", page, flags=re.MULTILINE) == ["Exit statuses", "JSON", *COMMANDS]


def test_every_key_has_a_meaning_and_no_other(writer: ModuleType) -> None:
    """A key that a command no longer gives must leave the glossary too."""
    for name in writer.MEANINGS:
        command, _, part = name.partition(" ")
        if command == "lines":
            continue
        rows = writer.told(command)[part or "rows"]
        assert set(rows[0]) == set(writer.MEANINGS[name])
        assert all(list(row) == list(rows[0]) for row in rows)


def test_frame_has_the_keys_named(writer: ModuleType) -> None:
    told = json.loads(logtool("reach", "sample_logs", "--json", "--band", "1m").stdout)
    told |= json.loads(logtool("check", "sample_logs", "--json").stdout)
    assert set(told) == set(writer.FRAME_KEYS)
    assert all([*ledger, "rules"] == list(writer.LEDGER_KEYS) for ledger in told["inputs"])
    by_recipe = ("check", "docs/recipes/blanks.txt", "--recipe", "docs/recipes/blanks.toml", "--json")
    (ledger,) = json.loads(logtool(*by_recipe).stdout)["inputs"]
    assert list(ledger) == list(writer.LEDGER_KEYS)
    assert ledger["lines"] == ledger["blank"] + sum(ledger["rules"].values())
    for ledger in told["inputs"]:
        parts = ("blank", "comments", "records", "repeated", "set_aside")
        assert ledger["lines"] == sum(ledger[part] for part in parts)


def test_summary_has_the_keys_of_a_row_and_two(writer: ModuleType) -> None:
    told = json.loads(logtool("reach", "sample_logs", "--json").stdout)
    assert list(told["summary"]) == ["from", "to", *told["rows"][0]]


def test_help_in_the_shell_is_the_help_of_the_page() -> None:
    page = " ".join((ROOT / "docs" / "commands.md").read_text(encoding="utf-8").split())
    for name in COMMANDS:
        assert " ".join(logtool(name, "--help").stdout.split()) in page
