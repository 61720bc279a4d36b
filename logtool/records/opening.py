"""`open_logs`, the way in for users of the library."""

from __future__ import annotations

import os
import re
from typing import TYPE_CHECKING

from logtool.errors import PlaceError, UsageError
from logtool.records.judge import time_of
from logtool.records.layout import LOCATOR_FORM, NAME_FORM, SETUP_LOCATOR_CHARACTERS
from logtool.records.reader import Logs, OpenOptions

if TYPE_CHECKING:
    from logtool.records.recipes.recipe import Recipe


def open_logs(
    *paths: str | os.PathLike[str],
    recipe: str | os.PathLike[str] | Recipe | None = None,
    date: str | None = None,
    at: str | None = None,
    antenna_name: str | None = None,
    threads: int | None = None,
    memory_mb: int | None = None,
    anyway: bool = False,
) -> Logs:
    """Return opened logs, to be used with `with`; the text is read when the first figure is asked for.

    A receiver without any setup has no place, so no distances: give `at`.

    Parameters
    ----------
    *paths : str or path
        Files (plain, `.gz`, `.zst`), folders, or `-` for standard input.
    recipe : str, path or Recipe, optional
        How files that do not follow the layout are read: a recipe's file, or one that was loaded.
    date : str, optional
        Date (`YYYY-MM-DD`) at which such files begin, where neither they nor their names give one.
    at : str, optional
        Locator of 4 or more characters that stands in for receivers without a setup.
    antenna_name : str, optional
        Name of the antenna of receivers without a setup.
    threads, memory_mb : int, optional
        How much of the machine the engine may use; by default all processors and most of the memory.
    anyway : bool
        Read on in a file whose first 10 000 lines hold no record.

    Returns
    -------
    Logs
        See `logtool.reach` and the others for what can be asked of it.

    Raises
    ------
    FileError
        Where a file cannot be read.
    UsageError
        Where no path is given, or `recipe`, `date`, `at` or `antenna_name` cannot be used.

    Examples
    --------
    >>> from logtool.records.layout import LAYOUT_LINE
    >>> from pathlib import Path
    >>> import tempfile
    >>> folder = tempfile.TemporaryDirectory()
    >>> log = Path(folder.name, "night.log")
    >>> _ = log.write_text(LAYOUT_LINE + "1\\n2026-03-01T22:00:00Z\\tstop\\thut" + "\\t" * 11 + "\\n")
    >>> with open_logs(log) as logs:
    ...     logs.inputs[0].records
    1
    """
    options = OpenOptions(
        threads,
        memory_mb,
        anyway=anyway,
        recipe=recipe_for(recipe),
        day_us=day_us_of(date, with_recipe=recipe),
    )
    return open_with(paths, at, antenna_name, options)


def recipe_for(recipe: str | os.PathLike[str] | Recipe | None) -> Recipe | None:
    """Return the recipe that is meant, loaded where it is a file."""
    from logtool.records.recipes.recipe import Recipe

    if recipe is None or isinstance(recipe, Recipe):
        return recipe
    from logtool.records.recipes.loading import load_recipe

    return load_recipe(recipe)


def day_us_of(date: str | None, *, with_recipe: object) -> int | None:
    """Return the date at which files begin as midnight in microseconds since 1970."""
    if date is None:
        return None
    if with_recipe is None:
        raise UsageError("--date is for texts that a recipe reads; give --recipe FILE")
    midnight_us = time_of(f"{date}T00:00:00Z")
    if midnight_us is None:
        raise UsageError(f"--date {date!r} is no date; write it like 2026-03-01")
    return midnight_us


def open_with(
    paths: tuple[str | os.PathLike[str], ...], at: str | None, antenna_name: str | None, options: OpenOptions
) -> Logs:
    """Return opened logs like `open_logs`, with the options that the commands need beside."""
    if at is not None:
        if not re.fullmatch(LOCATOR_FORM, at):
            raise PlaceError(f"--at {at!r} is not a locator; give one like JN58 or JN58td")
        if len(at) < SETUP_LOCATOR_CHARACTERS:
            raise PlaceError(
                f"--at {at!r} is too coarse for a receiver; give 4 characters or more, like JN58"
            )
    if antenna_name is not None and not re.fullmatch(NAME_FORM, antenna_name):
        raise UsageError(
            f"--antenna-name {antenna_name!r}: a name has 1 to 32 of the letters A-Z a-z, digits, _ and -"
        )
    return Logs(paths, at=at, antenna_name=antenna_name, options=options)
