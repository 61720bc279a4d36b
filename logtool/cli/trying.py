"""`logtool convert --try` and `--suggest`: what a recipe makes of a text, and a first recipe for it."""

from __future__ import annotations

import os
import sys
from contextlib import nullcontext
from typing import TYPE_CHECKING, Any

import click

from logtool.errors import UsageError

if TYPE_CHECKING:
    from pathlib import Path

    from logtool.records.recipes.recipe import Recipe
    from logtool.records.sources import Source

STAND_IN_DATE = "2000-01-01"
SUGGESTED_LINES = 10  # shown of a text with a suggested recipe


def run_try(words: dict[str, Any]) -> int:
    """Print line by line what the recipe of a call makes of its files' first lines; return the exit status."""
    from logtool.cli.run import EXIT_NO_RECORD
    from logtool.pages.tried import tried_text
    from logtool.records.opening import day_us_of, recipe_for
    from logtool.records.recipes.trying import try_lines
    from logtool.records.writer import whole_file

    recipe = recipe_for(words["recipe"])
    if recipe is None:
        raise UsageError("--try shows what a recipe does: give --recipe FILE; --suggest writes a first one")
    day_us = day_us_of(words["date"], with_recipe=recipe)
    any_record = False
    sources = _sources(words)
    _spare(words["out"], words["recipe"], *[source.path for source in sources])
    with nullcontext(sys.stdout) if words["out"] is None else whole_file(words["out"]) as out:
        for source in sources:
            tried = try_lines(recipe, source, words["lines"], day_us=day_us)
            click.echo(f"{source.name}, its first {len(tried)} lines by {recipe.name}\n", file=out)
            click.echo(tried_text(tried), file=out)
            any_record |= any(one.became for one in tried)
    return 0 if any_record else EXIT_NO_RECORD


def run_suggest(words: dict[str, Any]) -> int:
    """Write a first recipe for a text, and tell what is in doubt and how its lines are read; return the status."""
    from logtool.cli.run import EXIT_NO_RECORD
    from logtool.records.recipes.loading import recipe_of
    from logtool.records.writer import whole_file
    from logtool.suggest.suggestion import suggest

    if words["recipe"] is not None:
        raise UsageError("--suggest writes a recipe and --recipe gives one; leave one of them away")
    sources = _sources(words)
    if len(sources) != 1 or sources[0].path is None:
        raise UsageError("--suggest looks at one file; name one, and not standard input")
    _spare(words["out"], sources[0].path)
    suggestion = suggest(sources[0].path)
    if words["out"] is None:
        sys.stdout.write(suggestion.recipe)
        sys.stdout.flush()
    else:
        with whole_file(words["out"]) as file:
            file.write(suggestion.recipe)
        click.echo(f"recipe written to {words['out']}", err=True)
    if not words["quiet"]:
        for doubt in suggestion.doubts:
            click.echo(f"logtool: to decide: {doubt}", err=True)
    if not suggestion.trial:
        return EXIT_NO_RECORD
    if not words["quiet"]:
        _show_as_read(recipe_of(suggestion.trial, "the suggested recipe"), sources[0])
    return 0


def _spare(out: str | None, *inputs: str | Path | None) -> None:
    """Stop where the output would take the place of an input."""
    if out is None:
        return
    if os.path.realpath(out) in {os.path.realpath(path) for path in inputs if path is not None}:
        raise UsageError(f"{out} is what is read here; name another file to write to")


def _show_as_read(recipe: Recipe, source: Source) -> None:
    """Show how a text's first lines would be read, with a stand-in for a date that it does not give."""
    from logtool.pages.tried import tried_text
    from logtool.records.opening import day_us_of
    from logtool.records.recipes.recipe import NO_DATE
    from logtool.records.recipes.trying import try_lines

    tried = try_lines(recipe, source, SUGGESTED_LINES)
    stand_ins = "stand-ins for what is to be filled in"
    if any(one.reason == NO_DATE for one in tried):
        tried = try_lines(
            recipe, source, SUGGESTED_LINES, day_us=day_us_of(STAND_IN_DATE, with_recipe=recipe)
        )
        stand_ins += f" and {STAND_IN_DATE} for the date (--date)"
    click.echo(f"\nits first {len(tried)} lines as they would be read, with {stand_ins}:\n", err=True)
    click.echo(tried_text(tried), err=True, nl=False)


def _sources(words: dict[str, Any]) -> list[Source]:
    from logtool.records.sources import sources_of

    return sources_of(words["paths"])
