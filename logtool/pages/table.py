"""Tables for people: the columns that fit, small bars that show the shape, local mean solar time beside UTC."""

from __future__ import annotations

import sys
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import IO, Any

from logtool.places.nights import local_mean_time
from logtool.records.ledger import FileLedger
from logtool.tables.result import Table, written_time

BAR_CELLS = 10
EIGHTHS = " ▏▎▍▌▋▊▉"
MOST_ROWS = 40  # shown on a terminal without --all
DAY_US = 86_400_000_000
NOTHING = "–"  # noqa: RUF001 - a dash that is wider than a minus sign, on purpose
FLEXIBLE = frozenset({"shown", "text", "more"})  # columns that may be cut short to fit
FLEXIBLE_CELLS = 24


@dataclass(frozen=True)
class Shown:
    """A column for people: its header, how a value is written, and how soon it is left out."""

    name: str
    header: str
    write: Callable[[Any], str]
    rank: int  # the greatest ranks are left out first where there is no room
    right: bool = True


def _text(value: Any) -> str:
    return NOTHING if value is None else str(value)


def _count(value: Any) -> str:
    return NOTHING if value is None else f"{value:,}".replace(",", " ")


def _whole(value: float | None) -> str:
    return NOTHING if value is None else _count(round(value))


def _tenth(value: float | None) -> str:
    return NOTHING if value is None else f"{value:.1f}"


def _yes(value: bool | None) -> str:
    return NOTHING if value is None else "yes" if value else "no"


def _minute(value: int | None) -> str:
    return NOTHING if value is None else written_time(value)[:16].replace("T", " ")


def _km(name: str, header: str, rank: int) -> Shown:
    return Shown(name, header, _whole, rank)


_STATION = [
    Shown("receiver", "receiver", _text, 7, right=False),
    Shown("antenna", "antenna", _text, 1, right=False),
    Shown("band", "band", _text, 6, right=False),
]
_LISTENING = [
    Shown("listening_min", "listening min", _whole, 2),
    Shown("listening", "listening", _text, 9, right=False),
]
_FARTHEST = [
    _km("farthest_km", "farthest km", 1),
    Shown("farthest_sender", "farthest sender", _text, 4, right=False),
]
COLUMNS: dict[str, list[Shown]] = {
    "check": [
        Shown("file", "file", _text, 0, right=False),
        Shown("line", "line", _count, 0),
        Shown("reason", "reason", _text, 0, right=False),
        Shown("shown", "what the line says", _text, 1, right=False),
    ],
    "reach": [
        Shown("hour", "UTC", _minute, 0, right=False),
        Shown("solar", "sun time", _text, 3, right=False),
        *_STATION,
        *_LISTENING,
        Shown("receptions", "receptions", _count, 1),
        Shown("unnamed", "unnamed", _count, 9),
        Shown("senders", "senders", _count, 1),
        Shown("heard_once", "heard once", _count, 7),
        Shown("senders_in_30", "senders in 30 min", _tenth, 5),
        Shown("located", "located", _count, 9),
        Shown("squares", "squares", _count, 8),
        _km("nearest_km", "nearest km", 3),
        _km("median_km", "median km", 2),
        _km("p90_km", "90 % km", 4),
        *_FARTHEST,
        _km("farthest_once_km", "once km", 8),
        Shown("snr_median_db", "SNR dB", _tenth, 5),
        Shown("sun_zenith_deg", "sun zenith", _whole, 6),
    ],
    "senders": [
        *[column for column in _STATION if column.name != "antenna"],
        Shown("sender", "sender", _text, 0, right=False),
        Shown("locator", "locator", _text, 2, right=False),
        Shown("borrowed", "borrowed", _yes, 8, right=False),
        _km("distance_km", "km", 1),
        _km("uncertainty_km", "± km", 4),
        Shown("bearing_deg", "bearing", _whole, 2),
        Shown("receptions", "receptions", _count, 1),
        Shown("heard_again", "again", _yes, 5, right=False),
        Shown("first", "first UTC", _minute, 6, right=False),
        Shown("last", "last UTC", _minute, 5, right=False),
        Shown("nights", "nights", _count, 4),
        Shown("snr_median_db", "SNR dB", _tenth, 3),
        Shown("snr_best_db", "best dB", _tenth, 7),
    ],
    "sectors": [
        *_STATION,
        Shown("sector_deg", "bearing", _tenth, 0),
        Shown("receptions", "receptions", _count, 1),
        Shown("senders", "senders", _count, 1),
        _km("median_km", "median km", 2),
        _km("farthest_km", "farthest km", 1),
    ],
    "nights": [
        Shown("night", "night", _text, 0, right=False),
        *_STATION,
        Shown("from", "from UTC", _minute, 8, right=False),
        Shown("to", "to UTC", _minute, 9, right=False),
        *_LISTENING,
        Shown("receptions", "receptions", _count, 1),
        Shown("senders", "senders", _count, 1),
        Shown("senders_in_30", "senders in 30 min", _tenth, 2),
        Shown("squares", "squares", _count, 6),
        _km("median_km", "median km", 3),
        _km("p90_km", "90 % km", 4),
        *_FARTHEST,
    ],
    "between": [
        Shown("a", "station", _text, 0, right=False),
        Shown("b", "and station", _text, 0, right=False),
        Shown("band", "band", _text, 6, right=False),
        Shown("first", "first UTC", _minute, 3, right=False),
        Shown("last", "last UTC", _minute, 5, right=False),
        Shown("from_a", "from first", _count, 2),
        Shown("from_b", "from second", _count, 2),
        Shown("locator_a", "locator", _text, 4, right=False),
        Shown("locator_b", "and locator", _text, 4, right=False),
        _km("between_km", "km between", 1),
    ],
    "lines": [
        Shown("file", "file", _text, 3, right=False),
        Shown("line", "line", _count, 1),
        Shown("time", "UTC", lambda value: _text(value and written_time(value)), 0, right=False),
        Shown("receiver", "receiver", _text, 5, right=False),
        Shown("dial_hz", "dial Hz", _text, 6),
        Shown("audio_hz", "audio Hz", _text, 5),
        Shown("snr_db", "SNR dB", _text, 2),
        Shown("late_s", "late s", _text, 6),
        Shown("mode", "mode", _text, 7, right=False),
        Shown("sender", "sender", _text, 1, right=False),
        Shown("addressee", "addressee", _text, 4, right=False),
        Shown("locator", "locator", _text, 3, right=False),
        Shown("power_dbm", "dBm", _text, 8),
        Shown("text", "text", _text, 2, right=False),
        Shown("more", "more", _text, 9, right=False),
    ],
}
BARS = {
    "reach": "farthest_km",
    "senders": "receptions",
    "sectors": "receptions",
    "nights": "senders_in_30",
}


def bar(value: float | None, greatest: float) -> str:
    """Return a bar of at most ten cells, to an eighth of a cell; empty where there is no value.

    >>> bar(5.0, 10.0), bar(None, 10.0)
    ('█████', '')
    """
    if value is None or greatest <= 0:
        return ""
    full, eighth = divmod(round(8 * BAR_CELLS * value / greatest), 8)
    return "█" * full + EIGHTHS[eighth].strip()


def write_table(out: IO[str], name: str, table: Table, inputs: list[FileLedger], *, show_all: bool) -> None:
    """Write a table for people, with what it was made from below.

    On a terminal it has the columns that fit and, without `show_all`, the last day or the first rows.

    Parameters
    ----------
    out : file
        Where to.
    name : str
        The command.
    table : Table
        What it found.
    inputs : list of FileLedger
        The ledgers of the files that were read.
    show_all : bool
        Whether all rows and columns are shown on a terminal too.
    """
    from rich.console import Console

    terminal = out is sys.stdout and out.isatty()
    console = Console(file=out, highlight=False, markup=False)
    kept, left_out = _kept_rows(name, table, limited=terminal and not show_all)
    columns = _columns(name, table)
    cells = {
        column.name: [column.write(value) for value in _values(column.name, table, kept)]
        for column in columns
    }
    if name == "senders":
        _mark_near(cells, table, kept)
    measure = BARS.get(name)
    if measure and kept:
        values = [table.columns[measure][i] for i in kept]
        greatest = max((value for value in values if value is not None), default=0)
        cells[measure + " bar"] = [bar(value, greatest) for value in values]
        columns.append(Shown(measure + " bar", "", _text, 2, right=False))
    if terminal and not show_all:
        columns = _that_fit(columns, cells, console.width)
        _cut_to_fit(columns, cells, console.width)
    if not kept:
        out.write("no line was set aside\n" if name == "check" else "no rows\n")
    elif terminal:
        _print_rows(console, columns, cells)
    else:
        _write_rows(out, columns, cells)
    for line in [*left_out, *_below(table), *_read(inputs)]:
        if terminal:
            console.print(line)
        else:
            out.write(f"{line}\n")


def _kept_rows(name: str, table: Table, *, limited: bool) -> tuple[list[int], list[str]]:
    every = list(range(len(table)))
    if not limited or not every:
        return every, []
    if name == "reach":
        since_us = max(table.columns["hour"]) - DAY_US
        kept = [i for i in every if table.columns["hour"][i] > since_us]
        what = "earlier rows"
    else:
        kept = every[:MOST_ROWS]
        what = "rows"
    left = len(every) - len(kept)
    return kept, [f"{_count(left)} {what} are not shown; --all shows them"] if left else []


def _columns(name: str, table: Table) -> list[Shown]:
    """Return the columns for people, those that split the rows further with them."""
    columns = [column for column in COLUMNS[name] if column.name in table.columns or column.name == "solar"]
    known = {column.name for column in columns} | {"kind"}
    further = [Shown(key, key, _text, 1, right=False) for key in table.columns if key not in known]
    if name == "reach" and not any(lon is not None for lon in table.lon_deg or []):
        columns = [column for column in columns if column.name != "solar"]
    return columns[:1] + further + columns[1:]


def _values(name: str, table: Table, kept: list[int]) -> list[Any]:
    if name != "solar":
        return [table.columns[name][i] for i in kept]
    lon_deg = table.lon_deg or []
    return [
        None if lon_deg[i] is None else local_mean_time(table.columns["hour"][i] / 1e6, lon_deg[i] or 0.0)
        for i in kept
    ]


def _mark_near(cells: dict[str, list[str]], table: Table, kept: list[int]) -> None:
    """Write `< U` for distances smaller than their uncertainty U."""
    for row, i in enumerate(kept):
        distance_km, uncertainty_km = (table.columns[name][i] for name in ("distance_km", "uncertainty_km"))
        if distance_km is not None and distance_km < uncertainty_km:
            cells["distance_km"][row] = f"< {_whole(uncertainty_km)}"


def _width(column: Shown, cells: dict[str, list[str]], *, cut: bool = False) -> int:
    width = max(map(len, [*column.header.split(), *cells[column.name]])) + 2
    return min(width, FLEXIBLE_CELLS) if cut and column.name in FLEXIBLE else width


def _head(column: Shown, cells: dict[str, list[str]]) -> list[str]:
    """Return the header in lines: one where the column is wide enough, else a word a line."""
    longest = max(map(len, cells[column.name]))
    return [column.header] if longest >= len(column.header) else column.header.split(" ")


def _that_fit(columns: list[Shown], cells: dict[str, list[str]], width: int) -> list[Shown]:
    room = width
    fitting = set()
    for column in sorted(columns, key=lambda column: column.rank):
        width = _width(column, cells, cut=True)
        if width <= room or column.rank == 0:
            fitting.add(column.name)
            room -= width
    return [column for column in columns if column.name in fitting]


def _cut_to_fit(columns: list[Shown], cells: dict[str, list[str]], width: int) -> None:
    """Cut the texts of flexible columns, so that the others keep their room."""
    flexible = [column for column in columns if column.name in FLEXIBLE]
    taken = sum(_width(column, cells) for column in columns if column.name not in FLEXIBLE)
    for column in flexible:
        room = max((width - taken) // len(flexible) - 2, FLEXIBLE_CELLS - 2)
        cells[column.name] = [
            cell if len(cell) <= room else cell[: room - 1] + "…" for cell in cells[column.name]
        ]


def _print_rows(console: Any, columns: list[Shown], cells: dict[str, list[str]]) -> None:
    from rich.table import Table as RichTable
    from rich.text import Text

    grid = RichTable(box=None, pad_edge=False, header_style="bold", padding=(0, 2, 0, 0))
    for column in columns:
        grid.add_column(
            "\n".join(_head(column, cells)),
            justify="right" if column.right else "left",
            no_wrap=True,
            overflow="ellipsis",
            vertical="bottom",
        )
    for row in zip(*(cells[column.name] for column in columns), strict=True):
        grid.add_row(*(Text(cell) for cell in row))
    console.print(grid)


def _write_rows(out: IO[str], columns: list[Shown], cells: dict[str, list[str]]) -> None:
    """Write the rows as plain text: a terminal's table takes a thousand times as long."""
    widths = [_width(column, cells) - 2 for column in columns]
    sides = [str.rjust if column.right else str.ljust for column in columns]
    heads = [_head(column, cells) for column in columns]
    depth = max(map(len, heads))
    for row in zip(*([""] * (depth - len(head)) + head for head in heads), strict=True):
        out.write(_line(row, sides, widths))
    for row in zip(*(cells[column.name] for column in columns), strict=True):
        out.write(_line(row, sides, widths))


def _line(row: tuple[str, ...], sides: Sequence[Callable[[str, int], str]], widths: list[int]) -> str:
    padded = [side(cell, width) for side, cell, width in zip(sides, row, widths, strict=True)]
    return "  ".join(padded).rstrip() + "\n"


def _below(table: Table) -> list[str]:
    lines = []
    if table.summary is not None and table.summary["from"] is not None:
        whole = table.summary
        lines.append(
            f"{_minute(whole['from'])} to {_minute(whole['to'])} UTC: {_count(whole['receptions'])} receptions of "
            f"{_count(whole['senders'])} senders, {_count(whole['heard_once'])} of them heard once, in "
            f"{_whole(whole['listening_min'] / 60)} h of listening ({whole['listening']})"
        )
        if whole["farthest_km"] is not None:
            lines.append(
                f"farthest heard again: {whole['farthest_sender']}, {_whole(whole['farthest_km'])} km; "
                f"half of the located senders lie within {_whole(whole['median_km'])} km"
            )
    for finding in table.findings or []:
        size = finding["size"]
        amount = _count(size) if isinstance(size, int) else _tenth(size)
        lines.append(
            f"{finding['what']}: {finding['receiver']}, {finding['from']} to {finding['to']}, "
            f"{amount} {finding['unit']}: {finding['why']}"
        )
    return lines


def _some(count: int, what: str) -> str:
    return f"{_count(count)} {what}{'' if count == 1 else 's'}"


def _read(inputs: list[FileLedger]) -> list[str]:
    aside = sum(file.set_aside for file in inputs)
    told = (
        f"read {_some(len(inputs), 'file')}, "
        f"{_some(sum(file.lines for file in inputs), 'line')}: "
        f"{_some(sum(file.records for file in inputs), 'record')}, "
        f"{_count(sum(file.repeated for file in inputs))} repeated, {_count(aside)} set aside"
    )
    return [told + (" (logtool check shows them)" if aside else "")]
