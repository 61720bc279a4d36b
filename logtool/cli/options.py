"""The options that commands share, as decorators."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import click

from logtool.records.privacy import COARSE_CHARACTERS

Command = Callable[..., Any]


def _together(*decorators: Callable[[Command], Command]) -> Callable[[Command], Command]:
    def decorate(command: Command) -> Command:
        for decorator in reversed(decorators):
            command = decorator(command)
        return command

    return decorate


def _several(name: str, metavar: str, help_text: str) -> Callable[[Command], Command]:
    return click.option(name, multiple=True, metavar=metavar, help=f"{help_text} May be given several times.")


logs = _together(
    click.argument("paths", nargs=-1, required=True, metavar="LOGS..."),
    click.option("--recipe", metavar="FILE", help="Read files that do not follow the layout by this recipe."),
    click.option("--date", metavar="DATE", help="Date at which they begin, where they name none."),
    click.option("--at", metavar="LOCATOR", help="Place of receivers that have no setup line."),
    click.option("--antenna-name", metavar="NAME", help="Antenna of receivers that have no setup line."),
    click.option("--anyway", is_flag=True, help="Read on in a file whose first 10 000 lines hold no record."),
    click.option("--set-aside", metavar="FILE", help="Write the lines that break the layout to a file."),
    click.option("--quiet", is_flag=True, help="No progress and no notes; errors are still told."),
)
gap = click.option(
    "--gap-min",
    type=float,
    default=10.0,
    show_default=True,
    metavar="MIN",
    help="Without watch lines, listening is assumed over gaps of at most so many minutes.",
)
span = _together(
    click.option("--from", "from_", metavar="TIME", help="Count from this date or time on (UTC)."),
    click.option("--to", metavar="TIME", help="Count up to this date or time, itself not counted (UTC)."),
    _several("--receiver", "NAME", "Count only this receiver."),
    gap,
)
choice = _together(
    span,
    _several("--antenna", "NAME", "Count only this antenna; `none` is left out unless named."),
    _several("--band", "BAND", "Count only this band, like 40m or '6100 kHz'."),
    _several("--mode", "MODE", "Count only this mode."),
    _several("--night", "DATE", "Count only the night that begins on this date."),
    _several("--sender", "CALL", "Count only this sender."),
)
privacy = _together(
    click.option(
        "--coarsen",
        type=click.Choice(COARSE_CHARACTERS),
        metavar="4|6|8",
        help="Cut all locators to so many characters, before anything is worked out from them.",
    ),
    click.option("--without-text", is_flag=True, help="Leave out the messages."),
    click.option("--hide-senders", is_flag=True, help="Give senders other names, by a secret key."),
    click.option(
        "--key",
        metavar="FILE",
        help="The secret key for --hide-senders; it is made if there is none. By default it is kept for you.",
    ),
)
by = _several("--by", "KEY", "Split the rows also by antenna, band, mode, night or receiver.")
output = _together(
    click.option(
        "--json", "as_json", is_flag=True, help="Print one JSON object with rows, ledger and options."
    ),
    click.option("--csv", "as_csv", is_flag=True, help="Print the rows as CSV."),
    click.option("-o", "--out", metavar="FILE", help="Write to a file instead of standard output."),
    click.option("--all", "show_all", is_flag=True, help="On a terminal, show all rows and columns."),
)
