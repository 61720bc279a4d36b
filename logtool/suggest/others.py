"""Lines that are no messages: dates, dials, headers, remarks, reports of the receiver itself."""

from __future__ import annotations

import re
from datetime import datetime

from logtool.suggest.clusters import Cluster, OtherRule, Others, clusters_of, heads_of, pattern_of
from logtool.suggest.day_order import best_form
from logtool.suggest.doubts import Doubt
from logtool.suggest.frequencies import radio_of
from logtool.suggest.hints import meanings_of
from logtool.suggest.looking import Line
from logtool.suggest.status import status_rule
from logtool.suggest.tables import Column, holds_call
from logtool.suggest.timeforms import has_date, moment_of, shared_forms
from logtool.suggest.times import Times
from logtool.suggest.toml import escaped, plain, text_of
from logtool.suggest.values import number_of

MOST_RULES = 10
_MOST_HEADS = 400
_NO_AUDIO = 24_000  # Hz; a bare number up to this could be anything
_COMMENT = re.compile(r"[ \t]*(#|;|//|\*|%|!)")


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
    heads = heads_of(lines, sorted(taken)[:_MOST_HEADS])
    for cluster in clusters_of(lines, taken):
        numbered = len(others.rules) < MOST_RULES
        begun = heads_of(lines, cluster.at[:1]) <= heads  # as a message's line that breaks off
        if numbered and not begun and _carry(others, cluster, dated=dated, dial_known=dial_known):
            continue
        if numbered and status_rule(others, cluster, times):
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
            Doubt(
                "lines",
                f"{len(others.left)} of {len(lines)} lines of the sample fit no rule and are set aside, as {shown!r}",
                essential=bool(calls),
            )
        )
    return others


def _pattern_in(rule: OtherRule) -> re.Pattern[str]:
    written = next(line for line in rule.lines if line.startswith("pattern = "))[len("pattern = ") :]
    if written.startswith("'"):
        return re.compile(written[1:-1])
    import tomllib

    return re.compile(tomllib.loads("p = " + written)["p"])


def _carry(others: Others, cluster: Cluster, *, dated: bool, dial_known: bool) -> bool:
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
                    form, why = _order_of_days(column, days, cluster)
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
            told = bool(column.unit or column.hint)
            if radio is not None and (told or "." in core.text or number_of(core.text) > _NO_AUDIO):
                if not told:
                    others.doubts.append(
                        Doubt(
                            "dial_hz",
                            f"NOT SURE that lines as {cluster.lines[0].text.strip()[:60]!r} give the dial",
                        )
                    )
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
        "carry",
        name + (f"-{number + 1}" if number else ""),
        [f"pattern = {text_of(pattern_of(cluster, names))}", *forms],
        [*remarks, f"as {cluster.lines[0].text.strip()[:80]!r}"],
        tuple(names.values()),
    )
    others.rules.append(rule)
    others.carried |= set(names.values())
    return True


def _order_of_days(column: Column, forms: list[str], cluster: Cluster) -> tuple[str, str]:
    def read(form: str) -> list[datetime | None]:
        return [moment_of(value, form) for value in column.values]

    form, why = best_form(forms, read, [line.part for line in cluster.lines], None)
    return form, f"{why} ({column.values[0]!r})" if why else ""


def _passed_over(others: Others, cluster: Cluster, first: int) -> bool:
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
