"""Who was heard, from where, how often and how strong."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from logtool.places.locator import written
from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import further_keys, in_order, make_chosen, make_senders
from logtool.tables.result import Table

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs

KEYS = ("receiver", "band")


def senders_table(logs: Logs, choice: Choice) -> Table:
    """Return the columns of `senders`; see `senders`."""
    connection, notes = make_chosen(logs, choice)
    by = further_keys(choice, KEYS)
    make_senders(connection, (*KEYS, *by))
    table = Table.of(
        connection.execute(f"""
            SELECT {", ".join((*KEYS, "sender", *by))}, locator, borrowed, distance_km, uncertainty_km, bearing_deg,
                n AS receptions, again AS heard_again, first_us AS first, last_us AS last, nights,
                CASE WHEN first_mode = last_mode THEN snr_median_db END AS snr_median_db,
                CASE WHEN first_mode = last_mode THEN snr_best_db END AS snr_best_db
            FROM per_sender
            ORDER BY {", ".join([in_order(KEYS), "n DESC", "sender", *filter(None, [in_order(by)])])}""")
    )
    table.columns["locator"] = [own and written(own) for own in table.columns["locator"]]
    table.notes = notes
    return table


def senders(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return each sender that a receiver heard on a band, with its distance. [km]

    The distance is between the centres of two cells and may be off by `uncertainty_km`; where it is
    smaller than that there is no bearing.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`.

    Returns
    -------
    pandas.DataFrame
        One row per receiver, band and sender with the columns of `logtool senders --json`, most
        receptions first; times as timestamps in UTC.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    return senders_table(logs, choose(**words)).to_pandas()
