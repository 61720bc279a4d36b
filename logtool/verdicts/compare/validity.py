"""Whether the assumptions of the design `together` hold, as far as its table can tell.

A check that fails does not mend the result; it says that the interval may be wrong by more than it admits.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from logtool.verdicts.compare.clusters import Sureness, sureness
from logtool.verdicts.compare.levels import Heights, Levels
from logtool.verdicts.compare.thresholds import Fit
from logtool.verdicts.compare.transmissions import Floats, effective_number

# All limits are our choice, set on invented tables.
FEWEST_SENDERS = 12.0  # effective ones; under it coverage was too low
FEWEST_DEGREES = 5.0  # of freedom: fewer when one sender or two decide
LEAST_MEASURED_SHARE = 0.5
MOST_ENDED_SHARE = 0.5  # of a side's values that stand at the upper end of its scale
STEEPEST = 0.003  # slope of the log of the likelihood per transmission where the search for thresholds ended
SURE = 0.01  # p-value under which an assumption that can be tested is given up
HIGHER_FLOOR_DB = 4.0
FARTHEST_BY_FLOOR_DB = 0.3  # a smaller difference between two floors does not matter, however sure it is
MOST_MISSED_SHARE = 0.1  # of what is strong
FEWEST_ROWS = 3  # pairs of a sender, for its own spread


@dataclass(frozen=True)
class Check:
    """One assumption: whether it holds, the figure that says so, and what the figure is."""

    name: str
    holds: bool
    size: float
    why: str


@dataclass(frozen=True)
class Found:
    """What was found, for the checks to look at."""

    levels: Levels
    fit: Fit
    difference_db: float
    excess_db: Floats
    weights: Floats
    sure: Sureness
    measured_share: float

    @cached_property
    def heights(self) -> Heights:
        """The heights above the floor, with the difference taken off."""
        return self.levels.heights(self.difference_db)


def too_little(pairs: int) -> Check:
    """Return the check that fails where nothing can be estimated."""
    return Check("too-little", False, float(pairs), f"{pairs} transmissions heard by both tell no difference")


def check_assumptions(found: Found) -> tuple[Check, ...]:
    """Return the checks of a result, in a fixed order."""
    return (
        _fit(found),
        _senders(found),
        _degrees(found),
        _measured(found),
        _ended(found),
        _spread(found),
        _strength(found),
        _floor(found),
        _missed(found),
    )


def _fit(found: Found) -> Check:
    slope = found.fit.steepest
    return Check("no-thresholds", slope <= STEEPEST, slope, "the search for the thresholds found no end")


def _senders(found: Found) -> Check:
    number = effective_number(found.levels.heard.per_sender)
    why = f"as many equally active senders as {number:.1f}; {FEWEST_SENDERS:.0f} are needed"
    return Check("few-senders", number >= FEWEST_SENDERS, number, why)


def _degrees(found: Found) -> Check:
    degrees = found.sure.degrees_of_freedom
    return Check(
        "few-degrees",
        degrees >= FEWEST_DEGREES,
        degrees,
        f"{degrees:.1f} degrees of freedom: a few senders decide",
    )


def _measured(found: Found) -> Check:
    share = found.measured_share
    why = f"{share:.0%} of the senders' weight lies where both sides decode nearly all"
    return Check("weak-senders", share >= LEAST_MEASURED_SHARE, share, why)


def _ended(found: Found) -> Check:
    share = max(scale.share_high for scale in found.levels.scales)
    why = f"{share:.0%} of a side's SNR stand at the upper end of its scale"
    return Check("ended-scale", share <= MOST_ENDED_SHARE, share, why)


def _tested(name: str, size: float, sure: Sureness | None, why: str) -> Check:
    """Return the check of a figure that should be 0; it holds where the figure cannot be told from 0."""
    return Check(name, sure is None or sure.p_value(size) >= SURE, size, why)


def _spread(found: Found) -> Check:
    """Two sides spread alike exactly where a pair's sum says nothing of its difference (Pitman and Morgan)."""
    heard, on = found.levels.heard, found.heights.inside
    rows = heard.counted(on)
    on = on & (rows[heard.sender] >= FEWEST_ROWS)
    rows = np.maximum(rows, 1)

    def centred(values: Floats) -> Floats:
        kept = np.where(on, values, 0.0)
        return np.where(on, kept - (heard.summed(kept) / rows)[heard.sender], 0.0)

    apart_db, sum_db = centred(heard.this_db - heard.that_db), centred(heard.this_db + heard.that_db)
    weight = found.heights.weight
    products, squares = heard.summed(weight * apart_db * sum_db), heard.summed(weight * sum_db**2)
    whole = float(squares.sum())
    slope = float(products.sum()) / whole if whole else 0.0
    why = f"the difference changes by {2 * slope:+.2f} dB for each dB of level: one side spreads more"
    return _tested("unequal-spread", slope, sureness(products - slope * squares, squares), why)


def _strength(found: Found) -> Check:
    """Whether strong senders' differences are unlike weak ones'."""
    heard, heights = found.levels.heard, found.heights
    rows = np.maximum(heard.counted(heights.counts), 1)
    level_db = heard.summed((heights.this_db + heights.that_db) / 2) / rows
    weights = np.maximum(found.weights, 0.0)
    from_mean_db = level_db - float(np.sum(weights * level_db) / weights.sum())
    squares = weights * from_mean_db**2
    whole = float(squares.sum())
    slope = float(np.sum(from_mean_db * found.excess_db)) / whole if whole else 0.0
    why = f"senders that are 1 dB stronger differ by {slope:+.2f} dB more"
    rest = from_mean_db * found.excess_db - slope * squares
    return _tested("depends-on-strength", slope, sureness(rest, squares), why)


def _floor(found: Found) -> Check:
    """Whether a higher floor says the same: it does not where the thresholds have another shape."""
    name = "depends-on-floor"
    higher = replace(found.levels, raised_db=HIGHER_FLOOR_DB)
    other_db = higher.balance(found.difference_db)
    if other_db is None:
        return Check(name, True, 0.0, "too few transmissions above a higher floor to tell")
    weights, whole = higher.weights(other_db), float(found.weights.sum())
    if weights.sum() <= 0:
        return Check(name, True, 0.0, "too few transmissions above a higher floor to tell")
    apart_db = other_db - found.difference_db
    excess = higher.excess_db(other_db) / float(weights.sum()) - found.excess_db / whole
    sure = sureness(excess, np.maximum(found.weights, 0.0) / whole)
    why = f"above a floor {HIGHER_FLOOR_DB:.0f} dB higher the difference is {apart_db:+.2f} dB more"
    holds = sure is None or abs(apart_db) <= FARTHEST_BY_FLOOR_DB or sure.p_value(apart_db) >= SURE
    return Check(name, holds, apart_db, why)


def _missed(found: Found) -> Check:
    """Whether one side misses what is far too strong to be missed."""
    shares = [threshold.missed_share for threshold in found.levels.thresholds]
    why = f"what is strong: this side misses {shares[0]:.1%} of it, that side {shares[1]:.1%}"
    return Check("missed-strong", max(shares) <= MOST_MISSED_SHARE, max(shares), why)
