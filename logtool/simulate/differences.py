"""The true differences between antennas and between receivers, for the estimand of docs/simulate.md."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations
from typing import Any

import numpy as np

from logtool.simulate.cast import Cast
from logtool.simulate.laws import BoolArray, FloatArray, IntArray
from logtool.simulate.receiving import Received, mean_on_db
from logtool.simulate.sending import Sent
from logtool.simulate.timeline import Timeline

WEIGHT_MOST = 10
"""A sender weighs as much as it has transmissions heard by at least one side, and this at most."""
TRUTH_DECIMALS = 6


@dataclass(frozen=True)
class Sides:
    """Two sides: expected difference of each transmission, which count, and by which side each was heard."""

    this: dict[str, str]
    that: dict[str, str]
    design: str
    difference_db: FloatArray
    counted: BoolArray
    heard_this: BoolArray
    heard_that: BoolArray


def weighted_difference(
    sender: IntArray, difference_db: FloatArray, senders: int
) -> tuple[IntArray, FloatArray, float]:
    """Return the estimand over transmissions that at least one side heard.

    Parameters
    ----------
    sender, difference_db : arrays of shape (n,)
        Each transmission's sender, as a number, and the difference to be expected of it. [dB]
    senders : int
        How many senders there are.

    Returns
    -------
    n : array of shape (senders,)
        Transmissions of each sender.
    mean_db : array of shape (senders,)
        Mean difference of each; NaN where it has none.
    difference_db : float
        Mean over senders, each weighted by min(n, 10); NaN without any.

    Examples
    --------
    >>> n, mean_db, whole_db = weighted_difference(np.array([0] * 30 + [1] * 5), np.array([3.0] * 30 + [0.0] * 5), 2)
    >>> whole_db
    2.0
    """
    n = np.bincount(sender, minlength=senders).astype(np.int64)
    with np.errstate(invalid="ignore"):
        mean_db = np.bincount(sender, weights=difference_db, minlength=senders) / n
    weight = np.minimum(n, WEIGHT_MOST)
    any_heard = weight > 0
    whole = (
        float(np.average(mean_db[any_heard], weights=weight[any_heard])) if any_heard.any() else float("nan")
    )
    return n, mean_db, whole


def sides_of(
    timelines: tuple[Timeline, ...],
    cast: Cast,
    sent: Sent,
    got: tuple[Received, ...],
    levels_db: tuple[FloatArray, ...],
) -> list[Sides]:
    """Return all pairs of receivers, and of each receiver's antennas, in the order of the scenario."""
    pairs = []
    for a, b in combinations(range(len(timelines)), 2):
        pairs.append(Sides(
            this={"receiver": timelines[a].receiver.name}, that={"receiver": timelines[b].receiver.name},
            design="together", difference_db=got[a].mean_db - got[b].mean_db,
            counted=got[a].hearing & got[b].hearing, heard_this=got[a].heard, heard_that=got[b].heard,
        ))  # fmt: skip
    for which, (timeline, one) in enumerate(zip(timelines, got, strict=True)):
        name = timeline.receiver.name
        many = range(len(timeline.antennas)) if len(timeline.antennas) > 1 else ()
        on_each = [mean_on_db(timeline, cast, which, sent, levels_db[which], number) for number in many]
        for a, b in combinations(many, 2):
            pairs.append(Sides(
                this={"receiver": name, "antenna": timeline.antennas[a].name},
                that={"receiver": name, "antenna": timeline.antennas[b].name},
                design="apart" if timeline.receiver.order == "nights" else "in-turn",
                difference_db=on_each[a] - on_each[b], counted=one.hearing,
                heard_this=one.heard & (one.antenna == a), heard_that=one.heard & (one.antenna == b),
            ))  # fmt: skip
    return pairs


def told_difference(sides: Sides, cast: Cast, sent: Sent) -> dict[str, Any]:
    """Return a pair's true difference and its counts as the truth tells them."""
    this, that = sides.heard_this & sides.counted, sides.heard_that & sides.counted
    either = this | that
    senders = len(cast.call)
    n, mean_db, whole = weighted_difference(sent.sender[either], sides.difference_db[either], senders)
    everybody = weighted_difference(sent.sender, sides.difference_db, senders)[1]
    sending = ~np.isnan(everybody)
    heard = np.flatnonzero(n).tolist()
    return {
        "this": sides.this,
        "that": sides.that,
        "design": sides.design,
        "difference_db": rounded(whole),
        "difference_all_senders_db": rounded(
            float(everybody[sending].mean()) if sending.any() else float("nan")
        ),
        "senders": len(heard),
        "heard_by_either": int(either.sum()),
        "heard_by_both": int((this & that).sum()),
        "only_this": int((this & ~that).sum()),
        "only_that": int((that & ~this).sum()),
        "by_sender": [
            {"sender": cast.call[i], "heard": int(n[i]), "difference_db": rounded(float(mean_db[i]))}
            for i in heard
        ],
    }


def rounded(number: float) -> float | None:
    """Return a number as the truth holds it: rounded, None for NaN, never -0."""
    return None if np.isnan(number) else round(float(number), TRUTH_DECIMALS) + 0.0
