"""Lines whose columns are told by their order: words between blanks, perhaps with words of prose between them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass

from logtool.suggest.cores import Core, cores_of
from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.tables import (
    Column,
    Table,
    enough,
    give_names,
    holds_call,
    split_by_word,
    without_wrong_times,
)
from logtool.suggest.toml import escaped, plain, text_of
from logtool.suggest.values import CALLING_WORDS, ENOUGH, is_call, is_word, words_for_nothing

FORMS = {
    "number": r"[+-]?[0-9]+(?:[.,][0-9]+)?",
    "time": ".+?",
    "call": r"[^ \t]+",
    "locator": r"[^ \t]+",
    "word": r"[^ \t]+",
}
_LEAST_ROWS = 3
_PREPOSITIONS = ("at", "on", "in", "of", "when", "off")
_LEAST_SHARE = 0.2  # of the lines that hold a call sign
_DROPPED_SHARE = 0.2  # of the rows may be of another kind at a position
_FEW_WORDS = 6
_OTHER_SIGNS_SHARE = 0.1  # of the lines have other signs at a place: a second kind of messages' lines
_MAIN_SIGNS_SHARE = 0.4
_NUMBER_FIRST = ("time", "number")


@dataclass(frozen=True)
class OrderWay:
    """Words in order: the signs before each, and the words that are always the same.

    Attributes
    ----------
    glue : tuple of str
        The signs before each column.
    kinds : tuple of str
        The kind of each column.
    always : tuple of str
        The word that a column always is; empty where it varies.
    text : int
        Place of the column that is any text; -1 where there is none.
    end : str
        Signs at the line's end.
    empties : tuple of tuple of str
        The words for nothing in each column.
    """

    glue: tuple[str, ...]
    kinds: tuple[str, ...]
    always: tuple[str, ...]
    text: int
    end: str
    blanks_inside: bool
    empties: tuple[tuple[str, ...], ...]
    tabs: bool
    strict: bool = False

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the rule's TOML lines."""
        at_end = self.text in (-1, len(self.glue) - 1)
        plain_blanks = (
            at_end
            and all(not glue.strip(" \t") for glue in self.glue)
            and not self.end
            and not self.blanks_inside
        )
        if plain_blanks and all(self.glue[1:]) and not self.strict:
            columns = [names.get(k, "") for k in range(len(self.glue))]
            if self.text < 0 and columns[-1] == "" and any(columns):
                while columns[-1] == "":
                    columns.pop()
                columns.append("...")
            return ['separator = "space"', "columns = [" + ", ".join(map(plain, columns)) + "]"]
        return [f"pattern = {text_of(self._pattern(names, forms))}"]

    def _pattern(self, names: Mapping[int, str], forms: Mapping[int, str]) -> str:
        out = ""
        count = len(self.glue)
        for k in range(count):
            glue = self.glue[k]
            if k == 0 and not glue.strip():
                out += r"[ \t]*"
            else:
                out += escaped(glue) if glue else ""
            is_text = k == self.text
            form = ".*?" if is_text else forms.get(k) or FORMS.get(self.kinds[k], r"[^ \t]+")
            if self.empties[k] and form == FORMS["number"]:
                form = "|".join([form, *map(escaped, self.empties[k])])
            if k in names:
                out += f"(?P<{names[k]}>{form})"
            elif self.always[k] and is_word(self.always[k]):
                out += escaped(self.always[k])
            else:
                out += f"(?:{form})" if "|" in form else form
        out += escaped(self.end.rstrip()) + r"[ \t]*"
        return out.replace(" +", r"[ \t]+") if self.tabs else out


def order_table(lines: list[str]) -> Table | None:
    """Return the table of lines that begin with the same kinds of words, or None where few do."""
    cut = [cores_of(line) for line in lines]
    alike = _main_group(lines, [cores for cores, _ in cut])
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
        found = _position([cut[i][0] for i in rows], k, even=even)
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
        found = _position(backwards, len(kinds), needed=ENOUGH)
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
    way = OrderWay(
        tuple(glue), tuple(kinds), always, k if has_text else -1, end, inside, empties, tabs, dropped > 0
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


def _main_group(lines: list[str], cut: list[list[Core]]) -> list[int]:
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


def _position(
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
        kept = _position(rows, k, needed, even=even)
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


def _is_message_tail(rows: list[list[Core]], kinds: list[str]) -> bool:
    """Return whether the last columns are a message of always the same number of words."""
    return bool(kinds) and any(core.text in CALLING_WORDS for row in rows for core in row[len(kinds) :])
