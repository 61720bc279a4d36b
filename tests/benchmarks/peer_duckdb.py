"""A bare DuckDB script with the columns of `reach`: no check, no ledger, no repeats, one receiver and dial."""

from __future__ import annotations

import sys

import duckdb

from logtool.records.layout import COLUMN_NAMES as NAMES
from tests.benchmarks.peer import distances, print_rows

TYPES = {"time": "TIMESTAMP", "snr_db": "DOUBLE", "dial_hz": "BIGINT"}


def main(path: str) -> None:
    """Print the rows of `reach` for one log."""
    con = duckdb.connect()
    columns = ", ".join(f"'{name}': '{TYPES.get(name, 'VARCHAR')}'" for name in NAMES)
    con.execute(f"""
        CREATE TABLE g AS
        SELECT date_trunc('hour', time) AS hour, receiver, dial_hz, mode, sender, count(*) AS n, min(time) AS t0,
            max(time) AS t1, median(snr_db) AS snr, list(DISTINCT time) AS times,
            list(locator) FILTER (length(locator) >= 4) AS locators
        FROM read_csv('{path}', auto_detect=false, header=false, delim='\t', quote='', escape='', comment='#',
            null_padding=true, columns={{{columns}}})
        WHERE kind = 'heard' GROUP BY ALL""")
    con.execute("""
        CREATE TABLE own AS
        SELECT hour, sender, arg_max(locator, (n, length(locator))) AS locator FROM (
            SELECT hour, sender, locator, count(*) AS n
            FROM (SELECT hour, sender, upper(unnest(locators)) AS locator FROM g) GROUP BY ALL) GROUP BY ALL""")
    con.execute("""
        CREATE TABLE placed AS
        WITH w AS (SELECT hour, sender FROM g ANTI JOIN own USING (hour, sender)),
        near AS (
            SELECT w.*, e.hour AS eh, e.locator AS el, l.hour AS lh, l.locator AS ll FROM w
            ASOF LEFT JOIN own e ON w.sender = e.sender AND w.hour > e.hour
            ASOF LEFT JOIN own l ON w.sender = l.sender AND w.hour < l.hour)
        SELECT hour, sender, locator FROM own UNION ALL
        SELECT hour, sender, CASE WHEN eh IS NULL OR lh - hour < hour - eh THEN ll ELSE el END FROM near
        WHERE least(hour - eh, lh - hour) <= INTERVAL 14 DAY""")
    locators = [row[0] for row in con.execute("SELECT DISTINCT locator FROM placed ORDER BY 1").fetchall()]
    distance_km, uncertainty_km = distances(locators)
    con.execute("CREATE TABLE pair (locator VARCHAR, km DOUBLE, u DOUBLE)")
    con.execute(
        "INSERT INTO pair SELECT unnest(?), unnest(?), unnest(?)",
        [locators, distance_km.tolist(), uncertainty_km.tolist()],
    )
    con.execute("""
        CREATE TABLE minutes AS
        WITH t AS (SELECT DISTINCT unnest(times) AS t FROM g),
        s AS (SELECT t, lead(t) OVER (ORDER BY t) AS u FROM t),
        c AS (
            SELECT date_trunc('hour', t) AS hour, t, least(u, date_trunc('hour', t) + INTERVAL 1 HOUR) AS u
            FROM s WHERE u - t <= INTERVAL 10 MINUTE
            UNION ALL
            SELECT date_trunc('hour', u), date_trunc('hour', u), u
            FROM s WHERE u - t <= INTERVAL 10 MINUTE AND date_trunc('hour', u) > t)
        SELECT hour, sum(epoch_us(u) - epoch_us(t)) / 6e7 AS minutes FROM c GROUP BY hour""")
    rows = con.execute("""
        WITH s AS (
            SELECT *, lag(t1) OVER w AS p1, lag(t0) OVER w AS p0, lead(t0) OVER w AS n0, lead(t1) OVER w AS n1
            FROM g WINDOW w AS (PARTITION BY receiver, sender ORDER BY hour)),
        a AS (
            SELECT hour, sender, n, snr, coalesce(t1 - t0 >= INTERVAL 1 MINUTE
                OR (t1 - p0 >= INTERVAL 1 MINUTE AND t0 - p1 < INTERVAL 1 DAY)
                OR (n1 - t0 >= INTERVAL 1 MINUTE AND n0 - t1 < INTERVAL 1 DAY), false) AS again
            FROM s),
        j AS (
            SELECT * FROM a LEFT JOIN placed USING (hour, sender) LEFT JOIN pair USING (locator)
            LEFT JOIN minutes USING (hour))
        SELECT strftime(hour, '%Y-%m-%dT%H:%M:%SZ'), minutes, sum(n)::BIGINT, count(*), count(*) FILTER (NOT again),
            CASE WHEN minutes >= 30 THEN sum(1 - (1 - 30 / minutes) ** n) END, count(km),
            count(DISTINCT left(locator, 4)), min(km) FILTER (u <= km / 2), quantile_cont(km, 0.5),
            CASE WHEN count(km) >= 5 THEN quantile_cont(km, 0.9) END, max(km) FILTER (again),
            arg_min(sender, (-km, sender)) FILTER (again AND km IS NOT NULL), max(km) FILTER (NOT again), median(snr)
        FROM j GROUP BY hour, minutes ORDER BY hour""").fetchall()
    print_rows(rows)


if __name__ == "__main__":
    main(sys.argv[1])
