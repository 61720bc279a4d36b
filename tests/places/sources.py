"""Outside values from tests/reference, and their forms."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

REFERENCE = Path(__file__).parent.parent / "reference"


def read(name: str) -> dict[str, Any]:
    """The whole of one file."""
    return tomllib.loads((REFERENCE / name).read_text(encoding="utf-8"))


def table(part: dict[str, Any]) -> list[dict[str, Any]]:
    """The rows of a part that gives its columns once."""
    return [dict(zip(part["columns"], row, strict=True)) for row in part["rows"]]


def degrees(dms: str) -> float:
    """Degrees from 'd m s'; the sign of the degrees counts for all, also in '-0 59 53.8'."""
    whole, minutes, seconds = dms.split()
    size = abs(int(whole)) + int(minutes) / 60 + float(seconds) / 3600
    return -size if whole.startswith("-") else size


def turned(a_deg: float, b_deg: float) -> float:
    """The angle from b to a, in [-180, 180)."""
    return (a_deg - b_deg + 180) % 360 - 180
