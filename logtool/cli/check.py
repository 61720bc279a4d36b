"""`logtool check`."""

from __future__ import annotations

from typing import Any

import click

from logtool.cli import options
from logtool.cli.run import run_table


@click.command("check")
@options.logs
@options.span
@options.output
@click.option("--strict", is_flag=True, help="Exit with status 1 if any line was set aside.")
def command(**words: Any) -> int:
    """What became of each line, which were set aside and why, and what is odd in the logs.

    --from, --to and --receiver choose among the findings; all lines set aside are shown.
    """
    from logtool.tables.checks import check_table

    return run_table("check", words, check_table, strict=words["strict"])
