"""The lines behind each sender on the map, and the short names of the files that they stand in."""

from __future__ import annotations

import os
from collections import Counter, defaultdict
from pathlib import PurePath
from typing import TYPE_CHECKING, NamedTuple

from logtool.pages.map_data import MapLine
from logtool.records.judge import Record, judge
from logtool.records.locate import line_numbers
from logtool.records.sources import STDIN
from logtool.records.tally import FIELD, HOUR_US, SPLIT
from logtool.tables.result import written_time

if TYPE_CHECKING:
    from logtool.records.reader import Logs

STANDARD_INPUT = "standard input"
Pair = tuple[str, str]  # a receiver and a sender, by name
_ROLES = ("first", "last", "strongest", "weakest", "located")
_LOCATED = len(_ROLES)  # the engine counts from 1


class _Found(NamedTuple):
    time_us: int
    file: int
    raw: bytes


def short_names(names: list[str]) -> list[str]:
    """Return the files' names below the folder that holds them all, never a full path.

    Where only the root holds them all, each gets the shortest end of its path that no other has.

    Parameters
    ----------
    names : list of str
        Paths as given; `-` for standard input.

    Examples
    --------
    >>> short_names(["logs/march/1.log", "logs/2.log", "-"])
    ['march/1.log', '2.log', 'standard input']
    """
    paths = {name: PurePath(os.path.abspath(name)) for name in names if name != STDIN}
    try:
        folder = PurePath(os.path.commonpath([path.parent for path in paths.values()]))
    except ValueError:  # no path, or several drives
        folder = PurePath()
    if folder.name:
        short = {name: path.relative_to(folder).as_posix() for name, path in paths.items()}
    else:
        ends = {
            name: [path.parts[-n:] for n in range(1, len(path.parts) + 1)] for name, path in paths.items()
        }
        times = Counter(end for of_path in ends.values() for end in of_path)
        short = {name: "/".join(next(end for end in ends[name] if times[end] == 1)) for name in paths}
    return [short.get(name, STANDARD_INPUT) for name in names]


def lines_behind(logs: Logs) -> dict[Pair, tuple[MapLine, ...]]:
    """Return up to five lines for each receiver and sender, in the order of time.

    The first and the last reception, the strongest and the weakest, and the last that gives the locator
    which the distance is measured to. Fewer where these are the same or where there is none.

    Parameters
    ----------
    logs : Logs
        Opened logs with the tables `heard`, and `per_sender` by receiver: see `logtool.tables.chosen`.
    """
    best = _best(logs)
    wanted: dict[int, set[bytes]] = defaultdict(set)
    for found in best.values():
        for one in found:
            wanted[one.file].add(one.raw)
    number_of: dict[tuple[int, bytes], int] = {}
    paths = logs.paths
    for file, left in wanted.items():
        for number, raw in line_numbers(paths[file], left):
            number_of[file, raw] = number
            left.remove(raw)
    return {
        pair: tuple(
            MapLine(one.file, number_of[one.file, one.raw], written_time(one.time_us))
            for one in sorted(found)
            if (one.file, one.raw) in number_of  # not where the file was changed meanwhile
        )
        for pair, found in best.items()
    }


def _best(logs: Logs) -> dict[Pair, set[_Found]]:
    """Return the lines of each pair, not yet with their numbers.

    The tally tells time and SNR of each reception but keeps no line, so those wanted are looked up in the
    text. A line that is set aside may look the same there; the judge tells.
    """
    _make_wanted(logs)
    rows = logs.connection.execute(f"""
        WITH text AS (SELECT file, line, {SPLIT} AS f FROM {logs.lines})
        SELECT name, w.sender, role, w.time_us, w.file, line
        FROM text JOIN wanted w ON text.file = w.file AND {FIELD["receiver"]} = w.receiver
            AND {FIELD["sender"]} = w.written AND epoch_us(try_cast({FIELD["time"]} AS TIMESTAMP)) = w.time_us
            AND try_cast(nullif({FIELD["snr_db"]}, '') AS DECIMAL(8, 6)) IS NOT DISTINCT FROM w.snr_db
        WHERE role <> {_LOCATED} OR upper({FIELD["locator"]}) = shown
        ORDER BY name, w.sender, role, CASE WHEN role = {_LOCATED} THEN -w.time_us END, w.file, line
        """).fetchall()
    best: dict[Pair, set[_Found]] = defaultdict(set)
    done = None
    for name, sender, role, time_us, file, line in rows:
        if (name, sender, role) == done:
            continue
        raw = line.encode()
        record = judge(raw)
        if isinstance(record, Record) and record.kind == "heard":
            best[name, sender].add(_Found(time_us, file, raw))
            done = (name, sender, role)
    return best


def _make_wanted(logs: Logs) -> None:
    """Make the table `wanted`: name (of the receiver), sender, role, the locator shown, and a reception.

    A reception is time_us, file, receiver, written (the sender, as written) and snr_db. For the role
    `located` there are all receptions of the latest hour in which the locator was given.
    """
    known = "FILTER (which.snr_db IS NOT NULL)"
    logs.connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE wanted AS
        WITH row_of AS (
            SELECT h.receiver AS name, h.sender, h.first_us, p.locator AS shown, t.file, t.receiver,
                t.sender AS written, t.start_us // {HOUR_US} * {HOUR_US} AS base_us, t.times, t.snrs,
                list_contains(list_transform(t.locators, lambda own: upper(own)), p.locator) AS gives
            FROM heard h JOIN tally t ON t.rowid = h.row
            JOIN per_sender p ON p.receiver = h.receiver AND p.sender = h.sender),
        reception AS (
            SELECT name, sender, shown,
                gives AND first_us = max(first_us) FILTER (gives) OVER (PARTITION BY name, sender) AS located,
                unnest(list_transform(list_zip(times, snrs), lambda one: {{'time_us': base_us + one[1],
                    'file': file, 'receiver': receiver, 'written': written, 'snr_db': one[2]}})) AS which
            FROM row_of),
        outermost AS (
            SELECT name, sender, [min(which), max(which), arg_max(which, (which.snr_db, which)) {known},
                arg_min(which, (which.snr_db, which)) {known}] AS list
            FROM reception GROUP BY name, sender),
        chosen AS (
            SELECT name, sender, unnest(range(1, {_LOCATED})) AS role, NULL AS shown, unnest(list) AS which
            FROM outermost
            UNION SELECT name, sender, {_LOCATED}, shown, which FROM reception WHERE located)
        SELECT name, sender, role, shown, unnest(which) FROM chosen""")
