"""How far this side's levels lie above that side's: the difference at which both have the same levels above a floor.

Take d off this side's SNR. If d is the true difference, a sender's SNR is then spread alike on both sides, so that
the mean of *any* function of it is the same on both. Here it is the height above a common floor, which is 0 below
the floor. The floor lies where both sides decode nearly all, so a missing value is 0, a transmission that neither
heard is 0, and the little that is missed above the floor is weighed in. Nothing is asked about the shape of fading,
about how it is shared, or about how the senders' levels are spread.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logtool.verdicts.compare.scales import Scale
from logtool.verdicts.compare.thresholds import Threshold
from logtool.verdicts.compare.transmissions import Bools, Floats, Transmissions, capped_weights

FLOOR_WIDTHS = 1.0  # the floor lies so many widths above the centre of the higher threshold; our choice
ABOVE_END_DB = 1.0  # and at least so far above the lower end of a scale
SLOPE_STEP_DB = 0.5  # half the distance over which the slope is taken; SNR comes in whole dB
FARTHEST_DB = 60.0  # differences are looked for so far from the start
SEARCH_STEP_DB = 1.0
CLOSE_DB = 1e-4


@dataclass(frozen=True)
class Heights:
    """Heights above the common floor, each weighed with the chance that the other side would decode it. [dB]"""

    this_db: Floats
    that_db: Floats
    weight: Floats
    inside: Bools  # heard by both, above the floor and below the end of either scale, on both sides

    @property
    def counts(self) -> Bools:
        """Which transmissions reach above the floor on either side."""
        return (self.this_db > 0) | (self.that_db > 0)

    @property
    def excess_db(self) -> Floats:
        """How far each transmission is higher by this than by that, weighted."""
        return self.weight * (self.this_db - self.that_db)


@dataclass(frozen=True)
class Levels:
    """The two sides' levels, to be brought onto each other by a difference."""

    heard: Transmissions
    thresholds: tuple[Threshold, Threshold]
    scales: tuple[Scale, Scale]
    raised_db: float = 0.0  # the floor is raised so far above its place

    def floor_db(self, difference_db: float) -> float:
        """Return the common floor, on that side's scale. [dB]"""
        places = []
        for threshold, scale, shift_db in zip(
            self.thresholds, self.scales, (difference_db, 0.0), strict=True
        ):
            places.append(threshold.centre_db + FLOOR_WIDTHS * threshold.width_db - shift_db)
            places.append(scale.low_db + ABOVE_END_DB - shift_db)
        return max(places) + self.raised_db

    def heights(self, difference_db: float) -> Heights:
        """Return the heights above the floor when a difference is taken off this side's SNR.

        A sender whose transmissions above the floor are more than `MOST_PER_SENDER` weighs as if they were so
        many. They are counted on the levelled scales, where both sides count alike, and not by who heard them.
        """
        floor_db = self.floor_db(difference_db)
        ceiling_db = min(self.scales[0].high_db - difference_db, self.scales[1].high_db)
        most_db = max(ceiling_db - floor_db, 0.0)
        by_this, by_that = self.heard.by_this, self.heard.by_that
        levelled_db = np.where(by_this, self.heard.this_db - difference_db, floor_db)
        that_db = np.where(by_that, self.heard.that_db, floor_db)
        this_high = self.thresholds[1].decodes(levelled_db) * np.clip(levelled_db - floor_db, 0.0, most_db)
        that_high = self.thresholds[0].decodes(that_db + difference_db) * np.clip(
            that_db - floor_db, 0.0, most_db
        )
        counted = self.heard.counted((this_high > 0) | (that_high > 0))
        lower_db, upper_db = np.minimum(levelled_db, that_db), np.maximum(levelled_db, that_db)
        inside = (lower_db > floor_db) & (upper_db < ceiling_db)
        return Heights(this_high, that_high, capped_weights(self.heard.sender, counted), inside)

    def excess_db(self, difference_db: float) -> Floats:
        """Return by how much each sender is higher by this than by that, after a difference was taken off."""
        return self.heard.summed(self.heights(difference_db).excess_db)

    def weights(self, difference_db: float) -> Floats:
        """Return each sender's weight: how fast its excess falls as the difference grows. [1]"""
        return self.heard.summed(self.row_weights(difference_db))

    def row_weights(self, difference_db: float) -> Floats:
        """Return each transmission's weight: how fast its excess falls as the difference grows. [1]"""
        less = self.heights(difference_db - SLOPE_STEP_DB).excess_db
        return (less - self.heights(difference_db + SLOPE_STEP_DB).excess_db) / (2 * SLOPE_STEP_DB)

    def balance(self, start_db: float) -> float | None:
        """Return the difference at which the senders' excess adds up to nothing; None where there is none. [dB]"""
        from scipy.optimize import brentq

        def total(difference_db: float) -> float:
            return float(self.excess_db(difference_db).sum())

        near_db, at_start = start_db, total(start_db)
        if at_start == 0.0:
            return start_db if self.heights(start_db).counts.any() else None
        step_db = SEARCH_STEP_DB if at_start > 0 else -SEARCH_STEP_DB
        while abs(near_db - start_db) < FARTHEST_DB:
            far_db = near_db + step_db
            there = total(far_db)
            if there == 0.0 and not self.heights(far_db).counts.any():
                return None
            if there * at_start <= 0:
                return float(brentq(total, near_db, far_db, xtol=CLOSE_DB))
            near_db = far_db
        return None
