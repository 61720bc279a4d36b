"""What is wrong with the logs themselves: lines set aside, gaps, clock steps, a setup that came late."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from logtool.records.quick import accepts_sql
from logtool.records.tally import FIELD, SPLIT
from logtool.tables.choice import Choice, choose
from logtool.tables.listening import MINUTE_US
from logtool.tables.result import Table, output_value
from logtool.tables.rollup import make_rollup

if TYPE_CHECKING:
    import pandas as pd

    from logtool.records.reader import Logs

STEP_S = 120  # eight slots of 15 s: decoders may write slots a little out of order; our choice
SHOWN_CHARACTERS = 200
_SECOND_US = 1_000_000


def escaped(line: bytes) -> str:
    r"""Return a line so that it can be shown on one line: odd bytes as escapes, a backslash doubled.

    >>> escaped(b"a\tb\xff")
    'a\\tb\\xff'
    """
    text = line.replace(b"\\", b"\\\\").decode(errors="backslashreplace")
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode() for c in text)


def check_table(logs: Logs, choice: Choice) -> Table:
    """Return the lines set aside, with what else is odd as findings; see `check`."""
    make_rollup(logs, choice)
    aside = logs.set_aside()
    table = Table(
        {
            "file": [file for file, _, _, _ in aside],
            "line": [line for _, line, _, _ in aside],
            "reason": [reason for _, _, reason, _ in aside],
            "shown": [escaped(shown)[:SHOWN_CHARACTERS] for _, _, _, shown in aside],
        }
    )
    findings = [*_before_setup(logs), *_outside_watch(logs), *_gaps(logs, choice), *_steps(logs)]
    findings = [finding for finding in findings if _is_chosen(finding, choice)]
    findings.sort(key=lambda finding: (finding["from"], finding["receiver"], finding["what"]))
    table.findings = [
        {key: output_value(key, value) for key, value in finding.items()} for finding in findings
    ]
    return table


def _is_chosen(finding: dict[str, Any], choice: Choice) -> bool:
    name = finding["receiver"]
    if choice.receivers and name not in choice.receivers and name.split("@")[0] not in choice.receivers:
        return False
    after_end = choice.to_us is not None and finding["from"] >= choice.to_us
    return not after_end and not (choice.from_us is not None and finding["to"] < choice.from_us)


def _finding(
    what: str, receiver: str, span_us: tuple[int, int], size: float, unit: str, why: str
) -> dict[str, Any]:
    return {
        "what": what,
        "from": span_us[0],
        "to": span_us[1],
        "receiver": receiver,
        "size": size,
        "unit": unit,
        "why": why,
    }


def _before_setup(logs: Logs) -> list[dict[str, Any]]:
    rows = logs.connection.execute("""
        SELECT receiver, sum(n)::BIGINT, min(first_us), max(last_us) FROM rollup
        WHERE place IS NULL GROUP BY receiver ORDER BY receiver""").fetchall()
    findings = []
    for receiver, count, first_us, last_us in rows:
        if receiver in logs.setups:
            what = "before-setup"
            why = f"{count} heard lines come before the first setup: they have no place and no antenna"
        else:
            what = "no-setup"
            why = f"{count} heard lines and no setup: without --at LOCATOR there are no distances"
        findings.append(_finding(what, receiver, (first_us, last_us), count, "receptions", why))
    return findings


def _outside_watch(logs: Logs) -> list[dict[str, Any]]:
    """Return for each receiver with watch lines what it heard in hours, or pieces of them, without any."""
    rows = logs.connection.execute("""
        SELECT r.receiver, sum(n)::BIGINT, min(first_us), max(last_us)
        FROM rollup r ANTI JOIN listening l
            ON r.receiver = l.receiver AND r.band = l.band AND r.start_us = l.start_us
        WHERE r.listening = 'recorded' GROUP BY r.receiver ORDER BY r.receiver""").fetchall()
    why = (
        "{} heard lines stand in hours without any watch, so without listening: watch lines are missing there"
    )
    return [
        _finding("outside-watch", receiver, (first_us, last_us), count, "receptions", why.format(count))
        for receiver, count, first_us, last_us in rows
    ]


def _gaps(logs: Logs, choice: Choice) -> list[dict[str, Any]]:
    """Return the stretches without listening between the first and the last that have some."""
    rows = logs.connection.execute(f"""
        WITH after AS (
            SELECT receiver, from_us, max(to_us) OVER (
                PARTITION BY receiver ORDER BY from_us, to_us ROWS BETWEEN UNBOUNDED PRECEDING AND 1 PRECEDING
            ) AS since_us FROM stretch),
        gap AS (
            SELECT receiver, since_us, from_us FROM after WHERE from_us - since_us > {choice.gap_min * MINUTE_US})
        SELECT receiver, since_us, from_us,
            receiver IN (SELECT receiver FROM event WHERE kind = 'watch'),
            (SELECT count(*) FROM event WHERE kind = 'stop' AND event.receiver = gap.receiver
                AND time_us >= since_us AND time_us < from_us)
        FROM gap ORDER BY ALL""").fetchall()
    findings = []
    for receiver, since_us, from_us, watched, stops in rows:
        if stops:
            why = "a stop is recorded"
        elif watched:
            why = "no watch is recorded and no stop either: the recording broke off or the computer was off"
        else:
            why = (
                "no record at all; without watch lines it cannot be told whether it was off or heard nothing"
            )
        size = (from_us - since_us) / MINUTE_US
        findings.append(_finding("gap", receiver, (since_us, from_us), size, "min", why))
    return findings


def _steps(logs: Logs) -> list[dict[str, Any]]:
    """Return where the times of one receiver's receptions go back within a file."""
    connection = logs.connection
    connection.execute("SET preserve_insertion_order = true")
    try:
        rows = connection.execute(f"""
            WITH split AS (
                SELECT file, {SPLIT} AS f FROM {logs.lines} WHERE {accepts_sql("heard")}),
            read AS (
                SELECT file, {FIELD["receiver"]} AS receiver, epoch_us({FIELD["time"]}::TIMESTAMP) AS time_us,
                    row_number() OVER () AS nth
                FROM split),
            step AS (
                SELECT *, lag(time_us) OVER (PARTITION BY file, receiver ORDER BY nth) AS before_us FROM read)
            SELECT file, receiver, before_us, time_us FROM step
            WHERE before_us - time_us > {STEP_S * _SECOND_US} ORDER BY ALL""").fetchall()
    finally:
        connection.execute("SET preserve_insertion_order = false")
    findings = []
    for file, receiver, before_us, time_us in rows:
        why = f"{logs.file_names[file]}: the time of one line is earlier than that of the line before"
        size = (before_us - time_us) / _SECOND_US
        findings.append(_finding("clock-step", receiver, (time_us, before_us), size, "s", why))
    return findings


def check(logs: Logs, **words: Any) -> pd.DataFrame:
    """Return the lines that were set aside, each with its reason; what else is odd is in `attrs`.

    Parameters
    ----------
    logs : Logs
        Opened logs, see `logtool.open_logs`.
    **words
        `gap_min`: gaps longer than this are told; from_, to and receiver choose among the findings.

    Returns
    -------
    pandas.DataFrame
        One row per line with file, line, reason and shown; `attrs["findings"]` is a list of dicts with
        what (`before-setup`, `no-setup`, `outside-watch`, `gap`,
        `clock-step`), from, to, receiver, size, unit and why.
    """
    table = check_table(logs, choose(**words))
    frame = table.to_pandas()
    frame.attrs["findings"] = table.findings
    return frame
