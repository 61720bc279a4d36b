"""Cells that a spreadsheet does not run, in exports and in the tables' --csv."""

from __future__ import annotations

import csv
import io
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logtool.exports.cells import cell_of, plain_text, safe_cell
from tests.cli.calling import HEADER, call
from tests.exports.logs import export, write_log

RUN = "=+-@\t\r"  # how a formula may begin; common practice, no source


@given(st.text() | st.text("'=+-@\t\r a1\""))
def test_no_cell_begins_like_a_formula_and_all_lead_back(text: str) -> None:
    cell = safe_cell(text)
    assert cell[:1] not in RUN or not cell
    assert plain_text(cell) == text
    assert cell == text or cell == f"'{text}"
    if text.lstrip("'")[:1] not in RUN or not text.lstrip("'"):
        assert cell == text


@given(st.lists(st.lists(st.text(), min_size=2, max_size=3), max_size=3))
def test_cells_survive_csv(rows: list[list[str]]) -> None:
    out = io.StringIO(newline="")
    csv.writer(out, lineterminator="\r\n").writerows([[cell_of(text) for text in row] for row in rows])
    found = list(csv.reader(io.StringIO(out.getvalue(), newline="")))
    assert [[plain_text(cell) for cell in row] for row in found] == rows


@pytest.mark.parametrize(
    ("value", "cell"), [(-12.5, -12.5), (7074000, 7074000), (None, ""), (False, "false")]
)
def test_numbers_are_as_they_are(value: object, cell: object) -> None:
    assert cell_of(value) == cell


def test_export_has_safe_cells(tmp_path: Path) -> None:
    log = write_log(tmp_path / "all.log")
    rows = list(csv.DictReader(io.StringIO(export("csv", log).decode(), newline="")))
    assert {row["text"] for row in rows} >= {'\'=1+1,"x"', "'@home"}
    assert {row["sender"] for row in rows} >= {"'-Q1", "Q1ABC"}
    assert {row["mode"] for row in rows} >= {"'+K8"}
    assert {row["snr_db"] for row in rows} >= {"-12.0"}


def test_tables_have_safe_cells(tmp_path: Path) -> None:
    log = tmp_path / "a.log"
    log.write_text(HEADER + "2026-03-01T22:00:00Z\theard\thut\t7041500\t\t-3\t\t+K\t-Q1\t\t\t\t=1+1\t\n=2\n")
    (row,) = csv.DictReader(io.StringIO(call("lines", "--csv", log).stdout))
    assert (row["sender"], row["mode"], row["text"], row["snr_db"]) == ("'-Q1", "'+K", "'=1+1", "-3.0")
    (row,) = csv.DictReader(io.StringIO(call("check", "--csv", log).stdout))
    assert row["shown"] == "'=2"
