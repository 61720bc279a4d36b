"""`logtool lines`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("lines")
@options.logs
@options.choice
@options.output
def command(**words: Any) -> int:
    """The receptions behind a figure: file, line number and what the line says."""
    from logtool.tables.lines import lines_table

    return run_table("lines", words, lines_table)
