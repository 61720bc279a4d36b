"""`docs/data-flow.md` shows what the program really has: its six lines are run and every table compared."""

from __future__ import annotations

import re

import pytest

from logtool.pages.columns import NOTHING
from tests.docs import data_flow


@pytest.fixture(scope="module")
def found() -> dict[str, str]:
    return data_flow.blocks()


PAGE_TEXT = data_flow.PAGE.read_text(encoding="utf-8")
SHOWN = dict(re.findall(r"<!-- (\w+) -->\n\n(.*?)\n\n<!-- end -->", PAGE_TEXT, flags=re.DOTALL))


def test_the_log_has_six_lines() -> None:
    assert len(data_flow.LINES) == 6


def test_page_shows_every_block_once(found: dict[str, str]) -> None:
    assert sorted(re.findall(r"<!-- (\w+) -->", PAGE_TEXT)) == sorted([*found, *["end"] * len(found)])


@pytest.mark.parametrize("name", SHOWN)
def test_block_is_what_the_program_has(name: str, found: dict[str, str]) -> None:
    assert SHOWN[name] == found[name], "write it anew with: python -m tests.docs.data_flow"


def test_figures_named_in_the_text_are_those_of_the_tables(found: dict[str, str]) -> None:
    """The sums written out in the page's words."""
    assert f"| `senders_in_30` | {NOTHING} | {2 * (1 - (1 - 30 / 40) ** 1)} |" in found["reach"]
    assert f"| `senders_in_30` | {round(0.84 + 0.6, 3)} |" in found["summary"]
    assert pytest.approx(0.84, abs=1e-12) == 1 - (1 - 30 / 50) ** 2
    assert pytest.approx(0.6, abs=1e-12) == 1 - (1 - 30 / 50) ** 1


def test_every_block_is_there_to_be_compared(found: dict[str, str]) -> None:
    assert set(SHOWN) == set(found)
