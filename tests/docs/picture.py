"""Make the README's picture of the map: `python -m tests.docs.picture`.

It needs Chromium, and the package `pillow` to make the file small.
"""

from __future__ import annotations

import tempfile
from pathlib import Path

from logtool import open_logs
from logtool.pages.map import map_text
from logtool.tables.choice import choose
from tests.browser import browser_page

ROOT = Path(__file__).parents[2]
PICTURE = ROOT / "docs" / "pictures" / "map.png"
WIDTH_PX, HEIGHT_PX = 1400, 900
HOUR = "2026-03-03 02:00"  # far into the night: the senders over the ocean are heard
COLOURS = 256
SLIDE = f"""(() => {{
  const page = logtoolMap.page, slider = document.getElementById("hour-slider");
  const wanted = Date.parse("{HOUR.replace(" ", "T")}Z") / 1000;
  slider.value = page.model.hours.findIndex((hour) => hour.start === wanted) + 1;
  slider.dispatchEvent(new Event("input", {{ bubbles: true }}));
}})()"""
CHOOSE = "logtoolMap.page.select(logtoolMap.page.model.senders.find((sender) => sender.name === 'Q8BOI'))"


def main() -> None:
    """Draw the sample's map for one hour, choose a sender, and keep what the window shows."""
    from PIL import Image

    with tempfile.TemporaryDirectory() as folder:
        page_file, shot = Path(folder) / "map.html", Path(folder) / "map.png"
        with open_logs(ROOT / "sample_logs") as logs:
            page_file.write_text(map_text(logs, choose()), encoding="utf-8")
        with browser_page() as page:
            page.open(page_file, width=WIDTH_PX, height=HEIGHT_PX)
            page.wait_for("document.documentElement.hasAttribute('data-drawn-senders')")
            page.evaluate(SLIDE)
            page.evaluate(CHOOSE)
            page.evaluate("new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)))")
            page.screenshot(shot)
        few = Image.open(shot).convert("RGB").quantize(COLOURS, dither=Image.Dither.NONE)
        few.save(PICTURE, optimize=True)


if __name__ == "__main__":
    main()
