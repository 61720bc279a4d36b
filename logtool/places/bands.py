"""Names of the amateur bands, by dial frequency."""

from __future__ import annotations

from dataclasses import dataclass

HZ_PER_KHZ = 1000
UNNAMED_STEP_KHZ = 100


@dataclass(frozen=True)
class Band:
    """A band's name and its lowest and highest dial frequency in Hz; both belong to it."""

    name: str
    low_hz: int
    high_hz: int


BANDS = (
    Band("2200m", 135_700, 137_800),
    Band("630m", 472_000, 479_000),
    Band("160m", 1_800_000, 2_000_000),
    Band("80m", 3_500_000, 4_000_000),
    Band("60m", 5_351_500, 5_366_500),
    Band("40m", 7_000_000, 7_300_000),
    Band("30m", 10_100_000, 10_150_000),
    Band("20m", 14_000_000, 14_350_000),
    Band("17m", 18_068_000, 18_168_000),
    Band("15m", 21_000_000, 21_450_000),
    Band("12m", 24_890_000, 24_990_000),
    Band("10m", 28_000_000, 29_700_000),
    Band("6m", 50_000_000, 54_000_000),
    Band("4m", 70_000_000, 70_500_000),
    Band("2m", 144_000_000, 148_000_000),
    Band("1.25m", 220_000_000, 225_000_000),
    Band("70cm", 420_000_000, 450_000_000),
    Band("33cm", 902_000_000, 928_000_000),
    Band("23cm", 1_240_000_000, 1_300_000_000),
)
"""The widest of the three regions' limits: ITU Radio Regulations, Article 5, from memory.

4m is there by national allocations only; the outer parts of 70cm by footnotes. National limits
differ, most of all on 60m. Both ends belong to a band, as an allocation's do.
"""


def band_name(dial_hz: int) -> str:
    """Return the band's name for a dial frequency given in Hz, `40m`; outside the bands `N kHz`.

    The dial is what names the band, not the signal, which lies above it by the audio frequency: a
    dial of 6 999 000 Hz is `6900 kHz` even where the signals heard on it are in `40m`.

    Parameters
    ----------
    dial_hz : int
        The carrier that audio is counted from, in Hz.

    Returns
    -------
    str
        A name of `BANDS`, else the dial in kHz rounded down to hundreds.

    Examples
    --------
    >>> band_name(7_074_000)
    '40m'
    >>> band_name(6_199_999)
    '6100 kHz'

    References
    ----------
    ITU Radio Regulations, Article 5 (from memory).
    """
    for band in BANDS:
        if band.low_hz <= dial_hz <= band.high_hz:
            return band.name
    return f"{dial_hz // (HZ_PER_KHZ * UNNAMED_STEP_KHZ) * UNNAMED_STEP_KHZ} kHz"
