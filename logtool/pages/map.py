"""What the map shows, gathered from opened logs by the same inner functions as the tables."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

import numpy as np

from logtool.errors import NoRecordsError, UsageError
from logtool.pages.map_data import (
    MapCounts,
    MapData,
    MapGroup,
    MapHour,
    MapPair,
    MapReceiver,
    MapSender,
    MapTotals,
)
from logtool.pages.map_lines import lines_behind, short_names
from logtool.pages.map_notes import figure_notes, file_notes, ledger_lines
from logtool.pages.map_page import map_html
from logtool.pages.map_privacy import privacy_notes, private_choice, private_options
from logtool.places.locator import written
from logtool.places.nights import HALF_PAST_S
from logtool.places.sun import subsolar_point
from logtool.records.engine import among
from logtool.tables.choice import Choice
from logtool.tables.chosen import make_chosen, make_senders
from logtool.tables.listening import MINUTE_US
from logtool.tables.result import Table, output_value, written_time

if TYPE_CHECKING:
    import duckdb

    from logtool.records.reader import Logs

GROUP_KEYS = ("receiver", "antenna", "band", "mode")
HOUR_S = 3600
NAMES_IN_TITLE = 3
DATE_CHARACTERS = len("2026-03-01")
# Every piece of an hour with receptions or listening in the choice, and until when.
_PIECES = """(SELECT receiver, place, hour, start_us, night, last_us AS until_us FROM heard
    UNION ALL SELECT receiver, place, hour, start_us, night, to_us FROM listened)"""


def map_text(
    logs: Logs, choice: Choice, *, title: str | None = None, options: Iterable[tuple[str, str]] = ()
) -> str:
    """Return the map of what a choice counts as one HTML text; its distances are in km.

    See `map_data_of` for the parameters, what is shown, and the errors. The same logs and options give the
    same text, byte for byte.
    """
    return map_html(map_data_of(logs, choice, title=title, options=options))


def map_data_of(
    logs: Logs, choice: Choice, *, title: str | None = None, options: Iterable[tuple[str, str]] = ()
) -> MapData:
    """Return what the map shows of a choice: places in degrees, distances in km.

    A sender stands at one place, that of all its receptions in the choice, also in an hour which by itself
    would speak for another. A pair has the figures of the table `senders` over all bands of the receiver: a
    distance does not depend on the band. In an hour those senders are drawn that have a locator then.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    choice : Choice
        What is counted, see `logtool.tables.choice.choose`; its `by` splits nothing here.
    title : str, optional
        Heading of the page; by default made of the receivers and dates.
    options : pairs of name and value
        Told on the page as they are, unless `logs.privacy` leaves them out.

    Raises
    ------
    UsageError
        No receiver in the choice has a place.
    NoRecordsError
        The inputs hold no record, so there is no receiver.
    """
    privacy = logs.privacy  # with it no file is named, and no line, which says nothing without its file
    choice = private_choice(choice, privacy)
    connection, notes = make_chosen(logs, choice)
    receivers, unplaced = _receivers(connection, choice)
    names = [receiver.name for receiver in receivers]
    notes += _left_out(connection, unplaced)
    files = [] if privacy else short_names(logs.file_names)
    hours = _hours(connection, receivers)
    index_of, senders = _senders(logs)
    pairs = _pairs(logs, names, index_of, senders)
    groups, totals, counts = _counted(
        connection,
        index_of,
        names,
        [hour.start_unix_s // HOUR_S for hour in hours],
    )
    return MapData(
        title=title or _title(names, hours),
        receivers=tuple(receivers),
        senders=tuple(senders),
        pairs=tuple(pairs),
        groups=groups,
        hours=tuple(hours),
        counts=counts,
        totals=totals,
        files=tuple(files),
        notes=(
            *privacy_notes(privacy),
            *notes,
            *file_notes(logs, files),
            *figure_notes(connection, receivers, choice.gap_min),
        ),
        ledger=ledger_lines(logs, files),
        options=private_options(options, privacy),
    )


def _receivers(connection: duckdb.DuckDBPyConnection, choice: Choice) -> tuple[list[MapReceiver], list[str]]:
    """Return the receivers of the choice at their last places in it, and the names of those without any.

    Where the choice leaves nothing they are those it names, else all.
    """
    place_of = dict(
        connection.execute(
            f"SELECT receiver, arg_max(place, until_us) FROM {_PIECES} GROUP BY receiver ORDER BY receiver"
        ).fetchall()
    )
    if not place_of:
        everywhere = dict(
            connection.execute(
                "SELECT name, arg_max(place, since_us) FROM station GROUP BY name ORDER BY name"
            ).fetchall()
        )
        words = set(choice.receivers)
        named = {name: place for name, place in everywhere.items() if {name, name.split("@")[0]} & words}
        place_of = named or everywhere
    if not place_of:
        raise NoRecordsError("map: the inputs hold no record, so there is no receiver to draw a map round")
    if not any(place_of.values()):
        raise UsageError(
            f"map: no receiver has a place ({', '.join(place_of)}): give --at LOCATOR, like --at JN58td, "
            "or a setup line before the first reception"
        )
    ways = dict(connection.execute("SELECT name, max(listening) FROM spot GROUP BY name").fetchall())
    placed = [
        MapReceiver(name, written(place), assumed=ways.get(name) == "assumed")
        for name, place in place_of.items()
        if place
    ]
    return placed, [name for name, place in place_of.items() if not place]


def _left_out(connection: duckdb.DuckDBPyConnection, unplaced: list[str]) -> list[str]:
    """Take receivers without a place out of what is chosen; return a note for each."""
    notes = []
    for name in unplaced:
        where = f"WHERE {among('receiver', [name])}"
        count = f"SELECT coalesce(sum(n), 0)::BIGINT FROM heard {where}"
        ((receptions,),) = connection.execute(count).fetchall()
        notes.append(
            f"{name} has no place, so its receptions ({receptions}) are not on this map: give --at LOCATOR, "
            "or a setup line before them"
        )
        connection.execute(f"DELETE FROM heard {where}")
        connection.execute(f"DELETE FROM listened {where}")
    return notes


def _hours(connection: duckdb.DuckDBPyConnection, receivers: list[MapReceiver]) -> list[MapHour]:
    """Return each hour with listening or receptions; a receiver on several bands at once listens once."""
    rows = connection.execute(f"""
        WITH known AS (SELECT receiver, hour, arg_max(night, start_us) AS night FROM {_PIECES} GROUP BY ALL),
        covered AS (
            SELECT receiver, hour, from_us, to_us, max(to_us) OVER (PARTITION BY receiver, hour
                ORDER BY from_us, to_us ROWS BETWEEN UNBOUNDED PRECEDING AND 1 PRECEDING) AS before_us
            FROM listened),
        minutes AS (
            SELECT receiver, hour, sum(greatest(to_us - greatest(from_us, before_us), 0))::BIGINT AS us
            FROM covered GROUP BY ALL)
        SELECT hour, receiver, night, us FROM known LEFT JOIN minutes USING (receiver, hour)""").fetchall()
    night_of = {(receiver, hour): night for hour, receiver, night, _ in rows}
    us_of = {(receiver, hour): us for hour, receiver, _, us in rows}
    hours = sorted({hour for hour, *_ in rows})
    seen = {r.name: [hour for hour in hours if (r.name, hour) in us_of] for r in receivers}

    def listening_min(receiver: MapReceiver, hour: int) -> float | None:
        if (us := us_of.get((receiver.name, hour))) is not None:
            value: float = output_value("listening_min", us / MINUTE_US)
            return value
        within = seen[receiver.name] and seen[receiver.name][0] < hour < seen[receiver.name][-1]
        silent = (receiver.name, hour) not in us_of
        return 0.0 if within and silent and not receiver.assumed else None

    sun_lat_deg, sun_lon_deg = subsolar_point(np.array(hours, dtype=np.float64) * HOUR_S + HALF_PAST_S)
    return [
        MapHour(
            hour * HOUR_S,
            lat_deg,
            lon_deg,
            tuple(night_of.get((receiver.name, hour)) for receiver in receivers),
            tuple(listening_min(receiver, hour) for receiver in receivers),
        )
        for hour, lat_deg, lon_deg in zip(hours, sun_lat_deg.tolist(), sun_lon_deg.tolist(), strict=True)
    ]


def _senders(logs: Logs) -> tuple[dict[str, int], list[MapSender]]:
    """Return each sender's index by its name in the logs, and the senders in the order of the names shown."""
    make_senders(logs.connection, ("whole",))
    found = logs.connection.execute("SELECT sender, locator, borrowed FROM per_sender").fetchall()
    shown = sorted((logs.privacy.call(name), name, own, borrowed) for name, own, borrowed in found)
    return (
        {name: i for i, (_, name, _, _) in enumerate(shown)},
        [MapSender(shown_name, own and written(own), borrowed) for shown_name, _, own, borrowed in shown],
    )


def _pairs(
    logs: Logs, receivers: list[str], index_of: dict[str, int], senders: list[MapSender]
) -> list[MapPair]:
    connection = logs.connection
    make_senders(connection, ("receiver",))
    lines = {} if logs.privacy else lines_behind(logs)
    table = Table.of(
        connection.execute("""
            SELECT sender, receiver, locator, distance_km, uncertainty_km, bearing_deg, first_us AS first,
                last_us AS last, again FROM per_sender""")
    )
    pairs = []
    for row in table.rows():
        index, own = index_of[row["sender"]], row["locator"] and written(row["locator"])
        pairs.append(
            MapPair(
                index,
                receivers.index(row["receiver"]),
                row["distance_km"],
                row["uncertainty_km"],
                row["bearing_deg"],
                row["first"],
                row["last"],
                heard_again=row["again"],
                lines=lines.get((row["receiver"], row["sender"]), ()),
                locator=None if own == senders[index].locator else own,
            )
        )
    return sorted(pairs, key=lambda pair: (pair.sender, pair.receiver))


def _counted(
    connection: duckdb.DuckDBPyConnection, sender_at: dict[str, int], receivers: list[str], hours: list[int]
) -> tuple[tuple[MapGroup, ...], MapTotals, MapCounts]:
    """Return the groups, and the receptions of each sender in each of them, over all hours and in each."""
    hour_at = {hour: i for i, hour in enumerate(hours)}
    listed = ", ".join(GROUP_KEYS)
    make_senders(connection, GROUP_KEYS)
    rows = connection.execute(f"SELECT sender, n, snr_median_db, {listed} FROM per_sender").fetchall()
    keys = sorted({tuple(key) for _, _, _, *key in rows}, key=lambda key: [value or "" for value in key])
    group_at = {key: i for i, key in enumerate(keys)}
    groups = tuple(
        MapGroup(receivers.index(receiver), antenna, band, mode or None)
        for receiver, antenna, band, mode in keys
    )
    totals = MapTotals(
        [sender_at[row[0]] for row in rows],
        [group_at[row[3:]] for row in rows],
        [row[1] for row in rows],
        [_snr_db(row[2]) for row in rows],
    )
    make_senders(connection, ("hour", *GROUP_KEYS))
    rows = connection.execute(
        f"SELECT sender, n, snr_median_db, hour, locator IS NOT NULL, {listed} FROM per_sender"
    ).fetchall()
    counts = MapCounts(
        [sender_at[row[0]] for row in rows],
        [group_at[row[5:]] for row in rows],
        [hour_at[row[3]] for row in rows],
        [row[1] for row in rows],
        [_snr_db(row[2]) for row in rows],
        located=[row[4] for row in rows],
    )
    return groups, totals, counts


def _snr_db(median_db: float | None) -> float | None:
    value: float | None = output_value("snr_median_db", median_db)
    return value


def _title(names: list[str], hours: list[MapHour]) -> str:
    """Return a heading of the receivers and the dates, like `Heard at hut, 2026-03-02 to 2026-03-08`."""
    who = ", ".join(names) if len(names) <= NAMES_IN_TITLE else f"{len(names)} receivers"
    dates = [written_time(hour.start_unix_s * 1_000_000)[:DATE_CHARACTERS] for hour in hours[:1] + hours[-1:]]
    return f"Heard at {who}" + (f", {' to '.join(dict.fromkeys(dates))}" if dates else "")
