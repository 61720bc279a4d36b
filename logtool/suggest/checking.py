"""Try a suggested recipe on the sample's first part: what it does not read as it should is told."""

from __future__ import annotations

import os
from collections import Counter
from pathlib import Path

from logtool.records.recipes.loading import recipe_of
from logtool.records.recipes.recipe import RecipeError
from logtool.records.recipes.trying import Tried, try_lines
from logtool.records.sources import Source, shown
from logtool.suggest.doubts import Doubt
from logtool.suggest.draft import Draft

_ANY_DAY_US = 1_772_323_200_000_000  # 2026-03-01: stands in where the text gives no date
_BAD = "bad-"


def doubts_by_trial(draft: Draft, trial: str, path: str | os.PathLike[str]) -> list[Doubt]:
    """Return doubts about messages of the sample that the recipe does not read.

    Parameters
    ----------
    draft : Draft
        What the recipe was written from.
    trial : str
        The recipe with stand-ins for what has to be filled in.
    path : str or path
        The file.
    """
    places = [*draft.table.rows, *(draft.second[0].rows if draft.second else [])]
    meant = {draft.look.lines[place].number for place in places} - {0}
    try:
        tried = try_lines(recipe_of(trial, "suggested"), _source(path), max(meant), day_us=_ANY_DAY_US)
    except RecipeError as error:
        return [Doubt("structure", f"the recipe cannot be used: {error}")]
    messages = [one for one in tried if one.number in meant]
    doubts = []
    unread = [one for one in messages if not one.rule.startswith("heard")]
    if unread:
        doubts.append(
            Doubt("lines", f"{_count(unread, messages)} are not read, as {unread[0].line.strip()[:80]!r}")
        )
    reasons = Counter(one.reason for one in messages if one.reason.startswith(_BAD) and one not in unread)
    for reason in sorted(reasons):
        bad = [one for one in messages if one.reason == reason]
        about = reason.removeprefix(_BAD)
        doubts.append(
            Doubt(
                f"lines, {about}",
                f"{_count(bad, messages)} are set aside as {reason}, as {bad[0].line.strip()[:80]!r}",
            )
        )
    return doubts


def _source(path: str | os.PathLike[str]) -> Source:
    return Source(shown(os.fspath(path)), Path(path))


def _count(some: list[Tried], of: list[Tried]) -> str:
    return f"{len(some)} of the first {len(of)} lines taken for messages"
