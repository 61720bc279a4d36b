"""Which locator a sender has: in an hour, over several hours, or borrowed from a near hour."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.places.locator import centres, half_diagonals_km, written
from logtool.records.engine import create_table
from logtool.records.tally import HOUR_US

if TYPE_CHECKING:
    import duckdb

BORROW_HOURS = 14 * 24  # a locator is borrowed from no farther; design, section 4


def most_frequent(counts: dict[str, int]) -> str:
    """Return the locator that a sender's locators speak for.

    One that begins others counts for the longer one; of several, for the most frequent. Then the most
    frequent; ties: the longer, then alphabetical.

    Parameters
    ----------
    counts : dict of str to int
        How often each locator was heard, upper case.

    Examples
    --------
    >>> most_frequent({"JN58": 3, "JN58TD": 1, "KO02": 3})
    'JN58TD'
    """
    votes = dict(counts)
    for short in sorted(counts, key=lambda locator: (len(locator), locator)):
        longer = [other for other in counts if other != short and other.startswith(short)]
        if longer:
            votes[_first(longer, counts)] += votes.pop(short)
    return _first(list(votes), votes)


def _first(locators: list[str], counts: dict[str, int]) -> str:
    return min(locators, key=lambda locator: (-counts[locator], -len(locator), locator))


def resolve(connection: duckdb.DuckDBPyConnection, name: str, keys: tuple[str, ...], counted: str) -> None:
    """Make the table `name` of the keys and the `locator` that their counts speak for.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the table is made.
    name : str
        The table's name.
    keys : tuple of str
        Columns that tell the groups.
    counted : str
        SQL of a relation of the keys, `locator` (upper case) and `n`, one row each.
    """
    listed = ", ".join(keys)
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE {name} AS
        SELECT {listed}, list_sort(list({{'locator': locator, 'n': n::BIGINT}})) AS votes, max(locator) AS locator,
            false AS contested
        FROM ({counted}) GROUP BY {listed}""")
    # Where all others begin the last one in the alphabet, they all count for it.
    connection.execute(f"""
        UPDATE {name} SET contested = true
        WHERE len(votes) > 1 AND len(list_filter(votes, lambda v: NOT starts_with(locator, v.locator))) > 0""")
    rows = connection.execute(f"""
        SELECT rowid, list_transform(votes, lambda v: v.locator), list_transform(votes, lambda v: v.n)
        FROM {name} WHERE contested""").fetchall()
    chosen = [most_frequent(dict(zip(locators, counts, strict=True))) for _, locators, counts in rows]
    create_table(
        connection, "chosen", {"row": "BIGINT", "locator": "VARCHAR"}, [[row for row, _, _ in rows], chosen]
    )
    connection.execute(
        f"UPDATE {name} SET locator = chosen.locator FROM chosen WHERE {name}.rowid = chosen.row"
    )
    connection.execute(f"ALTER TABLE {name} DROP COLUMN votes")
    connection.execute(f"ALTER TABLE {name} DROP COLUMN contested")


def make_own_hours(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `own_hour`: sender, hour and locator where it gave one, over all receivers."""
    resolve(
        connection,
        "own_hour",
        ("sender", "hour"),
        f"""SELECT sender, hour, locator, count(*) AS n
            FROM (SELECT upper(sender) AS sender, start_us // {HOUR_US} AS hour, upper(unnest(locators)) AS locator
                  FROM tally WHERE sender <> '')
            GROUP BY ALL""",
    )


def make_sender_hours(connection: duckdb.DuckDBPyConnection, name: str, wanted: str) -> None:
    """Make a table of sender, hour, locator (null: none) and borrowed for the pairs that are wanted.

    An hour without a locator borrows from the nearest hour that has one, the earlier on a tie, at most
    14 days away; call signs with `/` never borrow.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the table `own_hour` is.
    name : str
        The table's name.
    wanted : str
        SQL of a relation of distinct `sender` and `hour`.
    """
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE {name} AS
        WITH wanted AS ({wanted}),
        without AS (SELECT * FROM wanted ANTI JOIN own_hour USING (sender, hour)),
        near AS (
            SELECT w.sender, w.hour, e.hour AS e_hour, e.locator AS e_locator, l.hour AS l_hour,
                l.locator AS l_locator
            FROM without w
            ASOF LEFT JOIN own_hour e ON w.sender = e.sender AND w.hour > e.hour
            ASOF LEFT JOIN own_hour l ON w.sender = l.sender AND w.hour < l.hour
            WHERE NOT contains(w.sender, '/')),
        lent AS (
            SELECT sender, hour, CASE WHEN e_hour IS NULL OR l_hour - hour < hour - e_hour THEN l_locator
                ELSE e_locator END AS locator
            FROM near WHERE least(hour - e_hour, l_hour - hour) <= {BORROW_HOURS})
        SELECT sender, hour, locator, false AS borrowed FROM own_hour SEMI JOIN wanted USING (sender, hour)
        UNION ALL SELECT sender, hour, locator, true FROM lent
        UNION ALL SELECT sender, hour, NULL, false FROM without ANTI JOIN lent USING (sender, hour)""")


def make_pairs(connection: duckdb.DuckDBPyConnection, pairs: str) -> None:
    """Make the table `pair`: place, locator, distance_km, uncertainty_km, bearing_deg and `written`.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where the table is made.
    pairs : str
        SQL of a relation of `place` and `locator`; rows where one is null have no distance.
    """
    found = connection.execute(
        f"SELECT DISTINCT place, locator FROM ({pairs}) WHERE place IS NOT NULL AND locator IS NOT NULL ORDER BY ALL"
    ).fetchall()
    columns = {
        "place": "VARCHAR",
        "locator": "VARCHAR",
        "distance_km": "DOUBLE",
        "uncertainty_km": "DOUBLE",
        "bearing_deg": "DOUBLE",
    }
    if not found:
        create_table(connection, "pair", columns, [])
        return
    from logtool.places.geodesic import inverse

    places, locators = [list(column) for column in zip(*found, strict=True)]
    place_names, locator_names = [written(place) for place in places], [written(own) for own in locators]
    line = inverse(*centres(place_names), *centres(locator_names))
    uncertainty_km = half_diagonals_km(place_names) + half_diagonals_km(locator_names)
    bearing_deg = [
        bearing if distance >= uncertainty else None
        for bearing, distance, uncertainty in zip(
            line.azimuth_a_deg.tolist(), line.distance_km.tolist(), uncertainty_km.tolist(), strict=True
        )
    ]
    values = [places, locators, line.distance_km.tolist(), uncertainty_km.tolist(), bearing_deg]
    create_table(connection, "pair", columns, values)
