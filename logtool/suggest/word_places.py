"""What stands at one place of lines: the kind of word that nearly all have there."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping

from logtool.suggest.cores import Core
from logtool.suggest.tables import (
    enough,
    holds_call,
)
from logtool.suggest.values import CALLING_WORDS, ENOUGH, is_call, is_word, words_for_nothing

_DROPPED_SHARE = 0.2  # of the rows may be of another kind at a position


_FEW_WORDS = 6


_OTHER_SIGNS_SHARE = 0.1  # of the lines have other signs at a place: a second kind of messages' lines


_MAIN_SIGNS_SHARE = 0.4


_NUMBER_FIRST = ("time", "number")


def main_group(lines: list[str], cut: list[list[Core]]) -> list[int]:
    """Return the lines that begin like most of those with call signs."""
    heads = [_head(cores) for cores in cut]
    counted = Counter(head for head, line in zip(heads, lines, strict=True) if head and holds_call(line))
    if not counted:
        return []
    best, _ = counted.most_common(1)[0]
    return [
        i
        for i, head in enumerate(heads)
        if head and all(ours in (theirs, "empty") for ours, theirs in zip(head, best, strict=True))
    ]


def _head(cores: list[Core]) -> tuple[str, ...]:
    """Return the kinds of a line's first two words."""
    if len(cores) < 2:
        return ()
    return tuple(_coarse(core) for core in cores[:2])


def _coarse(core: Core) -> str:
    kind = core.kind
    return kind if kind in ("number", "time", "empty") else "word"


def normal(glue: str) -> str:
    """Return signs with each run of blanks as one blank."""
    out = ""
    for c in glue:
        if c in " \t":
            if not out.endswith(" "):
                out += " "
        else:
            out += c
    return out


def _glue(row: list[Core], k: int) -> str:
    return normal(row[k].glue) if k else normal(row[k].glue).strip()


def kind_at(
    rows: list[list[Core]], k: int, needed: float = 1 - _DROPPED_SHARE, *, even: bool = False
) -> tuple[list[bool], str, str] | None:
    """Return which rows are of the main kind at a position, that kind and the signs before, or None for text."""
    given_rows = rows
    there = [row for row in rows if len(row) > k]
    if not enough(len(there), len(rows)):
        return None
    glues = Counter(_glue(row, k) for row in there)
    before, times = glues.most_common(1)[0]
    if times < needed * len(there):
        signs = [glue.strip() for glue, n in glues.items() if n >= _OTHER_SIGNS_SHARE * len(there)]
        if len(set(signs)) < 2 or times < _MAIN_SIGNS_SHARE * len(there) or needed == ENOUGH:
            return None  # else signs tell two kinds of lines apart: the others are looked at later
        rows = [row for row in rows if len(row) > k and _glue(row, k) == before]
        kept = kind_at(rows, k, needed, even=even)
        if kept is None:
            return None
        good_rows = {id(row): ok for row, ok in zip(rows, kept[0], strict=True)}
        return [good_rows.get(id(row), False) for row in given_rows], kept[1], kept[2]
    words = Counter(row[k].text for row in there)
    kinds = Counter(row[k].kind for row in there)
    empties = kinds.pop("empty", 0)
    if not kinds:
        return None
    kind, most = kinds.most_common(1)[0]

    def good(test: Mapping[str, bool] | set[str], *, by_text: bool = False) -> list[bool]:
        return [
            len(row) > k
            and _glue(row, k) == before
            and ((row[k].text if by_text else row[k].kind) in test or row[k].kind == "empty")
            for row in rows
        ]

    if len(words) == 1 and is_word(next(iter(words))) and not set(words) & CALLING_WORDS:
        return good(set(words), by_text=True), "constant", before
    if kind in _NUMBER_FIRST and most + empties >= needed * len(there):
        return good({kind}), kind, before
    calling = set(words) & CALLING_WORDS
    if calling and even and set(kinds) <= {"call", "word"}:
        most, total = (
            sum(n for word, n in words.items() if is_call(word) or word in CALLING_WORDS),
            len(there),
        )
        if most + empties < ENOUGH * total or len(words) == len(calling):
            return None
        return good({word for word in words if is_call(word)} | calling, by_text=True), "call", before
    if calling:
        return None
    if kind in ("call", "locator") and enough(most + empties, len(there)):
        if kind == "locator" and len(words) <= 2:
            return good({kind}), "word", before
        return good({kind}), kind, before
    few = len(words) <= min(_FEW_WORDS, max(1, len(there) // 6))
    if few and all(" " not in word for word in words):
        return good(set(words) | words_for_nothing(words), by_text=True), "word", before
    return None
