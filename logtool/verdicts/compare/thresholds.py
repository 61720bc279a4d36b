"""From which SNR on each side decodes: soft thresholds, from what one side heard and the other missed.

What one side decoded predicts what the other would have heard: a normal value on a line through both. Either the
other decoded it too, then its SNR is known, or not, then it is censored below that side's soft threshold. What
neither heard never enters, because each prediction starts from something heard; so nothing is truncated.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from logtool.verdicts.compare.censored import above, below, decoded, seen
from logtool.verdicts.compare.scales import Scale
from logtool.verdicts.compare.transmissions import Bools, Counts, Floats, Transmissions

# The parameters, in this order: the difference, the line's height and slope, the log of the spread about it, then of
# this side and of that the threshold's centre and the log of its width, and the logit of the share missed at any SNR.
DIFFERENCE, HEIGHT, SLOPE, LOG_SD, CENTRE, LOG_WIDTH, LOGIT_MISSED = range(7)
PER_SIDE = 3  # the last three again, for that side
PARAMETERS = 10
# Where the data hardly tell a width: a normal prior on its log, about 1.35 dB, from 0.7 to 2.7 dB; our choice.
# The same of the logit of the share missed at any SNR: about 1.8 %, from 0.4 to 7.5 %; our choice.
PRIORS = {LOG_WIDTH: (0.3, 0.7), LOGIT_MISSED: (-4.0, 1.5)}
ROUNDING_SD_DB = 12**-0.5  # of whole dB: no scatter is smaller
LOWEST_QUANTILE = 0.03  # where the search for a threshold starts, of the SNR that a side decoded
START_SLOPE = 1.0
STEP = 1e-4  # of the parameters, for the curvature
GRADIENT = 3e-4  # where the search ends; the log of the likelihood is per transmission


@dataclass(frozen=True)
class Threshold:
    """The SNR at which a side decodes every other transmission, how softly it begins to [dB], and what it misses."""

    centre_db: float
    width_db: float
    missed_share: float = 0.0  # however strong

    def decodes(self, snr_db: Floats) -> Floats:
        """Return the chance that a transmission of this SNR is decoded."""
        from scipy.special import ndtr

        return np.asarray((1 - self.missed_share) * ndtr((snr_db - self.centre_db) / self.width_db))


@dataclass(frozen=True)
class Fit:
    """The thresholds of both sides, and how much each sender moved them."""

    parameters: Floats
    centre_db: float
    influence: Floats
    steepest: float  # slope that is left where the search ended, per transmission

    @property
    def difference_db(self) -> float:
        """The difference by this likelihood: where the search for the better one starts."""
        return float(self.parameters[DIFFERENCE])

    @property
    def sd_db(self) -> float:
        """How far what one side hears scatters about what the other's SNR says. [dB]"""
        return float(np.hypot(np.exp(self.parameters[LOG_SD]), ROUNDING_SD_DB))

    def thresholds(self, parameters: Floats) -> tuple[Threshold, Threshold]:
        """Return the thresholds of this side and of that, of the fitted parameters or of ones near to them."""
        this, that = (
            Threshold(
                float(parameters[CENTRE + at]) + self.centre_db, float(np.exp(parameters[LOG_WIDTH + at]))
            )
            for at in (0, PER_SIDE)
        )
        return this, that


@dataclass(frozen=True)
class Predictions:
    """One line for each value heard that says something of the other side."""

    known_db: Floats  # what the one side heard
    value_db: Floats  # what the other heard, NaN where it missed it
    by_this: Bools  # the other is this side
    ended: Bools  # the other's value stands at the end of its scale
    weight: Floats
    sender: Counts
    senders: int

    def merged(self) -> Predictions:
        """Return the same with equal lines as one of their joint weight, for SNR comes in whole dB; without senders."""
        missed = np.isnan(self.value_db)
        columns = [self.known_db, np.where(missed, np.inf, self.value_db), self.by_this, self.ended]
        first, which = np.unique(np.stack(columns), axis=1, return_index=True, return_inverse=True)[1:]
        return Predictions(
            self.known_db[first],
            self.value_db[first],
            self.by_this[first],
            self.ended[first],
            np.bincount(which.ravel(), self.weight).astype(float),
            np.zeros(len(first), dtype=np.int64),
            1,
        )

    @cached_property
    def missed(self) -> Bools:
        """Which the other side did not decode."""
        return np.isnan(self.value_db)

    @cached_property
    def known(self) -> Bools:
        """Which the other side decoded at an SNR that its scale can hold."""
        return ~self.missed & ~self.ended

    def scores(self, parameters: Floats) -> tuple[Floats, Floats]:
        """Return the log of the likelihood of each line, and its slopes by the parameters: shape (n, 10)."""
        difference, height, slope = parameters[:LOG_SD]
        free_sd = np.exp(parameters[LOG_SD])
        sd = float(np.hypot(free_sd, ROUNDING_SD_DB))
        shift = np.where(self.by_this, 0.0, difference)
        mean = height + slope * (self.known_db - shift) + np.where(self.by_this, difference, 0.0)
        side = np.where(self.by_this, 0, PER_SIDE)
        centre, width = parameters[CENTRE + side], np.exp(parameters[LOG_WIDTH + side])
        share = 1 / (1 + np.exp(-parameters[LOGIT_MISSED + side]))  # missed at any SNR
        log_likelihood, by_mean, by_log_sd, by_centre, by_log_width = np.zeros((5, len(mean)))

        on = self.known
        piece = seen(self.value_db[on], mean[on], sd)
        log_likelihood[on], by_mean[on], by_log_sd[on] = piece[:3]
        piece = decoded(self.value_db[on], centre[on], width[on])
        log_likelihood[on] += piece.log_likelihood
        by_centre[on], by_log_width[on] = piece.by_mean, piece.by_log_width
        on = self.ended
        piece = above(self.value_db[on], mean[on], sd)
        log_likelihood[on], by_mean[on], by_log_sd[on] = piece[:3]
        log_likelihood += np.log1p(-share)
        by_logit = -share
        on = self.missed
        piece = below(centre[on], mean[on], sd, width[on])
        too_weak = np.exp(piece.log_likelihood)
        missed = share[on] + (1 - share[on]) * too_weak
        part = (1 - share[on]) * too_weak / missed
        log_likelihood[on] = np.log(missed)
        by_mean[on], by_log_sd[on], by_log_width[on] = (part * slope for slope in piece[1:])
        by_centre[on] = -by_mean[on]
        by_logit[on] = share[on] * (1 - share[on]) * (1 - too_weak) / missed

        slopes = np.zeros((len(mean), PARAMETERS))
        slopes[:, DIFFERENCE] = by_mean * np.where(self.by_this, 1.0, -slope)
        slopes[:, HEIGHT] = by_mean
        slopes[:, SLOPE] = by_mean * (self.known_db - shift)
        slopes[:, LOG_SD] = by_log_sd * (free_sd / sd) ** 2
        rows = np.arange(len(mean))
        slopes[rows, CENTRE + side] = by_centre
        slopes[rows, LOG_WIDTH + side] = by_log_width
        slopes[rows, LOGIT_MISSED + side] = by_logit
        return log_likelihood * self.weight, slopes * self.weight[:, None]

    def cost(self, parameters: Floats) -> tuple[float, Floats]:
        """Return what the search makes small, and its slopes: the log of the likelihood with the prior, turned."""
        log_likelihood, slopes = self.scores(parameters)
        total, slope = float(log_likelihood.sum()), slopes.sum(axis=0)
        for first, (middle, sd) in PRIORS.items():
            for at in (first, first + PER_SIDE):
                off = (parameters[at] - middle) / sd
                total -= 0.5 * off**2
                slope[at] -= off / sd
        whole = float(self.weight.sum())
        return -total / whole, -slope / whole

    def curvature(self, parameters: Floats) -> Floats:
        """Return the second derivatives of the cost, shape (10, 10), by differences of its slopes."""
        here = self.cost(parameters)[1]
        square = (
            np.array([self.cost(parameters + step)[1] - here for step in STEP * np.eye(PARAMETERS)]) / STEP
        )
        return (square + square.T) / 2


def predict(
    heard: Transmissions, weight: Floats, scales: tuple[Scale, Scale], centre_db: float
) -> Predictions:
    """Return what each side's values say of the other side, SNR counted from a centre."""
    this_db, that_db = heard.this_db - centre_db, heard.that_db - centre_db
    this_ended = heard.this_db >= scales[0].high_db
    that_ended = heard.that_db >= scales[1].high_db
    from_that = np.flatnonzero(heard.by_that & ~that_ended)
    from_this = np.flatnonzero(heard.by_this & ~this_ended)
    rows = np.concatenate([from_that, from_this])
    by_this = np.arange(len(rows)) < len(from_that)
    return Predictions(
        np.where(by_this, that_db[rows], this_db[rows]),
        np.where(by_this, this_db[rows], that_db[rows]),
        by_this,
        np.where(by_this, this_ended[rows], that_ended[rows]),
        weight[rows],
        heard.sender[rows],
        len(heard.per_sender),
    )


def fit_thresholds(heard: Transmissions, weight: Floats, scales: tuple[Scale, Scale]) -> Fit:
    """Return the soft thresholds of both sides, from the likelihood of what each side's values say of the other.

    The trap: the difference in this fit is a start, not the result. It rests on the scatter being normal.

    Parameters
    ----------
    heard : Transmissions
        Some of them heard by both.
    weight : array, shape (n,)
        Weight of each transmission.
    scales : tuple of Scale
        Ends of this side's scale and of that side's.
    """
    from scipy.optimize import minimize

    both = heard.by_this & heard.by_that
    apart_db = heard.this_db[both] - heard.that_db[both]
    centre_db = float(np.mean(np.concatenate([heard.this_db[heard.by_this], heard.that_db[heard.by_that]])))
    lines = predict(heard, weight, scales, centre_db)
    start = np.zeros(PARAMETERS)
    start[: LOG_SD + 1] = apart_db.mean(), 0.0, START_SLOPE, np.log(max(apart_db.std(), 1.0))
    for side, snr_db in enumerate((heard.this_db[heard.by_this], heard.that_db[heard.by_that])):
        at = PER_SIDE * side
        start[CENTRE + at] = np.quantile(snr_db, LOWEST_QUANTILE) - centre_db
        for first, (middle, _) in PRIORS.items():
            start[first + at] = middle
    merged = lines.merged()
    found = minimize(merged.cost, start, jac=True, method="BFGS", options={"gtol": GRADIENT})
    parameters = np.asarray(found.x, dtype=float)
    slopes = lines.scores(parameters)[1]
    per_sender = np.zeros((lines.senders, PARAMETERS))
    np.add.at(per_sender, lines.sender, slopes)
    bread = np.linalg.pinv(merged.curvature(parameters) * merged.weight.sum())
    return Fit(parameters, centre_db, per_sender @ bread, float(np.max(np.abs(found.jac))))
