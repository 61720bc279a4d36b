"""Make recipes and texts for them at random: all ways of cutting, kinds, names and times, good and bad."""

from __future__ import annotations

import json
from dataclasses import dataclass, field
from datetime import datetime, timedelta
from random import Random

from tests.recipes.comparing import recipe, rule, toml

ZONES = ["UTC", "UTC", "Europe/Berlin", "America/St_Johns", "Australia/Lord_Howe"]
# Shortly before midnight, a month's end, the 29th of February, New Year, and changes of the clocks.
STARTS = [
    "2026-03-01 23:58:00", "2024-02-28 23:30:00", "2023-02-28 23:30:00", "2025-12-31 23:59:00",
    "2026-03-29 00:30:00", "2026-10-25 00:10:00", "2026-11-01 03:30:00", "2026-04-04 14:20:00",
]  # fmt: skip
LATER_S = [0, 0, 15, 15, 15, 60, 600, 3000, -5, -50, -700, -119, -121, 40_000, -43_200, -43_201, 86_300]
TIME_FORMS = [
    "iso", "%H:%M:%S", "%H%M%S", "%H:%M", "%Y-%m-%d %H:%M:%S", "%y%m%d_%H%M%S", "%d.%m. %H:%M:%S", "%j/%Y %H.%M",
    "%d %b %Y %H:%M", "%I:%M:%S %p", "%m/%d %H:%M", "unix_s", "unix_ms",
]  # fmt: skip
DATE_FORMS = ["%Y-%m-%d", "%y%m%d", "%d.%m.%Y", "iso", "%b %d %Y"]
NUMBERS = ["-12", "3.5", "+4", "0", "x", "1.5.2", "-", "n/a", "", "007", "99999", "- 3", "+", "1.1234567"]
VALUES = {
    "sender": ["Q1ABC", "q2xyz", "<Q1ABC>", "<...>", "", "n/a", "Q1ABC/P", "Q 1", "Q1\u00c4B"],
    "addressee": ["Q9ZZ", "<Q9ZZ>", "-", ""],
    "snr_db": NUMBERS,
    "late_s": NUMBERS,
    "late_ms": ["100", "-1250", "0.5", "x", "60001", "-", "0.0004", "0.0005"],
    "audio_hz": ["1500", "700.25", "24001", "", "-1", "+5"],
    "audio_khz": ["1.5", "0.70025", "30", "", "k"],
    "dial_hz": ["7041500", "7041500.5", "0", "", "n/a", "3000000001", "seven"],
    "dial_khz": ["7041.5", "7041.0005", "7", "", "-", "x", "3000000.001"],
    "dial_mhz": ["7.0415", "14.0000004", "", "x"],
    "signal_khz": ["7042.25", "7041.4", "", "7043"],
    "mode": ["KB15", "~", "#", "K B", "n/a", ""],
    "locator": ["JN58", "jo62", "RR73", "ZZ00", "JN58td", "", "JN"],
    "power_dbm": ["37", "-31", "x", ""],
    "power_w": ["5", "0.2", "0", "-1", "w", ""],
    "power_mw": ["200", "0", "1.5", ""],
    "text": [
        "CQ Q1ABC JN58", "Q1ABC Q2XYZ -12", "Q1ABC Q2XYZ R+03", "<Q1ABC> Q2XYZ RR73", "Q1ABC <...> JO62", "73",
        "cq dx q1abc jo62aa", "CQ 123 Q3Z", "DE Q1ABC", "QRZ DE Q1ABC/P", "TNX \\ 73", "", "n/a", "Q1ABC Q2XYZ R JN58",
        "Q1ABC DE Q2XYZ K", "CQ Q0AB RR73", 'say "hi"', "a\u20acb", "CQ  Q1ABC  JN58", "Q1ABC Q2XYZ JN58 37",
    ],
    "sure": ["0.5", "1", "2", "", "x"],
    "assisted": ["1", "0", "", "2"],
    "drift_hz": NUMBERS,
    "decoder": ["one", "a b", "x; sure=1", "", "x;y"],
    "receiver": ["hut", "barn", "", "no good", "n/a"],
    "temperature_c": ["4.5", "-3", ""],
    "on_s": ["60", "0", "86401", ""],
    "on_min": ["1", "0.25", "x", ""],
    "dbfs": ["-43.5", "4", "", "x"],
    "place": ["JN58td", "JN", "", "XX99"],
    "antenna": ["wire", "none", "no good", ""],
    "own_word": ["a", "b=c", "n/a", ""],
    "state": ["RX", "TX", "", " RX"],
}  # fmt: skip
FOR_KIND = {
    "heard": [
        "sender", "addressee", "snr_db", "late_s", "late_ms", "audio_hz", "audio_khz", "dial_hz", "dial_khz",
        "dial_mhz", "signal_khz", "mode", "locator", "power_dbm", "power_w", "power_mw", "text", "sure", "assisted",
        "drift_hz", "decoder", "receiver", "own_word", "temperature_c",
    ],
    "setup": ["place", "antenna", "dial_khz", "receiver", "text"],
    "watch": ["on_s", "on_min", "dial_khz", "text"],
    "noise": ["dbfs", "temperature_c"],
    "stop": ["text"],
    "note": ["text", "own_word"],
    "carry": ["dial_khz", "dial_hz", "mode", "receiver", "decoder", "place", "antenna", "locator", "signal_khz"],
    "skip": ["text"],
}  # fmt: skip
NEEDS = {"watch": ["on_s"], "noise": ["dbfs"], "setup": ["place", "antenna"]}
WAYS = [",", ";", "\t", "|", ".", "space", "fixed", "json", "pattern"]
WIDTH = 22
PATTERNS = ["CQ {sender} [{locator}]", "{addressee} {sender} [{locator}] {power_dbm} ...", "de {sender} ..."]


@dataclass
class Kind:
    """One rule in the making, and how its lines are written."""

    kind: str
    way: str
    tag: str  # stands in each line, so that rules do not take each other's lines
    pieces: list[str]
    time_form: str = "iso"
    date_form: str = "iso"
    more: dict[str, object] = field(default_factory=dict)

    def toml(self) -> str:
        """Return the rule as it stands in the recipe."""
        names = ["tag", *self.pieces]
        keys: dict[str, object] = {"name": f"rule-{self.tag}", "where": {"tag": self.tag} | self.where()}
        if self.way == "fixed":
            keys["fixed"] = {name: [i * WIDTH + 1, (i + 1) * WIDTH] for i, name in enumerate(names)}
        elif self.way == "json":
            keys["json"] = {name: f"in.{name}" if name == "mode" else name for name in names}
        elif self.way == "pattern":
            keys["pattern"] = " ".join(f"{name}=(?P<{name}>[^|]*)[|]" for name in names)
        else:
            keys |= {"separator": self.way, "columns": names}
        if "time" in self.pieces:
            keys["time_form"] = self.time_form
        if "date" in self.pieces:
            keys["date_form"] = self.date_form
        return rule(self.kind, **keys, **self.more)

    def where(self) -> dict[str, str]:
        """Return the condition on the user's own piece."""
        return {"state": "RX|"} if "state" in self.pieces else {}

    def line(self, values: dict[str, str], rng: Random) -> str:
        """Return a line with these values."""
        told = {"tag": self.tag, **values}
        if self.way == "fixed":
            return "".join(text.ljust(WIDTH)[:WIDTH] for text in told.values()).rstrip()
        if self.way == "json":
            held: dict[str, object] = {}
            for name, text in told.items():
                item: object = None if text == "" and rng.random() < 0.5 else text
                (held.setdefault("in", {}) if name == "mode" else held)[name] = item  # type: ignore[index]
            return json.dumps(held, ensure_ascii=rng.random() < 0.5)
        if self.way == "pattern":
            return " ".join(f"{name}={text}|" for name, text in told.items())
        if self.way == "space":
            *words, last = told.values()
            blank = rng.choice([" ", "  ", "\t"])
            return blank.join([*(word.replace(" ", "_") or "n/a" for word in words), last])
        return self.way.join(self._quoted(text, rng) for text in told.values())

    def _quoted(self, text: str, rng: Random) -> str:
        if self.way in text or text.startswith('"') or rng.random() < 0.2:
            return '"' + text.replace('"', '""') + '"'
        return rng.choice(["", " "]) + text if "'" not in text and '"' not in text else text


def written(at: datetime, form: str) -> str:
    """Return a time as its form says."""
    since_s = int((at - datetime(1970, 1, 1)).total_seconds())
    if form == "unix_s":
        return str(since_s)
    if form == "unix_ms":
        return f"{since_s}250"
    if form == "iso":
        return at.isoformat(sep="T") + ("Z" if at.second % 2 else "")
    return at.strftime(form)


def made_kind(rng: Random, kind: str, tag: str) -> Kind:
    """Return a rule of a kind with pieces and forms at random."""
    pieces = rng.sample(FOR_KIND[kind], min(len(FOR_KIND[kind]), rng.randint(1, 7)))
    for needed in NEEDS.get(kind, []):
        if not any(piece.startswith(needed[:3]) for piece in pieces):
            pieces.append(needed)
    if kind not in ("carry", "skip"):
        pieces.insert(rng.randint(0, len(pieces)), "time")
    if kind != "skip" and rng.random() < 0.3:
        pieces.insert(rng.randint(0, len(pieces)), "date")
    if rng.random() < 0.2:
        pieces.insert(rng.randint(0, len(pieces)), "state")
    made = Kind(kind, rng.choice(WAYS), tag, pieces, rng.choice(TIME_FORMS), rng.choice(DATE_FORMS))
    if kind == "heard" and rng.random() < 0.3:
        names = [piece for piece in pieces if piece not in ("time", "date", "text", "state", "own_word")]
        made.more["carry"] = names[:2]
    if kind not in ("carry", "skip") and rng.random() < 0.3:
        made.more["constants"] = rng.choice(
            [{"mode": "RULE"}, {"dial_khz": 3578.5}, {"sure": 0.25, "decoder": "r"}]
        )
    return made


def made_recipe(rng: Random) -> tuple[str, list[Kind]]:
    """Return a recipe's text and its rules."""
    kinds = ["heard", *rng.choices(list(FOR_KIND), k=rng.randint(0, 5))]
    rng.shuffle(kinds)
    rules = [made_kind(rng, kind, f"r{i}") for i, kind in enumerate(kinds)]
    slot_s = rng.choice(["", "", "slot_s = 15\n", "slot_s = 7.5\n"])
    top = f"zone = '{rng.choice(ZONES)}'\nkeep = ['own_word']\n{slot_s}"
    if slot_s and rng.random() < 0.5:
        top += "time_marks = 'end'\n"
    top += rng.choice(["", "time_step_s = 60\n"]) + rng.choice(["", "empty = ['n/a', '-']\n"])
    top += rng.choice(["", "decimal = ','\n"]) + rng.choice(["", "skip = ['^//', 'sk.p']\n"])
    used = {piece for rule in rules for piece in rule.pieces}
    if "mode" in used and rng.random() < 0.7:
        top += "[values.mode]\n'~' = 'KB15'\n'#' = ''\n"
    if rng.random() < 0.7:
        top += "[message]\n" + rng.choice(["", "never_locators = ['JN58', 'rr73']\n"])
        top += rng.choice(["", f"patterns = {toml(PATTERNS)}\n"])
    constants = "[constants]\nreceiver = 'hut'\n" + rng.choice(
        ["dial_hz = 7041500\n", "dial_mhz = 7.0415\n", "dial_khz = '7041.5'\nmode = 'KB'\n"]
    )
    return recipe("".join(rule.toml() for rule in rules), top, constants), rules


def made_text(rng: Random, rules: list[Kind], lines: int) -> str:
    """Return a text: mostly lines of the rules, with times that go on, jump and fall."""
    at = datetime.fromisoformat(rng.choice(STARTS))
    made: list[str] = []
    for _ in range(lines):
        at += timedelta(seconds=rng.choice(LATER_S))
        if rng.random() < 0.05:
            made.append(
                rng.choice(
                    ["", " \t", "// remark", "no line of any rule", '"', "{", "{}", "[1]", "sk?p skip"]
                )
            )
        elif made and rng.random() < 0.15:
            made.append(rng.choice(made[-4:]))
        else:
            one = rng.choice(rules)
            values = {piece: rng.choice(VALUES[piece]) for piece in one.pieces if piece in VALUES}
            for piece in one.pieces:
                if piece in ("time", "date"):
                    values[piece] = written(at, one.time_form if piece == "time" else one.date_form)
                    if rng.random() < 0.03:
                        values[piece] = rng.choice(["", "n/a", "99:99", "2026-02-30"])
            made.append(one.line({piece: values[piece] for piece in one.pieces}, rng))
    return "\n".join(made) + rng.choice(["\n", ""])
