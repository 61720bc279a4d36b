"""The difference of two that heard the same transmissions, in dB, and how sure it is."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from logtool.verdicts.compare.clusters import Sureness, sureness, two_ways
from logtool.verdicts.compare.levels import Levels
from logtool.verdicts.compare.missed import missed_though_strong, with_missed
from logtool.verdicts.compare.scales import find_ends
from logtool.verdicts.compare.thresholds import (
    CENTRE,
    LOG_WIDTH,
    PARAMETERS,
    PER_SIDE,
    Fit,
    Threshold,
    fit_thresholds,
)
from logtool.verdicts.compare.transmissions import (
    MOST_PER_SENDER,
    Counts,
    Floats,
    Transmissions,
    capped_weights,
    effective_number,
)
from logtool.verdicts.compare.validity import Check, Found, check_assumptions, too_little

LEVEL = 0.95  # of the interval; design, section 5
# Fewer transmissions that both heard, within their scales, tell no difference; our choice.
FEWEST_PAIRS = 10
PARAMETER_STEP = 0.25  # of thresholds, for their part in the result; SNR comes in whole dB
MISSED_STEP = 0.01  # of missed shares, the same


@dataclass(frozen=True)
class Together:
    """What the design `together` says; numbers are None where the table holds too little.

    Parameters
    ----------
    difference_db, low_db, high_db : float or None
        This minus that, and its 95 % interval.
    p_value : float or None
        For no difference at all; under 0.05 exactly where the interval leaves out 0.
    degrees_of_freedom : float or None
        Of the t distribution that the interval uses.
    thresholds : tuple of Threshold or None
        Of this side and of that.
    spread_db : float or None
        How far one transmission's SNR on one side scatters about what the other side's says.
    senders, effective_senders
        Senders in the table, and of how many equally active ones they are worth.
    measured_share : float
        The share of the senders' weight that lies where both sides decode nearly all.
    checks : tuple of Check
        The assumptions, and whether they hold.
    """

    difference_db: float | None
    low_db: float | None
    high_db: float | None
    p_value: float | None
    degrees_of_freedom: float | None
    thresholds: tuple[Threshold, Threshold] | None
    spread_db: float | None
    transmissions: int
    pairs: int
    only_this: int
    only_that: int
    senders: int
    effective_senders: float
    measured_share: float
    checks: tuple[Check, ...]

    @property
    def sound(self) -> bool:
        """Whether every assumption holds as far as the table can tell."""
        return all(check.holds for check in self.checks)


def estimate(heard: Transmissions) -> Together:
    """Return by how many dB this side hears the same transmissions better than that side, with its interval.

    It is the mean over senders of the difference of their SNR in the same slot, each weighted by its
    transmissions, ten at most, that reach above a floor common to both sides: see `levels`. The senders' own
    differences are taken as a sample, so the interval speaks of senders in general and is never narrower than
    their differences allow. Where the table gives spells of time, they are taken as a sample too.

    The trap: the mean over the pairs that both heard leaves out what the weaker side missed, and so makes the
    difference too small. Another: the differences of senders too weak for both sides to decode most of what
    they send are not seen; that they are like those of the others is assumed.

    Parameters
    ----------
    heard : Transmissions
        300 to 3000 of them, of 25 senders or more, are what the interval was tried on.

    Examples
    --------
    >>> rng = np.random.default_rng(1)
    >>> sender = np.repeat(np.arange(40), 20)
    >>> level_db = np.repeat(rng.normal(-12, 5, 40), 20) + rng.normal(0, 4, 800)
    >>> sides = [np.round(level_db + better + rng.normal(0, 2, 800)) for better in (3, 0)]
    >>> this_db, that_db = (np.where(side > -20, side, np.nan) for side in sides)
    >>> on = ~(np.isnan(this_db) & np.isnan(that_db))
    >>> found = estimate(Transmissions(sender[on], this_db[on], that_db[on]))
    >>> found.low_db < 3 < found.high_db
    True
    """
    nothing = _nothing(heard)
    scales = find_ends(heard.this_db[heard.by_this]), find_ends(heard.that_db[heard.by_that])
    # NaN is on neither side of an end.
    if np.sum((heard.this_db < scales[0].high_db) & (heard.that_db < scales[1].high_db)) < FEWEST_PAIRS:
        return nothing
    fit = fit_thresholds(heard, capped_weights(heard.sender, heard.per_sender), scales)
    levels = Levels(heard, fit.thresholds(fit.parameters), scales)
    near_db = levels.balance(fit.difference_db)
    if near_db is None:
        return nothing
    shares, missed = missed_though_strong(levels, near_db, fit.sd_db)
    levels = with_missed(levels, shares)
    difference_db = levels.balance(near_db)
    if difference_db is None:
        return nothing
    excess_db = levels.excess_db(difference_db) + _through_thresholds(levels, fit, missed, difference_db)
    heights, weights = levels.heights(difference_db), levels.weights(difference_db)
    sure = sureness(excess_db, weights, heard.summed(heights.excess_db**2))
    if sure is not None and heard.spell is not None:
        sure = _over_spells(
            sure, heard.spell, heights.excess_db, levels.row_weights(difference_db), heard.sender
        )
    if sure is None:
        return nothing
    low_db, high_db = sure.interval(difference_db, LEVEL)
    measured = float(np.minimum(heard.counted(heights.counts), MOST_PER_SENDER).sum())
    share = measured / float(np.minimum(heard.per_sender, MOST_PER_SENDER).sum())
    found = Found(levels, fit, difference_db, excess_db, weights, sure, share)
    return replace(
        nothing,
        difference_db=difference_db,
        low_db=low_db,
        high_db=high_db,
        p_value=sure.p_value(difference_db),
        degrees_of_freedom=sure.degrees_of_freedom,
        thresholds=levels.thresholds,
        spread_db=fit.sd_db,
        measured_share=share,
        checks=check_assumptions(found),
    )


def _through_thresholds(levels: Levels, fit: Fit, missed: Floats, difference_db: float) -> Floats:
    """Return what each sender does to the sum of the excesses by moving thresholds and missed shares. [dB]"""

    def slope(lower: Levels, upper: Levels, apart: float) -> float:
        moved_db = upper.excess_db(difference_db).sum() - lower.excess_db(difference_db).sum()
        return float(moved_db) / apart

    shares = np.array([threshold.missed_share for threshold in levels.thresholds])
    through = np.zeros(len(levels.heard.per_sender))
    for at in (CENTRE, LOG_WIDTH, CENTRE + PER_SIDE, LOG_WIDTH + PER_SIDE):
        step = np.zeros(PARAMETERS)
        step[at] = PARAMETER_STEP
        lower, upper = (
            with_missed(replace(levels, thresholds=fit.thresholds(parameters)), shares)
            for parameters in (fit.parameters - step, fit.parameters + step)
        )
        through += fit.influence[:, at] * slope(lower, upper, 2 * PARAMETER_STEP)
    for side in range(2):
        more = shares + MISSED_STEP * (np.arange(2) == side)
        through += missed[:, side] * slope(levels, with_missed(levels, more), MISSED_STEP)
    return through


def _over_spells(
    sure: Sureness, spell: Counts, excess_db: Floats, weights: Floats, sender: Counts
) -> Sureness | None:
    """Return the sureness when spells of time are a sample too, as the senders are; None with fewer than two."""
    excesses_db, spell_weights, squares = (
        np.bincount(spell, column).astype(float) for column in (excess_db, weights, excess_db**2)
    )
    by_spell = sureness(excesses_db, spell_weights, squares)
    if by_spell is None:
        return None
    crossed = np.unique(np.stack([sender, spell]), axis=1, return_inverse=True)[1].ravel()
    crossed_error = np.sqrt(np.sum(np.bincount(crossed, excess_db) ** 2)) / weights.sum()
    return two_ways(sure, by_spell, float(crossed_error))


def _nothing(heard: Transmissions) -> Together:
    """Return what is said of a table that holds too little: how much it holds."""
    pairs = int(np.sum(heard.by_this & heard.by_that))
    senders = heard.per_sender[heard.per_sender > 0]
    return Together(
        difference_db=None,
        low_db=None,
        high_db=None,
        p_value=None,
        degrees_of_freedom=None,
        thresholds=None,
        spread_db=None,
        transmissions=len(heard),
        pairs=pairs,
        only_this=int(np.sum(heard.by_this)) - pairs,
        only_that=int(np.sum(heard.by_that)) - pairs,
        senders=len(senders),
        effective_senders=effective_number(senders),
        measured_share=0.0,
        checks=(too_little(pairs),),
    )
