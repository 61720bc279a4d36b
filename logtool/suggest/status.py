"""Lines in which the receiver reports that it listened, or how loud the noise is."""

from __future__ import annotations

from collections import Counter
from datetime import datetime
from itertools import pairwise

from logtool.suggest.clusters import Cluster, OtherRule, Others, pattern_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.tables import Column, holds_call
from logtool.suggest.timeforms import has_date, has_time, moment_of, shared_forms
from logtool.suggest.times import Times
from logtool.suggest.toml import plain, text_of
from logtool.suggest.values import number_of

_LISTENING = {
    "listened",
    "listening",
    "watch",
    "watched",
    "open",
    "active",
    "monitored",
    "monitoring",
    "receiving",
    "heard",
}


_INTERVAL_SHARE = 0.7


_LEAST_INTERVALS = 3


def status_rule(others: Others, cluster: Cluster, times: Times) -> bool:
    """Make a rule of lines in which the receiver reports that it listened, or the level of the noise."""
    cores = cluster.cores[0][0]
    clocks = [k for k, core in enumerate(cores) if core.kind == "time" or _is_clock(cluster.column(k), times)]
    if not clocks or any(holds_call(line.text) for line in cluster.lines):
        return False
    names, forms = _clock_of(cluster, clocks, times)
    if not names:
        return False
    words = {core.text.lower() for core in cores}
    moments = [moment_of(cluster.cores[j][0][clocks[0]].text, forms[0]) for j in range(len(cluster.lines))]
    interval_s = _interval_s([m for m in moments if m is not None])
    numbers = [k for k, core in enumerate(cores) if core.kind == "number" and k not in names]
    for k in numbers:
        column = cluster.column(k)
        unit = column.unit.lower()
        if "dbfs" in (unit, *column.hint.lower().split()):
            names[k] = "dbfs"
        elif not any(name.startswith("on_") for name in names.values()):
            factor = 60 if unit in ("min", "minutes", "minute") else 1
            most, times_seen = Counter(column.values).most_common(1)[0]
            fits = (
                interval_s is not None
                and times_seen >= _INTERVAL_SHARE * len(column.values)
                and abs(number_of(most) * factor - interval_s) < 0.1 * interval_s
            )
            told = bool(words & _LISTENING) and unit in ("s", "sec", "seconds", "min", "minutes", "minute")
            if fits or told:
                names[k] = "on_min" if factor == 60 else "on_s"
                if not (fits and told):
                    others.doubts.append(
                        Doubt(
                            "watch",
                            f"NOT SURE that lines as {cluster.lines[0].text.strip()[:60]!r} tell how long it listened",
                        )
                    )
    kind = (
        "watch"
        if any(name.startswith("on_") for name in names.values())
        else "noise"
        if "dbfs" in names.values()
        else ""
    )
    if not kind:
        return False
    if names and times.date_form and "date" in names.values():
        forms = [forms[0], times.date_form]
    toml = [f"pattern = {text_of(pattern_of(cluster, names))}"]
    if forms[0] != "iso":
        toml.append(f"time_form = {plain(forms[0])}")
    if "date" in names.values():
        toml.append(f"date_form = {plain(forms[1])}")
    number = sum(rule.kind == kind for rule in others.rules)
    others.rules.append(
        OtherRule(
            kind,
            kind + (f"-{number + 1}" if number else ""),
            toml,
            [f"as {cluster.lines[0].text.strip()[:80]!r}"],
        )
    )
    return True


def _is_clock(column: Column, times: Times) -> bool:
    """Return whether a column of bare digits has the messages' form of time."""
    return bool(times.time_form) and "%" in times.time_form and times.time_form in shared_forms(column.values)


def _clock_of(cluster: Cluster, clocks: list[int], times: Times) -> tuple[dict[int, str], list[str]]:
    """Return the names of the pieces that give a line's time, and the forms of time and date."""
    for k in clocks:
        forms = shared_forms(cluster.column(k).values)
        if times.time_form in forms:
            names = {k: "time"}
            if times.date_form:
                day = next(
                    (
                        j
                        for j in clocks
                        if j != k and times.date_form in shared_forms(cluster.column(j).values)
                    ),
                    None,
                )
                if day is None:
                    return {}, []
                names[day] = "date"
            clocks[0] = k
            return names, [times.time_form, times.date_form]
    for k in clocks:
        forms = [form for form in shared_forms(cluster.column(k).values) if has_time(form)]
        if len(forms) == 1 and has_date(forms[0]):
            clocks[0] = k
            return {k: "time"}, [forms[0], ""]
    return {}, []


def _interval_s(moments: list[datetime]) -> float | None:
    steps = Counter(round((b - a).total_seconds()) % 86_400 for a, b in pairwise(moments))
    if not steps:
        return None
    step, times = steps.most_common(1)[0]
    return float(step) if step and times >= max(_LEAST_INTERVALS, 0.5 * sum(steps.values())) else None
