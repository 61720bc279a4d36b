"""The receptions themselves, read again from the text: for conversations and for the lines behind a figure."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.records import each
from logtool.records.tally import FIELD, HOUR_US, SPLIT
from logtool.tables.choice import Choice
from logtool.tables.chosen import conditions
from logtool.tables.rollup import make_rollup

if TYPE_CHECKING:
    from logtool.records.reader import Logs


def receptions_sql(logs: Logs, choice: Choice, *, also_off: bool = False) -> str:
    """Return the SQL of a relation of the receptions that the choice counts, each record once.

    It has file (index), raw (the line), time_us, receiver (its name), antenna, place, band, hour,
    start_us, night, mode, sender, addressee (both upper case), text and f (the fields as written, from 1).

    Parameters
    ----------
    logs : Logs
        Opened logs.
    choice : Choice
        Which receptions.
    also_off : bool
        Also those with the antenna off, where no antenna is chosen.
    """
    make_rollup(logs, choice)
    where = " AND ".join(conditions(choice, of_receptions=True, also_off=also_off))
    return f"""(
        WITH split AS (SELECT file, line AS raw, {SPLIT} AS f FROM {each.receptions_sql(logs)}),
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
