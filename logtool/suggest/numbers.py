"""Which columns of numbers are levels, lateness, power: by their bounds and how they spread."""

from __future__ import annotations

from dataclasses import dataclass

from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.tables import Column
from logtool.suggest.values import ENOUGH, given, is_number, number_of

SNR_LOW_DB, SNR_HIGH_DB = -40, 60  # no decoder of keyboard modes tells more; our choice
_SNR_SPREAD_DB = 6
LATE_TOP_S = 10.0
_LATE_MIDDLE_S = 2.5
_POWERS_DBM = frozenset(range(-30, 71))
_POWER_ENDS = (0, 3, 7)  # last digits of the powers that such messages carry; common practice, no source


@dataclass(frozen=True)
class Spread:
    """Figures of a column of numbers."""

    count: int
    low: float
    high: float
    p5: float
    middle: float
    p95: float
    different: int
    decimals: int
    signed: bool

    @property
    def negative(self) -> bool:
        """Whether there is a number below 0."""
        return self.low < 0


def spread_of(column: Column) -> Spread | None:
    """Return the figures of a column, or None where it is none of numbers."""
    values = given(column.values)
    written = [value for value in values if is_number(value)]
    if not written or len(written) < ENOUGH * len(values):
        return None
    numbers = sorted(map(number_of, written))

    def at(share: float) -> float:
        return numbers[int(share * (len(numbers) - 1))]

    return Spread(
        len(numbers), numbers[0], numbers[-1], at(0.05), at(0.5), at(0.95), len(set(numbers)),
        max(len(value.replace(",", ".").partition(".")[2]) for value in written),
        any(value[0] in "+-" for value in written),
    )  # fmt: skip


def could_be_snr(spread: Spread) -> bool:
    """Return whether numbers lie and spread as signal-to-noise ratios do."""
    return (
        spread.p5 >= SNR_LOW_DB
        and spread.p95 <= SNR_HIGH_DB
        and spread.low >= -60
        and spread.p95 - spread.p5 >= _SNR_SPREAD_DB
        and spread.decimals <= 2
    )


def could_be_late(spread: Spread) -> bool:
    """Return whether numbers lie and spread as seconds of lateness do."""
    return (
        spread.decimals >= 1
        and spread.p5 >= -LATE_TOP_S
        and spread.p95 <= LATE_TOP_S
        and abs(spread.middle) <= _LATE_MIDDLE_S
        and spread.different > 1
        and not could_be_snr(spread)
    )


def could_be_power(column: Column, spread: Spread) -> bool:
    """Return whether numbers are powers in dBm as messages carry them."""
    numbers = {number_of(value) for value in given(column.values) if is_number(value)}
    return (
        spread.low >= 0
        and numbers <= _POWERS_DBM
        and all(number % 10 in _POWER_ENDS for number in numbers)
        and len(numbers) >= 3
    )


def hinted_number(column: Column, spread: Spread) -> tuple[str, str]:
    """Return the name that a column's own name and unit give it, if its values agree, else why they do not.

    Returns
    -------
    name, trouble : str
        Both empty where the column's name says nothing of levels, lateness and power.
    """
    means = meanings_of(column.hint)
    unit = column.unit or unit_of(column.hint)
    if "dbfs" in means:
        return "", "a level of the audio, not of the signal"
    if "snr" in means or (unit == "dB" and not means - {"snr", "signal", "report"}):
        if could_be_snr(spread) or (spread.low >= SNR_LOW_DB and spread.high <= SNR_HIGH_DB):
            return "snr_db", ""
        return (
            "",
            f"called {column.hint!r}, but {spread.low:g} to {spread.high:g} is no signal-to-noise ratio",
        )
    if "late" in means or (unit in ("s", "ms") and "late_or_audio" in means):
        if unit == "ms":
            return "late_ms", ""
        if max(-spread.p5, spread.p95) <= LATE_TOP_S:
            return "late_s", ""
        if spread.decimals == 0 and max(-spread.p5, spread.p95) > 60:
            return "late_ms", f"{spread.low:g} to {spread.high:g} are no seconds, so read as milliseconds"
        return "", f"called {column.hint!r}, but {spread.low:g} to {spread.high:g} is no lateness in seconds"
    if "power" in means or unit in ("dBm", "W", "mW"):
        if unit == "W" or "watt" in column.hint.lower():
            return "power_w", ""
        if unit == "mW":
            return "power_mw", ""
        if spread.low < -30:
            return (
                "",
                f"{spread.low:g} to {spread.high:g} dBm is a level at the receiver, not a sender's power",
            )
        if unit == "dBm":
            return "power_dbm", ""
        if could_be_power(column, spread):
            return "power_dbm", f"called {column.hint!r} without a unit; read as dBm"
        return "", f"called {column.hint!r} without a unit: dBm or W"
    if "drift" in means:
        return "drift_hz", ""
    return "", ""
