"""Lines whose columns are told by their order: words between blanks, perhaps with words of prose between them."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass

from logtool.suggest.cores import Core, cores_of
from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.order_way import OrderWay
from logtool.suggest.tables import (
    Column,
    Table,
    enough,
    give_names,
    holds_call,
    split_by_word,
    without_wrong_times,
)
from logtool.suggest.values import CALLING_WORDS, ENOUGH, words_for_nothing
from logtool.suggest.word_places import kind_at, main_group, normal

_LEAST_ROWS = 3
_PREPOSITIONS = ("at", "on", "in", "of", "when", "off")
_LEAST_SHARE = 0.2  # of the lines that hold a call sign


def order_table(lines: list[str]) -> Table | None:
    """Return the table of lines that begin with the same kinds of words, or None where few do."""
    cut = [cores_of(line) for line in lines]
    alike = main_group(lines, [cores for cores, _ in cut])
    rows = [i for i in alike if holds_call(lines[i])]
    if len(rows) < _LEAST_ROWS:
        return None
    glue: list[str] = []
    kinds: list[str] = []
    dropped = 0
    k = 0
    counts = Counter(len(cut[i][0]) for i in rows)
    even = enough(
        counts.most_common(1)[0][1], len(rows)
    )  # so a general call may stand in a column of call signs
    while True:
        found = kind_at([cut[i][0] for i in rows], k, even=even)
        if found is None:
            break
        good, kind, before = found
        dropped += sum(not ok for ok in good)
        rows = [i for i, ok in zip(rows, good, strict=True) if ok]
        glue.append(before)
        kinds.append(kind)
        k += 1
    has_text = any(len(cut[i][0]) > k for i in rows)
    if has_text or _is_message_tail([cut[i][0] for i in rows], kinds):
        while kinds and kinds[-1] in ("call", "calling", "locator"):  # they belong to the message
            kinds.pop()
            glue.pop()
        has_text = True
    k = len(kinds)
    if not k:
        return None
    pattern = _Pattern([cut[i][0] for i in rows], glue, kinds)
    rows = sorted(set(rows) | {i for i in alike if not holds_call(lines[i]) and pattern.fits(cut[i][0])})
    after: list[str] = []
    if has_text:
        after, rows, lost = _after_text([cores for cores, _ in cut], rows, k)
        dropped += lost
    return _table(lines, cut, rows, _Found(glue, kinds, after, has_text, dropped))


class _Pattern:
    """What words have to be for a line to be of the same kind as the lines with call signs."""

    def __init__(self, rows: list[list[Core]], glue: list[str], kinds: list[str]) -> None:
        self._glue, self._kinds = glue, kinds
        self._words = [
            {row[k].text for row in rows} if kind in ("constant", "word") else set()
            for k, kind in enumerate(kinds)
        ]

    def fits(self, cores: list[Core]) -> bool:
        """Return whether a line begins as the others do."""
        if len(cores) < len(self._kinds):
            return False
        for core, glue, kind, words in zip(cores, self._glue, self._kinds, self._words, strict=False):
            if normal(core.glue).strip() != glue.strip():
                return False
            if words and core.text not in words:
                return False
            if not words and core.kind not in (kind, "empty"):
                return False
        return True


@dataclass
class _Found:
    """The columns before a text and their signs, and the kinds of those after it."""

    glue: list[str]
    kinds: list[str]
    after: list[str]
    has_text: bool
    dropped: int


def _after_text(cut: list[list[Core]], rows: list[int], k: int) -> tuple[list[str], list[int], int]:
    """Return the kinds of the columns that follow the text, the rows that have them, and how many have not."""
    kinds: list[str] = []
    lost = 0
    while True:
        backwards = [[_before_end(cut[i], n) for n in range(len(cut[i]) - k - 1)] for i in rows]
        found = kind_at(backwards, len(kinds), needed=ENOUGH)
        if found is None or found[1] not in ("number", "time", "constant"):
            break
        good, kind, _ = found
        lost += sum(not ok for ok in good)
        rows = [i for i, ok in zip(rows, good, strict=True) if ok]
        kinds.insert(0, kind)
    while kinds and kinds[0] == "constant" and len(kinds) == kinds.count("constant"):
        kinds.pop(0)  # words that always end a message belong to it
    return kinds, rows, lost


def _before_end(cores: list[Core], n: int) -> Core:
    """Return a word counted from the end, with the signs after it (a blank at the end) in place of those before."""
    core = cores[-1 - n]
    return Core(core.text, cores[-n].glue if n else " ", core.start)


def _table(lines: list[str], cut: list[tuple[list[Core], str]], rows: list[int], found: _Found) -> Table:
    glue, kinds, has_text, dropped = found.glue, found.kinds, found.has_text, found.dropped
    k = len(kinds)
    tail = len(found.after)
    columns = [Column(f"column {j + 1}", [cut[i][0][j].text for i in rows]) for j in range(k)]
    end = ""
    if not has_text or tail:
        ends = Counter(cut[i][1].strip() for i in rows)
        end = ends.most_common(1)[0][0]
    if has_text:
        befores = Counter(normal(cut[i][0][k].glue) for i in rows if len(cut[i][0]) > k)
        before = befores.most_common(1)[0][0] if befores else " "
        glue = [*glue, before]
        kinds = [*kinds, "text"]
        texts = [_text_of(lines[i], cut[i][0], k, tail) for i in rows]
        if tail:
            behind = Counter(normal(cut[i][0][-tail].glue) for i in rows).most_common(1)[0][0]
            glue += [behind, *(normal(cut[rows[0]][0][n - tail].glue) for n in range(1, tail))]
            texts = [text.removesuffix(behind.strip()).rstrip() for text in texts]
        else:
            texts, end = _without_closing(texts, before)
        columns.append(Column(f"column {k + 1}", texts))
        kinds += found.after
        columns += [
            Column(f"column {k + 2 + n}", [cut[i][0][n - tail].text for i in rows]) for n in range(tail)
        ]
    always = tuple(
        column.values[0] if len(set(column.values)) == 1 and column.values[0] else "" for column in columns
    )
    _take_hints(columns, glue, kinds)
    inside = any(" " in value for column in columns[:k] for value in column.values)
    empties = tuple(tuple(sorted(words_for_nothing(column.values))) for column in columns)
    tabs = any("\t" in lines[i] for i in rows)
    may_end = has_text and not tail and any(not text for text in columns[-1].values)
    way = OrderWay(
        tuple(glue),
        tuple(kinds),
        always,
        k if has_text else -1,
        end,
        inside,
        empties,
        tabs,
        dropped > 0,
        may_end,
    )
    table = Table(way, columns, rows, strict=dropped > 0)
    give_names(table, lines)
    split_by_word(table, lines)
    without_wrong_times(table)
    return table


def _text_of(line: str, cores: list[Core], k: int, tail: int) -> str:
    """Return what stands between the columns before the text and those after it."""
    if len(cores) <= k:
        return ""
    return line[cores[k].start : cores[-tail].start if tail else None].rstrip()


def _without_closing(texts: list[str], before: str) -> tuple[list[str], str]:
    """Return texts without the sign that closes all of them, where one opens them, and that sign."""
    closing = Counter(text[-1:] for text in texts if text).most_common(1)
    if before.strip() and closing and closing[0][0] in "\"')]}|;>" and enough(closing[0][1], len(texts)):
        end = closing[0][0]
        return [text.removesuffix(end).rstrip() for text in texts], end
    return texts, ""


def _take_hints(columns: list[Column], glue: list[str], kinds: list[str]) -> None:
    """Give each column the word that stands before it in every line as its hint, and that after as its unit."""
    for k, column in enumerate(columns):
        if kinds[k] == "constant":
            column.literal = True
            continue
        if k and kinds[k - 1] == "constant":
            word = columns[k - 1].values[0]
            is_unit = k > 1 and kinds[k - 2] == "number" and unit_of(word)
            if meanings_of(word) and word.lower() not in _PREPOSITIONS and not is_unit:
                column.hint = word
        if k + 1 < len(columns) and kinds[k + 1] == "constant" and kinds[k] == "number":
            column.unit = unit_of(columns[k + 1].values[0])


def _is_message_tail(rows: list[list[Core]], kinds: list[str]) -> bool:
    """Return whether the last columns are a message of always the same number of words."""
    return bool(kinds) and any(core.text in CALLING_WORDS for row in rows for core in row[len(kinds) :])
