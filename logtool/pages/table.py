"""Tables for people: the columns that fit, small bars that show the shape, local mean solar time beside UTC."""

from __future__ import annotations

import sys
from collections import Counter
from collections.abc import Callable, Sequence
from typing import IO, Any

from logtool.pages.columns import BARS, COLUMNS, Shown, count, minute, tenth, text, whole
from logtool.places.nights import local_mean_time
from logtool.records.ledger import FileLedger
from logtool.tables.result import Table

BAR_CELLS = 10
EIGHTHS = " ▏▎▍▌▋▊▉"
MOST_ROWS = 40  # shown on a terminal without --all
DAY_US = 86_400_000_000
FLEXIBLE = frozenset({"shown", "text", "more"})  # columns that may be cut short to fit
FLEXIBLE_CELLS = 24


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
        columns.append(Shown(measure + " bar", "", text, 2, right=False))
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
    return kept, [f"{count(left)} {what} are not shown; --all shows them"] if left else []


def _columns(name: str, table: Table) -> list[Shown]:
    """Return the columns for people, those that split the rows further with them."""
    columns = [column for column in COLUMNS[name] if column.name in table.columns or column.name == "solar"]
    known = {column.name for column in columns} | {"kind"}
    further = [Shown(key, key, text, 1, right=False) for key in table.columns if key not in known]
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
            cells["distance_km"][row] = f"< {whole(max(1.0, uncertainty_km))}"


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
        over_all = table.summary
        lines.append(
            f"{minute(over_all['from'])} to {minute(over_all['to'])} UTC: "
            f"{count(over_all['receptions'])} receptions of "
            f"{count(over_all['senders'])} senders, {count(over_all['heard_once'])} of them heard once, in "
            f"{tenth(over_all['listening_min'] / 60)} h of listening ({over_all['listening']})"
        )
        if over_all["farthest_km"] is not None:
            lines.append(
                f"farthest heard again: {over_all['farthest_sender']}, {whole(over_all['farthest_km'])} km; "
                f"half of the located senders lie within {whole(over_all['median_km'])} km"
            )
    for finding in table.findings or []:
        size = finding["size"]
        amount = count(size) if isinstance(size, int) else tenth(size)
        lines.append(
            f"{finding['what']}: {finding['receiver']}, {finding['from']} to {finding['to']}, "
            f"{amount} {finding['unit']}: {finding['why']}"
        )
    return lines


def _some(number: int, what: str) -> str:
    return f"{count(number)} {what}{'' if number == 1 else 's'}"


def _read(inputs: list[FileLedger]) -> list[str]:
    aside = sum(file.set_aside for file in inputs)
    told = (
        f"read {_some(len(inputs), 'file')}, "
        f"{_some(sum(file.lines for file in inputs), 'line')}: "
        f"{_some(sum(file.records for file in inputs), 'record')}, "
        f"{count(sum(file.repeated for file in inputs))} repeated, {count(aside)} set aside"
    )
    rules: Counter[str] = Counter()
    for file in inputs:
        rules.update(file.rules or {})
    by_rule = ", ".join(f"{count(lines)} {name}" for name, lines in sorted(rules.items()))
    return [
        told + (" (logtool check shows them)" if aside else ""),
        *([f"lines by the recipe's rules: {by_rule}"] if by_rule else []),
    ]
