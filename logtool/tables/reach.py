"""How far it hears, hour by hour."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from logtool.places.locator import centres
from logtool.places.sun import zenith_deg
from logtool.records.tally import HOUR_US
from logtool.tables.choice import Choice, choose
from logtool.tables.chosen import further_keys, in_order, make_chosen, make_senders, same
from logtool.tables.listening import MINUTE_US
from logtool.tables.result import Table

if TYPE_CHECKING:
    import duckdb
    import pandas as pd

    from logtool.records.reader import Logs

KEYS = ("hour", "receiver", "antenna", "band")
SHARE_MIN = 30.0  # receptions are thinned to so many minutes of listening; design, section 4
P90_SENDERS = 5  # the 90th percentile needs so many located senders; design, section 4
MIXED = "mixed"  # listening is recorded for a part of the row, assumed for the other
HALF_HOUR_S = 1800.0
# What the summary says where nothing is counted.
_NOTHING = dict.fromkeys(
    ("listening_min", "receptions", "unnamed", "senders", "heard_once", "located", "squares"), 0
)
COLUMNS = (
    "listening_min",
    "listening",
    "receptions",
    "unnamed",
    "senders",
    "heard_once",
    "senders_in_30",
    "located",
    "squares",
    "nearest_km",
    "median_km",
    "p90_km",
    "farthest_km",
    "farthest_sender",
    "farthest_once_km",
    "snr_median_db",
)

# Figures of a row over the senders in it, from `per_sender`.
FIGURES = f"""
    count(*) AS senders, count(*) FILTER (NOT again) AS heard_once, count(distance_km) AS located,
    count(DISTINCT left(locator, 4)) AS squares,
    min(distance_km) FILTER (uncertainty_km <= distance_km / 2) AS nearest_km,
    quantile_cont(distance_km, 0.5) AS median_km,
    CASE WHEN count(distance_km) >= {P90_SENDERS} THEN quantile_cont(distance_km, 0.9) END AS p90_km,
    max(distance_km) FILTER (again) AS farthest_km,
    arg_min(sender, (-distance_km, sender)) FILTER (again AND distance_km IS NOT NULL) AS farthest_sender,
    max(distance_km) FILTER (NOT again) AS farthest_once_km,
    CASE WHEN min(first_mode) = max(last_mode) AND min(first_band) = max(last_band)
        THEN quantile_cont(snr_median_db, 0.5) END AS snr_median_db"""


# Senders, each counted by its chance of being heard in 30 of the minutes listened.
THINNED = f"sum(1 - (1 - {SHARE_MIN} / greatest(listening_min, {SHARE_MIN})) ** per_sender.n)"


def make_rows(connection: duckdb.DuckDBPyConnection, keys: tuple[str, ...]) -> None:
    """Make the table `row`: what a table with the keys says, from `heard` and `listened`.

    It has the keys, listening_min, listening, receptions, unnamed, place, lon_deg, first_us, last_us, senders_in_30
    and the columns of `FIGURES`. A row has receptions or listening; modes have no listening of their own.
    """
    make_senders(connection, keys)
    listed = ", ".join(keys)
    timed_keys = tuple(key for key in keys if key != "mode")
    timed = ", ".join(timed_keys)
    of_sender = ", ".join(f"per_sender.{key}" for key in keys)
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE counted AS
        WITH minutes AS (
            SELECT {timed}, sum(to_us - from_us) / {MINUTE_US} AS listening_min, min(listening) AS first_way,
                max(listening) AS last_way, arg_max(place, (to_us, place)) AS listened_at,
                any_value(lon_deg) AS lon_deg
            FROM listened GROUP BY {timed}),
        receptions AS (
            SELECT {listed}, sum(n)::BIGINT AS receptions,
                coalesce(sum(n) FILTER (sender = ''), 0)::BIGINT AS unnamed,
                arg_max(place, (last_us, place)) AS heard_at, min(first_us) AS first_us,
                max(last_us) AS last_us, min(listening) AS first_way, max(listening) AS last_way,
                any_value(lon_deg) AS lon_deg
            FROM heard GROUP BY {listed})
        SELECT {", ".join(f"coalesce(r.{key}, m.{key}) AS {key}" if key != "mode" else "mode" for key in keys)},
            coalesce(listening_min, 0) AS listening_min,
            CASE WHEN least(r.first_way, m.first_way) = greatest(r.last_way, m.last_way)
                THEN least(r.first_way, m.first_way) ELSE '{MIXED}' END AS listening,
            coalesce(receptions, 0) AS receptions, coalesce(unnamed, 0) AS unnamed,
            coalesce(heard_at, listened_at) AS place, coalesce(r.lon_deg, m.lon_deg) AS lon_deg, first_us, last_us
        FROM receptions r FULL JOIN minutes m ON {same("r", "m", timed_keys)}""")
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE row AS
        WITH figure AS (
            SELECT {of_sender}, {FIGURES}, {THINNED} AS senders_in_30
            FROM per_sender JOIN counted ON {same("per_sender", "counted", keys)} GROUP BY {of_sender}, listening_min)
        SELECT counted.*, figure.* EXCLUDE ({listed}, senders, heard_once, located, squares, senders_in_30),
            coalesce(senders, 0) AS senders, coalesce(heard_once, 0) AS heard_once,
            coalesce(located, 0) AS located, coalesce(squares, 0) AS squares,
            CASE WHEN listening_min >= {SHARE_MIN} THEN coalesce(senders_in_30, 0) END AS senders_in_30
        FROM counted LEFT JOIN figure ON {same("counted", "figure", keys)}""")


def reach_table(logs: Logs, choice: Choice) -> Table:
    """Return the columns of `reach`, with its summary; see `reach`."""
    connection, notes = make_chosen(logs, choice)
    by = further_keys(choice, KEYS)
    keys = (*KEYS, *by)
    make_rows(connection, keys)
    order = in_order(keys)
    table = Table.of(
        connection.execute(f"""
            SELECT hour * {HOUR_US} AS hour, {", ".join((*KEYS[1:], *by))}, {", ".join(COLUMNS)},
                place AS sun_zenith_deg, lon_deg
            FROM row ORDER BY {order}""")
    )
    table.lon_deg = table.columns.pop("lon_deg")
    table.columns["sun_zenith_deg"] = _zeniths(table.columns["hour"], table.columns["sun_zenith_deg"])
    table.summary = _summary(connection, table)
    table.notes = notes
    return table


def _zeniths(hours_us: list[int], places: list[str | None]) -> list[float | None]:
    """Return the sun's zenith at half past each hour, None where the receiver has no place. [deg]"""
    known = [i for i, place in enumerate(places) if place]
    lat, lon = centres([places[i] or "" for i in known])
    middle_s = np.array([hours_us[i] for i in known]) / 1e6 + HALF_HOUR_S
    zeniths: list[float | None] = [None] * len(places)
    for i, zenith in zip(known, zenith_deg(middle_s, lat, lon).tolist(), strict=True):
        zeniths[i] = zenith
    return zeniths


def _summary(connection: duckdb.DuckDBPyConnection, table: Table) -> dict[str, Any]:
    make_rows(connection, ("whole",))
    whole = Table.of(
        connection.execute(f'SELECT first_us AS "from", last_us AS "to", {", ".join(COLUMNS)} FROM row')
    )
    found = {name: values[0] if values else _NOTHING.get(name) for name, values in whole.columns.items()}
    keys: dict[str, Any] = {}
    for name in table.columns:
        if name in COLUMNS or name in ("hour", "sun_zenith_deg"):
            continue
        different = set(table.columns[name])
        keys[name] = different.pop() if len(different) == 1 else None
    return {
        "from": found.pop("from"),
        "to": found.pop("to"),
        "hour": None,
        **keys,
        **found,
        "sun_zenith_deg": None,
    }


def reach(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return how far each receiver hears in each hour, antenna and band. [km]

    An hour in which it listened and heard nothing has a row; one with neither has none. The farthest
    sender is of those heard again: one heard once may be a false decode.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        The words of `logtool.tables.choice.choose`: from_, to, receiver, antenna, band, mode, night,
        sender, by, gap_min.

    Returns
    -------
    pandas.DataFrame
        One row per hour, receiver, antenna and band with the columns of `logtool reach --json`; times as
        timestamps in UTC. `attrs["summary"]` has the same over all.

    Raises
    ------
    UsageError
        Where a word cannot be used.
    """
    return reach_table(logs, choose(**words)).to_pandas()
