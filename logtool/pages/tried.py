"""What a recipe makes of lines, for people: each line, and below it what it became or why it did not."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable

from logtool.records.layout import COLUMN_NAMES
from logtool.records.recipes.trying import Tried
from logtool.tables.checks import escaped

MOST_CHARACTERS = 200  # of a line that is shown
_NO_RECORD = "no record"


def tried_text(tried: list[Tried]) -> str:
    """Return the lines one by one with what each became, and the count by rule and reason at the end."""
    width = len(str(tried[-1].number)) if tried else 1
    shown = []
    for one in tried:
        line = escaped(one.line.encode())[:MOST_CHARACTERS]
        shown.append(f"{one.number:>{width}}  {line}")
        shown.append(f"{'':{width}}  -> {_outcome(one)}")
    return "\n".join([*shown, "", *_counted(tried)]) + "\n"


def _outcome(one: Tried) -> str:
    if one.reason:
        rule = f" (by the rule {one.rule})" if one.rule else ""
        return f"set aside: {one.reason}{rule}"
    if not one.became:
        return f"{_NO_RECORD}: {one.rule or 'blank'}"
    fields = zip(COLUMN_NAMES, one.became.split("\t"), strict=True)
    return f"{one.rule}: " + "  ".join(f"{name}={value}" for name, value in fields if value)


def _counted(tried: list[Tried]) -> Iterable[str]:
    records = Counter(one.rule for one in tried if one.became)
    reasons = Counter(one.reason for one in tried if one.reason)
    others = Counter(one.rule or "blank" for one in tried if not one.became and not one.reason)
    yield f"{len(tried)} lines: {sum(records.values())} records{_listed(records)}"
    if others:
        yield f"{sum(others.values())} {_NO_RECORD}{_listed(others)}"
    if reasons:
        yield f"{sum(reasons.values())} set aside{_listed(reasons)}"


def _listed(counts: Counter[str]) -> str:
    return f" ({', '.join(f'{count} {name}' for name, count in sorted(counts.items()))})" if counts else ""
