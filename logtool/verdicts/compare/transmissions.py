"""Transmissions that two sides could hear: the table that the design `together` starts from."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from logtool.errors import UsageError

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Counts = NDArray[np.int64]

# A sender counts for so many transmissions at most, so that the busiest do not decide alone; design, section 5.
MOST_PER_SENDER = 10


def effective_number(sizes: Floats | Counts) -> float:
    """Return how many clusters of equal size vary as much as these: the square of the sum over the sum of squares.

    Parameters
    ----------
    sizes : array, shape (n,)
        Sizes or weights of the clusters, none below 0.

    Returns
    -------
    float
        At most the number of sizes; 0 where all are 0.

    Examples
    --------
    >>> effective_number(np.array([5, 5, 5])), effective_number(np.array([100, 1, 1]))
    (3.0, 1.040...)

    References
    ----------
    L. Kish, Survey Sampling (1965), section 11.7 (from memory).
    """
    squares = float(np.sum(np.square(sizes, dtype=float)))
    return float(np.sum(sizes, dtype=float)) ** 2 / squares if squares else 0.0


@dataclass(frozen=True)
class Transmissions:
    """Transmissions of which at least one of two sides decoded each.

    What neither side decoded leaves no line, so such a transmission is not in the table.

    Parameters
    ----------
    sender : array of int, shape (n,)
        Number of the sender of each transmission, from 0.
    this_db, that_db : array, shape (n,)
        SNR by either side, NaN where that side did not decode it.
    spell : array of int, shape (n,), optional
        Number of the spell of time of each transmission, from 0: a night or a few hours, in which a side's noise
        may be unlike that of another. Without it the interval speaks of times like these only.

    Raises
    ------
    UsageError
        Columns of different lengths, or a transmission that neither side decoded.
    """

    sender: Counts
    this_db: Floats
    that_db: Floats
    spell: Counts | None = None

    def __post_init__(self) -> None:
        lengths = {len(column) for column in (self.sender, self.this_db, self.that_db)}
        if self.spell is not None:
            lengths.add(len(self.spell))
        if len(lengths) > 1:
            raise UsageError(
                f"transmissions: columns of {' and '.join(map(str, sorted(lengths)))} rows; "
                "give columns of one length"
            )
        unheard = np.flatnonzero(np.isnan(self.this_db) & np.isnan(self.that_db))
        if unheard.size:
            raise UsageError(f"transmissions, row {unheard[0]}: neither side decoded it; leave such rows out")

    def __len__(self) -> int:
        return len(self.sender)

    @cached_property
    def by_this(self) -> Bools:
        """Which of them this side decoded."""
        return ~np.isnan(self.this_db)

    @cached_property
    def by_that(self) -> Bools:
        """Which of them that side decoded."""
        return ~np.isnan(self.that_db)

    @cached_property
    def per_sender(self) -> Counts:
        """Transmissions of each sender."""
        return self.counted(np.ones(len(self), dtype=np.bool_))

    def counted(self, which: Bools) -> Counts:
        """Return how many of the chosen transmissions each sender has."""
        senders = int(self.sender.max()) + 1 if len(self) else 0
        return np.bincount(self.sender[which], minlength=senders).astype(np.int64)

    def summed(self, values: Floats) -> Floats:
        """Return the sum of a column over each sender's transmissions."""
        return np.bincount(self.sender, values, minlength=len(self.per_sender)).astype(float)


def capped_weights(sender: Counts, per_sender: Counts) -> Floats:
    """Return a weight for each transmission, so that none of its senders weighs more than `MOST_PER_SENDER`."""
    return np.minimum(1.0, MOST_PER_SENDER / np.maximum(per_sender, 1))[sender]
