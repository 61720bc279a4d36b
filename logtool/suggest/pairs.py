"""Lines of keys and their values: `snr=-12 from=Q1ABC`."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass

from logtool.suggest.cores import cores_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.tables import Column, Table, holds_call, split_by_word, without_wrong_times
from logtool.suggest.toml import escaped, text_of

FEWEST_KEYS = 3
_LEAST_SHARE = 0.3
MOST_ORDERS = 8
_ORDER_SHARE = 0.01  # of the lines have their keys in an order
_MANY_ROWS = 30
_PAIR = {
    "=": re.compile(r"(?<![\w.])([A-Za-z][\w./-]{0,24}) ?= ?(?=\S)"),
    ":": re.compile(r"(?<![\w.])([A-Za-z][\w./-]{0,24}): ?(?=\S)"),
}
_BETWEEN = r"[ \t,;|]+"
_STRIPPED = " \t,;|"


@dataclass(frozen=True)
class PairsWay:
    """Keys in the orders in which they come; each order is a rule of its own."""

    sign: str
    orders: tuple[tuple[str, ...], ...]
    keys: tuple[str, ...]  # of the columns, those of the words before the first key are empty
    lead: int  # how many words stand before the first key
    lead_glue: tuple[str, ...]
    blanks: frozenset[str]  # keys whose values hold blanks
    optional: frozenset[str]
    commas: frozenset[str] = frozenset()  # keys whose values hold commas

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the TOML lines of the first order's rule."""
        return self.rules(names)[0]

    def rules(self, names: Mapping[int, str]) -> list[list[str]]:
        """Return the TOML lines of the rules, one for each order of keys."""
        return [[f"pattern = {text_of(self._pattern(order, names))}"] for order in self.orders]

    def _pattern(self, order: tuple[str, ...], names: Mapping[int, str]) -> str:
        out = r"[ \t]*"
        for k in range(self.lead):
            glue = self.lead_glue[k]
            out += escaped(glue) if glue.strip() or k else ""
            out += f"(?P<{names[k]}>[^ \\t]+?)" if k in names else r"[^ \t]+?"
        out += (escaped(self.lead_glue[self.lead]) or _BETWEEN) if self.lead else ""
        begun = False  # whether a key that is never left out came already
        for key in order:
            column = self.keys.index(key)
            form = ".*?" if key in self.blanks else r"[^ \t;|]*?" if key in self.commas else r"[^ \t,;|]*?"
            value = f'"?(?P<{names[column]}>{form})"?' if column in names else f'"?{form}"?'
            pair = escaped(key) + f" ?{self.sign} ?" + value
            if key not in self.optional:
                out += (_BETWEEN if begun else "") + pair
                begun = True
            else:
                out += f"(?:{_BETWEEN}{pair})?" if begun else f"(?:{pair}(?:{_BETWEEN}|$))?"
        return out + r"[ \t,;|]*"


def pairs_table(lines: list[str], sign: str) -> Table | None:
    """Return the table of lines of keys and values, or None where few are."""
    found = [list(_PAIR[sign].finditer(line)) for line in lines]
    telling = [i for i, line in enumerate(lines) if holds_call(line)]
    rows = [i for i in telling if len(found[i]) >= FEWEST_KEYS]
    if not rows or len(rows) < _LEAST_SHARE * len(telling):
        return None
    counted = Counter(match[1] for i in rows for match in found[i])
    keys = [key for key in counted if counted[key] >= 0.02 * len(rows)]
    common = {key for key in keys if counted[key] >= 0.5 * len(rows)}
    if len(common) < FEWEST_KEYS:
        return None
    rows = [i for i in range(len(lines)) if len({match[1] for match in found[i]} & common) >= len(common) / 2]
    values = {key: [""] * len(rows) for key in keys}
    orders: Counter[tuple[str, ...]] = Counter()
    row_orders: list[tuple[str, ...]] = []
    leads = []
    for j, i in enumerate(rows):
        ends = [*(match.start() for match in found[i][1:]), len(lines[i])]
        for match, end in zip(found[i], ends, strict=True):
            if match[1] in values:
                values[match[1]][j] = lines[i][match.end() : end].strip(_STRIPPED).strip('"')
        row_orders.append(tuple(dict.fromkeys(match[1] for match in found[i] if match[1] in values)))
        orders[row_orders[-1]] += 1
        leads.append(cores_of(lines[i][: found[i][0].start()]))
    counts = Counter(len(cores) for cores, _ in leads)
    lead = counts.most_common(1)[0][0]
    columns = []
    lead_glue: list[str] = []
    wanted = [len(cores) == lead for cores, _ in leads]
    for k in range(lead):
        glue = Counter(cores[k].glue for cores, _ in leads if len(cores) == lead).most_common(1)[0][0]
        lead_glue.append(glue)
        columns.append(
            Column(f"column {k + 1}", [cores[k].text if len(cores) == lead else "" for cores, _ in leads])
        )
    lead_glue.append(Counter(end for cores, end in leads if len(cores) == lead).most_common(1)[0][0])
    columns += [Column(repr(key), values[key], key) for key in keys]
    least = max(2, _ORDER_SHARE * len(rows)) if len(rows) >= _MANY_ROWS else 1
    orders = Counter(
        {order: n for order, n in orders.items() if n >= least}
    )  # the others are cut off or damaged
    wanted = [keep and order in orders for keep, order in zip(wanted, row_orders, strict=True)]
    merged = _merged(list(orders))
    blanks = frozenset(key for key in keys if any(" " in value for value in values[key]))
    optional = frozenset(key for key in keys if any(key not in order for order in orders))
    commas = frozenset(key for key in keys if any("," in value for value in values[key]))
    all_keys = ("",) * lead + tuple(keys)
    way = PairsWay(
        sign, tuple(merged[:MOST_ORDERS]), all_keys, lead, tuple(lead_glue), blanks, optional, commas
    )
    table = Table(way, columns, rows)
    if len(merged) > MOST_ORDERS:
        table.doubts.append(
            Doubt("lines", "the keys come in very many orders; those left over are set aside")
        )
    table.keep(wanted)
    split_by_word(table, lines)
    without_wrong_times(table)
    return table


def _merged(orders: list[tuple[str, ...]]) -> list[tuple[str, ...]]:
    """Return orders of keys such that each given one is one of them with some keys left out."""
    merged: list[tuple[str, ...]] = []
    for order in sorted(orders, key=lambda order: (-len(order), order)):
        for k, longer in enumerate(merged):
            joint = _joined(longer, order)
            if joint is not None:
                merged[k] = joint
                break
        else:
            merged.append(order)
    return merged


def _joined(a: tuple[str, ...], b: tuple[str, ...]) -> tuple[str, ...] | None:
    """Return an order that holds two others, or None where they contradict each other."""
    out: list[str] = []
    i = j = 0
    while i < len(a) or j < len(b):
        if i < len(a) and j < len(b) and a[i] == b[j]:
            out.append(a[i])
            i, j = i + 1, j + 1
        elif i < len(a) and a[i] not in b[j:]:
            out.append(a[i])
            i += 1
        elif j < len(b) and b[j] not in a[i:]:
            out.append(b[j])
            j += 1
        else:
            return None
    return tuple(out) if len(set(out)) == len(out) else None
