"""`logtool map`."""

from __future__ import annotations

import sys
from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import choice_of, opened, status_of, told_options
from logtool.errors import NoRecordsError

STANDARD_OUTPUT = "-"
_NOT_TOLD = ("out", "set_aside", "quiet", "title")  # paths of the maker's machine, and what changes no figure


@click.command("map")
@options.logs
@options.choice
@options.privacy
@click.option(
    "-o",
    "--out",
    default="map.html",
    show_default=True,
    metavar="FILE",
    help="Where to write the map; - for standard output.",
)
@click.option("--title", metavar="TEXT", help="Heading of the page.")
def command(**words: Any) -> int:
    """One map as an HTML file that opens from disk without any network."""
    from logtool.pages.map import map_text
    from logtool.records.writer import whole_file

    choice = choice_of(words)
    with opened(words, with_digest=False) as logs:
        told = [
            (name, ", ".join(value) if isinstance(value, list) else str(value))
            for name, value in told_options(words).items()
            if name not in _NOT_TOLD and value not in (None, [], False)
        ]
        try:
            page = map_text(logs, choice, title=words["title"], options=told)
        except NoRecordsError:
            return status_of(logs, quiet=words["quiet"], notes=[])
        if words["out"] == STANDARD_OUTPUT:
            sys.stdout.write(page)
        else:
            with whole_file(words["out"]) as file:
                file.write(page)
            if not words["quiet"]:
                click.echo(f"map written to {words['out']}: open it in a browser", err=True)
        return status_of(logs, quiet=words["quiet"], notes=[])
