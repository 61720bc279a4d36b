"""Read texts by recipes, with the package and with the slow reading, and compare them line by line."""

from __future__ import annotations

import tempfile
from collections import Counter
from datetime import date
from pathlib import Path

import pytest

from logtool.records import sources
from logtool.records.engine import connect
from logtool.records.judge import Record, judge
from logtool.records.opening import open_logs
from logtool.records.recipes import blocks
from logtool.records.recipes.converter import Converter
from logtool.records.recipes.cutting import BLANK
from logtool.records.recipes.loading import recipe_of
from logtool.records.recipes.reading import joined
from logtool.records.scan import LEAST_MEMORY_MB
from logtool.records.sources import Source, Text
from tests.recipes.slow_recipe import Line, SlowRecipe

RECEIVER = 'receiver = "hut"\n'
DIAL = "dial_hz = 7041500\n"
TOP = "recipe = 1\n"
CONSTANTS = f"[constants]\n{RECEIVER}{DIAL}"
DAY_US = 86_400_000_000


def recipe(rules: str, top: str = "", constants: str = CONSTANTS) -> str:
    """Return a recipe's text: keys at the top, constants, rules."""
    return f"{TOP}{top}\n{constants}{rules}"


def rule(kind: str = "heard", /, **keys: object) -> str:
    """Return one [[line]]; values are written as TOML, texts in '...'."""
    return "[[line]]\n" + "".join(f"{key} = {toml(value)}\n" for key, value in {"kind": kind, **keys}.items())


def toml(value: object) -> str:
    """Return a value as TOML."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        if "'" not in value and value.isprintable():
            return f"'{value}'"
        escaped = "".join(f"\\u{ord(c):04x}" if c in '"\\' or not c.isprintable() else c for c in value)
        return f'"{escaped}"'
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{toml(str(key))} = {toml(item)}" for key, item in value.items()) + " }"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(map(toml, value)) + "]"
    return str(value)


def engine_lines(
    text: str, data: bytes, name: str = "night.txt", first_day: date | None = None, threads: int = 1
) -> tuple[list[Line], Converter]:
    """Return what the package makes of each line, judged."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder, name)
        path.write_bytes(data)
        connection = connect(Path(folder), threads, LEAST_MEMORY_MB)
        try:
            day_us = None if first_day is None else (first_day - date(1970, 1, 1)).days * DAY_US
            converter = Converter(connection, recipe_of(text, "r.toml"), str(path), day_us)
            found: list[Line] = []
            for _, made in converter.blocks(Text(Source(str(path), path))):
                outs = joined(made).split(b"\n")
                assert outs.pop() == b""
                assert len(outs) == len(made.rules)
                for code, out in zip(made.rules, outs, strict=True):
                    became, reason = _judged(out)
                    found.append(Line(len(found) + 1, converter.rule_name(int(code)), became, reason))
                    assert (out == b"") == (code == BLANK)
            return found, converter
        finally:
            connection.close()


def _judged(out: bytes) -> tuple[str, str]:
    if out in (b"", b"#"):
        return "", ""
    if out.startswith(b"!"):
        return "", out.decode()[1:]
    judged = judge(out)
    return (out.decode(), "") if isinstance(judged, Record) else ("", judged)


def compare(
    text: str, data: bytes | str, name: str = "night.txt", first_day: date | None = None
) -> list[Line]:
    """Compare the readings of a text line by line, and return them."""
    raw = data.encode() if isinstance(data, str) else data
    found, converter = engine_lines(text, raw, name, first_day)
    slow = SlowRecipe(text, name, first_day)
    wanted = slow.read(raw)
    assert found == wanted
    told = converter._clock.notes
    assert (told.steps, told.doubtful, told.skipped) == (
        slow.clock.steps,
        slow.clock.doubtful,
        slow.clock.skipped,
    )
    assert converter.counts == Counter(
        line.rule or line.reason for line in wanted if line.rule or line.reason
    )
    return found


def in_blocks_of(monkeypatch: pytest.MonkeyPatch, size: int) -> None:
    """Let the engine be given so many bytes at a time from here on."""
    monkeypatch.setattr(sources, "BLOCK_BYTES", size)
    defaults = blocks.blocks_of.__kwdefaults__
    assert defaults is not None
    monkeypatch.setitem(defaults, "joined_bytes", size)


def compare_ledger(folder: Path, text: str, files: dict[str, bytes], first_day: str | None = None) -> None:
    """Compare ledger, lines set aside and records of whole files, read as the commands read them."""
    logs_folder = folder / "logs"
    logs_folder.mkdir(exist_ok=True)
    for name, data in files.items():
        (logs_folder / name).write_bytes(data)
    made = recipe_of(text, "r.toml")
    seen: set[str] = set()
    with open_logs(logs_folder, recipe=made, date=first_day, anyway=True, threads=1) as logs:
        aside = []
        for ledger, name in zip(logs.inputs, sorted(files), strict=True):
            day = None if first_day is None else date.fromisoformat(first_day)
            lines = SlowRecipe(text, name, day).read(files[name])
            records = [line for line in lines if line.became]
            new = {line.became for line in records} - seen
            seen |= new
            told = ledger.as_dict()
            blank = sum(not line.rule and not line.reason for line in lines)
            assert told["lines"] == len(lines)
            assert told["blank"] == blank
            assert told["records"] == len(new)
            assert told["repeated"] == len(records) - len(new)
            assert told["reasons"] == dict(Counter(line.reason for line in lines if line.reason))
            assert told["set_aside"] == sum(told["reasons"].values())
            parts = ("blank", "comments", "records", "repeated", "set_aside")
            assert told["lines"] == sum(told[part] for part in parts)
            assert told["lines"] == sum(told["rules"].values()) + blank
            assert told["bytes"] == len(files[name])
            aside += [(str(logs_folder / name), line.number, line.reason) for line in lines if line.reason]
        assert [row[:3] for row in logs.set_aside()] == aside
