"""Receptions as a listener's log in ADI, the text form of ADIF 3.1."""

from __future__ import annotations

from typing import IO, TYPE_CHECKING

from logtool import __version__
from logtool.exports.rows import blocks
from logtool.records.adi_fields import (
    APP_ANTENNA,
    APP_COLUMNS,
    APP_TIME,
    DBM_OF_1_W,
    GRID_CHARACTERS,
    HZ_PER_MHZ,
    ascii_more,
    ascii_text,
)
from logtool.records.layout import COLUMN_NAMES
from logtool.tables.choice import Choice
from logtool.tables.records import records_query

if TYPE_CHECKING:
    from logtool.records.reader import Logs

VERSION = "3.1.6"
_BANDS_OF_ONE_NAME = "630m 160m 80m 60m 40m 30m 20m 17m 15m 12m 10m 6m 4m 2m 1.25m 70cm 33cm 23cm"
BANDS = {name: name for name in _BANDS_OF_ONE_NAME.split(" ")} | {"2200m": "2190m"}
"""What ADIF's enumeration Band (from memory) calls the bands of `logtool.places.bands`; no other has a BAND."""


def write(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write the receptions that a choice counts and that name a sender, one entry a line.

    An entry is a listener's (`SWL`): `CALL` is the sender, `RST_SENT` the report that the listener could give, in dB,
    `FREQ` that of the signal. What ADIF has no field for, or a coarser one, stands in fields `APP_LOGTOOL_...` as it
    was written, so that reading the entry gives the same record. Returns notes on what is left out.
    """
    out.write(
        "Receptions of a listener; fields APP_LOGTOOL_ are as in logtool's log layout\n"
        f"{_field('ADIF_VER', VERSION)}{_field('PROGRAMID', 'LOGTOOL')}"
        f"{_field('PROGRAMVERSION', __version__)}<EOH>\n".encode()
    )
    unnamed = others = 0
    for rows in blocks(logs, records_query(logs, choice, ("f", "band", "antenna", "receiver_locator"))):
        entries = []
        for fields, *place in rows:
            written = dict(zip(COLUMN_NAMES, fields, strict=True))
            if written["kind"] != "heard":
                others += 1
            elif not written["sender"]:
                unnamed += 1
            else:
                entries.append(_entry(written, *place))
        out.write("".join(entries).encode("ascii"))
    notes = []
    if unnamed:
        notes.append(f"{unnamed} receptions name no sender, so they are no entry of an ADI file")
    if others:
        notes.append(f"{others} records are no receptions, so they are no entry of an ADI file")
    return notes


def _entry(written: dict[str, str], band: str, antenna: str | None, place: str | None) -> str:
    time, snr_db, power_dbm = written["time"], written["snr_db"], written["power_dbm"]
    date, clock = time[: len("2026-03-01")], time[len("2026-03-01T") : len("2026-03-01T22:00:00")]
    signal_hz = int(written["dial_hz"]) + float(written["audio_hz"] or 0)
    own = {name: written[name] for name in APP_COLUMNS}
    own |= {"text": ascii_text(own["text"]), "more": ascii_more(own["more"])}
    fields = {
        "CALL": written["sender"].upper(),
        "QSO_DATE": date.replace("-", ""),
        "TIME_ON": clock.replace(":", ""),
        "FREQ": f"{signal_hz / HZ_PER_MHZ:.6f}",
        "BAND": BANDS.get(band, ""),
        "MODE": written["mode"],
        "RST_SENT": f"{round(float(snr_db)):+03d}" if snr_db else "",
        "GRIDSQUARE": written["locator"][:GRID_CHARACTERS],
        "GRIDSQUARE_EXT": written["locator"][GRID_CHARACTERS:],
        "MY_GRIDSQUARE": (place or "")[:GRID_CHARACTERS],
        "MY_GRIDSQUARE_EXT": (place or "")[GRID_CHARACTERS:],
        "RX_PWR": _watts(float(power_dbm)) if power_dbm else "",
        "SWL": "Y",
        APP_TIME: time if "." in time else "",
        APP_ANTENNA: antenna or "",
        **{APP_COLUMNS[name]: value for name, value in own.items()},
    }
    return "".join([_field(name, value) for name, value in fields.items() if value]) + "<EOR>\n"


def _field(name: str, value: str) -> str:
    """Return a field as ADI holds it, its length before it."""
    return f"<{name}:{len(value)}>{value} "


def _watts(power_dbm: float) -> str:
    """Return a power in watts as a decimal number, to a nanowatt.

    >>> _watts(37), _watts(-30)
    ('5.011872336', '0.000001')
    """
    return f"{10 ** ((power_dbm - DBM_OF_1_W) / 10):.9f}".rstrip("0").rstrip(".")
