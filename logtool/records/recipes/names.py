"""The names that a recipe gives to the pieces of a line, and what each becomes: one definition."""

from __future__ import annotations

from dataclasses import dataclass

from logtool.records.layout import COLUMN_NAMES, KNOWN_KEYS, NUMBER_FORM


@dataclass(frozen=True)
class Piece:
    """What a named piece of a line becomes: its target, and the factor that its unit needs.

    Targets are the layout's columns and keys, `signal_hz` (the radio frequency of the signal itself), `place`
    (the receiver's locator), `time` and `date`.
    """

    target: str
    factor: str = "1"  # a decimal number; `dbm` turns watts into dBm after it


COLUMN_TARGETS = tuple(name for name in COLUMN_NAMES if name not in ("time", "kind", "more"))
KEY_TARGETS = tuple(KNOWN_KEYS)
WATTS = {"power_w": "1", "power_mw": "0.001"}
PIECES = {
    **{name: Piece(name) for name in ("time", "date", "place", *COLUMN_TARGETS, *KEY_TARGETS)},
    "dial_khz": Piece("dial_hz", "1000"),
    "dial_mhz": Piece("dial_hz", "1000000"),
    "audio_khz": Piece("audio_hz", "1000"),
    "signal_hz": Piece("signal_hz"),
    "signal_khz": Piece("signal_hz", "1000"),
    "signal_mhz": Piece("signal_hz", "1000000"),
    "late_ms": Piece("late_s", "0.001"),
    "on_min": Piece("on_s", "60"),
    **{name: Piece("power_dbm", factor) for name, factor in WATTS.items()},
}
INTEGER_TARGETS = ("dial_hz",)
NUMBER_TARGETS = (
    "dial_hz",
    "audio_hz",
    "snr_db",
    "late_s",
    "power_dbm",
    "signal_hz",
    *(name for name, key in KNOWN_KEYS.items() if key.form == NUMBER_FORM and not key.words),
)  # fmt: skip


def target_of(name: str) -> str:
    """Return what a piece becomes; a name of the user's own, kept in `more`, stays itself.

    >>> target_of("dial_khz")
    'dial_hz'
    """
    return PIECES[name].target if name in PIECES else name
