"""`logtool between`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("between")
@options.logs
@options.choice
@options.output
def command(**words: Any) -> int:
    """Conversations between two other stations, as far as they were heard."""
    from logtool.tables.between import between_table

    return run_table("between", words, between_table)
