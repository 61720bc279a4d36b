"""The columns of the tables for people: header, how a value is written, and what is left out first."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from logtool.tables.result import written_time

NOTHING = "–"  # noqa: RUF001 - a dash that is wider than a minus sign, on purpose


@dataclass(frozen=True)
class Shown:
    """A column for people: its header, how a value is written, and how soon it is left out."""

    name: str
    header: str
    write: Callable[[Any], str]
    rank: int  # the greatest ranks are left out first where there is no room
    right: bool = True


def text(value: Any) -> str:
    """Return a value as it is; a dash where there is none."""
    return NOTHING if value is None else str(value)


def count(value: Any) -> str:
    """Return a whole number in groups of three digits."""
    return NOTHING if value is None else f"{value:,}".replace(",", " ")


def whole(value: float | None) -> str:
    """Return a number rounded to a whole one."""
    return NOTHING if value is None else count(round(value))


def tenth(value: float | None) -> str:
    """Return a number with one decimal."""
    return NOTHING if value is None else f"{value:.1f}"


def yes(value: bool | None) -> str:
    """Return yes or no."""
    return NOTHING if value is None else "yes" if value else "no"


def minute(value: int | None) -> str:
    """Return an instant to the minute, UTC."""
    return NOTHING if value is None else written_time(value)[:16].replace("T", " ")


def _km(name: str, header: str, rank: int) -> Shown:
    return Shown(name, header, whole, rank)


_STATION = [
    Shown("receiver", "receiver", text, 7, right=False),
    Shown("antenna", "antenna", text, 1, right=False),
    Shown("band", "band", text, 6, right=False),
]
_LISTENING = [
    Shown("listening_min", "listening min", whole, 2),
    Shown("listening", "listening", text, 9, right=False),
]
_FARTHEST = [
    _km("farthest_km", "farthest km", 1),
    Shown("farthest_sender", "farthest sender", text, 4, right=False),
]
COLUMNS: dict[str, list[Shown]] = {
    "check": [
        Shown("file", "file", text, 0, right=False),
        Shown("line", "line", count, 0),
        Shown("reason", "reason", text, 0, right=False),
        Shown("shown", "what the line says", text, 1, right=False),
    ],
    "reach": [
        Shown("hour", "UTC", minute, 0, right=False),
        Shown("solar", "sun time", text, 3, right=False),
        *_STATION,
        *_LISTENING,
        Shown("receptions", "receptions", count, 1),
        Shown("unnamed", "unnamed", count, 9),
        Shown("senders", "senders", count, 1),
        Shown("heard_once", "heard once", count, 7),
        Shown("senders_in_30", "senders in 30 min", tenth, 5),
        Shown("located", "located", count, 9),
        Shown("squares", "squares", count, 8),
        _km("nearest_km", "nearest km", 3),
        _km("median_km", "median km", 2),
        _km("p90_km", "90 % km", 4),
        *_FARTHEST,
        _km("farthest_once_km", "once km", 8),
        Shown("snr_median_db", "SNR dB", tenth, 5),
        Shown("sun_zenith_deg", "sun zenith", whole, 6),
    ],
    "senders": [
        *[column for column in _STATION if column.name != "antenna"],
        Shown("sender", "sender", text, 0, right=False),
        Shown("locator", "locator", text, 2, right=False),
        Shown("borrowed", "borrowed", yes, 8, right=False),
        _km("distance_km", "km", 1),
        _km("uncertainty_km", "± km", 4),
        Shown("bearing_deg", "bearing", whole, 2),
        Shown("receptions", "receptions", count, 1),
        Shown("heard_again", "again", yes, 5, right=False),
        Shown("first", "first UTC", minute, 6, right=False),
        Shown("last", "last UTC", minute, 5, right=False),
        Shown("nights", "nights", count, 4),
        Shown("snr_median_db", "SNR dB", tenth, 3),
        Shown("snr_best_db", "best dB", tenth, 7),
    ],
    "sectors": [
        *_STATION,
        Shown("sector_deg", "bearing", tenth, 0),
        Shown("receptions", "receptions", count, 1),
        Shown("senders", "senders", count, 1),
        _km("median_km", "median km", 2),
        _km("farthest_km", "farthest km", 1),
    ],
    "nights": [
        Shown("night", "night", text, 0, right=False),
        *_STATION,
        Shown("from", "from UTC", minute, 8, right=False),
        Shown("to", "to UTC", minute, 9, right=False),
        *_LISTENING,
        Shown("receptions", "receptions", count, 1),
        Shown("senders", "senders", count, 1),
        Shown("senders_in_30", "senders in 30 min", tenth, 2),
        Shown("squares", "squares", count, 6),
        _km("median_km", "median km", 3),
        _km("p90_km", "90 % km", 4),
        *_FARTHEST,
    ],
    "between": [
        Shown("a", "station", text, 0, right=False),
        Shown("b", "and station", text, 0, right=False),
        Shown("band", "band", text, 6, right=False),
        Shown("first", "first UTC", minute, 3, right=False),
        Shown("last", "last UTC", minute, 5, right=False),
        Shown("from_a", "from first", count, 2),
        Shown("from_b", "from second", count, 2),
        Shown("locator_a", "locator", text, 4, right=False),
        Shown("locator_b", "and locator", text, 4, right=False),
        _km("between_km", "km between", 1),
    ],
    "lines": [
        Shown("file", "file", text, 3, right=False),
        Shown("line", "line", count, 1),
        Shown("time", "UTC", lambda value: text(value and written_time(value)), 0, right=False),
        Shown("receiver", "receiver", text, 5, right=False),
        Shown("dial_hz", "dial Hz", text, 6),
        Shown("audio_hz", "audio Hz", text, 5),
        Shown("snr_db", "SNR dB", text, 2),
        Shown("late_s", "late s", text, 6),
        Shown("mode", "mode", text, 7, right=False),
        Shown("sender", "sender", text, 1, right=False),
        Shown("addressee", "addressee", text, 4, right=False),
        Shown("locator", "locator", text, 3, right=False),
        Shown("power_dbm", "dBm", text, 8),
        Shown("text", "text", text, 2, right=False),
        Shown("more", "more", text, 9, right=False),
    ],
}
BARS = {
    "reach": "farthest_km",
    "senders": "receptions",
    "sectors": "receptions",
    "nights": "senders_in_30",
}
