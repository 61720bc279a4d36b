"""Write a log of the layout as another program's text, and the recipe that reads it, for the benchmarks.

Run `python -m tests.benchmarks.make_foreign LOG TEXT RECIPE`. The records are the same by both ways.
"""

from __future__ import annotations

import sys
from pathlib import Path

RECIPE = r"""recipe = 1
slot_s = 15

[constants]
receiver = "hut"
dial_khz = 7041.5
mode = "KB15"
place = "JO74xa"
antenna = "wire"

[message]

[[line]]
kind = "carry"
pattern = 'Day (?P<date>\S+)'
date_form = "%Y-%m-%d"

[[line]]
kind = "heard"
pattern = '(?P<time>\d{6}) +(?P<snr_db>[+-]?\d+) +(?P<late_s>-?[\d.]+) +(?P<audio_hz>\d+) +(?P<text>.*)'
time_form = "%H%M%S"
"""


def make_foreign(log: Path, text: Path, recipe: Path) -> None:
    """Write the receptions of a log that `make_log` made as times of day with a line for each day."""
    day = ""
    with log.open(encoding="utf-8") as lines, text.open("w", encoding="utf-8", newline="") as file:
        for line in lines:
            fields = line.split("\t")
            if len(fields) < 2 or fields[1] != "heard":
                continue
            if fields[0][:10] != day:
                day = fields[0][:10]
                file.write(f"Day {day}\n")
            time = fields[0][11:19].replace(":", "")
            file.write(f"{time} {fields[5]:>3} {fields[6]:>4} {fields[4]:>4}  {fields[12]}\n")
    recipe.write_text(RECIPE, encoding="utf-8")


if __name__ == "__main__":
    make_foreign(*map(Path, sys.argv[1:4]))
