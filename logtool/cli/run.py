"""What all table commands do: open the logs, make the table, print it, and end with the right status."""

from __future__ import annotations

import csv
import json
import os
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager, nullcontext
from typing import IO, TYPE_CHECKING, Any

import click

from logtool import __version__
from logtool.errors import UsageError

if TYPE_CHECKING:
    from logtool.records.reader import Logs
    from logtool.tables.choice import Choice
    from logtool.tables.result import Table

EXIT_NO_RECORD = 1
EXIT_UNREAD = 3
_CHOICE_WORDS = (
    "from_",
    "to",
    "receiver",
    "antenna",
    "band",
    "mode",
    "night",
    "sender",
    "by",
    "gap_min",
)
_NAMES = {"from_": "from", "as_json": "json", "as_csv": "csv", "show_all": "all"}


def told_options(words: dict[str, Any]) -> dict[str, Any]:
    """Return the options of a call by their names on the command line, defaults too."""
    return {
        _NAMES.get(name, name): list(value) if isinstance(value, tuple) else value
        for name, value in sorted(words.items())
        if name != "paths"
    }


def choice_of(words: dict[str, Any]) -> Choice:
    """Return the checked choice of a call."""
    from logtool.tables.choice import choose

    return choose(**{name: words[name] for name in _CHOICE_WORDS if name in words})


@contextmanager
def opened(words: dict[str, Any], *, with_digest: bool) -> Iterator[Logs]:
    """Open the logs of a call, with progress on a terminal; write what was set aside if it is wanted."""
    from logtool.cli.memory import keep_freed_memory
    from logtool.cli.privacy import privacy_of
    from logtool.cli.progress import ProgressBar
    from logtool.records.opening import day_us_of, open_with, recipe_for
    from logtool.records.reader import OpenOptions

    keep_freed_memory()
    privacy = privacy_of(words)
    recipe = recipe_for(words["recipe"])
    day_us = day_us_of(words["date"], with_recipe=recipe)
    with ProgressBar(quiet=words["quiet"]) as bar:
        options = OpenOptions(
            with_digest=with_digest,
            anyway=words["anyway"],
            others_too=True,
            progress=bar,
            recipe=recipe,
            day_us=day_us,
            privacy=privacy,
        )
        with open_with(words["paths"], words["at"], words["antenna_name"], options) as logs:
            _spare_inputs(logs, words)
            yield logs
            bar.close()
            if words["set_aside"] is not None:
                _write_set_aside(logs, words["set_aside"])


def _spare_inputs(logs: Logs, words: dict[str, Any]) -> None:
    """Stop where an output would take the place of an input or of the other output."""
    outputs = [words[name] for name in ("out", "set_aside") if words.get(name) not in (None, "-")]
    real = [os.path.realpath(output) for output in outputs]
    inputs = {os.path.realpath(path) for path in logs.source_paths}
    for output, place in zip(outputs, real, strict=True):
        if place in inputs:
            raise UsageError(f"{output} is one of the logs; name another file to write to")
        if words.get("recipe") is not None and place == os.path.realpath(words["recipe"]):
            raise UsageError(f"{output} is the recipe; name another file to write to")
    if len(set(real)) < len(real):
        raise UsageError(f"--out and --set-aside both name {outputs[0]}; name two files")


def _write_set_aside(logs: Logs, path: str) -> None:
    from logtool.records.writer import whole_file
    from logtool.tables.checks import escaped

    with whole_file(path) as file:
        for name, number, reason, line in logs.set_aside():
            file.write(
                f"{escaped(name.encode(errors='surrogateescape'))}\t{number}\t{reason}\t{escaped(line)}\n"
            )


def status_of(logs: Logs, *, quiet: bool, notes: list[str]) -> int:
    """Tell on standard error what was refused, odd or empty; return the exit status."""
    if not quiet:
        for note in [*logs.notes, *notes]:
            click.echo(f"logtool: note: {note}", err=True)
    for refusal in logs.refused:
        click.echo(f"logtool: {refusal}", err=True)
    if logs.refused:
        return EXIT_UNREAD
    if not any(file.records for file in logs.inputs):
        click.echo(
            "logtool: the inputs hold no record; `logtool check` shows what became of each line, and for another "
            "program's text `logtool convert --suggest FILE` writes a first recipe",
            err=True,
        )
        return EXIT_NO_RECORD
    return 0


def run_table(
    name: str, words: dict[str, Any], make: Callable[[Logs, Choice], Table], *, strict: bool = False
) -> int:
    """Run a command that prints a table; return the exit status."""
    if words["as_json"] and words["as_csv"]:
        raise UsageError("--json and --csv exclude each other; give one of them")
    choice = choice_of(words)
    with opened(words, with_digest=words["as_json"]) as logs:
        table = make(logs, choice)
        logs.tally()
        with _output(words["out"]) as out:
            if words["as_json"]:
                _write_json(out, name, words, logs, table)
            elif words["as_csv"]:
                _write_csv(out, table)
            else:
                from logtool.pages.table import write_table

                write_table(out, name, table, logs.inputs, show_all=words["show_all"])
        status = status_of(logs, quiet=words["quiet"], notes=table.notes)
        if status == 0 and strict and any(file.set_aside for file in logs.inputs):
            return EXIT_NO_RECORD
    return status


def _output(path: str | None) -> Any:
    from logtool.records.writer import whole_file

    return nullcontext(sys.stdout) if path is None else whole_file(path)


def _write_json(out: IO[str], name: str, words: dict[str, Any], logs: Logs, table: Table) -> None:
    from logtool.records.layout import LAYOUT_VERSION

    told: dict[str, Any] = {
        "logtool": __version__,
        "layout": LAYOUT_VERSION,
        "command": name,
        "options": told_options(words),
        "inputs": [file.as_dict() for file in logs.inputs],
        "rows": list(table.rows()),
    }
    if table.summary is not None:
        told["summary"] = table.written_summary()
    if table.findings is not None:
        told["findings"] = table.findings
    notes = [*logs.refused, *logs.notes, *table.notes]
    if notes:
        told["notes"] = notes
    _write_object(out, told)


def _write_object(out: IO[str], told: dict[str, Any]) -> None:
    """Write a JSON object with an entry a line, and lists of objects with an object a line."""
    entries = []
    for name, value in told.items():
        if isinstance(value, list) and value and isinstance(value[0], dict):
            text = "[\n" + ",\n".join(f"  {_json(item)}" for item in value) + "\n ]"
        else:
            text = _json(value)
        entries.append(f" {_json(name)}: {text}")
    out.write("{\n" + ",\n".join(entries) + "\n}\n")


def _json(value: Any) -> str:
    return json.dumps(value, allow_nan=False)


def _write_csv(out: IO[str], table: Table) -> None:
    """Write the rows after RFC 4180, with a header, missing values empty and no text a spreadsheet would run."""
    from logtool.exports.cells import cell_of

    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(table.columns)
    for row in table.rows():
        writer.writerow([cell_of(value) for value in row.values()])
