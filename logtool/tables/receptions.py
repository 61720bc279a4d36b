"""The receptions themselves, read again from the text: for conversations and for the lines behind a figure."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.records.quick import accepts_sql
from logtool.records.tally import FIELD, HOUR_US, SPLIT
from logtool.tables.choice import Choice
from logtool.tables.chosen import conditions
from logtool.tables.rollup import make_rollup

if TYPE_CHECKING:
    from logtool.records.reader import Logs


def receptions_sql(logs: Logs, choice: Choice) -> str:
    """Return the SQL of a relation of the receptions that the choice counts, each record once.

    It has file (index), raw (the line), time_us, receiver (its name), antenna, place, band, hour,
    start_us, night, mode, sender, addressee (both upper case), text and f (the fields as written, from 1).

    Parameters
    ----------
    logs : Logs
        Opened logs.
    choice : Choice
        Which receptions.
    """
    make_rollup(logs, choice)
    lines = f"""
        SELECT file, line FROM {logs.lines} WHERE {accepts_sql("heard")}
        UNION ALL FROM odd_heard"""
    if any(file.repeated for file in logs.inputs):
        lines = f"SELECT min(file) AS file, line FROM ({lines}) GROUP BY line"
    where = " AND ".join(conditions(choice, of_receptions=True))
    return f"""(
        WITH split AS (SELECT file, line AS raw, {SPLIT} AS f FROM ({lines})),
        fields AS (
            SELECT file, raw, f, epoch_us({FIELD["time"]}::TIMESTAMP) AS time_us, {FIELD["receiver"]} AS receiver,
                {FIELD["dial_hz"]} AS dial_hz, {FIELD["mode"]} AS mode, upper({FIELD["sender"]}) AS sender,
                upper({FIELD["addressee"]}) AS addressee, {FIELD["text"]} AS text
            FROM split),
        placed AS (
            SELECT file, raw, time_us, name AS receiver, antenna, place, band, spot.hour, spot.start_us, night,
                mode, sender, addressee, text, f
            FROM fields JOIN spot ON fields.receiver = spot.receiver AND time_us // {HOUR_US} = spot.hour
                AND time_us >= spot.start_us AND time_us < spot.stop_us
            JOIN dial_band USING (dial_hz))
        SELECT * FROM placed WHERE {where})"""
