"""The receptions themselves, read again from the text: for conversations and for the lines behind a figure."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.records.layout import COLUMN_NAMES
from logtool.records.quick import accepts_sql
from logtool.records.tally import HOUR_US
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
    field = {name: f"f[{i}]" for i, name in enumerate(COLUMN_NAMES, 1)}
    lines = f"""
        SELECT file, line FROM {logs.lines} WHERE {accepts_sql("heard")}
        UNION ALL FROM odd_heard"""
    if any(file.repeated for file in logs.inputs):
        lines = f"SELECT min(file) AS file, line FROM ({lines}) GROUP BY line"
    where = " AND ".join(conditions(choice, of_receptions=True))
    return f"""(
        WITH split AS (SELECT file, line AS raw, string_split(line, chr(9)) AS f FROM ({lines})),
        fields AS (
            SELECT file, raw, f, epoch_us({field["time"]}::TIMESTAMP) AS time_us, {field["receiver"]} AS receiver,
                {field["dial_hz"]} AS dial_hz, {field["mode"]} AS mode, upper({field["sender"]}) AS sender,
                upper({field["addressee"]}) AS addressee, {field["text"]} AS text
            FROM split),
        placed AS (
            SELECT file, raw, time_us, name AS receiver, antenna, place, band, spot.hour, spot.start_us, night,
                mode, sender, addressee, text, f
            FROM fields JOIN spot ON fields.receiver = spot.receiver AND time_us // {HOUR_US} = spot.hour
                AND time_us >= spot.start_us AND time_us < spot.stop_us
            JOIN dial_band USING (dial_hz))
        SELECT * FROM placed WHERE {where})"""
