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

# How the engine splits the column `line` into the list `f` of fields, and where each stands: from 1 on.
SPLIT = "string_split(line, chr(9))"
FIELD = {name: f"f[{i}]" for i, name in enumerate(COLUMN_NAMES, 1)}
_FIELDS = f"""epoch_us({FIELD["time"]}::TIMESTAMP) AS time_us, {FIELD["receiver"]} AS receiver,
    {FIELD["dial_hz"]} AS dial_hz, {FIELD["mode"]} AS mode, {FIELD["sender"]} AS sender, {{locator}} AS locator,
    nullif({FIELD["snr_db"]}, '')::DECIMAL(8, 6) AS snr_db"""
# A group of the tally; `start_us` is the start of the hour, or of the piece of it after a cut.
_KEYS = ("file", "start_us", "receiver", "dial_hz", "mode", "sender")
_NAMES = ", ".join(_KEYS)
# The engine's hash of a line alone is weak: lines that differ in their time and one more field share it.
_HASH = "xor(hash(line), hash({time}))"
_PLACED = f"length(locator) >= {OWN_LOCATOR_CHARACTERS}"
_LOCATORS = f"list(locator) FILTER ({_PLACED})"
_LISTS = f"""count(*) AS n, list((time_us % {HOUR_US})::UINTEGER) AS times, list(snr_db) AS snrs,
    {_LOCATORS} AS locators"""


class Cuts(NamedTuple):
    """Where hours are cut, by the table `cuts` (receiver, hour, start_us, stop_us) and at bounds; and locators."""

    by_setups: bool
    bounds: tuple[int, ...]  # microseconds since 1970
    locator_characters: int | None = None  # None: whole


class Odd(NamedTuple):
    """A line that is no record, how often a file has it, and why: a reason, `blank` or `comment`."""

    file: int
    line: str
    copies: int
    why: str


class Repeats(NamedTuple):
    """How many lines of a file are equal to an earlier record's."""

    file: int
    copies: int


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
        What is no record.

    Notes
    -----
    `tally` has the columns file, start_us (of the hour or the piece of it), receiver, dial_hz, mode, sender,
    n (receptions) and lists: times (microseconds into the hour), snrs and hashes (of the lines), all of n
    in one order, and locators (the own ones). `odd_records` (file, line, n) has the records that are not
    in it.
    """
    source = f"""
        SELECT file, CASE WHEN NOT quick THEN line END AS odd, {_HASH.format(time=FIELD["time"])} AS hash, f
        FROM (SELECT *, CASE WHEN quick THEN {SPLIT} END AS f
              FROM (SELECT file, line, {accepts_sql("heard")} AS quick FROM {lines}))"""
    connection.execute(
        f"CREATE OR REPLACE TABLE tally AS SELECT odd, {_NAMES}, {_LISTS}, list(hash) AS hashes"
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
    locator = FIELD["locator"]
    if cuts.locator_characters is not None:
        locator = f"left({locator}, {cuts.locator_characters})"
    return f"""
        SELECT fields.*, greatest({", ".join(pieces)}) AS start_us
        FROM (SELECT * EXCLUDE (f), {_FIELDS.format(locator=locator)} FROM ({source})) AS fields {join}"""


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


def drop_repeated(connection: duckdb.DuckDBPyConnection, lines: str, *, cuts: Cuts) -> list[Repeats]:
    """Count each record once, charge the others to the later files and return how many those have.

    Then the receptions among the odd records join the tally, and `hashes` goes. The engine's
    hash only tells which lines may be equal; the lines themselves decide.
    """
    repeats = _drop_repeated_odd(connection)
    candidates = _may_be_equal(connection)
    if len(candidates):
        connection.execute("CREATE OR REPLACE TEMP TABLE candidate AS SELECT column0 AS hash FROM candidates")
        repeats += _drop_copies(connection, lines, cuts)
    connection.execute("ALTER TABLE tally DROP COLUMN hashes")
    connection.execute(f"""
        CREATE OR REPLACE TABLE odd_heard AS SELECT * FROM odd_records WHERE {SPLIT}[2] = 'heard'""")
    connection.execute(f"DELETE FROM odd_records WHERE {SPLIT}[2] = 'heard'")
    heard = f"SELECT file, {SPLIT} AS f FROM odd_heard"
    connection.execute(
        f"INSERT INTO tally BY NAME SELECT {_NAMES}, {_LISTS}"
        f" FROM ({_fields_sql(heard, cuts=cuts)}) GROUP BY {_NAMES}"
    )
    return repeats


def _may_be_equal(connection: duckdb.DuckDBPyConnection) -> np.ndarray:
    """Return the hashes that occur more than once."""
    hashes = connection.execute("SELECT unnest(hashes) AS hash FROM tally").fetchnumpy()["hash"]
    hashes = np.asarray(hashes, np.uint64)
    hashes.sort()
    return np.unique(hashes[1:][hashes[1:] == hashes[:-1]])


def _drop_copies(connection: duckdb.DuckDBPyConnection, lines: str, cuts: Cuts) -> list[Repeats]:
    """Take what repeated lines added out of their groups; return how many there are."""
    copies = f"""
        SELECT file, {SPLIT} AS f, n - (file = min(file) OVER (PARTITION BY line))::INTEGER AS repeated
        FROM (SELECT file, line, count(*) AS n FROM {lines}
              WHERE {_HASH.format(time="split_part(line, chr(9), 1)")} IN (SELECT hash FROM candidate)
                  AND {accepts_sql("heard")}
              GROUP BY ALL)"""
    same = " AND ".join(f"tally.{name} = copy.{name}" for name in _KEYS)
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE extra AS
        SELECT tally.rowid AS row, copy.file, repeated, (time_us % {HOUR_US})::UINTEGER AS time, snr_db, locator
        FROM ({_fields_sql(copies, cuts=cuts)}) AS copy JOIN tally ON {same} WHERE repeated > 0""")
    connection.execute(f"""
        UPDATE tally SET n = len(heard.times), times = heard.times, snrs = heard.snrs, locators = own.locators
        FROM ({_without(times="time", snrs="snr_db")}) AS heard JOIN ({_without(locators="locator")}) AS own
            USING (row)
        WHERE tally.rowid = heard.row""")
    connection.execute("DELETE FROM tally WHERE n = 0")
    return [
        Repeats(*row)
        for row in connection.execute(
            "SELECT file, sum(repeated)::BIGINT FROM extra GROUP BY file"
        ).fetchall()
    ]


def _without(**values: str) -> str:
    """Return SQL for lists of the tally in the rows that `extra` names, less the values that it has.

    The lists are named with the column of `extra` that holds their values; they are of one order and stay so.
    """
    columns = ", ".join(values.values())
    lists = ", ".join(f"unnest({name}) AS {value}" for name, value in values.items())
    same = " AND ".join(f"one.{value} IS NOT DISTINCT FROM less.{value}" for value in values.values())
    kept = ", ".join(
        f"coalesce(list(one.{value}) FILTER (nth > coalesce(gone, 0)), []) AS {name}"
        for name, value in values.items()
    )
    return f"""
        SELECT hit.row, {kept}
        FROM (SELECT DISTINCT row FROM extra) AS hit
            LEFT JOIN (
                SELECT *, row_number() OVER (PARTITION BY row, {columns}) AS nth
                FROM (SELECT rowid AS row, {lists} FROM tally WHERE rowid IN (SELECT row FROM extra))
            ) AS one USING (row)
            LEFT JOIN (SELECT row, {columns}, sum(repeated) AS gone FROM extra GROUP BY ALL) AS less
                ON one.row = less.row AND {same}
        GROUP BY hit.row"""


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
