"""Small logs, written by hand or drawn at random, and what the tables say of them."""

from __future__ import annotations

import gzip
import json
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from logtool import open_logs
from logtool.records.reader import Logs
from logtool.tables.between import between_table
from logtool.tables.choice import choose
from logtool.tables.lines import lines_table
from logtool.tables.nights import nights_table
from logtool.tables.reach import reach_table
from logtool.tables.result import Table
from logtool.tables.sectors import sectors_table
from logtool.tables.senders import senders_table
from tests.records.slow_reader import COLUMNS

Rows = list[list[tuple[str, Any]]]
TABLES = {
    "reach": reach_table,
    "senders": senders_table,
    "sectors": sectors_table,
    "nights": nights_table,
    "between": between_table,
    "lines": lines_table,
}


def line(kind: str, time: str, receiver: str = "hut", **fields: Any) -> str:
    """One record, all fields empty that are not given."""
    values = dict.fromkeys(COLUMNS, "") | {"time": time, "kind": kind, "receiver": receiver} | fields
    return "\t".join(str(values[name]) for name in COLUMNS)


def heard(time: str, sender: str = "Q1ABC", **fields: Any) -> str:
    return line("heard", time, sender=sender, **{"dial_hz": 7074000, "mode": "K8"} | fields)


def setup(time: str, locator: str = "JN58td", antenna: str = "wire", **fields: Any) -> str:
    return line("setup", time, locator=locator, more=f"antenna={antenna}", **{"dial_hz": 7074000} | fields)


def watch(time: str, on_s: float | str, **fields: Any) -> str:
    return line("watch", time, more=f"on_s={on_s}", **{"dial_hz": 7074000} | fields)


def stop(time: str, receiver: str = "hut") -> str:
    return line("stop", time, receiver)


def note(time: str, receiver: str = "hut") -> str:
    return line("note", time, receiver, text="rain")


def write(folder: Path, *files: Sequence[str], packed: bool = False) -> Path:
    """Write one file for each list of lines, in the order of their names."""
    folder.mkdir(parents=True, exist_ok=True)
    for i, lines in enumerate(files):
        data = "".join(f"{text}\n" for text in lines).encode()
        if packed:
            (folder / f"{i:03d}.log.gz").write_bytes(gzip.compress(data, mtime=0))
        else:
            (folder / f"{i:03d}.log").write_bytes(data)
    return folder


def read_back(folder: Path) -> list[tuple[str, bytes]]:
    """The files of a folder in the order of their names, unpacked."""
    files = [(str(path), path.read_bytes()) for path in sorted(folder.iterdir())]
    return [(name, gzip.decompress(data) if name.endswith(".gz") else data) for name, data in files]


def table(logs: Logs, name: str, **words: Any) -> Table:
    return TABLES[name](logs, choose(**words))


def rows_of(
    folder: Path, lines: Sequence[str], name: str, *, at: str | None = None, **words: Any
) -> list[Any]:
    """The rows of a table of one small log, as they leave the program."""
    with open_logs(write(folder, lines), at=at, threads=1) as logs:
        return list(table(logs, name, **words).rows())


def all_rows(logs: Logs, **words: Any) -> dict[str, str]:
    """The bytes of all tables' rows, and of the summary of reach."""
    found = {}
    for name in TABLES:
        made = table(logs, name, **words)
        rows = list(made.rows())
        if name == "lines":  # where a line stands is another matter
            rows = sorted(({**row, "file": "", "line": 0} for row in rows), key=json.dumps)
        found[name] = json.dumps(rows)
        if name == "reach":
            found["summary"] = json.dumps(made.written_summary())
    return found
