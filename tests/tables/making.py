"""Small logs, written by hand or drawn at random, and what the tables say of them."""

from __future__ import annotations

import gzip
import json
from collections.abc import Sequence
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

from hypothesis import strategies as st

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

Rows = list[list[tuple[str, Any]]]
TABLES = {
    "reach": reach_table,
    "senders": senders_table,
    "sectors": sectors_table,
    "nights": nights_table,
    "between": between_table,
}
COLUMNS = (
    "time kind receiver dial_hz audio_hz snr_db late_s mode sender addressee locator power_dbm text more"
).split()


def line(kind: str, time: str, receiver: str = "hut", **fields: Any) -> str:
    """One record, all fields empty that are not given."""
    values = dict.fromkeys(COLUMNS, "") | {"time": time, "kind": kind, "receiver": receiver} | fields
    return "\t".join(str(values[name]) for name in COLUMNS)


def heard(time: str, sender: str = "Q1ABC", **fields: Any) -> str:
    return line("heard", time, sender=sender, **{"dial_hz": 7074000, "mode": "K8"} | fields)


def setup(time: str, locator: str = "JN58td", antenna: str = "wire", **fields: Any) -> str:
    return line(
        "setup", time, locator=locator, more=f"antenna={antenna}", **{"dial_hz": 7074000} | fields
    )


def watch(time: str, on_s: float, **fields: Any) -> str:
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
    return (TABLES | {"lines": lines_table})[name](logs, choose(**words))


def rows_of(folder: Path, lines: Sequence[str], name: str, *, at: str | None = None, **words: Any) -> list[Any]:
    """The rows of a table of one small log, as they leave the program."""
    with open_logs(write(folder, lines), at=at, threads=1) as logs:
        return list(table(logs, name, **words).rows())


def all_rows(logs: Logs, **words: Any) -> dict[str, str]:
    """The bytes of all tables' rows, and of the summary of reach."""
    found = {}
    for name in TABLES:
        made = table(logs, name, **words)
        found[name] = json.dumps(list(made.rows()))
        if name == "reach":
            found["summary"] = json.dumps(made.written_summary())
    return found


START = datetime(2026, 12, 31, tzinfo=UTC)
SECONDS = (0, 0, 0, 15, 30, 59.999, 60, 0.000001)
PLACES = ("JN58td", "JN58te", "JN58tg", "JN58", "jn58TD44", "KO02aa", "RE78ir", "AA00aa")


def _time(day: int, minute: int, second: float) -> str:
    at = START + timedelta(days=day, minutes=minute, seconds=second)
    return at.strftime("%Y-%m-%dT%H:%M:%S.%f").rstrip("0").rstrip(".") + "Z"


def _days(far: bool) -> st.SearchStrategy[int]:
    return st.sampled_from([0, 0, 0, 0, 1, 13, 14, 15] if far else [0, 0, 0, 1])


times = st.builds(
    _time,
    _days(far=True),
    st.one_of(st.integers(690, 810), st.sampled_from([0, 1, 59, 60, 119, 120, 700, 710, 720, 1439])),
    st.sampled_from(SECONDS),
)
receivers = st.sampled_from(["hut", "hut", "hut", "isle"])
dials = st.sampled_from([7074000, 7074000, 7041500, 3573000, 6100000])
calls = st.sampled_from(["Q1ABC", "Q1ABC", "q1abc", "Q2X", "Q3Z/P", "Q4U", "Q5V", "Q6W", ""])
locators = st.sampled_from(
    ["", "", "JN58", "JN58td", "jn58TD25", "JN58ae", "JN59", "KO02", "KO02aa", "AA00", "RE78ir", "RR99xx", "JN"]
)
events = st.one_of(
    st.builds(
        setup, times, st.sampled_from(PLACES), st.sampled_from(["wire", "loop", "none"]),
        receiver=receivers, dial_hz=dials,
    ),
    st.builds(
        watch, times, st.sampled_from([0, 0.5, 60, 600, 1800, 3600, 7200, 86400]),
        receiver=st.sampled_from(["hut", "hut", "isle"]), dial_hz=st.one_of(dials, st.just("")),
    ),
    st.builds(stop, times, receivers),
    st.builds(note, times, receivers),
)  # fmt: skip
hearings = st.builds(
    heard, times, calls, receiver=receivers, dial_hz=dials, addressee=st.sampled_from(["", "Q2X", "q1abc", "Q9"]),
    locator=locators, snr_db=st.sampled_from(["", "-10", "3.5", "7", "-21.25"]),
    mode=st.sampled_from(["K8", "K8", "K8", "S2", ""]), text=st.sampled_from(["", "a", "b\\t"]),
)  # fmt: skip
seeds = st.integers(0, 2**32 - 1)


@st.composite
def logs_of_files(draw: st.DrawFn) -> list[list[str]]:
    """The lines of one to three files; some lines stand in several."""
    with_events = draw(st.lists(events, max_size=12))
    if draw(st.booleans()):
        with_events = [text for text in with_events if "\twatch\t" not in text]
    lines = draw(st.permutations(with_events + draw(st.lists(hearings, max_size=40))))
    count = draw(st.integers(1, 3))
    files: list[list[str]] = [[] for _ in range(count)]
    for text in lines:
        files[draw(st.integers(0, count - 1))].append(text)
        if draw(st.integers(0, 7)) == 0:
            files[draw(st.integers(0, count - 1))].append(text)
    return files


words = st.fixed_dictionaries(
    {},
    optional={
        "from_": st.sampled_from(["2026-12-31", "2026-12-31T11:40:00Z", "2026-12-31T12:00:00Z"]),
        "to": st.sampled_from(["2027-01-13", "2026-12-31T12:30:00.000001Z", "2026-12-31T23:59:00Z"]),
        "receiver": st.sampled_from(["hut", "isle", "hut@JN58td", "nobody"]),
        "antenna": st.sampled_from(["wire", "none"]),
        "band": st.sampled_from(["40m", "80m", "6100 kHz"]),
        "mode": st.sampled_from(["K8", "S2"]),
        "night": st.sampled_from(["2026-12-31", "2026-12-30"]),
        "sender": st.sampled_from(["q1abc", "Q2X"]),
        "by": st.sampled_from([("mode",), ("night",), ("antenna", "mode")]),
        "gap_min": st.sampled_from([1.0, 30.0, 120.0]),
    },
)
