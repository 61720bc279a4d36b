"""What a recipe makes of a file's first lines, one by one: for `convert --try` and `--suggest`."""

from __future__ import annotations

from itertools import islice
from pathlib import Path
from typing import NamedTuple

from logtool.records.judge import Record, judge
from logtool.records.marks import MARK, PASSED_OVER
from logtool.records.recipes.blocks import blocks_of
from logtool.records.recipes.converter import Converter
from logtool.records.recipes.prepared import prepare
from logtool.records.recipes.reading import joined
from logtool.records.recipes.recipe import Recipe
from logtool.records.scan import LEAST_MEMORY_MB
from logtool.records.sources import Source, Text


class Tried(NamedTuple):
    """A line of a text and what a recipe makes of it.

    Attributes
    ----------
    number : int
        From 1.
    line : str
        As it stands, without its ending.
    rule : str
        The name of the rule that holds for it; empty for a blank line and one that no rule matches.
    became : str
        The record, as a line of the layout; empty where it is none.
    reason : str
        Why it was set aside; empty where it was not.
    """

    number: int
    line: str
    rule: str
    became: str
    reason: str


def try_lines(recipe: Recipe, source: Source, limit: int, *, day_us: int | None = None) -> list[Tried]:
    """Return what a recipe makes of the first lines of a file, up to a limit; nothing is refused.

    Raises
    ------
    FileError
        Where the file cannot be read.
    RecipeError
        Where the recipe does not fit the file's name or header.
    """
    from logtool.records.engine import connect

    block = b""
    for piece in blocks_of(Text(source, limit=None), recipe.encoding, joined_bytes=0):
        block += piece
        if block.count(b"\n") >= limit:
            break
    kept = list(islice(block.split(b"\n"), limit))
    if block.count(b"\n") < limit and kept and not kept[-1]:
        kept.pop()
    if not kept:
        return []
    connection = connect(Path("."), None, LEAST_MEMORY_MB)
    try:
        converter = Converter(connection, recipe, source.name, day_us)
        made = converter.make(prepare(b"".join(line + b"\n" for line in kept), recipe.encoding))
        names = [converter.rule_name(int(code)) for code in made.rules]
    finally:
        connection.close()
    return [
        _tried(number, line, rule, out)
        for number, (line, rule, out) in enumerate(
            zip(kept, names, joined(made).split(b"\n"), strict=False), 1
        )
    ]


def _tried(number: int, line: bytes, rule: str, out: bytes) -> Tried:
    shown = line.removesuffix(b"\r").decode(errors="backslashreplace")
    became = reason = ""
    if out.startswith(MARK.encode()):
        reason = out.decode().removeprefix(MARK)
    elif out and not out.startswith(PASSED_OVER.encode()):
        judged = judge(out)
        became, reason = (out.decode(), "") if isinstance(judged, Record) else ("", judged)
    return Tried(number, shown, rule, became, reason)
