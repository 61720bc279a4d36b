"""Random shapes of logs: random columns in a random order, cut and written in random ways."""

from __future__ import annotations

import json
import random
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import UTC, datetime, timedelta
from zoneinfo import ZoneInfo

from tests.suggest.scenario import Heard, make
from tests.suggest.shape import Lines, Shape

SEPARATORS = {"tab": "\t", "semicolon": ";", "bar": "|", "comma": ","}
WAYS = (*SEPARATORS, "space", "json", "pairs", "fixed")
STAMPS = (
    "%Y-%m-%d %H:%M:%S", "%Y-%m-%dT%H:%M:%SZ", "%Y%m%d-%H%M%S", "%d.%m.%Y %H:%M:%S", "%m/%d/%Y %H:%M:%S",
    "%d/%m/%y %H:%M:%S", "%y%m%d_%H%M%S", "%d-%b-%Y %H:%M:%S", "%Y-%j %H:%M:%S", "%b %d %Y %H:%M:%S", "unix",
    "%d.%m.%Y %H:%M", "%m/%d/%Y %I:%M:%S %p",
)  # fmt: skip
CLOCKS = ("%H:%M:%S", "%H%M%S", "%H:%M", "%H%M", "%I:%M:%S %p", "%H:%M:%SZ")
DATES = ("%Y-%m-%d", "%d.%m.%Y", "%m/%d/%Y", "%y%m%d", "%d/%m/%y", "%Y%m%d", "%d-%b-%y")
HEADERS = {
    "stamp": ("utc", "timestamp", "date_time"),
    "clock": ("time", "utc", "clock"),
    "day": ("date", "day"),
    "snr": ("snr", "S/N", "db", "snr_db"),
    "late": ("dt", "late", "delay_s"),
    "audio": ("audio", "af", "freq", "tone_hz"),
    "dial": ("dial", "freq", "qrg", "dial_freq"),
    "signal": ("freq", "frequency", "rf"),
    "mode": ("mode", "Mode"),
    "sender": ("from", "sender", "de"),
    "addressee": ("to", "called"),
    "locator": ("locator", "grid", "loc"),
    "text": ("message", "text", "msg"),
    "counter": ("nr", "count"),
    "quality": ("quality", "score"),
    "distance": ("km", "distance"),
    "bearing": ("bearing", "az"),
    "own": ("station", "me"),
    "temperature": ("temp", "temperature"),
    "antenna": ("antenna", "ant"),
}
JUNK = ("counter", "quality", "distance", "bearing", "temperature", "antenna")


@dataclass
class Plan:
    """What a random log looks like."""

    draw: random.Random
    way: str
    columns: list[str]
    header: bool
    stamp: str
    clock: str
    day: str
    date_from: str  # `column`, `name`, `lines`, `told`
    dial_unit: str
    comma: bool
    empty: str
    names: dict[str, str]
    zone: str
    noise: bool
    minutes: bool = False
    lacking: dict[str, float] = field(default_factory=dict)


def plan_of(seed: int) -> Plan:
    """Return a random plan."""
    draw = random.Random(seed)
    way = draw.choice(WAYS)
    named_way = way in ("json", "pairs")
    header = named_way or (way != "space" and draw.random() < 0.5) or (way == "space" and draw.random() < 0.2)
    columns = [name for name in ("snr", "late", "audio", "mode") if draw.random() < 0.75]
    if draw.random() < 0.6:
        columns.append(draw.choice(["dial", "dial", "signal"]))
    columns += draw.sample(JUNK, draw.choice([0, 0, 0, 1, 1, 2]))
    split = draw.random() < 0.35
    if split:
        columns += ["sender"]
        if draw.random() < 0.7:
            columns.append("addressee")
        if draw.random() < 0.6:
            columns.append("locator")
    stamped = draw.random() < 0.5
    columns.append("stamp" if stamped else "clock")
    date_from = "column" if stamped else draw.choice(["column", "name", "lines", "told"])
    if named_way and date_from == "lines":
        date_from = "name"
    if not stamped and date_from == "column":
        columns.append("day")
    draw.shuffle(columns)
    if not split:
        if way in ("space", "fixed") or draw.random() < 0.7:
            columns.append("text")
        else:
            columns.insert(draw.randrange(len(columns)), "text")
    stamp, clock = draw.choice(STAMPS), draw.choice(CLOCKS)
    names = {name: draw.choice(HEADERS[name]) for name in columns}
    taken: set[str] = set()
    for name in columns:
        while names[name] in taken:
            names[name] = draw.choice(HEADERS[name]) + "_" + name
        taken.add(names[name])
    comma = way not in ("comma", "json") and draw.random() < 0.2
    empty = draw.choice(["", "-", "N/A"]) if way not in ("space",) else "-"
    lacking = {name: draw.choice([0.0, 0.0, 0.2]) for name in columns if name in ("snr", "late", "audio")}
    if way == "json":
        empty = ""
    zone = draw.choice(["UTC", "UTC", "UTC", "Atlantic/Azores", "Asia/Tokyo"])
    return Plan(
        draw, way, columns, header, stamp, clock, draw.choice(DATES), date_from, draw.choice(["hz", "khz", "mhz"]),
        comma, empty, names, zone, draw.random() < 0.4, lacking=lacking,
    )  # fmt: skip


def shape_of(seed: int) -> Shape:
    """Return a random log with its truth."""
    plan = plan_of(seed)
    draw = plan.draw
    start = datetime(2026, draw.randrange(1, 12), draw.randrange(1, 25), draw.randrange(24), 0, tzinfo=UTC)
    made = make(seed + 1000, count=draw.choice([60, 150, 400]), start=start, dials=draw.choice([1, 1, 3]),
                modes=draw.choice([("KB15",), ("KB15", "KB60")]))  # fmt: skip
    columns = set(plan.columns)
    radio = "dial" in columns or "signal" in columns
    one_dial = len({h.dial_hz for h in made.heard}) == 1
    if not {"dial"} & columns and not one_dial and not {"signal", "audio"} <= columns:
        made.heard[:] = [h for h in made.heard if h.dial_hz == made.heard[0].dial_hz]
    form = plan.stamp if "stamp" in columns else plan.clock
    zone = ZoneInfo(
        "UTC" if form == "unix" or form.endswith("Z") or "utc" in plan.names.values() else plan.zone
    )
    out = Lines(_told(columns))
    if plan.header and plan.way not in ("json", "pairs"):
        out.add(_join(plan, [plan.names[name] for name in plan.columns]))
    day = None
    first_day = made.heard[0].time.astimezone(zone).date()
    for i, h in enumerate(made.heard):
        local = h.time.astimezone(zone)
        if plan.date_from == "lines" and local.date() != day:
            day = local.date()
            out.add(f"** {local:%Y-%m-%d} **")
        if plan.noise and i % 25 == 3:
            out.add("# the receiver is well")
        cells = {name: _cell(plan, name, h, i, made.locators, local) for name in plan.columns}
        other: dict[str, object] = {}
        for name, target in (("snr", "snr_db"), ("late", "late_s"), ("audio", "audio_hz")):
            if name in columns and draw.random() < plan.lacking.get(name, 0.0):
                cells[name] = plan.empty
                other[target] = None
                if name == "audio" and "signal" in columns:
                    del other[target]
                    cells[name] = str(h.audio_hz)
        if "%S" not in form and form != "unix":
            other["time"] = h.time.replace(second=0)
        out.heard(_line(plan, cells), h, **other)
    fill = (
        {}
        if radio and not ("signal" in columns and "audio" not in columns)
        else {"dial_hz": str(made.heard[0].dial_hz)}
    )
    if zone.key != "UTC":
        fill["zone"] = f'"{zone.key}"'
    name = f"log{first_day:%Y-%m-%d}.txt" if plan.date_from == "name" else f"log-{'abc'[seed % 3]}.txt"
    told = first_day if plan.date_from == "told" else None
    return out.shape(f"random-{seed}", name, fill=fill, day=told)


def _told(columns: set[str]) -> list[str]:
    told = ["time", "dial_hz"]
    told += [
        target
        for name, target in (("snr", "snr_db"), ("late", "late_s"), ("audio", "audio_hz"), ("mode", "mode"))
        if name in columns
    ]
    if "signal" in columns:
        told.append("audio_hz")
    if "text" in columns:
        told += ["sender", "addressee", "locator"]
    return told + [name for name in ("sender", "addressee", "locator") if name in columns]


def _number(plan: Plan, value: str) -> str:
    return value.replace(".", ",") if plan.comma else value


def _radio(plan: Plan, hz: int) -> str:
    digits = {"hz": f"{hz}", "khz": f"{hz / 1000:.3f}", "mhz": f"{hz / 1e6:.6f}"}
    return _number(plan, digits[plan.dial_unit])


def _cell(plan: Plan, name: str, h: Heard, i: int, locators: dict[str, str], local: datetime) -> str:
    draw = plan.draw
    cells: dict[str, Callable[[], str]] = {
        "stamp": lambda: str(int(h.time.timestamp())) if plan.stamp == "unix" else local.strftime(plan.stamp),
        "clock": lambda: local.strftime(plan.clock),
        "day": lambda: local.strftime(plan.day),
        "snr": lambda: str(h.snr_db),
        "late": lambda: _number(plan, f"{h.late_s:.1f}"),
        "audio": lambda: str(h.audio_hz),
        "dial": lambda: _radio(plan, h.dial_hz),
        "signal": lambda: _radio(plan, h.dial_hz + h.audio_hz),
        "mode": lambda: h.mode,
        "sender": lambda: h.sender,
        "addressee": lambda: h.addressee or ("CQ" if plan.way in ("space", "fixed") else plan.empty or "CQ"),
        "locator": lambda: h.locator or ("-" if plan.way == "space" else plan.empty),
        "text": lambda: h.text,
        "counter": lambda: str(i + 1),
        "quality": lambda: str(draw.randrange(0, 101)),
        "distance": lambda: str(200 + sum(map(ord, h.sender)) * 7 % 4000),
        "bearing": lambda: str(sum(map(ord, h.sender)) * 13 % 360),
        "temperature": lambda: _number(plan, f"{4 + i / 100:.1f}"),
        "antenna": lambda: "wire" if i % 7 else "loop",
    }
    return cells[name]()


def _join(plan: Plan, cells: list[str]) -> str:
    if plan.way in SEPARATORS:
        return SEPARATORS[plan.way].join(cells)
    if plan.way == "fixed":
        widths = {
            "stamp": 26,
            "clock": 13,
            "day": 13,
            "text": 0,
            "sender": 11,
            "addressee": 11,
            "dial": 13,
            "signal": 13,
        }
        return "".join(
            f"{cell:<{widths.get(name, 10)}} " for name, cell in zip(plan.columns, cells, strict=True)
        ).rstrip()
    return " ".join(cells)


def _line(plan: Plan, cells: dict[str, str]) -> str:
    if plan.way == "json":
        numbers = ("snr", "late", "audio", "counter", "quality")
        told: dict[str, object] = {plan.names[name]: cell or None for name, cell in cells.items()}
        for name in numbers:
            if cells.get(name):
                told[plan.names[name]] = float(cells[name]) if "." in cells[name] else int(cells[name])
        return json.dumps(told)
    if plan.way == "pairs":
        items = [
            f'{plan.names[n]}="{c}"' if " " in c else f"{plan.names[n]}={c}" for n, c in cells.items() if c
        ]
        return " ".join(items)
    return _join(plan, [cells[name] for name in plan.columns])


DAY = timedelta(days=1)
