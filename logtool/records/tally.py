"""The first pass over the text: one row per hour, receiver, dial, mode and sender, and all odd lines.

The engine reads the lines in parallel, vouches for those that match the quick patterns and groups them in
the same breath; no record is kept. What it cannot vouch for goes to the judge.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from logtool.records.judge import is_blank, is_comment, judge
from logtool.records.layout import COLUMN_NAMES
from logtool.records.quick import accepts_sql

if TYPE_CHECKING:
    import duckdb

HOUR_US = 3_600_000_000
OWN_LOCATOR_CHARACTERS = 4  # a sender's locator has at least so many to count as its own place
BLANK, COMMENT = "blank", "comment"

# The fields of a line that was split at its TABs; the engine counts from 1.
_F = {name: f"f[{i}]" for i, name in enumerate(COLUMN_NAMES, 1)}
_FIELDS = f"""epoch_us({_F["time"]}::TIMESTAMP) AS time_us, {_F["receiver"]} AS receiver,
    {_F["dial_hz"]} AS dial_hz, {_F["mode"]} AS mode, {_F["sender"]} AS sender, {_F["locator"]} AS locator,
    nullif({_F["snr_db"]}, '')::DECIMAL(8, 6) AS snr_db"""
_SPLIT = "string_split(line, chr(9))"
# A group of the tally; `start_us` is the start of the hour, or of the piece of it after a cut.
_KEYS = ("file", "start_us", "receiver", "dial_hz", "mode", "sender")
_NAMES = ", ".join(_KEYS)
_PLACED = f"length(locator) >= {OWN_LOCATOR_CHARACTERS}"
_LOCATORS = f"list(locator) FILTER ({_PLACED})"
_LISTS = f"""count(*) AS n, list((time_us % {HOUR_US})::UINTEGER) AS times, list(snr_db) AS snrs,
    {_LOCATORS} AS locators"""


class Cuts(NamedTuple):
    """Where hours are cut: by the table `cuts` (receiver, hour, start_us, stop_us), and at bounds."""

    by_setups: bool
    bounds: tuple[int, ...]  # microseconds since 1970


class Odd(NamedTuple):
    """A line that is no record, how often a file has it, and why: a reason, `blank` or `comment`."""

    file: int
    line: str
    count: int
    why: str


class Repeats(NamedTuple):
    """How many lines of a file are equal to an earlier record's."""

    file: int
    count: int


def create_tally(connection: duckdb.DuckDBPyConnection, lines: str, *, cuts: Cuts) -> list[Odd]:
    """Make the tables `tally` and `odd_records` from the relation `lines`; return what is no record.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the tables are made.
    lines : str
        SQL of a relation of `file` and `line`.
    cuts : Cuts
        Where hours are cut.

    Returns
    -------
    list of Odd
        `tally` has the columns file, start_us (of the hour or the piece of it), receiver, dial_hz, mode, sender, n and the lists times (microseconds into the hour), snrs,
        placed (whether there is an own locator) and hashes (of the lines), all of n in one order, and
        locators (the own ones, in that order). `odd_records` (file, line, n) has the records that
        are not in it.
    """
    source = f"""
        SELECT file, CASE WHEN NOT quick THEN line END AS odd, hash(line) AS hash,
            CASE WHEN quick THEN {_SPLIT} END AS f
        FROM (SELECT file, line, {accepts_sql("heard")} AS quick FROM {lines})"""
    connection.execute(
        f"CREATE OR REPLACE TABLE tally AS SELECT odd, {_NAMES}, {_LISTS}, list(hash) AS hashes,"
        f" list({_PLACED}) AS placed"
        f" FROM ({_fields_sql(source, cuts=cuts)}) GROUP BY odd, {_NAMES}"
    )
    odd = _judged(connection)
    connection.execute("DELETE FROM tally WHERE odd IS NOT NULL")
    connection.execute("ALTER TABLE tally DROP COLUMN odd")
    return odd


def _fields_sql(source: str, *, cuts: Cuts) -> str:
    """Return the SQL that reads the fields `f` of a relation and puts each line into its group."""
    pieces, join = [f"time_us // {HOUR_US} * {HOUR_US}"], ""
    if cuts.by_setups:
        pieces.append("cuts.start_us")
        join = f"""LEFT JOIN cuts ON cuts.receiver = fields.receiver AND cuts.hour = time_us // {HOUR_US}
            AND time_us >= cuts.start_us AND time_us < cuts.stop_us"""
    for bound in cuts.bounds:
        after = f"time_us >= {bound} AND time_us // {HOUR_US} = {bound // HOUR_US}"
        pieces.append(f"CASE WHEN {after} THEN {bound} END")
    return f"""
        SELECT fields.*, greatest({", ".join(pieces)}) AS start_us
        FROM (SELECT * EXCLUDE (f), {_FIELDS} FROM ({source})) AS fields {join}"""


def _judged(connection: duckdb.DuckDBPyConnection) -> list[Odd]:
    """Judge the odd lines that do not match the pattern of events; keep the records among all of them."""
    connection.execute(f"""
        CREATE OR REPLACE TABLE odd_records AS
        SELECT file, line, n, {accepts_sql("event")} AS good
        FROM (SELECT file, odd AS line, n FROM tally WHERE odd IS NOT NULL)""")
    odd, good = [], []
    for file, line, count in connection.execute(
        "SELECT file, line, n FROM odd_records WHERE NOT good"
    ).fetchall():
        raw = line.encode()
        if is_comment(raw):
            odd.append(Odd(file, line, count, COMMENT))
        elif is_blank(raw):
            odd.append(Odd(file, line, count, BLANK))
        elif isinstance(judged := judge(raw), str):
            odd.append(Odd(file, line, count, judged))
        else:
            good.append(line)
    connection.execute(
        "UPDATE odd_records SET good = true WHERE NOT good AND line IN (SELECT unnest(?::VARCHAR[]))", [good]
    )
    connection.execute("DELETE FROM odd_records WHERE NOT good")
    return odd


def drop_repeated(connection: duckdb.DuckDBPyConnection, *, cuts: Cuts) -> list[Repeats]:
    """Count each record once, charge the others to the later files and return how many those have.

    Then the receptions among the odd records move to the tally, and `hashes` and `placed` go. Two lines are
    taken as equal where their 64-bit hashes are: docs/methods.md#repeated-lines.
    """
    repeats = _drop_repeated_odd(connection)
    hashes = connection.execute("SELECT unnest(hashes) AS hash FROM tally").fetchnumpy()["hash"]
    hashes = np.sort(np.asarray(hashes, np.uint64))
    twice = np.unique(hashes[1:][hashes[1:] == hashes[:-1]])
    if len(twice):
        connection.execute("CREATE OR REPLACE TEMP TABLE twice AS SELECT column0 AS hash FROM twice")
        repeats += _drop_repeated_heard(connection)
    connection.execute("ALTER TABLE tally DROP COLUMN hashes")
    connection.execute("ALTER TABLE tally DROP COLUMN placed")
    heard = f"SELECT file, {_SPLIT} AS f FROM odd_records WHERE {_SPLIT}[2] = 'heard'"
    connection.execute(
        f"INSERT INTO tally BY NAME SELECT {_NAMES}, {_LISTS}"
        f" FROM ({_fields_sql(heard, cuts=cuts)}) GROUP BY {_NAMES}"
    )
    connection.execute(f"DELETE FROM odd_records WHERE {_SPLIT}[2] = 'heard'")
    return repeats


def _drop_repeated_heard(connection: duckdb.DuckDBPyConnection) -> list[Repeats]:
    """Rebuild the groups that hold a repeated line. The lists of a group are in one order."""
    connection.execute("""
        CREATE OR REPLACE TEMP TABLE member AS
        WITH hit AS (
            SELECT rowid AS row, * FROM tally WHERE rowid IN (
                SELECT row FROM (SELECT rowid AS row, unnest(hashes) AS hash FROM tally) SEMI JOIN twice USING (hash))),
        one AS (
            SELECT row, file, hashes, locators, unnest(range(1, n + 1)) AS i, times[i] AS time, snrs[i] AS snr_db,
                CASE WHEN placed[i] THEN locators[len(list_filter(placed[:i], lambda p: p))] END AS locator
            FROM hit)
        SELECT row, file, time, snr_db, locator,
            row_number() OVER (PARTITION BY hashes[i] ORDER BY file) = 1 AS kept
        FROM one""")
    connection.execute("""
        DELETE FROM tally WHERE rowid IN (SELECT row FROM member GROUP BY row HAVING NOT bool_or(kept))""")
    connection.execute(f"""
        UPDATE tally SET n = again.n, times = again.times, snrs = again.snrs, locators = again.locators
        FROM (SELECT row, count(*) AS n, list(time) AS times, list(snr_db) AS snrs, {_LOCATORS} AS locators
              FROM member WHERE kept GROUP BY row) AS again
        WHERE tally.rowid = again.row""")
    return [
        Repeats(*row)
        for row in connection.execute(
            "SELECT file, count(*) FROM member WHERE NOT kept GROUP BY file"
        ).fetchall()
    ]


def _drop_repeated_odd(connection: duckdb.DuckDBPyConnection) -> list[Repeats]:
    connection.execute("""
        CREATE OR REPLACE TABLE odd_records AS
        SELECT file, line, n - (file = min(file) OVER (PARTITION BY line))::INTEGER AS repeated FROM odd_records""")
    repeats = connection.execute(
        "SELECT file, sum(repeated)::BIGINT FROM odd_records WHERE repeated > 0 GROUP BY file"
    ).fetchall()
    connection.execute(
        "CREATE OR REPLACE TABLE odd_records AS SELECT min(file) AS file, line FROM odd_records GROUP BY line"
    )
    return [Repeats(*row) for row in repeats]
