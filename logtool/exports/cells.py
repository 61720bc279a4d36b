"""Cells of CSV files that no spreadsheet takes for a formula."""

from __future__ import annotations

import re
from typing import Any

_FORMULA = re.compile(
    r"'*[=+\-@\t\r]"
)  # how cells begin that spreadsheets may run; common practice, no source
_MADE_SAFE = re.compile(r"'+[=+\-@\t\r]")


def safe_cell(text: str) -> str:
    """Return a text as a cell that a spreadsheet shows and never runs: where it could, with `'` before it.

    A text that looks as if it had been made safe gets one more, so that `plain_text` always leads back.

    >>> safe_cell("=1+1"), safe_cell("CQ"), safe_cell("'=1+1")
    ("'=1+1", 'CQ', "''=1+1")
    """
    return f"'{text}" if _FORMULA.match(text) else text


def plain_text(cell: str) -> str:
    """Return the text that `safe_cell` made a cell of.

    >>> plain_text("'=1+1"), plain_text("'tis")
    ('=1+1', "'tis")
    """
    return cell[1:] if _MADE_SAFE.match(cell) else cell


def cell_of(value: Any) -> Any:
    """Return a value as a cell: texts made safe, numbers as they are, missing ones empty.

    >>> cell_of(-12.5), cell_of(None), cell_of(True)
    (-12.5, '', 'true')
    """
    if isinstance(value, str):
        return safe_cell(value)
    if value is None:
        return ""
    return str(value).lower() if isinstance(value, bool) else value
