"""`logtool convert --try` and `--suggest`: what a recipe makes of a text, and a first recipe for it."""

from __future__ import annotations

import sys
from typing import TYPE_CHECKING, Any

import click

from logtool.errors import UsageError

if TYPE_CHECKING:
    from logtool.records.sources import Source

SUGGESTED_LINES = 10  # shown of a text with a suggested recipe


def run_try(words: dict[str, Any]) -> int:
    """Print line by line what the recipe of a call makes of its files' first lines; return the exit status."""
    from logtool.pages.tried import tried_text
    from logtool.records.opening import day_us_of, recipe_for
    from logtool.records.recipes.trying import try_lines

    recipe = recipe_for(words["recipe"])
    if recipe is None:
        raise UsageError("--try shows what a recipe does: give --recipe FILE; --suggest writes a first one")
    day_us = day_us_of(words["date"], with_recipe=recipe)
    any_record = False
    for source in _sources(words):
        tried = try_lines(recipe, source, words["lines"], day_us=day_us)
        click.echo(f"{source.name}, its first {len(tried)} lines by {recipe.name}\n")
        click.echo(tried_text(tried))
        any_record |= any(one.became for one in tried)
    return 0 if any_record else 1


def run_suggest(words: dict[str, Any]) -> int:
    """Write a first recipe for a text, and tell what is in doubt and how its lines are read; return the status."""
    from logtool.pages.tried import tried_text
    from logtool.records.recipes.loading import recipe_of
    from logtool.records.recipes.recipe import RecipeError
    from logtool.records.recipes.trying import try_lines
    from logtool.records.writer import whole_file
    from logtool.suggest.suggestion import suggest

    if words["recipe"] is not None:
        raise UsageError("--suggest writes a recipe and --recipe gives one; leave one of them away")
    sources = _sources(words)
    if len(sources) != 1 or sources[0].path is None:
        raise UsageError("--suggest looks at one file; name one, and not standard input")
    suggestion = suggest(sources[0].path)
    if words["out"] is None:
        sys.stdout.write(suggestion.recipe)
        sys.stdout.flush()
    else:
        with whole_file(words["out"]) as file:
            file.write(suggestion.recipe)
        click.echo(f"recipe written to {words['out']}", err=True)
    for doubt in suggestion.doubts:
        click.echo(f"logtool: not sure: {doubt}", err=True)
    try:
        recipe = recipe_of(suggestion.recipe, words["out"] or "the suggested recipe")
        tried = try_lines(recipe, sources[0], SUGGESTED_LINES)
    except RecipeError as error:
        click.echo(f"logtool: to be filled in: {error}", err=True)
        return 1
    click.echo(f"\nthe first {len(tried)} lines as they would be read:\n\n{tried_text(tried)}", err=True)
    return 0 if any(one.became for one in tried) else 1


def _sources(words: dict[str, Any]) -> list[Source]:
    from logtool.records.sources import sources_of

    return sources_of(words["paths"])
