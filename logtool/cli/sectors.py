"""`logtool sectors`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("sectors")
@options.logs
@options.choice
@options.by
@options.output
def command(**words: Any) -> int:
    """What was heard from each of sixteen directions, by the bearing at the receiver."""
    from logtool.tables.sectors import sectors_table

    return run_table("sectors", words, sectors_table)
