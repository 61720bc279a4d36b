"""Frequencies among the columns: which unit by the amateur bands, and dial, signal or audio by how they spread."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from itertools import pairwise

from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.tables import Column
from logtool.suggest.values import ENOUGH, given, is_number, number_of

# The widest limits of the amateur bands (ITU Radio Regulations, Article 5, from memory), kHz.
_BANDS_KHZ = (
    (135.7, 137.8),
    (472, 479),
    (1800, 2000),
    (3500, 4000),
    (5250, 5450),
    (7000, 7300),
    (10_100, 10_150),
    (14_000, 14_350),
    (18_068, 18_168),
    (21_000, 21_450),
    (24_890, 24_990),
    (28_000, 29_700),
    (50_000, 54_000),
    (70_000, 70_500),
    (144_000, 148_000),
    (220_000, 225_000),
    (420_000, 450_000),
    (902_000, 928_000),
    (1_240_000, 1_300_000),
)
_BELOW_KHZ = 3.0  # a dial may lie below the band by the width of the audio
UNIT_KHZ = {"Hz": 0.001, "kHz": 1.0, "MHz": 1000.0}
_AUDIO_TOP_HZ = 6000  # our choice: the widest audio of a receiver for speech, and some room
_AUDIO_LOW_SPREAD_HZ = 150
_TURN_DEG = 360  # what does not go over it could be a bearing
FEW_DIALS = 12
_FEW_SHARE = 0.08
_MOST_HZ = 3_000_000_000


@dataclass(frozen=True)
class Frequency:
    """A column of radio frequencies: its unit and whether its values are few."""

    column: int
    unit: str
    few: bool
    hz: tuple[float | None, ...]
    sure: bool


def in_band(khz: float) -> bool:
    """Return whether a frequency could be a dial or a signal of an amateur band.

    >>> in_band(7078.0), in_band(6100.0)
    (True, False)
    """
    return any(low - _BELOW_KHZ <= khz <= high for low, high in _BANDS_KHZ)


def radio_of(k: int, column: Column, *, few: bool | None = None) -> Frequency | None:
    """Return a column as radio frequencies, or None where it cannot be such; `few` where that is known."""
    written = [value for value in given(column.values) if is_number(value)]
    if not written or len(written) < ENOUGH * len(given(column.values)):
        return None
    numbers = [number_of(value) for value in written]
    if few is None:
        few = len(set(numbers)) <= max(1, min(FEW_DIALS, _FEW_SHARE * len(numbers)))
    means = meanings_of(column.hint)
    told = column.unit if column.unit in UNIT_KHZ else unit_of(column.hint)
    if means and not means & {"dial", "frequency", "signal", "rf", "audio"}:
        return None
    units = [told] if told in UNIT_KHZ else list(UNIT_KHZ)
    fitting = [unit for unit in units if _fits(numbers, written, unit, few=few, hinted=bool(means))]
    sure = len(fitting) == 1
    if not fitting and told in UNIT_KHZ and "audio" not in means:
        khz = [number * UNIT_KHZ[told] for number in numbers]
        if min(khz) >= 100:
            fitting = [told]
            sure = True
    if not fitting and not means and min(numbers) >= 1_000_000 and max(numbers) <= _MOST_HZ and few:
        fitting = ["Hz"]
    if (
        not fitting
        and means & {"dial", "frequency"}
        and "audio" not in means
        and min(numbers) > _AUDIO_TOP_HZ
    ):
        fitting = ["Hz" if min(numbers) > 1_000_000 else "kHz"]
    if not fitting:
        return None
    factor = UNIT_KHZ[fitting[0]] * 1000
    hz = tuple(number_of(value) * factor if is_number(value) else None for value in column.values)
    return Frequency(k, fitting[0], few, hz, sure)


def _fits(numbers: list[float], written: list[str], unit: str, *, few: bool, hinted: bool) -> bool:
    khz = [number * UNIT_KHZ[unit] for number in numbers]
    if sum(map(in_band, khz)) < ENOUGH * len(khz):
        return False
    decimals = max(len(value.replace(",", ".").partition(".")[2]) for value in written)
    if unit == "MHz":
        return decimals >= 2  # whole MHz are names of bands
    if unit == "kHz" and max(numbers) <= _AUDIO_TOP_HZ:
        return few or (hinted and decimals > 0)
    return True


def could_be_audio(column: Column) -> bool:
    """Return whether a column's numbers could be audio frequencies in Hz."""
    written = [value for value in given(column.values) if is_number(value)]
    if len(written) < ENOUGH * max(1, len(given(column.values))):
        return False
    numbers = sorted(map(number_of, written))
    if not numbers or numbers[0] < 0 or numbers[-1] > _AUDIO_TOP_HZ or numbers[-1] <= _TURN_DEG:
        return False
    spread = numbers[int(0.95 * (len(numbers) - 1))] - numbers[int(0.05 * (len(numbers) - 1))]
    different = len(set(numbers))
    return spread >= _AUDIO_LOW_SPREAD_HZ and different > max(3, 0.02 * len(numbers)) and not _counts(written)


def _counts(written: list[str]) -> bool:
    """Return whether numbers only ever rise by one, as those of lines."""
    numbers = [number_of(value) for value in written]
    steps = Counter(b - a for a, b in pairwise(numbers))
    return bool(steps) and steps[1.0] >= 0.9 * (len(numbers) - 1)


def name_radio(
    radio: list[Frequency], audio: tuple[float | None, ...] | None
) -> tuple[dict[int, str], list[Doubt]]:
    """Return the names of columns of radio frequencies, and the doubts.

    Parameters
    ----------
    radio : list of Frequency
    audio : tuple of float or None, optional
        The audio frequency of each row in Hz, where a column has it.
    """
    names: dict[int, str] = {}
    doubts: list[Doubt] = []
    for one in radio:
        unit = one.unit.lower()
        if one.few:
            name = "dial"
        elif audio is not None and lies_above_dials(one, audio):
            name = "signal"
        elif audio is None:
            name = "signal"
            if _is_coarse(one):
                doubts.append(
                    Doubt(
                        "dial_hz, audio_hz",
                        "many different radio frequencies in whole kHz: they could be dials"
                        " or signals; read as signals",
                    )
                )
        else:
            doubts.append(
                Doubt(
                    "dial_hz, audio_hz",
                    "the radio frequencies vary much and are not some dials plus the audio; left out",
                )
            )
            continue
        if not one.sure:
            doubts.append(
                Doubt(
                    "dial_hz, audio_hz",
                    f"the unit of the radio frequency is taken as {one.unit} by its size only",
                )
            )
        full = f"{name}_{unit}"
        if full in names.values() or any(other.startswith(name) for other in names.values()):
            doubts.append(
                Doubt(
                    "dial_hz, audio_hz", "there are two columns of radio frequencies; the later is left out"
                )
            )
            continue
        names[one.column] = full
    return names, doubts


def lies_above_dials(radio: Frequency, audio: tuple[float | None, ...]) -> bool:
    """Return whether radio minus audio gives few dials."""
    dials = [
        round((rf - af) / 10)
        for rf, af in zip(radio.hz, audio, strict=True)
        if rf is not None and af is not None
    ]
    different = len({rf for rf in radio.hz if rf is not None})
    return bool(dials) and len(set(dials)) <= max(1, min(FEW_DIALS * 2, different / 3))


def _is_coarse(radio: Frequency) -> bool:
    return all(rf is None or abs(rf / 1000 - round(rf / 1000)) < 1e-6 for rf in radio.hz)
