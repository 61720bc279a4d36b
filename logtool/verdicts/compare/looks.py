"""Other looks at the same transmissions, which use other parts of them and assume other things.

They stand beside the difference and do not replace it: signs throw the dB away, and means over pairs that both
heard leave out what the weaker side missed, so that they come out too near to 0.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logtool.verdicts.compare.transmissions import Floats, Transmissions

LEVEL = 0.95  # of the interval, at least


@dataclass(frozen=True)
class Middle:
    """The Hodges-Lehmann estimate with an exact interval, and the level that the interval really has."""

    estimate: float
    low: float | None
    high: float | None
    level: float | None


@dataclass(frozen=True)
class Looks:
    """Senders that either side decoded more often, what chance says of that, and the middle of senders' means."""

    more_by_this: int
    more_by_that: int
    sign_p_value: float
    pairs_db: Middle | None


def mcnemar(more: int, less: int) -> float:
    """Return the exact two-sided p-value of so many cases one way and so many the other.

    The trap: cases that went the same way on both sides do not enter.

    Examples
    --------
    >>> mcnemar(0, 6)
    0.03125

    References
    ----------
    Q. McNemar, Psychometrika 12 (1947) 153-157, doi:10.1007/BF02295996 (from memory); the exact form is the sign
    test.
    """
    from scipy.stats import binomtest

    return float(binomtest(more, more + less).pvalue) if more + less else 1.0


def signed_rank_table(values: int) -> Floats:
    """Return P(W <= w) of Wilcoxon's signed rank sum, for w from 0 to n(n + 1)/2.

    Parameters
    ----------
    values : int
        How many values, all different in size and none 0.

    Returns
    -------
    array, shape (n(n + 1)/2 + 1,)

    Examples
    --------
    >>> signed_rank_table(2)
    array([0.25, 0.5 , 0.75, 1.  ])

    References
    ----------
    F. Wilcoxon, Biometrics Bulletin 1 (1945) 80-83, doi:10.2307/3001968 (from memory).
    """
    chances = np.zeros(values * (values + 1) // 2 + 1)
    chances[0] = 1.0
    for rank in range(1, values + 1):
        with_rank = np.zeros_like(chances)
        with_rank[rank:] = chances[:-rank]
        chances = (chances + with_rank) / 2
    return np.minimum(np.cumsum(chances), 1.0)


def hodges_lehmann(values: Floats, level: float = LEVEL) -> Middle:
    """Return the median of all averages of two values (or of one with itself), and its exact interval.

    The trap: with fewer than six values no interval reaches 95 %, so there is none.

    Parameters
    ----------
    values : array, shape (n,)
        At least one, spread evenly to both sides of their middle.
    level : float
        The interval holds the middle with at least this chance.

    Examples
    --------
    >>> hodges_lehmann(np.array([1.0, 2.0, 6.0])).estimate
    2.75

    References
    ----------
    J. L. Hodges and E. L. Lehmann, Annals of Mathematical Statistics 34 (1963) 598-611,
    doi:10.1214/aoms/1177704172 (from memory).
    """
    first, second = np.triu_indices(len(values))
    averages = np.sort((values[first] + values[second]) / 2)
    estimate = float(np.median(averages))
    table = signed_rank_table(len(values))
    left_out = int(np.searchsorted(table, (1 - level) / 2, side="right")) - 1
    if left_out < 0:
        return Middle(estimate, None, None, None)
    reached = float(1 - 2 * table[left_out])
    return Middle(estimate, float(averages[left_out]), float(averages[-1 - left_out]), reached)


def look(heard: Transmissions) -> Looks:
    """Return the other looks: a sign for each sender, and each sender's mean over pairs. [dB]"""
    both = heard.by_this & heard.by_that
    more = heard.counted(heard.by_this & ~both) - heard.counted(heard.by_that & ~both)
    by_this, by_that = int(np.sum(more > 0)), int(np.sum(more < 0))
    pairs = heard.counted(both)
    sums_db = heard.summed(np.where(both, heard.this_db - heard.that_db, 0.0))
    means_db = sums_db[pairs > 0] / pairs[pairs > 0]
    return Looks(
        by_this, by_that, mcnemar(by_this, by_that), hodges_lehmann(means_db) if means_db.size else None
    )
