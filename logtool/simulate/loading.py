"""Read and check a scenario: every key, with the line where something is wrong and what to do."""

from __future__ import annotations

import difflib
import os
import re
import tomllib
from dataclasses import Field, fields, is_dataclass
from datetime import date, datetime
from itertools import pairwise
from pathlib import Path
from typing import Any, get_type_hints

from logtool.errors import FileError
from logtool.places.locator import check as check_locator
from logtool.simulate.scenario import LISTS, TABLES, Fault, Scenario, ScenarioError

_SHOWN = {str: "a text in quotes", int: "a whole number", float: "a number", date: "a date like 2026-03-01"}
_MEMBERS = {tuple[str, ...]: str, tuple[float, ...]: float}
_MOST_KIB = 1024
LEAST_PLACE = 4
LEAST_DF = 2.0


class Where:
    """The text of a scenario, to say on which line something stands."""

    def __init__(self, text: str, name: str) -> None:
        self._lines = [line.strip() for line in text.splitlines()]
        self._name = name

    def error(self, table: str, number: int, key: str, message: str) -> ScenarioError:
        """Return the error for a key of the table of that number among those of one name."""
        path = ".".join(part for part in (table, key) if part)
        line = self._line_of(table, number, key)
        return ScenarioError(f"{self._name}{f', line {line}' if line else ''}: `{path}`: {message}")

    def _line_of(self, table: str, number: int, key: str) -> int | None:
        starts = self._headings(table)
        if table and number >= len(starts):
            return None
        begin = starts[number] + 1 if table else 0
        for i in range(begin, len(self._lines)):
            if self._lines[i].startswith("["):
                break
            if re.match(rf"""["']?{re.escape(key)}["']?\s*=""", self._lines[i]):
                return i + 1
        headings = [] if table else self._headings(key)
        return headings[0] + 1 if headings else begin or None

    def _headings(self, name: str) -> list[int]:
        pattern = re.compile(rf"\[+\s*{re.escape(name)}\s*\]")
        return [i for i, line in enumerate(self._lines) if pattern.match(line)]


def load_scenario(path: str | os.PathLike[str]) -> Scenario:
    """Return the scenario in a TOML file.

    Raises
    ------
    FileError
        Where the file cannot be read.
    ScenarioError
        Where something in it cannot be used; the message names the file, the line and the key.
    """
    try:
        with Path(path).open("rb") as file:
            raw = file.read((_MOST_KIB << 10) + 1)
    except OSError as error:
        raise FileError(f"{path}: the scenario cannot be read ({error.strerror}); check the path") from error
    if len(raw) > _MOST_KIB << 10:
        raise FileError(f"{path}: it is over {_MOST_KIB} KiB, so it is no scenario; check the path")
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise FileError(f"{path}: a scenario is UTF-8 text, and this is not; save it as UTF-8") from error
    return scenario_of(text, os.fspath(path))


def scenario_of(text: str, name: str = "scenario") -> Scenario:
    """Return the scenario that a text is; `name` stands for it in errors. See `load_scenario`.

    Examples
    --------
    >>> scenario_of("[senders]\\nnumber = 5").senders.number
    5
    >>> scenario_of("[air]\\nmod = 5", "my.toml")
    Traceback (most recent call last):
    ...
    logtool.simulate.scenario.ScenarioError: my.toml, line 2: `air.mod`: there is no such key; did you mean `mode`?
    """
    try:
        told = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise ScenarioError(
            f"{name}: it is no TOML ({error}); `logtool simulate --print-scenario` shows a right one"
        ) from error
    where = Where(text, name)
    given = _values(Scenario, told, where, "", 0)
    for table, kind in TABLES.items():
        inner = told.get(table, {})
        if not isinstance(inner, dict):
            raise where.error("", 0, table, f"it is a table: write [{table}] above its keys")
        given[table] = kind(**_values(kind, inner, where, table, 0))
    for table, kind in LISTS.items():
        several = told.get(table, [])
        if not isinstance(several, list) or not all(isinstance(one, dict) for one in several):
            raise where.error("", 0, table, f"there may be several: write [[{table}]] above the keys of each")
        if several:
            given[table] = tuple(kind(**_values(kind, one, where, table, i)) for i, one in enumerate(several))
    scenario = Scenario(**given)
    _check_whole(scenario, where)
    return scenario


def _values(kind: type, told: dict[str, Any], where: Where, table: str, number: int) -> dict[str, Any]:
    """Return the checked values of a table's keys, tables in it left out."""
    hints = get_type_hints(kind)
    known = {one.name: one for one in fields(kind)}
    values = {}
    for key, value in told.items():
        if key not in known:
            alike = difflib.get_close_matches(key, known, n=1)
            hint = f"did you mean `{alike[0]}`?" if alike else f"there are {', '.join(known)}"
            raise where.error(table, number, key, f"there is no such key; {hint}")
        if key in known and not known[key].metadata:
            continue
        try:
            values[key] = _checked(value, hints[key], known[key])
        except ValueError as error:
            raise where.error(table, number, key, str(error)) from error
    return values


def _checked(value: Any, kind: Any, key: Field[Any]) -> Any:
    if kind in _MEMBERS:
        if not isinstance(value, list):
            raise ValueError(f"{value!r} is no list; write [..., ...]")
        return tuple(_checked(one, _MEMBERS[kind], key) for one in value)
    right = isinstance(value, (int, float) if kind is float else kind)
    if not right or isinstance(value, bool | datetime):
        raise ValueError(f"{value!r} cannot be used; write {_SHOWN[kind]}")
    bounds, words, form = (key.metadata[name] for name in ("bounds", "words", "form"))
    if bounds is not None and not bounds[0] <= value <= bounds[1]:
        raise ValueError(f"{value} is out of bounds; give {bounds[0]:g} to {bounds[1]:g}")
    if words and str(value) not in words:
        raise ValueError(f"{value!r} is none of {', '.join(words)}")
    if form and not re.fullmatch(form, value):
        raise ValueError(f"{value!r} has not the form {form}")
    if key.name in ("locator", "locators"):
        check_locator(value)
        if len(value) < LEAST_PLACE:
            raise ValueError(f"{value!r} is too wide a place; give {LEAST_PLACE} characters or more")
    return float(value) if kind is float else value


def _check_whole(scenario: Scenario, where: Where) -> None:
    """Stop where values do not go together."""
    for low, high, table, strict in (
        ("near_km", "far_km", "senders", False),
        ("audio_low_hz", "audio_high_hz", "senders", False),
        ("bearing_from_deg", "bearing_to_deg", "senders", False),
        ("passband_low_hz", "passband_high_hz", "air", True),
    ):
        part = getattr(scenario, table)
        a, b = getattr(part, low), getattr(part, high)
        if a > b or (strict and a == b):
            raise where.error(table, 0, low, f"{a:g} is not below `{high}`, {b:g}; change one of them")
    for key in ("shared_df", "own_df"):
        df = getattr(scenario.fading, key)
        if 0 < df <= LEAST_DF:
            raise where.error(
                "fading", 0, key, f"with {df:g} the spread is infinite; give over 2, or 0 for normal"
            )
    if not scenario.senders.power_dbm:
        raise where.error("senders", 0, "power_dbm", "it is empty; give one power at least")
    _check_antennas(scenario, where)
    _check_receivers(scenario, where)
    for i, fault in enumerate(scenario.fault):
        _check_fault(scenario, fault, i, where)


def _check_antennas(scenario: Scenario, where: Where) -> None:
    names: list[str] = []
    for i, antenna in enumerate(scenario.antenna):
        if antenna.name in names or antenna.name == "none":
            raise where.error(
                "antenna", i, "name", f"{antenna.name!r} is taken; give each antenna another name"
            )
        names.append(antenna.name)
        for at, gain in (("table_deg", "table_db"), ("distance_km", "distance_db")):
            places, gains = getattr(antenna, at), getattr(antenna, gain)
            if len(places) != len(gains):
                message = f"it has {len(gains)} values and `{at}` has {len(places)}; give as many"
                raise where.error("antenna", i, gain, message)
            if any(b <= a for a, b in pairwise(places)):
                raise where.error("antenna", i, at, "it does not rise; sort both lists by it")
        if antenna.table_deg and antenna.table_deg[-1] - antenna.table_deg[0] >= 360:
            raise where.error("antenna", i, "table_deg", "0 and 360 are one bearing; leave one out")


def _check_receivers(scenario: Scenario, where: Where) -> None:
    names: list[str] = []
    known = [antenna.name for antenna in scenario.antenna]
    for i, receiver in enumerate(scenario.receiver):
        if receiver.name in names:
            raise where.error(
                "receiver", i, "name", f"{receiver.name!r} is taken; give each receiver another name"
            )
        names.append(receiver.name)
        for name in receiver.antennas:
            if name not in known:
                message = f"there is no antenna {name!r}; there are {', '.join(known)}"
                raise where.error("receiver", i, "antennas", message)
            if receiver.antennas.count(name) > 1:
                raise where.error("receiver", i, "antennas", f"{name!r} stands twice; name each once")
        if receiver.lowest_db >= receiver.highest_db:
            message = (
                f"{receiver.lowest_db} is not below `highest_db`, {receiver.highest_db}; change one of them"
            )
            raise where.error("receiver", i, "lowest_db", message)


def _check_fault(scenario: Scenario, fault: Fault, i: int, where: Where) -> None:
    names = [receiver.name for receiver in scenario.receiver]
    if fault.receiver and fault.receiver not in names:
        message = f"there is no receiver {fault.receiver!r}; there are {', '.join(names)}"
        raise where.error("fault", i, "receiver", message)
    if fault.night > scenario.nights.number:
        message = f"there are {scenario.nights.number} nights; give one of them, or raise `nights.number`"
        raise where.error("fault", i, "night", message)
    if fault.kind in ("deaf", "antenna-off") and fault.size <= 0:
        raise where.error("fault", i, "size", f"{fault.kind} needs a loss above 0 dB, like size = 60")
    if fault.kind == "slots-missed" and not 0 <= fault.size <= 100:
        raise where.error("fault", i, "size", f"{fault.size:g} is no share; give 0 to 100 %")


def told_scenario(part: Any) -> Any:
    """Return a scenario, or a part of one, as a JSON object holds it."""
    if is_dataclass(part):
        return {one.name: told_scenario(getattr(part, one.name)) for one in fields(part)}
    if isinstance(part, tuple):
        return [told_scenario(one) for one in part]
    return part.isoformat() if isinstance(part, date) else part
