"""Where the scale of a side's SNR ends: values piled up at an extreme are only known to lie beyond it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logtool.verdicts.compare.transmissions import Floats

PILED_SHARE = 0.02  # equal values at an extreme, of all that a side decoded; our choice
FEWEST_PILED = 5  # fewer are no pile; our choice


@dataclass(frozen=True)
class Scale:
    """The ends of one side's scale, infinite where values do not pile up. [dB]"""

    low_db: float
    high_db: float
    share_high: float

    @property
    def ended(self) -> bool:
        """Whether values pile up at the upper end."""
        return bool(np.isfinite(self.high_db))


def find_ends(snr_db: Floats) -> Scale:
    """Return where a side's scale ends. [dB]

    The trap: at a hard decoding threshold values pile up at the lower end too. That is no harm, for what lies
    at a lower end is not used either way.

    Parameters
    ----------
    snr_db : array, shape (n,)
        What one side decoded, without NaN.

    Examples
    --------
    >>> find_ends(np.array([-20.0, -15, -10, -5, 0, 10, 10, 10, 10, 10]))
    Scale(low_db=-inf, high_db=10.0, share_high=0.5)
    """
    if not snr_db.size:
        return Scale(-np.inf, np.inf, 0.0)
    low, high = float(snr_db.min()), float(snr_db.max())
    piled = max(FEWEST_PILED, PILED_SHARE * snr_db.size)
    at_low, at_high = int(np.sum(snr_db == low)), int(np.sum(snr_db == high))
    return Scale(
        low if at_low >= piled else -np.inf,
        high if at_high >= piled else np.inf,
        at_high / snr_db.size if at_high >= piled else 0.0,
    )
