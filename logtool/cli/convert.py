"""`logtool convert`."""

from __future__ import annotations

import sys
from contextlib import nullcontext
from typing import IO, TYPE_CHECKING, Any

import click

from logtool.cli import options
from logtool.cli.run import choice_of, opened, status_of
from logtool.errors import UsageError
from logtool.exports.formats import FORMATS, write_as

if TYPE_CHECKING:
    from contextlib import AbstractContextManager

STANDARD_OUTPUT = "-"
LAYOUT = "layout"
MOST_TRIED = 10_000


def _choice(function: options.Command) -> options.Command:
    """Give a command the options of the choice but for its `--to`: the command's own takes a format as well."""
    own = list(getattr(function, "__click_params__", []))
    chosen = options.choice(function)
    params: list[click.Parameter] = chosen.__click_params__  # type: ignore[attr-defined]
    params[:] = [param for param in params if param.name != "to" or param in own]
    return chosen


@click.command("convert")
@options.logs
@_choice
@click.option(
    "--to",
    multiple=True,
    metavar="FORMAT|TIME",
    help=f"Format to write: {', '.join(FORMATS)}; {LAYOUT} unless given. A time (UTC): count up to it, itself not "
    "counted. May be given once for each.",
)
@click.option("--suggest", is_flag=True, help="Look at one text and write a first recipe for it.")
@click.option("--try", "try_", is_flag=True, help="Show line by line what --recipe makes of the first lines.")
@click.option(
    "--lines",
    type=click.IntRange(1, MOST_TRIED),
    default=40,
    show_default=True,
    metavar="N",
    help="With --try: so many lines.",
)
@options.privacy
@click.option("-o", "--out", metavar="FILE", help="Write to a file instead of standard output.")
def command(**words: Any) -> int:
    """Any program's text to the layout, and records to open formats for other programs.

    --suggest and --try help to write a recipe for a text (docs/recipes.md); without them the records are written.

    csv, jsonl, parquet and arrow hold each record with the distance to its sender; adi the receptions that name a
    sender; geojson and kml receivers, senders and paths. Only these two leave out what was heard with the antenna
    off.
    """
    from logtool.cli.trying import run_suggest, run_try
    from logtool.pages.map_privacy import private_choice
    from logtool.tables.chosen import unknown_words

    if words["suggest"] and words["try_"]:
        raise UsageError("--suggest writes a recipe and --try shows what one does; give one of them")
    if words["suggest"] or words["try_"]:
        _refuse_beside_text(words)
    if words["out"] == STANDARD_OUTPUT:
        words["out"] = None
    if words["suggest"]:
        return run_suggest(words)
    if words["try_"]:
        return run_try(words)
    name, words["to"] = _format_and_time(words["to"])
    if words["out"] is None and FORMATS[name].binary and sys.stdout.isatty():
        raise UsageError(
            f"--to {name} is no text, so it is not shown on a terminal; name a file with -o FILE"
        )
    choice = choice_of(words)
    with opened(words, with_digest=False) as logs:
        choice = private_choice(choice, logs.privacy)
        if not any(file.records for file in logs.inputs):  # nothing is written in place of what may be there
            return status_of(logs, quiet=words["quiet"], notes=[])
        with _output(words["out"]) as out:
            notes = write_as(name, logs, choice, out)
        notes = [*unknown_words(logs.connection, choice, logs.privacy), *notes]
        return status_of(logs, quiet=words["quiet"], notes=notes)


def _refuse_beside_text(words: dict[str, Any]) -> None:
    """Stop where an option would do nothing beside --suggest or --try, which show the text itself."""
    for name in ("to", "set_aside", "coarsen", "without_text", "hide_senders", "key"):
        if words[name]:
            raise UsageError(
                f"--{name.replace('_', '-')} does nothing beside --suggest or --try, which show the text as it is; "
                "leave it away"
            )


def _format_and_time(given: tuple[str, ...]) -> tuple[str, str | None]:
    """Return the format and the time that `--to` names; a time is checked with the choice."""
    formats = [word for word in given if word in FORMATS]
    times = [word for word in given if word not in FORMATS]
    if len(formats) > 1 or len(times) > 1:
        raise UsageError(f"--to {' --to '.join(given)}: give one format and one time at most")
    if times and not times[0][:1].isdigit():
        raise UsageError(f"--to {times[0]!r} is neither a time nor a format; there are: {', '.join(FORMATS)}")
    return formats[0] if formats else LAYOUT, times[0] if times else None


def _output(path: str | None) -> AbstractContextManager[IO[bytes]]:
    from logtool.records.writer import whole_bytes

    return nullcontext(sys.stdout.buffer) if path is None else whole_bytes(path)
