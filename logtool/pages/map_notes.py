"""What the map page says in words of what was read, and of what is not on the map."""

from __future__ import annotations

import os
from typing import TYPE_CHECKING

from logtool.pages.map_data import MapReceiver
from logtool.records.ledger import FileLedger

if TYPE_CHECKING:
    import duckdb

    from logtool.records.reader import Logs


def ledger_lines(logs: Logs, files: list[str]) -> tuple[str, ...]:
    """Return a line for each file that says what became of its lines; where files are left out, one for all.

    Parameters
    ----------
    logs : Logs
        Opened logs.
    files : list of str
        The names to show, in the order of the files.
    """
    if logs.privacy:
        return (f"{_many(len(logs.inputs), 'file')}: {_account(_together(logs.inputs))}",)
    return tuple(f"{name}: {_account(file)}" for name, file in zip(files, logs.inputs, strict=True))


def _together(ledgers: list[FileLedger]) -> FileLedger:
    whole = FileLedger("", None, 0, 0)
    for file in ledgers:
        for name in ("bytes", "lines", "blank", "comments", "records", "repeated"):
            setattr(whole, name, getattr(whole, name) + getattr(file, name))
        whole.reasons.update(file.reasons)
    return whole


def _account(file: FileLedger) -> str:
    parts = [_many(file.records, "record")]
    parts += [f"{file.blank} blank"] if file.blank else []
    parts += [_many(file.comments, "comment")] if file.comments else []
    parts += [f"{file.repeated} repeated"] if file.repeated else []
    if file.set_aside:
        why = ", ".join(f"{count} {reason}" for reason, count in sorted(file.reasons.items()))
        parts.append(f"{file.set_aside} set aside ({why})")
    return f"{_many(file.lines, 'line')}: {', '.join(parts)}"


def file_notes(logs: Logs, files: list[str]) -> list[str]:
    """Return the notes on the reading, and why files were not read, without the folders of any.

    Where files are left out, only how many notes there are, since each names one.

    Parameters
    ----------
    logs : Logs
        Opened logs.
    files : list of str
        The names to show, in the order of the files.
    """
    if logs.privacy:
        notes = [f"{_many(len(logs.notes), 'note')} on the reading left out"] if logs.notes else []
        return notes + ([f"{_many(len(logs.refused), 'input')} not read"] if logs.refused else [])
    shown = dict(zip(logs.file_names, files, strict=True))
    notes = [_without_folder(note, shown) for note in logs.notes]
    return notes + [f"not read: {_without_folder(refusal, shown)}" for refusal in logs.refused]


def figure_notes(
    connection: duckdb.DuckDBPyConnection, receivers: list[MapReceiver], gap_min: float
) -> list[str]:
    """Return the notes on what is assumed, not on the map, or drawn at one place of several.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the table `heard` is: see `logtool.tables.chosen`.
    receivers : list of MapReceiver
        Those on the map.
    gap_min : float
        The longest gap between two records over which listening is assumed. [min]
    """
    notes = [
        f"{receiver.name}: no watch line, so listening is assumed from one record to the next, "
        f"up to {gap_min:g} min apart"
        for receiver in receivers
        if receiver.assumed
    ]
    ((unnamed, several),) = connection.execute("""
        SELECT (SELECT coalesce(sum(n), 0)::BIGINT FROM heard WHERE sender = ''), (SELECT count(*) FROM (
            SELECT sender FROM heard WHERE locator IS NOT NULL GROUP BY sender
            HAVING count(DISTINCT left(locator, 4)) > 1))""").fetchall()
    if unnamed:
        notes.append(f"{_many(unnamed, 'reception')} without a sender: not on the map")
    if several:
        notes.append(
            f"{_many(several, 'sender')} with locators in several squares: drawn where most of them are"
        )
    return notes


def _without_folder(told: str, shown: dict[str, str]) -> str:
    """Return what is told of a file, which begins with its path, without the folders."""
    path, colon, rest = told.partition(": ")
    return shown.get(path, os.path.basename(path)) + colon + rest


def _many(count: int, one: str) -> str:
    return f"{count} {one}" if count == 1 else f"{count} {one}s"
