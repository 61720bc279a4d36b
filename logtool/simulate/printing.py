"""A scenario of all defaults with its comments, and the tables of keys for the docs."""

from __future__ import annotations

from dataclasses import Field, fields
from datetime import date
from typing import Any

from logtool.simulate.scenario import FAULT_UNITS, LISTS, STEPS, TABLES, Scenario

COMMENT_AT = 44  # column of the comments, our choice
_HEAD = """# A scenario for `logtool simulate`: all keys with their defaults. Keys that are left out have these too.
# docs/simulate.md says more.
"""
_FAULTS = """# Any number of faults; remove the signs in front to have this one. `size` is in the unit behind its kind;
# stops and outages have none.
"""


def default_scenario() -> str:
    """Return the default scenario as TOML, each key with its unit and meaning as a comment."""
    blocks = [_HEAD + _lines(Scenario)]
    blocks += [f"[{name}]  # {_about(kind)}\n{_lines(kind)}" for name, kind in TABLES.items()]
    for name, kind in LISTS.items():
        block = f"[[{name}]]  # {_about(kind)} There may be several.\n{_lines(kind)}"
        if name == "fault":
            kinds = "".join(f"#   {word} ({unit})\n" for word, unit in FAULT_UNITS.items())
            block = _FAULTS + kinds + "".join(f"# {line}\n" for line in block.splitlines())
        blocks.append(block)
    return "\n".join(blocks)


def key_tables() -> str:
    """Return the tables of all keys in Markdown."""
    parts = ["Above all tables:\n\n" + _table(Scenario)]
    parts += [f"### [{name}]\n\n{_about(kind)}\n\n{_table(kind)}" for name, kind in TABLES.items()]
    parts += [f"### [[{name}]]\n\n{_about(kind)}\n\n{_table(kind)}" for name, kind in LISTS.items()]
    return "\n\n".join(parts)


def kind_table() -> str:
    """Return the table of faults with the unit of their size and how long they last, in Markdown."""
    lines = ["| kind | unit of `size` | lasts |", "|---|---|---|"]
    lines += [
        f"| `{kind}` | {'none' if unit == 'min' else unit} | {'for ever' if kind in STEPS else '`minutes`'} |"
        for kind, unit in FAULT_UNITS.items()
    ]
    return "\n".join(lines)


def _about(kind: type) -> str:
    return (kind.__doc__ or "").splitlines()[0]


def _keys(kind: type) -> list[Field[Any]]:
    return [one for one in fields(kind) if one.metadata]


def _lines(kind: type) -> str:
    lines = []
    for key in _keys(kind):
        unit, meaning = key.metadata["unit"], key.metadata["meaning"]
        value = f"{key.name} = {written(key.default)}"
        lines.append(f"{value:<{COMMENT_AT}}# {f'[{unit}] ' if unit else ''}{meaning}\n")
    return "".join(lines)


def _table(kind: type) -> str:
    lines = ["| key | default | unit | bounds | meaning |", "|---|---|---|---|---|"]
    for key in _keys(kind):
        told = key.metadata
        bounds = f"{_plain(told['bounds'][0])} to {_plain(told['bounds'][1])}" if told["bounds"] else ""
        if told["words"]:
            bounds = ", ".join(f"`{word}`" for word in told["words"])
        meaning = told["meaning"].replace("|", "\\|")
        lines.append(f"| `{key.name}` | `{written(key.default)}` | {told['unit']} | {bounds} | {meaning} |")
    return "\n".join(lines)


def _plain(number: float) -> str:
    return f"{number:,.6g}".replace(",", " ") if abs(number) < 1e6 else f"{number:,.0f}".replace(",", " ")


def written(value: Any) -> str:
    """Return a value as TOML has it.

    Examples
    --------
    >>> written((1.0, 2.5)), written("wire")
    ('[1.0, 2.5]', '"wire"')
    """
    if isinstance(value, tuple):
        return "[" + ", ".join(written(one) for one in value) + "]"
    if isinstance(value, str):
        return '"' + value.replace("\\", "\\\\").replace('"', '\\"') + '"'
    return value.isoformat() if isinstance(value, date) else str(value)
