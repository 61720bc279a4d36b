"""`logtool nights`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("nights")
@options.logs
@options.choice
@options.by
@options.output
def command(**words: Any) -> int:
    """Nights side by side, each from one solar noon at the receiver to the next."""
    from logtool.tables.nights import nights_table

    return run_table("nights", words, nights_table)
