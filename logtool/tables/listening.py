"""When the receiver was listening: recorded by watch lines, or assumed between near records."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.records.tally import HOUR_US

if TYPE_CHECKING:
    import duckdb

MINUTE_US = 60_000_000
BEFORE_ALL_US, AFTER_ALL_US = -(2**62), 2**62


def make_stretches(connection: duckdb.DuckDBPyConnection, gap_min: float) -> None:
    """Make the table `stretch`: receiver, band, from_us and to_us.

    Recorded ones for receivers with any watch, assumed ones for the others. Needs the tables `tally`,
    `event` and `dial_band`. Stretches of one receiver and band do not overlap.
    A dial that is not told is that of the latest setup or heard line before; of several at one instant, all.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the tables are.
    gap_min : float
        The longest gap between two records over which listening is assumed. [min]
    """
    _make_tuned(connection)
    gap_us = round(gap_min * MINUTE_US)
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE stretch AS
        WITH watched AS (SELECT DISTINCT receiver FROM event WHERE kind = 'watch'),
        halted AS (SELECT DISTINCT receiver, time_us FROM event WHERE kind = 'stop'),
        watch AS (
            SELECT e.receiver, e.dial_hz, e.time_us - e.on_us AS from_us, e.time_us AS end_us
            FROM event e WHERE kind = 'watch' AND e.on_us > 0),
        recorded AS (
            SELECT w.receiver, w.dial_hz, from_us, end_us, least(end_us, h.time_us) AS to_us
            FROM watch w ASOF LEFT JOIN halted h ON w.receiver = h.receiver AND w.from_us < h.time_us),
        told AS (
            SELECT r.receiver, CASE WHEN r.dial_hz IS NULL THEN t.dials ELSE [r.dial_hz] END AS dials,
                from_us, to_us
            FROM recorded r ASOF LEFT JOIN tuned t ON r.receiver = t.receiver AND r.end_us > t.since_us),
        instant AS (
            SELECT receiver, time_us FROM event
            UNION SELECT receiver, start_us // {HOUR_US} * {HOUR_US} + unnest(times) FROM tally),
        step AS (
            SELECT receiver, time_us, lag(time_us) OVER (PARTITION BY receiver ORDER BY time_us) AS before_us
            FROM instant ANTI JOIN watched USING (receiver)),
        start AS (
            SELECT s.receiver, s.time_us, before_us
            FROM step s LEFT JOIN halted h ON s.receiver = h.receiver AND s.before_us = h.time_us
            WHERE before_us IS NULL OR s.time_us - before_us > {gap_us} OR h.time_us IS NOT NULL),
        latest AS (SELECT receiver, max(time_us) AS latest_us FROM step GROUP BY receiver),
        assumed AS (
            SELECT receiver, time_us AS from_us, lead(before_us, 1, latest_us) OVER (
                PARTITION BY receiver ORDER BY time_us) AS to_us
            FROM start JOIN latest USING (receiver) QUALIFY to_us > from_us),
        guessed AS (
            SELECT a.receiver, dials, greatest(from_us, since_us) AS from_us, least(to_us, until_us) AS to_us
            FROM assumed a JOIN tuned t ON a.receiver = t.receiver AND from_us < until_us AND to_us > since_us),
        piece AS (FROM told UNION ALL FROM guessed),
        banded AS (
            SELECT DISTINCT receiver, band, from_us, to_us
            FROM (SELECT receiver, unnest(coalesce(dials, [NULL])) AS dial_hz, from_us, to_us FROM piece)
            LEFT JOIN dial_band USING (dial_hz)),
        marked AS (
            SELECT *, from_us > max(to_us) OVER (
                PARTITION BY receiver, band ORDER BY from_us, to_us ROWS BETWEEN UNBOUNDED PRECEDING AND 1 PRECEDING
            ) AS apart FROM banded),
        joined AS (
            SELECT *, sum(coalesce(apart, true)::INTEGER) OVER (
                PARTITION BY receiver, band ORDER BY from_us, to_us ROWS UNBOUNDED PRECEDING) AS nth FROM marked)
        SELECT receiver, band, min(from_us) AS from_us, max(to_us) AS to_us
        FROM joined GROUP BY receiver, band, nth""")


def _make_tuned(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `tuned`: receiver, since_us, until_us and the dials that it was on (null: not told)."""
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE tuned AS
        WITH told AS (
            SELECT receiver, dial_hz, start_us // {HOUR_US} * {HOUR_US} AS base_us, times FROM tally
            UNION ALL SELECT receiver, dial_hz, time_us, [0] FROM event WHERE kind = 'setup'),
        dial AS (
            SELECT receiver, dial_hz, min(base_us + list_min(times)) AS time_us FROM told GROUP BY ALL),
        changing AS (SELECT receiver FROM dial GROUP BY receiver HAVING count(*) > 1),
        one AS (
            SELECT receiver, dial_hz, time_us FROM dial ANTI JOIN changing USING (receiver)
            UNION SELECT receiver, dial_hz, base_us + unnest(times) FROM told SEMI JOIN changing USING (receiver)),
        instant AS (
            SELECT receiver, time_us, list_sort(list(dial_hz)) AS dials FROM one GROUP BY ALL
            UNION ALL SELECT DISTINCT receiver, {BEFORE_ALL_US}, NULL::VARCHAR[]
            FROM (SELECT receiver FROM event UNION SELECT receiver FROM tally)),
        change AS (
            SELECT * FROM instant WINDOW w AS (PARTITION BY receiver ORDER BY time_us)
            QUALIFY dials IS DISTINCT FROM lag(dials) OVER w OR row_number() OVER w = 1)
        SELECT receiver, time_us AS since_us, dials,
            lead(time_us, 1, {AFTER_ALL_US}) OVER (PARTITION BY receiver ORDER BY time_us) AS until_us
        FROM change""")


def make_listening(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `listening`: the stretches cut at hours, setups and bounds, with their station.

    Needs the tables `stretch` and `spot`; see `logtool.tables.rollup`.
    """
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE listening AS
        WITH hourly AS (
            SELECT receiver, band, from_us, to_us,
                unnest(range(from_us // {HOUR_US}, (to_us - 1) // {HOUR_US} + 1)) AS hour
            FROM stretch),
        cut AS (
            SELECT spot.*, band, greatest(from_us, start_us) AS from_us, least(to_us, stop_us) AS to_us
            FROM hourly JOIN spot USING (receiver, hour)
            WHERE from_us < stop_us AND to_us > start_us)
        SELECT name AS receiver, antenna, place, lon_deg, band, hour, night, start_us, from_us, to_us, listening
        FROM cut""")
