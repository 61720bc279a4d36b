"""The page's colours, in light and dark, against the contrasts that WCAG 2.2 asks for."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

import logtool.pages

TEXT_CONTRAST = 4.5  # WCAG 2.2, 1.4.3, level AA; from memory
MARK_CONTRAST = 3.0  # WCAG 2.2, 1.4.11, level AA; from memory
STYLE = (Path(logtool.pages.__file__).parent / "assets" / "map.css").read_text("utf-8")
TEXTS = (
    ("text", "page"), ("text", "box"), ("text", "hover"), ("soft", "page"), ("soft", "box"),
    ("accent-text", "accent"), ("ring-text", "halo"), ("text", "halo"),
    ("grid-text", "sea"), ("grid-text", "land"),
)  # fmt: skip
MARKS = (
    *((mark, "sea") for mark in ("ring", "reach", "chosen", "none-edge", "receiver")),
    *((mark, "land") for mark in ("ring", "reach", "chosen", "none-edge", "receiver")),
    *((mark, "page") for mark in ("field", "accent", "bar", "bar-now")),
    *((mark, "box") for mark in ("field", "accent")),
)

EDGE_LIGHT = re.findall(r"--edge: rgba\((.*?), (.*?), (.*?), (.*?)\)", STYLE)[0]

Colour = tuple[float, float, float]


def colours(theme: str) -> dict[str, Colour]:
    """Return the style sheet's colours, red, green, blue from 0 to 1; the dark ones are its second block."""
    block = re.findall(r":root \{(.*?)\}", STYLE, flags=re.S)[("light", "dark").index(theme)]
    found = {}
    for name, text in re.findall(r"--([a-z-]+): #([0-9a-f]{6});", block):
        red, green, blue = (int(text[i : i + 2], 16) / 255 for i in (0, 2, 4))
        found[name] = (red, green, blue)
    return found


def luminance(colour: Colour) -> float:
    """Return the relative luminance of WCAG 2.2, 0 to 1."""
    red, green, blue = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in colour)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


def contrast(a: Colour, b: Colour) -> float:
    """Return the contrast ratio of WCAG 2.2, 1 to 21."""
    low, high = sorted((luminance(a), luminance(b)))
    return (high + 0.05) / (low + 0.05)


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize(("text", "ground"), TEXTS)
def test_text_can_be_read(theme: str, text: str, ground: str) -> None:
    known = colours(theme)
    assert contrast(known[text], known[ground]) >= TEXT_CONTRAST


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize(("mark", "ground"), MARKS)
def test_marks_can_be_seen(theme: str, mark: str, ground: str) -> None:
    known = colours(theme)
    assert contrast(known[mark], known[ground]) >= MARK_CONTRAST


def test_contrast_of_black_on_white_is_21() -> None:
    assert contrast((0, 0, 0), (1, 1, 1)) == pytest.approx(21.0)
