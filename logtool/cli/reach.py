"""`logtool reach`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("reach")
@options.logs
@options.choice
@options.by
@options.output
def command(**words: Any) -> int:
    """How far it hears, hour by hour: one row per hour, receiver, antenna and band."""
    from logtool.tables.reach import reach_table

    return run_table("reach", words, reach_table)
