"""Read a made log by the recipe suggested for it, and compare each field with the truth."""

from __future__ import annotations

import re
from collections import Counter
from dataclasses import dataclass, field
from datetime import UTC, datetime
from pathlib import Path

from logtool.records.layout import COLUMN_NAMES
from logtool.records.recipes.loading import recipe_of
from logtool.records.recipes.trying import try_lines
from logtool.records.sources import Source
from logtool.suggest import Suggestion, suggest
from tests.suggest.shape import FIELDS, Shape

DAY_US = 86_400_000_000


@dataclass
class Outcome:
    """How a suggestion fared.

    Attributes
    ----------
    wrong : Counter
        How often each field differs from the truth; `lines`: messages that were not read; `extra`: lines read as
        messages that are none.
    silent : set of str
        Those of them that no doubt names.
    """

    suggestion: Suggestion
    recipe: str
    wrong: Counter[str] = field(default_factory=Counter)
    silent: set[str] = field(default_factory=set)
    examples: dict[str, str] = field(default_factory=dict)
    watches: int = 0

    @property
    def right(self) -> bool:
        """Whether every field of every message was read as it was."""
        return not self.wrong


def filled_in(recipe: str, fill: dict[str, str]) -> str:
    """Return the recipe with the lines that it asks the user to fill in, and no others, filled in."""
    known = {"receiver": '"hut"', **fill}

    def line(match: re.Match[str]) -> str:
        return f"{match[1]} = {known[match[1]]}" if match[1] in known else match[0]

    filled = re.sub(r"(?m)^#(\w+) = .*FILL IN.*$", line, recipe)
    return re.sub(r"(?m)^#dial_hz = .*FILL IN.*$", "dial_hz = 1", filled)  # the user knows of none: all wrong


def outcome_of(shape: Shape, folder: Path) -> Outcome:
    """Return what the suggested recipe reads, held against the truth."""
    path = folder / shape.file
    path.write_bytes(shape.stored)
    suggestion = suggest(path)
    outcome = Outcome(suggestion, filled_in(suggestion.recipe, shape.fill))
    if not suggestion.trial:
        if shape.truth:
            outcome.wrong["structure"] += 1
    else:
        recipe_of(suggestion.trial, "trial")
        recipe = recipe_of(outcome.recipe, "suggested")
        day_us = None if shape.day is None else (shape.day.toordinal() - 719_163) * DAY_US
        tried = try_lines(recipe, Source(str(path), path), 1_000_000, day_us=day_us)
        for one in tried:
            record = dict(zip(COLUMN_NAMES, one.became.split("\t"), strict=False))
            truth = shape.truth.get(one.number)
            outcome.watches += record.get("kind") == "watch"
            if truth is None:
                if record.get("kind") == "heard":
                    outcome.wrong["extra"] += 1
                    outcome.examples.setdefault("extra", one.line)
            elif record.get("kind") != "heard":
                outcome.wrong["lines"] += 1
                outcome.examples.setdefault("lines", f"{one.line!r} {one.rule} {one.reason}")
            else:
                for name in FIELDS:
                    if not _same(name, record[name], truth.get(name)):
                        outcome.wrong[name] += 1
                        outcome.examples.setdefault(
                            name, f"{one.line!r}: {record[name]!r}, not {truth.get(name)}"
                        )
        for number in set(shape.truth) - {one.number for one in tried}:
            outcome.wrong["lines"] += 1
            outcome.examples.setdefault("lines", f"line {number} was not reached")
    named = {word for doubt in suggestion.doubts for word in doubt.split(":")[0].split(", ")}
    outcome.silent = {
        name for name in outcome.wrong if name not in named and not (name == "lines" and "time" in named)
    }
    return outcome


def _same(name: str, read: str, truth: object) -> bool:
    if truth is None or truth == "":
        return read == ""
    if read == "":
        return False
    if name == "time":
        assert isinstance(truth, datetime)
        return abs((datetime.fromisoformat(read) - truth.astimezone(UTC)).total_seconds()) < 1e-3
    if isinstance(truth, int | float):
        return abs(float(read) - truth) < 1e-6
    return read.upper() == str(truth).upper()
