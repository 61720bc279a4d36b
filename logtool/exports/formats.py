"""The formats that records can be written as, by name; each module is imported when it is asked for."""

from __future__ import annotations

from importlib import import_module
from typing import IO, TYPE_CHECKING, NamedTuple

from logtool.tables.choice import Choice

if TYPE_CHECKING:
    from logtool.records.reader import Logs


class Format(NamedTuple):
    """Where the function of a format is in this room, and whether the format is none that one can read."""

    module: str
    function: str = "write"
    binary: bool = False


FORMATS = {
    "layout": Format("layout"),
    "csv": Format("comma_separated"),
    "jsonl": Format("json_lines"),
    "parquet": Format("columnar", "write_parquet", binary=True),
    "arrow": Format("columnar", "write_arrow", binary=True),
    "adi": Format("adi"),
    "geojson": Format("geojson"),
    "kml": Format("kml"),
}


def write_as(name: str, logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write what a choice counts in a format; return notes on what it cannot hold.

    Parameters
    ----------
    name : str
        One of `FORMATS`.
    logs : Logs
        Opened logs; what they leave out of an output is left out.
    choice : Choice
        What is counted.
    out : binary file
        Where to; it need not be seekable.
    """
    place = FORMATS[name]
    write = getattr(import_module(f"logtool.exports.{place.module}"), place.function)
    notes: list[str] = write(logs, choice, out)
    return notes
