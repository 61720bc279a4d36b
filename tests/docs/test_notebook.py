"""The cells of `docs/week.ipynb` run as a user's and show what is stored with them."""

from __future__ import annotations

import re
import shutil
from collections.abc import Iterator
from typing import Any

import pytest

from tests.docs import notebook
from tests.docs.running import ROOT, SAMPLES, logtool

CELLS = 10
STORED = notebook.code_cells(notebook.notebook())


@pytest.fixture(scope="module")
def ran() -> Iterator[tuple[list[str], dict[str, Any]]]:
    shown, names = notebook.run()
    yield shown, names
    shutil.rmtree(names["map_file"].parent)


@pytest.fixture
def names(ran: tuple[list[str], dict[str, Any]]) -> dict[str, Any]:
    """The names that the cells leave."""
    return ran[1]


def test_there_are_ten_cells() -> None:
    assert len(STORED) == CELLS
    assert [cell["execution_count"] for cell in STORED] == list(range(1, CELLS + 1))


@pytest.mark.parametrize("number", range(CELLS))
def test_cell_shows_what_is_stored(number: int, ran: tuple[list[str], dict[str, Any]]) -> None:
    assert ran[0][number], "a cell that shows nothing"
    assert ran[0][number] == notebook.stored_output(STORED[number]), (
        "write it anew with: python -m tests.docs.notebook"
    )


def test_notebook_is_of_the_format() -> None:
    """Notebook format 4.5: nbformat's own description (from memory)."""
    stored = notebook.notebook()
    assert (stored["nbformat"], stored["nbformat_minor"]) == (4, 5)
    names = [cell["id"] for cell in stored["cells"]]
    assert len(set(names)) == len(names)
    assert all(re.fullmatch(r"[a-zA-Z0-9_-]{1,64}", name) for name in names)
    for cell in stored["cells"]:
        wanted = {"cell_type", "id", "metadata", "source"}
        assert set(cell) == wanted | (
            {"execution_count", "outputs"} if cell["cell_type"] == "code" else set()
        )


def test_links_lead_somewhere() -> None:
    words = "".join("".join(cell["source"]) for cell in notebook.notebook()["cells"])
    links = re.findall(r"\]\(([^)]+)\)", words)
    assert links
    assert all((ROOT / "docs" / link).is_file() for link in links)


def test_frames_agree_with_each_other(names: dict[str, Any]) -> None:
    """Sums that come about in several ways: the ledger, the records, the receptions, the nights."""
    assert names["ledger"].records.sum() == len(names["records"]) == names["table"].num_rows
    heard = (names["records"].kind == "heard").sum()
    assert heard == names["heard"].num_rows == len(names["receptions"]) == names["nights"].receptions.sum()
    assert (names["far"].distance_km > 5000).all()
    assert names["hours"].sum() > 0


def test_nights_are_what_the_command_says(names: dict[str, Any]) -> None:
    """The first night of the wire, as `logtool nights` prints it in CSV."""
    told = logtool("nights", str(SAMPLES), "--antenna", "wire", "--night", "2026-03-02", "--csv").stdout
    night = dict(zip(*(line.split(",") for line in told.splitlines()), strict=True))
    nights = names["nights"]
    (found,) = nights[(nights.night == "2026-03-02") & (nights.antenna == "wire")].itertuples()
    assert str(found.receptions) == night["receptions"]
    assert str(round(found.median_km, 3)) == night["median_km"]


def test_the_map_is_written_and_the_logs_closed(names: dict[str, Any]) -> None:
    page = names["map_file"].read_text(encoding="utf-8")
    assert page.startswith("<!DOCTYPE html>")
    assert "The first night" in page
    assert names["logs"]._connection is None
