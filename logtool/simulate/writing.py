"""The lines of a log, by the layout, and the order and files in which they stand."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from logtool.simulate.laws import IntArray
from logtool.simulate.scenario import Scenario
from logtool.simulate.times import Night

HEAD = (
    "# logtool layout 1\n"
    "# time\tkind\treceiver\tdial_hz\taudio_hz\tsnr_db\tlate_s\tmode\tsender\taddressee\tlocator\tpower_dbm\t"
    "text\tmore\n"
)
HEAD_LINES = 2
# At one instant lines stand in this order: what was before, then what begins.
WATCH, NOISE, STOP, SETUP, HEARD = range(5)
TRUE, FALSE, BAD = range(3)  # what became of a line; a bad one has its reason beside it


def line_of(
    time: str,
    kind: str,
    receiver: str,
    *,
    dial_hz: int | str = "",
    mode: str = "",
    locator: str = "",
    more: str = "",
) -> str:
    """Return a line that is no reception.

    Examples
    --------
    >>> line_of("2026-03-01T18:01:00Z", "watch", "hut", more="on_s=60").count("\\t")
    13
    """
    return f"{time}\t{kind}\t{receiver}\t{dial_hz}\t\t\t\t{mode}\t\t\t{locator}\t\t\t{more}"


@dataclass
class Lines:
    """Lines as they are made, each with its instant, order, receiver, place among its like, and mark."""

    texts: list[str] = field(default_factory=list)
    notes: list[str] = field(
        default_factory=list
    )  # of a bad line the reason, of a false decode the call sign
    keys: list[IntArray] = field(default_factory=list)

    def add(
        self, texts: list[str], at_us: IntArray, *, order: int, receiver: int, place: IntArray, mark: int = TRUE,
        notes: list[str] | None = None,
    ) -> None:  # fmt: skip
        """Add lines of one kind and receiver."""
        n = len(texts)
        self.texts += texts
        self.notes += notes if notes is not None else [""] * n
        columns = at_us, np.full(n, order), np.full(n, receiver), place, np.full(n, mark)
        self.keys.append(np.stack([np.asarray(column, dtype=np.int64) for column in columns]))


@dataclass(frozen=True)
class Odd:
    """A bad line or a false decode, where it stands."""

    file: str
    line: int
    receiver: str
    at_us: int
    note: str


@dataclass(frozen=True)
class Written:
    """The files, what each holds line by line, and where the odd lines stand."""

    files: dict[str, bytes]
    ledgers: list[dict[str, object]]
    false_decodes: tuple[Odd, ...]
    bad_lines: tuple[Odd, ...]


def write(scenario: Scenario, nights: tuple[Night, ...], lines: Lines) -> Written:
    """Return the files of a simulated log; each begins with the layout's two comments."""
    at_us, order, receiver, place, mark = np.concatenate(lines.keys, axis=1)
    sorted_ = np.lexsort((place, receiver, order, at_us))
    names, file_of = _files(scenario, nights, at_us, receiver)
    files: dict[str, bytes] = {}
    ledgers: list[dict[str, object]] = []
    odd: tuple[list[Odd], list[Odd]] = [], []
    seen: set[str] = set()
    for number in sorted(range(len(names)), key=lambda number: names[number]):
        own = sorted_[file_of[sorted_] == number]
        texts = [lines.texts[i] for i in own.tolist()]
        marks = mark[own]
        for i in np.flatnonzero(marks != TRUE).tolist():
            where = int(own[i])
            one = Odd(
                names[number], i + 1 + HEAD_LINES, scenario.receiver[int(receiver[where])].name,
                int(at_us[where]), lines.notes[where],
            )  # fmt: skip
            odd[0 if marks[i] == FALSE else 1].append(one)
        bad = int(np.count_nonzero(marks == BAD))
        before = len(seen)
        seen.update(text for text, one in zip(texts, marks.tolist(), strict=True) if one != BAD)
        records = len(seen) - before
        ledgers.append({
            "file": names[number], "lines": len(texts) + HEAD_LINES, "blank": 0, "comments": HEAD_LINES,
            "records": records, "repeated": len(texts) - bad - records, "set_aside": bad,
        })  # fmt: skip
        whole = HEAD + "".join(f"{text}\n" for text in texts)
        files[names[number]] = whole.encode("utf-8", "surrogateescape")
    return Written(files, ledgers, tuple(odd[0]), tuple(odd[1]))


def _files(
    scenario: Scenario, nights: tuple[Night, ...], at_us: IntArray, receiver: IntArray
) -> tuple[list[str], IntArray]:
    """The files' names, and the number of the file that each line goes into."""
    if scenario.files.split == "one":
        return ["all.log"], np.zeros(len(at_us), dtype=np.int64)
    if scenario.files.split == "receiver":
        return [f"{one.name}.log" for one in scenario.receiver], receiver
    starts = np.array([night.start_us for night in nights])
    return [f"{night.day}.log" for night in nights], np.searchsorted(starts, at_us, side="right") - 1
