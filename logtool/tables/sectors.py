"""How much was heard from each of sixteen directions."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import further_keys, in_order, make_chosen, make_senders, same
from logtool.tables.result import Table

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs

KEYS = ("receiver", "antenna", "band")
SECTORS = 16
SECTOR_DEG = (
    360 / SECTORS
)  # sector k holds the bearings of k * 22.5 +- 11.25 degrees, the lower bound with it


def sectors_table(logs: Logs, choice: Choice) -> Table:
    """Return the columns of `sectors`; see `sectors`."""
    connection, notes = make_chosen(logs, choice)
    by = further_keys(choice, KEYS)
    keys = (*KEYS, *by)
    listed = ", ".join(keys)
    make_senders(connection, keys)
    order = in_order((*KEYS, "sector_deg", *by))
    table = Table.of(
        connection.execute(f"""
            WITH placed AS (
                SELECT *, floor((bearing_deg + {SECTOR_DEG / 2}) / {SECTOR_DEG})::BIGINT % {SECTORS} AS sector
                FROM per_sender WHERE bearing_deg IS NOT NULL),
            wanted AS (
                SELECT * FROM (SELECT DISTINCT {listed} FROM heard), (SELECT unnest(range({SECTORS})) AS sector)),
            figure AS (
                SELECT {listed}, sector, sum(n)::BIGINT AS receptions, count(*) AS senders,
                    quantile_cont(distance_km, 0.5) AS median_km, max(distance_km) FILTER (again) AS farthest_km
                FROM placed GROUP BY {listed}, sector)
            SELECT {", ".join(f"w.{key}" for key in KEYS)}, w.sector * {SECTOR_DEG}::DOUBLE AS sector_deg,
                {"".join(f"w.{key}, " for key in by)}coalesce(receptions, 0) AS receptions,
                coalesce(senders, 0) AS senders, median_km, farthest_km
            FROM wanted w LEFT JOIN figure f ON {same("w", "f", (*keys, "sector"))}
            ORDER BY {order}""")
    )
    table.notes = notes
    return table


def sectors(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return what was heard from each of sixteen directions. [km]

    A sender counts in one direction, that of the locator it was heard with most; one nearer than the
    uncertainty of its distance has no bearing and counts in none.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`.

    Returns
    -------
    pandas.DataFrame
        Sixteen rows per receiver, antenna and band with the columns of `logtool sectors --json`.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    return sectors_table(logs, choose(**words)).to_pandas()
