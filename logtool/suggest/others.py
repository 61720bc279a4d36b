"""Lines that are no messages: dates, dials, headers, remarks, reports of the receiver itself."""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from dataclasses import dataclass, field
from datetime import datetime

from logtool.suggest.cores import Core, cores_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.frequencies import radio_of
from logtool.suggest.hints import meanings_of
from logtool.suggest.looking import Line
from logtool.suggest.positions import normal
from logtool.suggest.tables import Column, holds_call
from logtool.suggest.timeforms import has_date, has_time, moment_of, shared_forms
from logtool.suggest.times import Times, best_form
from logtool.suggest.toml import escaped, plain, text_of
from logtool.suggest.values import is_number, is_word, number_of

MOST_RULES = 10
_COMMENT = re.compile(r"[ \t]*(#|;|//|\*|%|!)")
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
_NOISE = {"dbfs", "noise", "level"}
_NUMBER = r"[+-]?[0-9]+(?:[.,][0-9]+)?"
_INTERVAL_SHARE = 0.7
_LEAST_INTERVALS = 3


@dataclass
class OtherRule:
    """One further rule: its TOML lines without the heading, and what to say about it."""

    kind: str
    name: str
    lines: list[str]
    remarks: list[str] = field(default_factory=list)
    values: tuple[str, ...] = ()  # names that it carries


@dataclass
class Others:
    """All further rules, and what is in doubt."""

    rules: list[OtherRule] = field(default_factory=list)
    doubts: list[Doubt] = field(default_factory=list)
    carried: set[str] = field(default_factory=set)  # names of pieces, like `dial_khz`
    left: list[str] = field(default_factory=list)  # lines that no rule takes


@dataclass
class _Cluster:
    """Lines that are alike but for numbers, times, call signs and locators."""

    lines: list[Line]
    cores: list[tuple[list[Core], str]]
    at: list[int]  # places in the sample

    def column(self, k: int) -> Column:
        words = [cores[k] for cores, _ in self.cores]
        hint = " ".join(core.text for core in self.cores[0][0][max(0, k - 2) : k] if is_word(core.text))
        unit = self.cores[0][0][k + 1].text if k + 1 < len(self.cores[0][0]) else ""
        return Column("", [word.text for word in words], hint, unit)


def find_others(lines: list[Line], taken: set[int], times: Times, *, dated: bool, dial_known: bool) -> Others:
    """Return rules for the lines that are not of the messages' table.

    Parameters
    ----------
    lines : list of Line
        The sample.
    taken : set of int
        Places of the lines that are messages or headers.
    times : Times
        What was found of the messages' times.
    dated, dial_known : bool
        Whether the day and the dial are known without these lines.
    """
    others = Others()
    first = min(taken, default=0)
    clusters = _clusters(lines, taken)
    for cluster in clusters:
        numbered = len(others.rules) < MOST_RULES
        if numbered and _carry(others, cluster, times, lines, taken, dated=dated, dial_known=dial_known):
            continue
        if numbered and _status(others, cluster, times):
            continue
        if numbered and _passed_over(others, cluster, first):
            continue
        others.left += [line.text for line in cluster.lines]
    _merge_comments(others)
    heard = [lines[i].text for i in sorted(taken)]
    for rule in list(others.rules):
        pattern = _pattern_in(rule)
        if any(pattern.fullmatch(text) for text in heard):
            others.rules.remove(rule)
            others.carried -= set(rule.values)
            others.doubts.append(
                Doubt("lines", f"a rule {rule.name!r} would take messages too and is left out")
            )
    if others.left:
        calls = [text for text in others.left if holds_call(text)]
        shown = (calls or others.left)[0].strip()[:80]
        others.doubts.append(
            Doubt("lines", f"{len(others.left)} of {len(lines)} lines of the sample fit no rule and are set aside, as {shown!r}",
                  essential=bool(calls))
        )  # fmt: skip
    return others


def _pattern_in(rule: OtherRule) -> re.Pattern[str]:
    written = next(line for line in rule.lines if line.startswith("pattern = "))[len("pattern = ") :]
    if written.startswith("'"):
        return re.compile(written[1:-1])
    import tomllib

    return re.compile(tomllib.loads("p = " + written)["p"])


def _clusters(lines: list[Line], taken: set[int]) -> list[_Cluster]:
    grouped: dict[tuple[str, ...], _Cluster] = defaultdict(lambda: _Cluster([], [], []))
    for i, line in enumerate(lines):
        if i in taken:
            continue
        cores, end = cores_of(line.text)
        key = [
            normal(core.glue) + "\n" + (core.text if core.kind in ("word", "empty") else core.kind)
            for core in cores
        ]
        cluster = grouped[(*key, normal(end))]
        cluster.lines.append(line)
        cluster.cores.append((cores, end))
        cluster.at.append(i)
    return sorted(grouped.values(), key=lambda cluster: (-len(cluster.lines), cluster.at[0]))


def _carry(
    others: Others,
    cluster: _Cluster,
    times: Times,
    lines: list[Line],
    taken: set[int],
    *,
    dated: bool,
    dial_known: bool,
) -> bool:
    """Make a rule of lines that give a date or a dial to the lines after them."""
    names: dict[int, str] = {}
    forms: list[str] = []
    remarks: list[str] = []
    if any(holds_call(line.text) for line in cluster.lines):
        return False
    for k, core in enumerate(cluster.cores[0][0]):
        column = cluster.column(k)
        if core.kind in ("time", "number") and not dated and "date" not in names.values():
            days = [form for form in shared_forms(column.values) if has_date(form) and "%f" not in form]
            if core.kind == "number" and not (
                meanings_of(column.hint) & {"date"} or len(core.text) in (6, 8)
            ):
                days = []
            if core.kind == "number" and radio_of(k, column, few=True) is not None:
                days = [] if column.unit.lower() in ("hz", "khz", "mhz") else days
            if days:
                form = days[0]
                if len(days) > 1:
                    form, why = _order_of_days(column, days, cluster, times, lines, taken)
                    if why:
                        others.doubts.append(Doubt("time", why))
                names[k] = "date"
                forms.append(f"date_form = {plain(form)}")
                continue
        if core.kind == "number" and not dial_known and not any("dial" in name for name in names.values()):
            column.unit = column.unit if column.unit.lower() in ("hz", "khz", "mhz") else ""
            column.unit = {"hz": "Hz", "khz": "kHz", "mhz": "MHz"}.get(column.unit.lower(), "")
            if column.unit or not meanings_of(column.hint) & {"dial", "frequency"}:
                column.hint = ""  # words of prose
            radio = radio_of(k, column, few=True)
            if radio is not None:
                names[k] = f"dial_{radio.unit.lower()}"
                if not radio.sure:
                    others.doubts.append(
                        Doubt("dial_hz", f"its unit is taken as {radio.unit} by its size only")
                    )
    if not names:
        return False
    name = "-".join(sorted({"date" if n == "date" else "dial" for n in names.values()})) + "-lines"
    number = sum(rule.name.startswith(name) for rule in others.rules)
    rule = OtherRule(
        "carry", name + (f"-{number + 1}" if number else ""), [f"pattern = {text_of(_pattern_of(cluster, names))}", *forms],
        [*remarks, f"as {cluster.lines[0].text.strip()[:80]!r}"], tuple(names.values()),
    )  # fmt: skip
    others.rules.append(rule)
    others.carried |= set(names.values())
    return True


def _order_of_days(
    column: Column, forms: list[str], cluster: _Cluster, times: Times, lines: list[Line], taken: set[int]
) -> tuple[str, str]:
    def read(form: str) -> list[datetime | None]:
        return [moment_of(value, form) for value in column.values]

    form, why = best_form(forms, read, [line.part for line in cluster.lines], None)
    return form, f"{why} ({column.values[0]!r})" if why else ""


def _status(others: Others, cluster: _Cluster, times: Times) -> bool:
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
    toml = [f"pattern = {text_of(_pattern_of(cluster, names))}"]
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


def _clock_of(cluster: _Cluster, clocks: list[int], times: Times) -> tuple[dict[int, str], list[str]]:
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
    steps = Counter(
        round((b - a).total_seconds()) % 86_400 for a, b in zip(moments, moments[1:], strict=False)
    )
    if not steps:
        return None
    step, times = steps.most_common(1)[0]
    return float(step) if step and times >= max(_LEAST_INTERVALS, 0.5 * sum(steps.values())) else None


def _passed_over(others: Others, cluster: _Cluster, first: int) -> bool:
    """Make a rule for comments, and for headers that come again."""
    text = cluster.lines[0].text
    if any(holds_call(line.text) for line in cluster.lines):
        return False
    sign = _COMMENT.match(text)
    if sign:
        others.rules.append(
            OtherRule(
                "skip", "comments", [f"pattern = {text_of('[ ' + chr(92) + 't]*' + escaped(sign[1]) + '.*')}"]
            )
        )
        return True
    cores = cluster.cores[0][0]
    rule_line = not cores
    words_only = bool(cores) and all(core.kind in ("word", "empty") for core in cores)
    if rule_line or (words_only and (len(cluster.lines) > 1 or cluster.at[0] < first)):
        number = sum(rule.name.startswith("header") for rule in others.rules)
        others.rules.append(
            OtherRule(
                "skip",
                f"headers-{number + 1}",
                [
                    f"pattern = {text_of('[ ' + chr(92) + 't]*' + escaped(text.strip()) + '[ ' + chr(92) + 't]*')}"
                ],
            )
        )
        return True
    return False


def _merge_comments(others: Others) -> None:
    """Keep one rule for each sign of comments, after those rules that read some of them."""
    seen = set()
    kept: list[OtherRule] = []
    for rule in others.rules:
        if rule.name == "comments":
            if rule.lines[0] in seen:
                continue
            seen.add(rule.lines[0])
            rule.name = f"comments-{len(seen)}"
        kept.append(rule)
    others.rules = [rule for rule in kept if rule.kind != "skip"] + [
        rule for rule in kept if rule.kind == "skip"
    ]


def _pattern_of(cluster: _Cluster, names: dict[int, str]) -> str:
    cores, end = cluster.cores[0]
    out = ""
    for k, core in enumerate(cores):
        glue = escaped(core.glue) if core.glue else ""
        out += glue if k or core.glue.strip() else r"[ \t]*"
        column = cluster.column(k)
        if k in names:
            form = _NUMBER if core.kind == "number" else ".+?"
            out += f"(?P<{names[k]}>{form})"
        elif core.kind in ("word", "empty"):
            out += escaped(core.text)
        else:
            out += _NUMBER if core.kind == "number" and all(map(is_number, column.values)) else ".+?"
    return out + escaped(end.rstrip()) + r"[ \t]*"
