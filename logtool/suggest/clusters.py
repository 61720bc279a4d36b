"""Lines that are alike, and the rules that they may become."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, field

from logtool.suggest.cores import Core, cores_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.looking import Line
from logtool.suggest.tables import Column
from logtool.suggest.toml import escaped
from logtool.suggest.values import is_number, is_word
from logtool.suggest.word_places import normal

_NUMBER = r"[+-]?[0-9]+(?:[.,][0-9]+)?"


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
class Cluster:
    """Lines that are alike but for numbers, times, call signs and locators."""

    lines: list[Line]
    cores: list[tuple[list[Core], str]]
    at: list[int]  # places in the sample

    def column(self, k: int) -> Column:
        words = [cores[k] for cores, _ in self.cores]
        hint = " ".join(core.text for core in self.cores[0][0][max(0, k - 2) : k] if is_word(core.text))
        unit = self.cores[0][0][k + 1].text if k + 1 < len(self.cores[0][0]) else ""
        return Column("", [word.text for word in words], hint, unit)


def heads_of(lines: list[Line], places: list[int]) -> set[tuple[str, ...]]:
    """Return how lines begin: the kinds of their first word and of their first two."""
    heads: set[tuple[str, ...]] = set()
    for i in places:
        kinds = [
            core.text if core.kind in ("word", "empty") else core.kind
            for core in cores_of(lines[i].text)[0][:2]
        ]
        heads |= {tuple(kinds), tuple(kinds[:1])}
    return heads


def clusters_of(lines: list[Line], taken: set[int]) -> list[Cluster]:
    grouped: dict[tuple[str, ...], Cluster] = defaultdict(lambda: Cluster([], [], []))
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


def pattern_of(cluster: Cluster, names: dict[int, str]) -> str:
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
