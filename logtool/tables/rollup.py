"""The rollup: per hour (or a piece of it), station, band, mode and sender, what was heard.

Everything that is learned from all records before any filter is settled here: stations, nights, listening,
locators and who was heard again. The tables then only choose and add.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from logtool.places.bands import band_name
from logtool.places.nights import night_of_hours
from logtool.records.engine import create_table
from logtool.records.tally import FIELD, HOUR_US, SPLIT
from logtool.tables.choice import Choice
from logtool.tables.listening import make_listening, make_stretches
from logtool.tables.locators import make_own_hours, make_sender_hours
from logtool.tables.stations import stations

if TYPE_CHECKING:
    import duckdb

    from logtool.records.reader import Logs

AGAIN_FROM_US = 60_000_000  # heard again: at least so long after or before; design, section 4
AGAIN_BELOW_US = 86_400_000_000  # and less than that
_SECOND_US = 1_000_000


def make_rollup(logs: Logs, choice: Choice) -> duckdb.DuckDBPyConnection:
    """Make the tables that all figures are built from, unless they are there; return the connection.

    `rollup` has receiver (its name), antenna, place, lon_deg, listening, band, mode, sender (empty: unnamed),
    hour, start_us, night, n, first_us, last_us, again (a reception of it was heard again), row (of `tally`, for its
    lists), locator and borrowed (of the sender in the hour). `listening` says when the receiver
    listened.

    Parameters
    ----------
    logs : Logs
        Opened logs.
    choice : Choice
        Its bounds cut hours, its longest gap decides on listening; no filter is applied.
    """
    logs.tally(choice.bounds)
    connection = logs.connection
    wanted = (logs.read_times, choice.gap_min)
    if logs.rolled_up_for == wanted:
        return connection
    _make_events(logs)
    _make_bands(connection)
    make_stretches(connection, choice.gap_min)
    _make_spots(logs)
    make_listening(connection)
    make_own_hours(connection)
    _make_pieces(connection)
    make_sender_hours(connection, "sender_hour", "SELECT DISTINCT sender, hour FROM piece WHERE sender <> ''")
    _make_rollup(connection)
    logs.rolled_up_for = wanted
    return connection


def _make_events(logs: Logs) -> None:
    """Make the table `event` of all records but receptions; of setups, those in force."""
    connection = logs.connection
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE event AS
        SELECT {FIELD["kind"]} AS kind, {FIELD["receiver"]} AS receiver,
            epoch_us({FIELD["time"]}::TIMESTAMP) AS time_us,
            nullif({FIELD["dial_hz"]}, '') AS dial_hz,
            (nullif(regexp_extract({FIELD["more"]}, '(?:^|; )on_s=([^;]+)', 1), '')::DECIMAL(12, 6)
                * {_SECOND_US})::BIGINT AS on_us
        FROM (SELECT {SPLIT} AS f FROM odd_records)
        WHERE {FIELD["kind"]} <> 'setup'""")
    held = [setup for setups in logs.setups.values() for setup in setups]
    columns = {"receiver": "VARCHAR", "time_us": "BIGINT", "dial_hz": "VARCHAR"}
    values = [[str(getattr(setup, name)) for setup in held] for name in columns]
    create_table(connection, "held", columns, values)
    connection.execute("INSERT INTO event BY NAME SELECT 'setup' AS kind, * FROM held")


def _make_bands(connection: duckdb.DuckDBPyConnection) -> None:
    dials = connection.execute(
        "SELECT dial_hz FROM tally UNION SELECT dial_hz FROM event WHERE dial_hz IS NOT NULL ORDER BY 1"
    ).fetchall()
    values = [[dial for (dial,) in dials], [band_name(int(dial)) for (dial,) in dials]]
    create_table(connection, "dial_band", {"dial_hz": "VARCHAR", "band": "VARCHAR"}, values)


def _make_spots(logs: Logs) -> None:
    """Make the table `spot`: for each hour in play its pieces, each with the station and the night."""
    connection = logs.connection
    receivers = connection.execute("SELECT receiver FROM tally UNION SELECT receiver FROM event").fetchall()
    found = stations(logs, [receiver for (receiver,) in receivers])
    columns = {
        "receiver": "VARCHAR",
        "since_us": "BIGINT",
        "name": "VARCHAR",
        "antenna": "VARCHAR",
        "place": "VARCHAR",
        "lon_deg": "DOUBLE",
    }
    values = [
        [getattr(station, name) for station in found]
        for name in ("receiver", "start_us", "name", "antenna", "place", "lon_deg")
    ]
    create_table(connection, "station", columns, values)
    create_table(connection, "bound", {"start_us": "BIGINT"}, [sorted(logs.bounds)])
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE spot AS
        WITH hours AS (
            SELECT DISTINCT receiver, start_us // {HOUR_US} AS hour FROM tally
            UNION SELECT receiver, unnest(range(from_us // {HOUR_US}, (to_us - 1) // {HOUR_US} + 1)) FROM stretch),
        cut AS (
            SELECT receiver, hour, hour * {HOUR_US} AS start_us FROM hours
            UNION SELECT receiver, hour, since_us FROM station JOIN hours USING (receiver)
                WHERE since_us // {HOUR_US} = hour
            UNION SELECT receiver, hour, start_us FROM hours JOIN bound ON start_us // {HOUR_US} = hour),
        piece AS (
            SELECT *, lead(start_us, 1, (hour + 1) * {HOUR_US}) OVER (
                PARTITION BY receiver, hour ORDER BY start_us) AS stop_us FROM cut)
        SELECT piece.*, name, antenna, place, lon_deg,
            CASE WHEN piece.receiver IN (SELECT receiver FROM event WHERE kind = 'watch')
                THEN 'recorded' ELSE 'assumed' END AS listening
        FROM piece ASOF JOIN station ON piece.receiver = station.receiver AND start_us >= since_us""")
    make_hour_nights(connection, "hour_night", "SELECT DISTINCT lon_deg, hour FROM spot")
    connection.execute("""
        CREATE OR REPLACE TEMP TABLE spot AS
        SELECT spot.*, night FROM spot JOIN hour_night
            ON spot.hour = hour_night.hour AND spot.lon_deg IS NOT DISTINCT FROM hour_night.lon_deg""")


def make_hour_nights(connection: duckdb.DuckDBPyConnection, name: str, wanted: str) -> None:
    """Make a table of lon_deg (null: no place), hour and the night that the hour belongs to.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the table is made.
    name : str
        The table's name.
    wanted : str
        SQL of a query of distinct `lon_deg` and `hour`.
    """
    hours = connection.execute(f"{wanted} ORDER BY ALL").fetchall()
    nights: list[int] = []
    for lon_deg in dict.fromkeys(lon for lon, _ in hours):
        of_lon = np.array([hour for lon, hour in hours if lon == lon_deg])
        nights += night_of_hours(of_lon * 3600.0, lon_deg).tolist()
    columns = {"lon_deg": "DOUBLE", "hour": "BIGINT", "night": "BIGINT"}
    create_table(connection, name, columns, [[lon for lon, _ in hours], [h for _, h in hours], nights])


def _make_pieces(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `piece`: the tally's rows with band, station and their first and last reception."""
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE piece AS
        SELECT t.rowid AS row, spot.name AS receiver, antenna, place, lon_deg, listening, band, mode,
            upper(sender) AS sender, hour, t.start_us, night, n, hour * {HOUR_US} + list_min(times) AS first_us,
            hour * {HOUR_US} + list_max(times) AS last_us
        FROM tally t JOIN spot ON t.receiver = spot.receiver AND t.start_us = spot.start_us
            JOIN dial_band USING (dial_hz)""")


def _make_rollup(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `rollup` of `piece`, `sender_hour` and who was heard again.

    The pieces of one receiver, band and sender do not overlap, so of two pieces it is enough to know the
    first and the last reception: docs/methods.md#heard-again.
    """
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE rollup AS
        WITH span AS (
            SELECT receiver, band, sender, start_us, min(first_us) AS first_us, max(last_us) AS last_us
            FROM piece WHERE sender <> '' GROUP BY ALL),
        short AS (
            SELECT row, receiver, band, sender, first_us, last_us, last_us - {AGAIN_FROM_US} AS before_us,
                first_us + {AGAIN_FROM_US} AS after_us
            FROM piece WHERE sender <> '' AND last_us - first_us < {AGAIN_FROM_US}),
        earlier AS (
            SELECT row FROM short s ASOF JOIN span o
                ON s.receiver = o.receiver AND s.band = o.band AND s.sender = o.sender AND s.before_us >= o.first_us
            WHERE s.first_us - o.last_us < {AGAIN_BELOW_US}),
        later AS (
            SELECT row FROM short s ASOF JOIN span o
                ON s.receiver = o.receiver AND s.band = o.band AND s.sender = o.sender AND s.after_us <= o.last_us
            WHERE o.first_us - s.last_us < {AGAIN_BELOW_US}),
        again AS (
            SELECT row FROM piece WHERE sender <> '' AND last_us - first_us >= {AGAIN_FROM_US}
            UNION SELECT row FROM earlier UNION SELECT row FROM later)
        SELECT piece.*, again.row IS NOT NULL AS again, locator, coalesce(borrowed, false) AS borrowed
        FROM piece LEFT JOIN again USING (row) LEFT JOIN sender_hour USING (sender, hour)""")
    connection.execute("DROP TABLE piece")
