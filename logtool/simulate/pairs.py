"""A table of receptions on two sides without any log, for thousands of tries of an estimator."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from logtool.errors import UsageError
from logtool.simulate.cast import activity_of
from logtool.simulate.differences import weighted_difference
from logtool.simulate.laws import FloatArray, IntArray, correlated, with_tails
from logtool.simulate.streams import stream

MOST_SENT = 1000  # for each row: so rarely nothing useful is heard
_SPARE, _GROWTH = 1.1, 10.0  # so many more than seem to be needed are drawn, and so many times more at most
_QUANTITIES = 9


@dataclass(frozen=True, kw_only=True)
class Plan:
    """What a table is made with; `this` and `that` are the two sides.

    Attributes
    ----------
    heard : int
        Transmissions heard by at least one side: the rows.
    senders : int
    activity_tail : float
        Exponent of the senders' unequal activity (Pareto), 0 for equal.
    level_db, level_sd_db : float
        Mean SNR of the senders at `that`, and its spread, normal.
    difference_db, difference_sd_db : float
        True difference, this minus that, and its spread over the senders, normal.
    shared_sd_db, shared_df : float
        Fading of both sides alike; degrees of freedom of a t distribution over 2, 0 for normal.
    own_sd_db : (float, float)
        Fading of each side's own.
    own_df : float
    shared_r, own_r : float
        Correlation of a sender's fading from one transmission to its next, 0 to under 1.
    threshold_db, width_db : (float, float)
        Of each side: half of the messages at this SNR are decoded; standard deviation of that threshold.
    step_db : float
        SNR is rounded to multiples of this; 0 for none.
    lowest_db, highest_db : float
        The scale's ends, to which SNR is clipped.
    """

    heard: int = 1000
    senders: int = 60
    activity_tail: float = 1.5
    level_db: float = -12.0
    level_sd_db: float = 8.0
    difference_db: float = 0.0
    difference_sd_db: float = 0.0
    shared_sd_db: float = 4.0
    shared_df: float = 0.0
    own_sd_db: tuple[float, float] = (2.0, 2.0)
    own_df: float = 0.0
    shared_r: float = 0.0
    own_r: float = 0.0
    threshold_db: tuple[float, float] = (-20.0, -20.0)
    width_db: tuple[float, float] = (1.0, 1.0)
    step_db: float = 1.0
    lowest_db: float = -24.0
    highest_db: float = 20.0

    def __post_init__(self) -> None:
        for name in ("shared_df", "own_df"):
            if 0 < getattr(self, name) <= 2:
                raise UsageError(
                    f"{name} = {getattr(self, name)}: the spread is infinite; give over 2, or 0 for normal"
                )
        for name in ("shared_r", "own_r"):
            if not 0 <= getattr(self, name) < 1:
                raise UsageError(f"{name} = {getattr(self, name)} is no correlation; give 0 to under 1")
        if self.heard < 1 or self.senders < 1:
            raise UsageError(f"heard = {self.heard}, senders = {self.senders}: both are 1 at least")


@dataclass(frozen=True)
class PairTable:
    """One table, an entry a transmission that at least one side heard, in the order of time; and the truth.

    Attributes
    ----------
    sender : array of shape (heard,)
        Number of the sender.
    snr_this, snr_that : arrays of shape (heard,)
        SNR as written [dB]; NaN where that side did not hear it.
    transmission : array of shape (heard,)
        Number among all transmissions sent, rising.
    sent : int
        Transmissions sent up to the last row.
    difference_db : float
        The truth: mean over senders in the table of the true difference, weighted by min(n, 10).
    sender_difference_db, sender_level_db, sender_share : arrays of shape (senders,)
        True difference and mean SNR at `that` of each sender, and its share of all transmissions.
    """

    sender: IntArray
    snr_this: FloatArray
    snr_that: FloatArray
    transmission: IntArray
    sent: int
    difference_db: float
    sender_difference_db: FloatArray = field(repr=False)
    sender_level_db: FloatArray = field(repr=False)
    sender_share: FloatArray = field(repr=False)


def table(plan: Plan, seed: int, number: int = 0) -> PairTable:
    """Return a table of receptions on two sides, with the true difference in dB.

    Transmissions that neither side heard are not in it, as they are in no log: the mean of the differences of
    those that both heard is therefore no fair estimate.

    Parameters
    ----------
    plan : Plan
    seed : int
        0 or more.
    number : int
        Which of many independent tables of the seed.

    Returns
    -------
    PairTable

    Raises
    ------
    UsageError
        Where hardly anything would be heard.

    Examples
    --------
    >>> made = table(Plan(heard=300, difference_db=2.0), seed=1)
    >>> len(made.sender), made.difference_db, bool((np.isnan(made.snr_this) & np.isnan(made.snr_that)).any())
    (300, 2.0, False)
    """
    dice = stream(seed, "pairs", number)
    share = activity_of(plan.senders, plan.activity_tail, dice)
    share = share / share.sum()
    level = plan.level_db + plan.level_sd_db * dice.standard_normal(plan.senders)
    difference = plan.difference_db + plan.difference_sd_db * dice.standard_normal(plan.senders)
    sent = 2 * plan.heard
    while True:
        sender, latent, softness = _sent(plan, (share, level, difference), sent, (seed, number))
        heard = latent + softness > np.array(plan.threshold_db)[:, None]
        rows = np.flatnonzero(heard[0] | heard[1])
        if len(rows) >= plan.heard:
            break
        if sent > MOST_SENT * plan.heard:
            raise UsageError("hardly anything is heard; raise `level_db` or lower `threshold_db`")
        sent = math.ceil(_SPARE * sent * min(plan.heard / max(len(rows), 1), _GROWTH))
    rows = rows[: plan.heard]
    written = latent[:, rows]
    if plan.step_db:
        written = plan.step_db * np.rint(written / plan.step_db)
    written = np.where(heard[:, rows], np.clip(written, plan.lowest_db, plan.highest_db), np.nan)
    own = sender[rows]
    return PairTable(
        sender=own,
        snr_this=written[0],
        snr_that=written[1],
        transmission=rows,
        sent=int(rows[-1]) + 1,
        difference_db=weighted_difference(own, difference[own], plan.senders)[2],
        sender_difference_db=difference,
        sender_level_db=level,
        sender_share=share,
    )


def _sent(
    plan: Plan, senders: tuple[FloatArray, FloatArray, FloatArray], sent: int, which: tuple[int, int]
) -> tuple[IntArray, FloatArray, FloatArray]:
    """Senders, and both sides' SNR and softness of the threshold, of the first so many transmissions.

    Each quantity has a stream of its own, so a longer try begins with the shorter one: nothing depends on how
    many tries it took.
    """
    share, level, difference = senders
    seed, number = which
    dice = [stream(seed, "pairs", number, quantity) for quantity in range(_QUANTITIES)]
    sender = np.searchsorted(np.cumsum(share)[:-1], dice[0].random(sent), side="right")
    shared = _fading(sender, plan.shared_r, plan.shared_df, (dice[1], dice[2]))
    own = [_fading(sender, plan.own_r, plan.own_df, (dice[3 + side], dice[5 + side])) for side in range(2)]
    common = level[sender] + plan.shared_sd_db * shared
    sides = [common + sd_db * fade for sd_db, fade in zip(plan.own_sd_db, own, strict=True)]
    softness = [plan.width_db[side] * dice[7 + side].standard_normal(sent) for side in range(2)]
    return sender, np.stack([sides[0] + difference[sender], sides[1]]), np.stack(softness)


def _fading(
    sender: IntArray, r: float, df: float, dice: tuple[np.random.Generator, np.random.Generator]
) -> FloatArray:
    normal = dice[0].standard_normal(len(sender))
    if r:
        order = np.argsort(sender, kind="stable")
        after = np.concatenate(([False], np.diff(sender[order]) == 0))
        mixed = correlated(normal[order], np.where(after, r, 0.0))
        normal[order] = mixed
    return with_tails(normal, df, dice[1])
