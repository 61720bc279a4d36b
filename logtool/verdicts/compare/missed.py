"""What a side misses although it is strong: collisions and bursts of noise, which no threshold explains."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from logtool.verdicts.compare.levels import Levels
from logtool.verdicts.compare.transmissions import Floats

FAR_SPREADS = 3.0  # so many spreads above the floor the other side hardly ever falls under it; our choice
# A share of nothing counts as if this many more had been strong and none missed; our choice.
PRIOR_ROWS = 10.0


def missed_though_strong(levels: Levels, difference_db: float, spread_db: float) -> tuple[Floats, Floats]:
    """Return the share that each side misses of what is strong, and how much each sender moved it.

    Strong is what the other side heard so far above the common floor that fading alone does not explain a miss.
    Both sides are judged alike on the levelled scales, so what heavy fading adds is the same on both and falls out
    of the difference.

    Parameters
    ----------
    levels : Levels
        With thresholds that know of no misses yet.
    difference_db : float
        Taken off this side's SNR.
    spread_db : float
        Of one side's SNR about what the other's says.

    Returns
    -------
    shares : array, shape (2,)
        Of this side and of that.
    influence : array, shape (senders, 2)
    """
    heard, heights = levels.heard, levels.heights(difference_db)
    shares, influence = np.zeros(2), np.zeros((len(heard.per_sender), 2))
    seen_db, by = (heights.that_db, heights.this_db), (heard.by_this, heard.by_that)
    for side, (height_db, decoded) in enumerate(zip(seen_db, by, strict=True)):
        strong = (height_db > FAR_SPREADS * spread_db).astype(float)
        whole = float(strong.sum()) + PRIOR_ROWS
        missed = strong * ~decoded
        shares[side] = float(missed.sum()) / whole
        influence[:, side] = heard.summed(missed - shares[side] * strong) / whole
    return shares, influence


def with_missed(levels: Levels, shares: Floats) -> Levels:
    """Return the levels with thresholds that know what each side misses."""
    this, that = (
        replace(threshold, missed_share=float(share))
        for threshold, share in zip(levels.thresholds, shares, strict=True)
    )
    return replace(levels, thresholds=(this, that))
