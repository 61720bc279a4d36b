"""The tables of `docs/data-flow.md`, made by running its six lines.

`python -m tests.docs.data_flow` writes them into the page.
"""

from __future__ import annotations

import re
import tempfile
from collections.abc import Iterable
from decimal import Decimal
from io import StringIO
from pathlib import Path
from typing import Any

from logtool import open_logs
from logtool.pages.columns import NOTHING
from logtool.pages.map import map_data_of
from logtool.pages.table import write_table
from logtool.records.layout import COLUMN_NAMES
from logtool.records.reader import Logs
from logtool.tables.checks import check_table
from logtool.tables.choice import choose
from logtool.tables.chosen import make_chosen, make_senders
from logtool.tables.reach import KEYS, reach_table
from logtool.tables.result import output_value, written_time
from logtool.tables.senders import senders_table

PAGE = Path(__file__).parents[2] / "docs" / "data-flow.md"
STATION = {"receiver": "garden", "dial_hz": "7040000"}
HEARD = {"kind": "heard", **STATION, "mode": "KB15"}
RECORDS: tuple[dict[str, str], ...] = (
    {"time": "2026-03-01T22:50:00Z", "kind": "setup", **STATION, "locator": "JO62qm", "more": "antenna=wire"},
    {"time": "2026-03-01T22:58:00Z", **HEARD, "audio_hz": "1210", "snr_db": "-5", "late_s": "0.1",
     "sender": "Q1ABC", "locator": "JN58", "text": "CQ DE Q1ABC JN58"},
    {"time": "2026-03-01T23:02:00Z", **HEARD, "audio_hz": "1212", "snr_db": "-9", "late_s": "0.1",
     "sender": "q1abc", "addressee": "Q2DEF", "text": "Q2DEF DE Q1ABC 73"},
    {"time": "2026-03-01T23:05:15Z", **HEARD, "audio_hz": "640", "snr_db": "-17", "late_s": "0.3",
     "sender": "Q2DEF", "locator": "FN42", "text": "CQ DE Q2DEF FN42"},
    {"time": "2026-03-01T23:07:30Z", **HEARD, "audio_hz": "655", "snr_db": "-20", "late_s": "0.3",
     "sender": "Q3GHI", "locator": "ZZ99", "text": "CQ DE Q3GHI ZZ99"},
    {"time": "2026-03-01T23:40:00Z", "kind": "watch", **STATION, "more": "on_s=3000"},
)  # fmt: skip
LINES = ["\t".join(record.get(name, "") for name in COLUMN_NAMES) for record in RECORDS]
TAB_SHOWN = "|"


def shown(name: str, value: Any) -> str:
    """Return a value as the page shows it: instants written, a list by its items, nothing as a dash."""
    if value is None:
        return NOTHING
    if isinstance(value, list):
        return ", ".join(shown("", item) for item in value) or NOTHING
    if isinstance(value, bool):
        return "yes" if value else "no"
    if name.endswith("_us"):
        return written_time(value)
    if not isinstance(value, str):
        value = output_value(name, float(value) if isinstance(value, Decimal) else value)
    return str(value) or NOTHING


def across(names: Iterable[str], rows: Iterable[Iterable[Any]]) -> str:
    """Return a Markdown table with a row for each row."""
    heads = list(names)
    lines = ["| " + " | ".join(heads) + " |", "|" + "---|" * len(heads)]
    for row in rows:
        lines.append("| " + " | ".join(shown(*pair) for pair in zip(heads, row, strict=True)) + " |")
    return "\n".join(lines)


def down(rows: list[dict[str, Any]]) -> str:
    """Return a Markdown table with a row for each key, for tables of many columns."""
    lines = ["| key |" + " |" * len(rows), "|" + "---|" * (1 + len(rows))]
    lines += [
        "| " + " | ".join([f"`{key}`", *(shown(key, row[key]) for row in rows)]) + " |" for key in rows[0]
    ]
    return "\n".join(lines)


def queried(logs: Logs, columns: str, source: str) -> str:
    """Return some columns of one of the engine's tables."""
    cursor = logs.connection.execute(f"SELECT {columns} FROM {source} ORDER BY ALL")
    return across([column[0] for column in cursor.description], cursor.fetchall())


def blocks() -> dict[str, str]:
    """Return each block of the page by its name, from a run of the six lines."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "garden.log"
        path.write_text("".join(line + "\n" for line in LINES), encoding="utf-8")
        with open_logs(path, threads=1) as logs:
            return _blocks(logs)


def _blocks(logs: Logs) -> dict[str, str]:
    found = {"log": "```text\n" + "\n".join(line.replace("\t", TAB_SHOWN) for line in LINES) + "\n```"}
    counted = logs.inputs[0].as_dict()
    counts = ("lines", "blank", "comments", "records", "repeated", "set_aside", "reasons")
    found["ledger"] = across(counts, [[str(counted[name]) for name in counts]])
    found["aside"] = across(
        ["line", "reason"], [(number, reason) for _, number, reason, _ in logs.set_aside()]
    )
    found["tally"] = queried(
        logs, "start_us, receiver, dial_hz, mode, sender, n, times, snrs, locators", "tally"
    )
    reach = reach_table(logs, choose())
    found["events"] = queried(logs, "time_us, kind, receiver, dial_hz", "event")
    found["stretches"] = queried(logs, "receiver, band, from_us, to_us", "stretch")
    found["listening"] = queried(logs, "receiver, antenna, band, from_us, to_us, listening", "listening")
    rollup = "receiver, antenna, band, sender, start_us, n, first_us, last_us, again, locator, borrowed"
    found["rollup"] = queried(logs, rollup, "rollup")
    found["sender_hour"] = queried(
        logs, "sender, hour * 3600000000 AS hour_us, locator, borrowed", "sender_hour"
    )
    found["pair"] = queried(logs, "place, locator, distance_km, uncertainty_km, bearing_deg", "pair")
    make_chosen(logs, choose())
    make_senders(logs.connection, KEYS)
    per_sender = "hour * 3600000000 AS hour_us, sender, n, again, locator, distance_km, snr_median_db"
    found["per_sender"] = queried(logs, per_sender, "per_sender")
    found["reach"] = down(list(reach.rows()))
    assert reach.summary is not None
    found["summary"] = down([dict(reach.written_summary() or {})])
    found["senders"] = down(list(senders_table(logs, choose()).rows()))
    found["map"] = _pairs(logs)
    found["check"] = "```text\n" + _printed(logs) + "\n```"
    return found


def _pairs(logs: Logs) -> str:
    data = map_data_of(logs, choose())
    names = ("sender", "receiver", "distance_km", "bearing_deg", "heard_again", "first", "last", "lines")
    rows = [
        (
            data.senders[pair.sender].name,
            data.receivers[pair.receiver].name,
            *(getattr(pair, name) for name in names[2:-1]),
            [line.line for line in pair.lines],
        )
        for pair in data.pairs
    ]
    return across(names, rows)


def _printed(logs: Logs) -> str:
    """Return what `logtool check` prints, without the folder's name and the spaces at lines' ends."""
    out = StringIO()
    table = check_table(logs, choose())
    table.columns["file"] = [Path(name).name for name in table.columns["file"]]
    write_table(out, "check", table, logs.inputs, show_all=False)
    return "\n".join(line.rstrip() for line in out.getvalue().splitlines())


def filled(page: str, found: dict[str, str]) -> str:
    """Return the page with the text between `<!-- NAME -->` and `<!-- end -->` replaced by the block."""

    def replaced(match: re.Match[str]) -> str:
        return f"<!-- {match[1]} -->\n\n{found[match[1]]}\n\n<!-- end -->"

    return re.sub(r"<!-- (\w+) -->\n.*?<!-- end -->", replaced, page, flags=re.DOTALL)


if __name__ == "__main__":
    PAGE.write_text(filled(PAGE.read_text(encoding="utf-8"), blocks()), encoding="utf-8")
