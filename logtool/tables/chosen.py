"""The part of the rollup and of the listening that a choice counts, and what the tables share."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.places.nights import night_name
from logtool.records.engine import among
from logtool.records.privacy import Privacy
from logtool.records.quick import sql_text
from logtool.tables.choice import NO_ANTENNA, Choice
from logtool.tables.locators import make_pairs, resolve
from logtool.tables.rollup import make_rollup

if TYPE_CHECKING:
    import duckdb

    from logtool.records.reader import Logs


MOST_NAMED = 20  # names that a note lists; our choice
_NOTHING_HIDDEN = Privacy()


def make_chosen(logs: Logs, choice: Choice) -> tuple[duckdb.DuckDBPyConnection, list[str]]:
    """Make the tables `heard` and `listened` of what the choice counts; return the connection and notes.

    `heard` has the columns of `rollup`, `listened` those of `listening`, `night` by its name and `whole` (true)
    in both.
    """
    connection = make_rollup(logs, choice)
    for name, source in (("heard", "rollup"), ("listened", "listening")):
        where = " AND ".join(conditions(choice, of_receptions=name == "heard"))
        connection.execute(f"""
            CREATE OR REPLACE TEMP TABLE {name} AS
            SELECT * EXCLUDE (night), true AS whole, strftime(DATE '1970-01-01' + night::INTEGER, '%Y-%m-%d') AS night
            FROM {source} WHERE {where}""")
    return connection, unknown_words(connection, choice, logs.privacy)


def conditions(choice: Choice, *, of_receptions: bool, also_off: bool = False) -> list[str]:
    """Return the SQL conditions of the choice on rows of `rollup` or, without mode and sender, `listening`.

    Where no antenna is chosen, `none` is left out unless `also_off`.
    """
    conditions = ["true"]
    if choice.from_us is not None:
        conditions.append(f"start_us >= {choice.from_us}")
    if choice.to_us is not None:
        conditions.append(f"start_us < {choice.to_us}")
    if choice.receivers:
        plain = "regexp_extract(receiver, '^[^@]*')"
        conditions.append(f"({among('receiver', choice.receivers)} OR {among(plain, choice.receivers)})")
    if choice.antennas:
        conditions.append(among("antenna", choice.antennas))
    elif not also_off:
        conditions.append(f"antenna IS DISTINCT FROM {sql_text(NO_ANTENNA)}")
    if choice.bands:
        conditions.append(among("band", choice.bands))
    if choice.nights:
        days = ", ".join(f"DATE {sql_text(night)} - DATE '1970-01-01'" for night in choice.nights)
        conditions.append(f"night IN ({days})")
    if of_receptions and choice.modes:
        conditions.append(among("mode", choice.modes))
    if of_receptions and choice.senders:
        conditions.append(among("sender", choice.senders))
    return conditions


def unknown_words(
    connection: duckdb.DuckDBPyConnection, choice: Choice, privacy: Privacy = _NOTHING_HIDDEN
) -> list[str]:
    """Return a note for each chosen word that the inputs do not have, with those they have.

    Where senders are hidden no note names any.
    """
    notes = []
    chosen = {
        "receiver": choice.receivers,
        "antenna": choice.antennas,
        "band": choice.bands,
        "mode": choice.modes,
        "night": choice.nights,
        "sender": choice.senders,
    }
    for key, words in chosen.items():
        if not words:
            continue
        also = "" if key in ("mode", "sender") else f" UNION SELECT {key} FROM listening"
        there = [row[0] for row in connection.execute(f"SELECT DISTINCT {key} FROM rollup{also}").fetchall()]
        known = sorted({night_name(word) if key == "night" else word for word in there if word})
        plain = {word.split("@")[0] for word in known} if key == "receiver" else set()
        some = (
            known
            if len(known) <= MOST_NAMED
            else [*known[:MOST_NAMED], f"and {len(known) - MOST_NAMED} more"]
        )
        missing = [word for word in words if word not in known and word not in plain]
        if missing and key == "sender" and privacy.key is not None:
            notes.append(f"{len(missing)} of {len(words)} senders chosen: not in the inputs")
            continue
        notes += [
            f"no {key} {word!r} in the inputs; there are: {', '.join(some) or 'none'}" for word in missing
        ]
    return notes


def same(a: str, b: str, keys: tuple[str, ...]) -> str:
    """Return the SQL condition that two relations agree in the keys, nulls being equal."""
    return " AND ".join(f"{a}.{key} IS NOT DISTINCT FROM {b}.{key}" for key in keys)


def further_keys(choice: Choice, keys: tuple[str, ...]) -> tuple[str, ...]:
    """Return the keys of `--by` that a table with these keys does not have anyway."""
    return tuple(key for key in choice.by if key not in keys)


def in_order(keys: tuple[str, ...]) -> str:
    """Return the SQL order of rows by their keys, nulls first."""
    return ", ".join(f"{key} NULLS FIRST" for key in keys)


def make_senders(connection: duckdb.DuckDBPyConnection, keys: tuple[str, ...]) -> None:
    """Make the table `per_sender`: one row for each sender in each row of a table with the keys.

    It has the keys, sender, n, again, first_us, last_us, nights, place, locator, borrowed, distance_km,
    uncertainty_km, bearing_deg, snr_median_db, snr_best_db, and the first and last mode and band by name of
    its levels. Where `hour` is a key the locator is that of the hour, else it is found over the receptions.

    Parameters
    ----------
    connection : duckdb.DuckDBPyConnection
        Where `heard` is.
    keys : tuple of str
        Columns of `heard`, without `sender`.
    """
    group = (*keys, "sender")
    listed = ", ".join(group)
    nights = "1::BIGINT" if "hour" in keys else "count(DISTINCT night)"
    connection.execute(f"""
        CREATE OR REPLACE TEMP TABLE of_sender AS
        SELECT row_number() OVER () AS id, * FROM (
            SELECT {listed}, list(row) AS rows, sum(n)::BIGINT AS n, bool_or(again) AS again,
                min(first_us) AS first_us, max(last_us) AS last_us, {nights} AS nights,
                arg_max(place, (last_us, place)) AS place, any_value(locator) AS hour_locator,
                any_value(borrowed) AS hour_borrowed
            FROM heard WHERE sender <> '' GROUP BY {listed})""")
    _make_levels(connection)
    if "hour" in keys:
        connection.execute("""
            CREATE OR REPLACE TEMP TABLE row_locator AS
            SELECT id, hour_locator AS locator, hour_borrowed AS borrowed FROM of_sender
            WHERE hour_locator IS NOT NULL""")
    else:
        _make_row_locators(connection)
    make_pairs(connection, "SELECT DISTINCT place, locator FROM of_sender JOIN row_locator USING (id)")
    connection.execute("""
        CREATE OR REPLACE TEMP TABLE per_sender AS
        SELECT of_sender.* EXCLUDE (rows, hour_locator, hour_borrowed), locator,
            CASE WHEN locator IS NOT NULL THEN borrowed END AS borrowed,
            distance_km, uncertainty_km, bearing_deg, snr_median_db, snr_best_db, first_mode, last_mode,
            first_band, last_band
        FROM of_sender LEFT JOIN row_locator USING (id) LEFT JOIN level USING (id)
            LEFT JOIN pair USING (place, locator)""")


def _make_levels(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `level`: for each id of `of_sender` its SNRs' median and best, modes and bands.

    Most have their values in one list; the lists of the others are taken together.
    """
    connection.execute("""
        CREATE OR REPLACE TEMP TABLE level AS
        WITH row_of AS (SELECT id, len(rows) = 1 AS single, unnest(rows) AS row FROM of_sender),
        part AS (
            SELECT id, single, snrs, list_max(snrs)::DOUBLE AS best_db, mode, band
            FROM row_of JOIN tally ON tally.rowid = row JOIN dial_band USING (dial_hz)
            WHERE list_max(snrs) IS NOT NULL),
        median AS (
            SELECT id, list_aggregate(snrs, 'quantile_cont', 0.5)::DOUBLE AS snr_median_db FROM part WHERE single
            UNION ALL
            SELECT id, quantile_cont(snr_db, 0.5) FROM (
                SELECT id, unnest(snrs)::DOUBLE AS snr_db FROM part WHERE NOT single) GROUP BY id)
        SELECT id, any_value(snr_median_db) AS snr_median_db, max(best_db) AS snr_best_db,
            min(mode) AS first_mode, max(mode) AS last_mode, min(band) AS first_band, max(band) AS last_band
        FROM part JOIN median USING (id) GROUP BY id""")


def _make_row_locators(connection: duckdb.DuckDBPyConnection) -> None:
    """Make the table `row_locator` over several hours.

    A sender's own locators among the receptions of the row decide; where they give none, the locators of
    its hours by its receptions there, borrowed ones last.
    """
    resolve(
        connection,
        "row_locator",
        ("id", "borrowed"),
        """
        WITH row_of AS (SELECT id, unnest(rows) AS row FROM of_sender),
        vote AS (
            SELECT id, 0 AS rank, false AS borrowed, locator, count(*) AS n
            FROM (SELECT id, upper(unnest(locators)) AS locator FROM row_of JOIN tally ON tally.rowid = row)
            GROUP BY ALL
            UNION ALL
            SELECT id, 1 + borrowed::INTEGER, borrowed, locator, sum(n)
            FROM row_of JOIN heard USING (row) WHERE locator IS NOT NULL GROUP BY ALL)
        SELECT id, borrowed, locator, n FROM vote QUALIFY rank = min(rank) OVER (PARTITION BY id)""",
    )
