"""The words of a map that leaves things out: its choice, its options, and what it says of itself."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import replace

from logtool.records.privacy import Privacy
from logtool.tables.choice import Choice

# South to north by west to east; the latter is that at the equator. Two digits.
CELLS = {4: "about 110 by up to 220 km", 6: "about 4.6 by up to 9.3 km", 8: "about 0.46 by up to 0.93 km"}
# No other option is told: it may name a file.
_CHOOSING = ("from", "to", "receiver", "antenna", "band", "mode", "night", "sender", "gap_min")
_TOLD = (*_CHOOSING, "at", "antenna_name", "date", "anyway", "coarsen", "without_text", "hide_senders")
_PLACE_IN_NAME = re.compile(r"(?<=@)[A-Za-z0-9]+")  # of `NAME@LOCATOR`


def private_choice(choice: Choice, privacy: Privacy) -> Choice:
    """Return the choice with receivers `NAME@LOCATOR` by the names that they have once places are cut."""
    return replace(choice, receivers=tuple(_coarse(name, privacy) for name in choice.receivers))


def private_options(options: Iterable[tuple[str, str]], privacy: Privacy) -> tuple[tuple[str, str], ...]:
    """Return the options that may be told: no file, no place finer than the page's, no hidden sender.

    Parameters
    ----------
    options : pairs of name and value
        As given to `logtool.pages.map.map_data_of`.
    privacy : Privacy
        What is left out; where nothing is, all options are told as they are.

    Examples
    --------
    >>> private_options([("at", "JO74xa"), ("out", "home/map.html")], Privacy(coarsen=4))
    (('at', 'JO74'),)
    """
    if not privacy:
        return tuple(options)
    told = []
    for name, value in options:
        if name == "at":
            value = privacy.locator(value)
        elif name == "receiver":
            value = _coarse(value, privacy)
        elif name == "sender" and privacy.key is not None:
            value = "some, not named here"
        if name in _TOLD:
            told.append((name, value))
    return tuple(told)


def privacy_notes(privacy: Privacy) -> list[str]:
    """Return what was left out or made coarse, in words; nothing where nothing was.

    Examples
    --------
    >>> for note in privacy_notes(Privacy(coarsen=6)):
    ...     print(note)
    places are cut to 6 characters (cells of about 4.6 by up to 9.3 km), and distances and bearings go by these
    left out of this page: files and their names, messages, and which lines are behind a figure
    """
    notes = []
    if privacy.coarsen is not None:
        notes.append(
            f"places are cut to {privacy.coarsen} characters (cells of {CELLS[privacy.coarsen]}), "
            "and distances and bearings go by these"
        )
    if privacy.key is not None:
        notes.append("senders have other names here, made with a secret key")
    if privacy:
        notes.append(
            "left out of this page: files and their names, messages, and which lines are behind a figure"
        )
    return notes


def _coarse(name: str, privacy: Privacy) -> str:
    return _PLACE_IN_NAME.sub(lambda place: privacy.locator(place[0]), name)
