"""`logtool senders`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("senders")
@options.logs
@options.choice
@options.by
@options.output
def command(**words: Any) -> int:
    """Who was heard, from where, how often and how strong."""
    from logtool.tables.senders import senders_table

    return run_table("senders", words, senders_table)
