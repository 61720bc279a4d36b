"""Pieces of a likelihood in which some values are only known to lie below or above a limit.

Values scatter normally. Each piece gives the log of its likelihood and that log's slopes, one number for each
value, so that a model is a sum of pieces and its slopes follow by the chain rule.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from logtool.verdicts.compare.transmissions import Floats

HALF_LOG_2PI = 0.5 * float(np.log(2 * np.pi))


class Piece(NamedTuple):
    """The log of a likelihood, and its slopes by mean, by the log of the spread and by the log of the width."""

    log_likelihood: Floats
    by_mean: Floats
    by_log_sd: Floats
    by_log_width: Floats


def _floats(values: ArrayLike) -> Floats:
    return np.asarray(values, dtype=float)


def hazard(z: ArrayLike) -> Floats:
    """Return the standard normal density over the probability below: the slope of log P(Z < z).

    Computed from the log of the probability, so that it stays right far below, where both are nearly 0.

    Parameters
    ----------
    z : array
        Limits, in standard deviations.

    Returns
    -------
    array
        Of the shape of z; the mean of a standard normal value known to lie below z is minus this.

    Examples
    --------
    >>> round(float(hazard(0.0)), 6)
    0.797885
    """
    return _log_below(_floats(z))[1]


def _log_below(z: Floats) -> tuple[Floats, Floats]:
    """Return log P(Z < z) of a standard normal value and its slope."""
    from scipy.special import log_ndtr

    log_chance = log_ndtr(z)
    return log_chance, np.exp(-0.5 * z**2 - HALF_LOG_2PI - log_chance)


def seen(value: ArrayLike, mean: ArrayLike, sd: float) -> Piece:
    """Return the piece of values that are known."""
    z = (_floats(value) - _floats(mean)) / sd
    return Piece(-0.5 * z**2 - HALF_LOG_2PI - np.log(sd), z / sd, z**2 - 1, np.zeros_like(z))


def below(limit: ArrayLike, mean: ArrayLike, sd: float, width: ArrayLike = 0.0) -> Piece:
    """Return the piece of values that are only known to lie below a limit, which may be soft.

    The trap: a soft limit is one that itself scatters normally, anew for each value. That widens the spread
    and nothing else, because the difference of two normal values is normal.

    Parameters
    ----------
    limit, mean : array
        Centre of the limit and mean of the values.
    sd : float
        Spread of the values.
    width : array
        Spread of the limit; 0 is a hard one.

    Returns
    -------
    Piece
        The slope by the limit is minus that by the mean.

    Examples
    --------
    >>> float(np.exp(below(0.0, 0.0, 3.0, width=4.0).log_likelihood))
    0.5...

    References
    ----------
    J. Tobin, Econometrica 26 (1958) 24-36, doi:10.2307/1907382 (from memory).
    """
    soft = _floats(width)
    whole = np.hypot(sd, soft)
    z = (_floats(limit) - _floats(mean)) / whole
    log_chance, slope = _log_below(z)
    return Piece(
        log_chance,
        -slope / whole,
        -slope * z * (sd / whole) ** 2,
        -slope * z * (soft / whole) ** 2,
    )


def above(limit: ArrayLike, mean: ArrayLike, sd: float) -> Piece:
    """Return the piece of values that are only known to lie above a limit, as where a scale ends."""
    turned = below(-_floats(limit), -_floats(mean), sd)
    return turned._replace(by_mean=-turned.by_mean)


def decoded(value: ArrayLike, centre: ArrayLike, width: ArrayLike) -> Piece:
    """Return the piece of values that were decoded although the threshold is soft; its mean is the centre."""
    soft = _floats(width)
    z = (_floats(value) - _floats(centre)) / soft
    log_chance, slope = _log_below(z)
    return Piece(log_chance, -slope / soft, np.zeros_like(z), -slope * z)
