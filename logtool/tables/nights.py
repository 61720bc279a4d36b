"""Nights side by side."""

from __future__ import annotations

from datetime import date
from typing import TYPE_CHECKING, Any

from logtool.places.nights import night_bounds
from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import further_keys, in_order, make_chosen, same
from logtool.tables.reach import SHARE_MIN, make_rows
from logtool.tables.result import Table

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs

KEYS = ("night", "receiver", "antenna", "band")
_EPOCH_DAY = date(1970, 1, 1).toordinal()


def nights_table(logs: Logs, choice: Choice) -> Table:
    """Return the columns of `nights`; see `nights`."""
    connection, notes = make_chosen(logs, choice)
    by = further_keys(choice, KEYS)
    keys = (*KEYS, *by)
    make_rows(connection, ("hour", *keys))
    timed_keys = tuple(key for key in keys if key != "mode")
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE hourly AS
        SELECT {", ".join(timed_keys)}, count(DISTINCT hour) AS hours FROM row
        WHERE listening_min >= {SHARE_MIN} GROUP BY ALL""")
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE thinned AS
        SELECT {", ".join(keys)}, sum(senders_in_30) AS senders_in_30 FROM row GROUP BY ALL""")
    make_rows(connection, keys)
    order = in_order(tuple(f"row.{key}" for key in keys))
    table = Table.of(
        connection.execute(f"""
            SELECT {", ".join(f"row.{key}" for key in keys)}, row.lon_deg AS "from", row.lon_deg AS "to", listening_min,
                listening, receptions, senders, coalesce(thinned.senders_in_30, 0) / hours AS senders_in_30, squares,
                median_km, p90_km, farthest_km, farthest_sender
            FROM row LEFT JOIN hourly ON {same("row", "hourly", timed_keys)}
                LEFT JOIN thinned ON {same("row", "thinned", keys)} ORDER BY {order}""")
    )
    table.lon_deg = table.columns["from"]
    bounds = [
        night_bounds(date.fromisoformat(night).toordinal() - _EPOCH_DAY, lon_deg)
        for night, lon_deg in zip(table.columns["night"], table.columns["from"], strict=True)
    ]
    table.columns["from"] = [round(start_s) * 1_000_000 for start_s, _ in bounds]
    table.columns["to"] = [round(stop_s) * 1_000_000 for _, stop_s in bounds]
    table.notes = notes
    return table


def nights(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return what each night gave, from one solar noon at the receiver to the next. [km]

    A night is named by the local mean solar date at the noon on which it begins. `senders_in_30` is the
    mean over its hours, so that a short night is not put behind a long one; from counts alone no night
    is better than another.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`.

    Returns
    -------
    pandas.DataFrame
        One row per night, receiver, antenna and band with the columns of `logtool nights --json`; times
        as timestamps in UTC, noons to the second.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    return nights_table(logs, choose(**words)).to_pandas()
