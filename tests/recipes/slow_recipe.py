"""A small, slow reading of a text by a recipe, written from `docs/recipes.md` alone.

It shares nothing with the package: it goes line by line and piece by piece with plain Python, so that a
disagreement is a fault of one of the two. Recipes given to it must be good ones.
"""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from datetime import date, datetime, timedelta
from decimal import ROUND_HALF_UP, Decimal
from typing import Any

from tests.recipes.slow_cut import cut, delimited, pieces_of
from tests.recipes.slow_message import said
from tests.recipes.slow_times import Clock, Written, written_date, written_time
from tests.recipes.slow_values import cleaned, constants, plain, target, value
from tests.records.slow_reader import COLUMNS, Record, read_line

KEYS = [
    "antenna", "on_s", "dbfs", "peak_dbfs", "slot_s", "sure", "assisted", "report_db", "drift_hz", "temperature_c",
    "order", "agc", "decoder",
]  # fmt: skip
CALLS = ("sender", "addressee")
MESSAGE_PARTS = ("sender", "addressee", "locator", "report_db", "power_dbm", "assisted")
# Which values lines of a kind take also from elsewhere: from earlier lines, the file's name, `[constants]`.
EVERYWHERE = ["receiver", "dial_hz", "signal_hz"]
SETUP_TAKES = [*EVERYWHERE, "place", "antenna", "mode", "order", "agc", "decoder", "temperature_c"]
HEARD_LEAVES = ["place", "antenna", "on_s", "dbfs", "peak_dbfs", "order", "agc", "temperature_c"]


@dataclass(frozen=True)
class Line:
    """What one line is: its rule, and the record that it becomes or the reason why it is set aside."""

    number: int
    rule: str
    became: str = ""
    reason: str = ""


def decoded(data: bytes, encoding: str) -> list[str | None]:
    """Return the lines of a text without their endings; None for one that is not of its encoding."""
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        encoding = "utf-16"
    if encoding.lower().replace("_", "-") in ("utf-8", "utf8"):
        data = data.removeprefix(b"\xef\xbb\xbf")
        lines: list[str | None] = []
        for raw in data.split(b"\n"):
            try:
                lines.append(raw.decode("utf-8"))
            except UnicodeDecodeError:
                lines.append(None)
    else:
        text = data.decode(encoding, "replace").removeprefix("\ufeff")
        lines = [None if "\ufffd" in line else line for line in text.split("\n")]
    last = lines.pop()
    ended = [line.removesuffix("\r") if line is not None else None for line in lines]
    return ended if last == "" else [*ended, last]


class SlowRecipe:
    """The reading of one file by a recipe."""

    def __init__(self, text: str, name: str, first_day: date | None = None) -> None:
        self.recipe: dict[str, Any] = tomllib.loads(text)
        self.rules: list[dict[str, Any]] = self.recipe["line"]
        self._constants = constants(self.recipe.get("constants", {}))
        named = self.recipe.get("name")
        if named:
            match = re.search(named["pattern"], name)
            assert match is not None
            found = {name: text for name, text in match.groupdict().items() if text}
            if "date" in found:
                first_day = written_date(found.pop("date"), named["date_form"])
            self._constants |= constants(found)
        self.clock = Clock(self.recipe.get("zone", "UTC"), first_day)
        self._carried: dict[str, str] = {}
        self._header: list[str] | None = None
        self._header_line: str | None = None
        self._step: tuple[datetime | None, dict[str, int]] = (None, {})

    def read(self, data: bytes) -> list[Line]:
        """Return what each line of a text is."""
        lines = decoded(data, self.recipe.get("encoding", "utf-8"))
        return [self._line(number, line) for number, line in enumerate(lines, 1)]

    def _line(self, number: int, line: str | None) -> Line:
        if line is None:
            return Line(number, "", reason="bad-encoding")
        if not line.strip(" \t"):
            return Line(number, "")
        is_skipped = any(re.search(pattern, line) for pattern in self.recipe.get("skip", []))
        headed = [rule for rule in self.rules if rule.get("header")]
        if headed and self._header_line is None and not is_skipped:
            self._header_line = line
            names = delimited(line, headed[0]["separator"])
            assert names is not None
            self._header = [name.strip() for name in names]
        if line == self._header_line:
            return Line(number, "header")
        if is_skipped:
            return Line(number, "skip")
        for rule in self.rules:
            pieces = cut(line, rule, self._header)
            if pieces is not None and self._holds(rule, pieces):
                return self._of_rule(number, rule, pieces)
        return Line(number, "", reason="no-rule")

    def _holds(self, rule: dict[str, Any], pieces: dict[str, Any]) -> bool:
        for piece, pattern in rule.get("where", {}).items():
            if pieces[piece] is None or not re.fullmatch(pattern, pieces[piece].strip(" \t")):
                return False
        if "time" not in pieces:
            return True
        if "fixed" in rule:  # nothing else tells such lines from others
            return self._time(rule, pieces) is not None
        return pieces["time"] is not None

    def _time(self, rule: dict[str, Any], pieces: dict[str, Any]) -> Written | None:
        text = cleaned(pieces["time"], "time", self.recipe)
        return None if text is None else written_time(text, rule.get("time_form", "iso"))

    def _of_rule(self, number: int, rule: dict[str, Any], pieces: dict[str, Any]) -> Line:
        name, kind = rule.get("name", rule["kind"]), rule["kind"]
        own = self._own(rule, pieces)
        is_lost = False
        if kind != "skip" and "date" in pieces:
            text = cleaned(pieces["date"], "date", self.recipe)
            day = None if text is None else written_date(text, rule["date_form"])
            is_lost = text is not None and day is None
            if text is not None:
                self.clock.give_date(day)
        for piece in rule.get("carry", pieces_of(rule) if kind == "carry" else []):
            if own.get(target(piece)) is not None:
                self._carried[target(piece)] = own[target(piece)]
        if is_lost:
            return Line(number, name, reason="bad-time")
        if kind in ("carry", "skip"):
            return Line(number, name)
        written = self._time(rule, pieces)
        if written is None:
            return Line(number, name, reason="bad-time")
        at = self.clock.utc(written)
        if at is None:
            return Line(number, name, reason="no-date")
        if self.recipe.get("time_marks") == "end" and kind == "heard":
            at -= timedelta(microseconds=int(Decimal(str(self.recipe["slot_s"])) * 1_000_000))
        line = self._numbered(at, self._made(at, rule, own))
        if re.search("[\x00-\x08\x0a-\x1f\x7f-\x9f]", line):
            return Line(number, name, reason="control-character")
        judged = read_line(line.encode())
        return Line(number, name, line, "") if isinstance(judged, Record) else Line(number, name, "", judged)

    def _own(self, rule: dict[str, Any], pieces: dict[str, Any]) -> dict[str, str]:
        """Return the values, by target, that the line itself has."""
        own: dict[str, str] = {}
        order = pieces_of(rule)
        assisted = None
        for piece in order:
            text = cleaned(pieces[piece], piece, self.recipe)
            found = value(text, piece, self.recipe)
            if found is not None:
                own.setdefault(target(piece), found)
            if piece in CALLS and text is not None and text.startswith("<") and text != "<...>":
                assisted = "1"
        if assisted:
            own.setdefault("assisted", assisted)
        return own

    def _said(self, rule: dict[str, Any], own: dict[str, str]) -> dict[str, str]:
        if rule["kind"] != "heard" or "message" not in self.recipe or "text" not in own:
            return {}
        found: dict[str, str] = {}
        for part, text in said(own["text"], self.recipe["message"].get("patterns")).items():
            if part == "word":
                continue
            worth = value(text, part, self.recipe)
            if worth is not None:
                found[part] = worth
            if part in CALLS and text.startswith("<") and text != "<...>":
                found["assisted"] = "1"
        return found

    def _value(
        self, name: str, rule: dict[str, Any], own: dict[str, str], told: dict[str, str]
    ) -> str | None:
        kind = rule["kind"]
        elsewhere = (
            name in SETUP_TAKES
            if kind == "setup"
            else name not in HEARD_LEAVES
            if kind == "heard"
            else name in EVERYWHERE
        )
        places = [own, told]
        if elsewhere:
            places.append(self._carried)
        places.append(constants(rule.get("constants", {})))
        if elsewhere:
            places.append(self._constants)
        found = next((place[name] for place in places if place.get(name) is not None), None)
        if found is None and kind == "setup" and name == "locator":
            return self._value("place", rule, own, told)
        if found is None and kind == "setup" and name == "slot_s" and "slot_s" in self.recipe:
            return plain(Decimal(str(self.recipe["slot_s"])))
        return found

    def _made(self, at: datetime, rule: dict[str, Any], own: dict[str, str]) -> str:
        told = self._said(rule, own)
        keep = self.recipe.get("keep", [])
        names = [*COLUMNS[2:-1], *KEYS, *keep, "signal_hz"]
        values = {name: self._value(name, rule, own, told) for name in names}
        self._from_signal(values)
        time = at.strftime("%Y-%m-%dT%H:%M:%S") + f".{at.microsecond:06}".rstrip("0").rstrip(".") + "Z"
        kept = {key: held for key in (*KEYS, *keep) if (held := values[key]) is not None}
        # A value holds no semicolon; one that has it must not pass for two keys.
        more = "; ".join(f"{key}={held.replace('; ', ';;')}" for key, held in kept.items())
        return "\t".join([time, rule["kind"], *(values[name] or "" for name in COLUMNS[2:-1]), more])

    def _from_signal(self, values: dict[str, str | None]) -> None:
        signal, dial, audio = (_decimal(values[name]) for name in ("signal_hz", "dial_hz", "audio_hz"))
        if values["signal_hz"] is None:
            return
        if values["dial_hz"] is None:
            below = None if signal is None else (signal - (audio or 0)).quantize(Decimal(1), ROUND_HALF_UP)
            values["dial_hz"] = "?" if below is None else str(below)
        elif values["audio_hz"] is None:
            values["audio_hz"] = "?" if signal is None or dial is None else plain(signal - dial)

    def _numbered(self, at: datetime, line: str) -> str:
        """Return the line with a number where it is an equal one within a step."""
        if not self.recipe.get("time_step_s"):
            return line
        if self._step[0] != at:
            self._step = (at, {})
        copies = self._step[1]
        copies[line] = copies.get(line, 0) + 1
        if copies[line] == 1:
            return line
        return f"{line}{'' if line.endswith(chr(9)) else '; '}nth={copies[line]}"


def _decimal(text: str | None) -> Decimal | None:
    return Decimal(text) if text is not None and re.fullmatch(r"[+-]?[0-9.]+", text) else None
