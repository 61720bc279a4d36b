"""What the map's browser tests do and ask: open a map, move its slider, read what it has drawn."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from logtool.pages.map_data import MapData
from logtool.pages.map_page import map_html
from tests.browser import Page

SLIDE = """((position) => {
  const slider = document.getElementById("hour-slider");
  slider.value = position;
  slider.dispatchEvent(new Event("input", { bubbles: true }));
})"""
CHOOSE = """((key, value) => {
  const select = document.querySelector(`[data-choice=${key}]`);
  select.value = value;
  select.dispatchEvent(new Event("change", { bubbles: true }));
})"""
CIRCLE = """((name) => {
  const { map, layer } = logtoolMap.page, place = map.getContainer(), box = place.getBoundingClientRect();
  const one = layer.scene.circles.find((circle) => circle.name === name);
  const at = map.latLngToContainerPoint([one.lat, one.lon]);
  return [box.left + place.clientLeft + at.x, box.top + place.clientTop + at.y];
})"""
PIXELS = """((name) => {
  const from = logtoolMap.page.layer.canvas, copy = document.createElement("canvas");
  copy.width = from.width;
  copy.height = from.height;
  const ctx = copy.getContext("2d", { willReadFrequently: true });
  ctx.fillStyle = logtoolMap.page.ink[name];
  ctx.fillRect(0, 0, 1, 1);
  const wanted = ctx.getImageData(0, 0, 1, 1).data;
  ctx.drawImage(from, 0, 0);
  const data = ctx.getImageData(0, 0, copy.width, copy.height).data;
  let count = 0;
  for (let i = 0; i < data.length; i += 4) {
    count += data[i] === wanted[0] && data[i + 1] === wanted[1] && data[i + 2] === wanted[2];
  }
  return count;
})"""


def call(page: Page, function: str, *values: Any) -> Any:
    """Return what a JavaScript function gives for these values."""
    return page.evaluate(f"{function}({', '.join(json.dumps(value) for value in values)})")


def open_map(page: Page, folder: Path, data: MapData, **window: Any) -> None:
    """Write the map of this data and open it; the window is 1400 by 900 px unless told otherwise."""
    path = folder / "map.html"
    path.write_text(map_html(data), "utf-8")
    page.open(path, **window)


def drawn(page: Page) -> str | None:
    """Return the number of senders that the page says it has drawn."""
    answer: str | None = page.evaluate("document.documentElement.getAttribute('data-drawn-senders')")
    return answer


def text(page: Page, name: str) -> str:
    """Return the text of the element with this id."""
    return str(page.evaluate(f"document.getElementById({name!r}).textContent"))


def slide(page: Page, position: int) -> None:
    """Move the slider of hours, as a hand would."""
    call(page, SLIDE, position)


def choose(page: Page, key: str, value: str) -> None:
    """Choose in one of the selects."""
    call(page, CHOOSE, key, value)


def toggle(page: Page, layer: str) -> None:
    """Switch one of the drawn layers on or off."""
    page.evaluate(f"document.querySelector('[data-layer={layer}]').click()")


def select(page: Page, sender: int) -> None:
    """Choose a sender by its index."""
    page.evaluate(f"logtoolMap.page.select(logtoolMap.page.model.senders[{sender}])")


def chosen(page: Page) -> str | None:
    """Return the name of the chosen sender that the panel shows."""
    answer: str | None = page.evaluate("document.querySelector('#sender h2')?.textContent ?? null")
    return answer


def circle(page: Page, name: str) -> tuple[float, float]:
    """Return where in the window a sender's circle is. [px]"""
    x, y = call(page, CIRCLE, name)
    return x, y


def pixels(page: Page, name: str) -> int:
    """Return how many pixels of the map's canvas have exactly the style sheet's colour of this name."""
    return int(call(page, PIXELS, name))
