"""Conversations between two other stations, as far as they were heard."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from logtool.places.locator import written
from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import unknown_words
from logtool.tables.locators import make_pairs, make_sender_hours, resolve
from logtool.tables.receptions import receptions_sql
from logtool.tables.result import Table

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs


def between_table(logs: Logs, choice: Choice) -> Table:
    """Return the columns of `between`; see `between`."""
    receptions = receptions_sql(logs, choice)
    connection = logs.connection
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE message AS
        SELECT DISTINCT least(sender, addressee) AS a, greatest(sender, addressee) AS b, band, sender, time_us,
            hour, text
        FROM {receptions} WHERE sender <> '' AND addressee <> '' AND sender <> addressee""")
    station_hours = """
        SELECT DISTINCT unnest([a, b]) AS sender, hour FROM message"""
    make_sender_hours(connection, "talker_hour", station_hours)
    resolve(
        connection,
        "talker",
        ("a", "b", "band", "sender"),
        """
        WITH side AS (SELECT a, b, band, hour, unnest([a, b]) AS sender FROM message),
        vote AS (
            SELECT a, b, band, sender, locator, borrowed, count(*) AS n
            FROM side JOIN talker_hour USING (sender, hour) WHERE locator IS NOT NULL GROUP BY ALL)
        SELECT a, b, band, sender, locator, n FROM vote
        QUALIFY borrowed = min(borrowed) OVER (PARTITION BY a, b, band, sender)""",
    )
    connection.execute("""
        CREATE OR REPLACE TEMP TABLE conversation AS
        SELECT m.a, m.b, m.band, min(time_us) AS first, max(time_us) AS last,
            count(*) FILTER (m.sender = m.a) AS from_a, count(*) FILTER (m.sender = m.b) AS from_b,
            any_value(of_a.locator) AS place, any_value(of_b.locator) AS locator
        FROM message m
            LEFT JOIN talker of_a ON m.a = of_a.a AND m.b = of_a.b AND m.band = of_a.band AND of_a.sender = m.a
            LEFT JOIN talker of_b ON m.a = of_b.a AND m.b = of_b.b AND m.band = of_b.band AND of_b.sender = m.b
        GROUP BY m.a, m.b, m.band""")
    make_pairs(connection, "SELECT DISTINCT place, locator FROM conversation")
    table = Table.of(
        connection.execute("""
            SELECT a, b, band, first, last, from_a, from_b, place AS locator_a, locator AS locator_b,
                distance_km AS between_km
            FROM conversation LEFT JOIN pair USING (place, locator) ORDER BY a, b, band NULLS FIRST""")
    )
    for name in ("locator_a", "locator_b"):
        table.columns[name] = [own and written(own) for own in table.columns[name]]
    table.notes = unknown_words(connection, choice)
    return table


def between(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return the conversations between two other stations, with the distance between them. [km]

    A message counts where it names its sender and its addressee; one that several receivers heard at one
    time counts once. One side may be out of reach, so `from_a` or `from_b` may be 0.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`, but for `by`.

    Returns
    -------
    pandas.DataFrame
        One row per pair of stations (in the order of the alphabet) and band with the columns of
        `logtool between --json`; times as timestamps in UTC.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    return between_table(logs, choose(**words)).to_pandas()
