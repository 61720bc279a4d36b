"""An entry of an ADI file as a line of the log layout, and what it says of the receiver's place."""

from __future__ import annotations

import re
from decimal import Decimal
from math import log10
from typing import NamedTuple

from logtool.records.adi_fields import (
    APP_ANTENNA,
    APP_COLUMNS,
    APP_TIME,
    DBM_OF_1_W,
    GRID_CHARACTERS,
    HZ_PER_MHZ,
    more_of_ascii,
    text_of_ascii,
)
from logtool.records.adi_tags import AdiEntry
from logtool.records.layout import COLUMN_NAMES, COLUMNS, NAME_FORM, TIME_FORM

UNNAMED_RECEIVER = "listener"
UNKNOWN_ANTENNA = "unknown"
_STANDARD = (
    "CALL QSO_DATE TIME_ON FREQ MODE SUBMODE RST_SENT RST_RCVD GRIDSQUARE GRIDSQUARE_EXT MY_GRIDSQUARE "
    "MY_GRIDSQUARE_EXT RX_PWR SWL STATION_CALLSIGN OPERATOR"
)
WANTED = frozenset({*_STANDARD.split(" "), APP_TIME, APP_ANTENNA, *APP_COLUMNS.values()})
"""The fields that are read; all others are passed over."""

_NAME, _TIME = re.compile(NAME_FORM), re.compile(TIME_FORM)
_DATE, _CLOCK = re.compile(r"([0-9]{4})([0-9]{2})([0-9]{2})"), re.compile(r"([0-9]{2})([0-9]{2})([0-9]{2})?")
_MHZ = re.compile(r"[0-9]{1,5}(?:\.[0-9]{0,12})?|\.[0-9]{1,12}")
_WATTS = re.compile(r"[0-9]{0,6}(?:\.[0-9]{0,12})?")
_DECIBELS = re.compile(r"[+-]?[0-9]{1,3}(?:\.[0-9]{1,6})?")
_READABILITY = re.compile(r"[1-5][1-9][1-9]?")  # a report of readability, strength (and tone), from memory
_SNR_DB = next(column for column in COLUMNS if column.name == "snr_db")
_MOST_LOCATOR = 10  # characters that the layout has room for


class Stand(NamedTuple):
    """Where a receiver stands and on what antenna, as an entry says."""

    locator: str
    antenna: str


def columns_of(entry: AdiEntry) -> dict[str, str] | None:
    """Return the fields of the layout that an entry gives, by column; None where it gives nothing or is cut off.

    What is not as ADIF has it stays as it is, for the judge to name. A field of our own counts before the one that
    ADIF has.
    """
    if not entry.whole or not entry.fields:
        return None
    fields = entry.fields
    own = {column: fields.get(name, "") for column, name in APP_COLUMNS.items()}

    def given(name: str) -> str:
        return fields[name].strip() if name in fields else ""

    columns = {
        "time": _time(given(APP_TIME), given("QSO_DATE"), given("TIME_ON")),
        "kind": "heard",
        "receiver": own["receiver"] or _receiver(given("STATION_CALLSIGN") or given("OPERATOR")),
        "dial_hz": own["dial_hz"] or _hz(given("FREQ")),
        "audio_hz": own["audio_hz"],
        "snr_db": own["snr_db"],
        "late_s": own["late_s"],
        "mode": (given("SUBMODE") or given("MODE")).replace(" ", "_"),
        "sender": given("CALL"),
        "addressee": own["addressee"],
        "locator": _locator(given("GRIDSQUARE"), given("GRIDSQUARE_EXT")),
        "power_dbm": own["power_dbm"] or _dbm(given("RX_PWR")),
        "text": text_of_ascii(own["text"]),
        "more": more_of_ascii(own["more"]),
    }
    if not columns["snr_db"] and given("SWL").upper() == "Y":
        columns["snr_db"] = _snr_db(given("RST_SENT") or given("RST_RCVD"))
    return columns


def stand_of(entry: AdiEntry) -> Stand | None:
    """Return where an entry says that its receiver stands, None where it does not."""
    place = entry.fields.get("MY_GRIDSQUARE", "").strip()
    if not place:
        return None
    antenna = entry.fields.get(APP_ANTENNA, "").strip()
    return Stand(
        _locator(place, entry.fields.get("MY_GRIDSQUARE_EXT", "").strip()),
        antenna if _NAME.fullmatch(antenna) else UNKNOWN_ANTENNA,
    )


def line_of(columns: dict[str, str]) -> bytes:
    """Return the line of the layout that has these fields."""
    return "\t".join(columns.get(name, "") for name in COLUMN_NAMES).encode()


def entry_shown(entry: AdiEntry) -> bytes:
    """Return an entry as a line that is no record, and that shows what was read of it."""
    fields = "".join(f"<{name}:{len(value)}>{value} " for name, value in entry.fields.items())
    return (fields if fields and not entry.whole else f"{fields}<EOR>").encode()


def _time(own: str, date: str, clock: str) -> str:
    """Return the time of the layout; what is none begins with `?`, so that the line is never a comment."""
    if own:
        return own if _TIME.fullmatch(own) else f"?{own}"
    day, time = _DATE.fullmatch(date), _CLOCK.fullmatch(clock)
    if day is None or time is None:
        return f"?{date} {clock}"
    return f"{'-'.join(day.groups())}T{time[1]}:{time[2]}:{time[3] or '00'}Z"


def _receiver(call: str) -> str:
    return re.sub(r"[^A-Z0-9_-]+", "-", call.upper())[:32].strip("-") or UNNAMED_RECEIVER


def _hz(mhz: str) -> str:
    return str(round(Decimal(mhz) * HZ_PER_MHZ)) if _MHZ.fullmatch(mhz) else mhz


def _locator(grid: str, rest: str) -> str:
    """Return a locator from its two parts, no longer than the layout has room for."""
    return (grid + rest)[:_MOST_LOCATOR] if len(grid) == GRID_CHARACTERS else grid


def _dbm(watts: str) -> str:
    """Return a power in dBm; nothing where none is told or it is no power."""
    power = float(watts) if re.search("[0-9]", watts) and _WATTS.fullmatch(watts) else 0
    return f"{10 * log10(power) + DBM_OF_1_W:.3f}".rstrip("0").rstrip(".") if power > 0 else ""


def _snr_db(report: str) -> str:
    """Return a listener's report in dB; nothing where it is none, as `59` and `599`, which tell readability."""
    if not _DECIBELS.fullmatch(report) or _READABILITY.fullmatch(report):
        return ""
    assert _SNR_DB.low is not None
    assert _SNR_DB.high is not None
    return report.lstrip("+") if _SNR_DB.low <= float(report) <= _SNR_DB.high else ""
