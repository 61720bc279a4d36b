"""The laws of chance: fading with tails and autocorrelation, soft thresholds, and what is to be expected of them."""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]
BoolArray = NDArray[np.bool_]

US_PER_S = 1_000_000
_FORGOTTEN = 1e-9  # a correlation below this is none
_TABLE_END, _TABLE_STEP = 9.0, 0.001  # linear interpolation is off by at most 3e-8
_MIXTURE_POINTS = 64
_MARGINS, _NEAR_DB, _FAR_DB = 2001, 20.0, 1000.0
_MIXTURE_REACH, _MIXTURE_LEFT = 8.0, 32.0  # what lies beyond has a probability below 1e-6


def correlated(draws: FloatArray, r: FloatArray) -> FloatArray:
    """Return normal draws (mean 0, deviation 1) of which each hangs together with the one before.

    `x[i] = r[i] x[i-1] + sqrt(1 - r[i]^2) draws[i]`, an autoregression of the first order whose steps may be of
    unequal length; where r is 0 a new series begins.

    Parameters
    ----------
    draws, r : arrays of shape (n,)
        Independent standard normal draws, and correlations in [0, 1).

    Returns
    -------
    array of shape (n,)

    Examples
    --------
    >>> correlated(np.array([1.0, 1.0]), np.array([0.0, 0.6])).round(3).tolist()
    [1.0, 1.4]
    """
    kept = np.where(r < _FORGOTTEN, 0.0, r)
    mixed = np.sqrt(1.0 - kept**2) * draws
    begins = np.flatnonzero(kept == 0.0)
    if begins.size == len(draws):
        return mixed
    depth = np.arange(len(draws)) - begins[np.searchsorted(begins, np.arange(len(draws)), side="right") - 1]
    by_depth = np.argsort(depth, kind="stable")
    ends = np.cumsum(np.bincount(depth))
    for start, end in zip(ends[:-1].tolist(), ends[1:].tolist(), strict=True):
        at = by_depth[start:end]
        mixed[at] += kept[at] * mixed[at - 1]
    return mixed


def correlations(at_us: IntArray, group: IntArray, correlation_s: float) -> FloatArray:
    """Return each instant's correlation with the one before it in its group, exp(-gap / correlation_s); 0 at first.

    Parameters
    ----------
    at_us, group : arrays of shape (n,)
        Sorted by group, then time.
    correlation_s : float
        0 for none.
    """
    r = np.zeros(len(at_us))
    if correlation_s > 0 and len(at_us) > 1:
        gap_s = np.diff(at_us) / US_PER_S
        r[1:] = np.where(np.diff(group) == 0, np.exp(-np.abs(gap_s) / correlation_s), 0.0)
    return r


def with_tails(normal: FloatArray, df: float, rng: np.random.Generator) -> FloatArray:
    """Return draws of deviation 1 with the tails of a t distribution, made of standard normal ones.

    Each is divided by an independent root of chi-squared, so an autocorrelation r of the normal draws becomes
    r times `tail_factor(df)`. With df = 0 the normal draws are returned.

    Parameters
    ----------
    normal : array of shape (n,)
    df : float
        Degrees of freedom, over 2, or 0.
    rng : numpy.random.Generator
        Where the chi-squared draws come from.
    """
    return normal if df == 0 else normal * np.sqrt((df - 2.0) / rng.chisquare(df, len(normal)))


def tail_factor(df: float) -> float:
    """Return what is left of an autocorrelation where draws get the tails of a t distribution.

    Examples
    --------
    >>> round(tail_factor(4.0), 4), tail_factor(0.0)
    (0.7854, 1.0)
    """
    if df == 0:
        return 1.0
    return (df - 2.0) / 2.0 * math.exp(2.0 * (math.lgamma((df - 1.0) / 2.0) - math.lgamma(df / 2.0)))


def power_sum_db(a_db: FloatArray, b_db: float) -> FloatArray:
    """Return the level of two noises together. [dB]

    Examples
    --------
    >>> float(power_sum_db(np.array(-50.0), -50.0).round(3))
    -46.99
    """
    return np.asarray(10.0 * np.log10(10.0 ** (np.asarray(a_db) / 10.0) + 10.0 ** (b_db / 10.0)))


@lru_cache(maxsize=1)
def _normal_table() -> tuple[FloatArray, FloatArray]:
    x = np.arange(-_TABLE_END, _TABLE_END + _TABLE_STEP, _TABLE_STEP)
    return x, np.array([0.5 * math.erfc(-value / math.sqrt(2.0)) for value in x.tolist()])


def normal_share(x: FloatArray) -> FloatArray:
    """Return the share of a standard normal distribution below x, to 1e-7.

    Examples
    --------
    >>> normal_share(np.array([-1.0, 0.0, 1.0])).round(4).tolist()
    [0.1587, 0.5, 0.8413]
    """
    table, share = _normal_table()
    return np.asarray(np.interp(x, table, share))


def chance(margin_db: FloatArray, width_db: float, fadings: tuple[tuple[float, float], ...]) -> FloatArray:
    """Return the probability that a message is decoded whose mean SNR is so much over the threshold.

    Over all fading and the softness of the threshold: of mean + fading + width * normal > threshold.

    Parameters
    ----------
    margin_db : array
        Mean SNR less the threshold.
    width_db : float
        Deviation of the threshold.
    fadings : tuple of (sd_db, df)
        Independent parts of the fading, df as in `with_tails`.

    Returns
    -------
    array of the shape of `margin_db`
    """
    variances, weights = np.array([width_db**2]), np.ones(1)
    for sd_db, df in fadings:
        scale, weight = _mixture(df if sd_db else 0.0)
        variances = np.add.outer(variances, sd_db**2 * scale).ravel()
        weights = np.multiply.outer(weights, weight).ravel()
    deviations = np.sqrt(variances)
    if deviations.max() == 0.0:
        return (np.asarray(margin_db) > 0).astype(np.float64)
    if deviations.size == 1:
        return normal_share(margin_db / deviations[0])
    evenly = np.linspace(-1.0, 1.0, _MARGINS)
    at_db = _NEAR_DB * evenly + _FAR_DB * evenly**3  # finest where the chance is steepest
    shares = np.array([float(weights @ normal_share(x / deviations)) for x in at_db.tolist()])
    return np.asarray(np.interp(margin_db, at_db, shares))


def _mixture(df: float) -> tuple[FloatArray, FloatArray]:
    """Variances and weights of the normal distributions that a t distribution of deviation 1 is a mixture of."""
    if df == 0:
        return np.ones(1), np.ones(1)
    narrow = _MIXTURE_REACH * math.sqrt(2.0 / df)
    low, high = -max(narrow, _MIXTURE_LEFT / df), math.log1p(narrow + _MIXTURE_LEFT / df)
    step = (high - low) / _MIXTURE_POINTS
    log_ratio = low + step * (np.arange(_MIXTURE_POINTS) + 0.5)  # of chi-squared to its degrees of freedom
    log_density = 0.5 * df * (log_ratio - np.exp(log_ratio))
    weights = np.exp(log_density - log_density.max())
    return np.exp(-log_ratio) * (df - 2.0) / df, weights / weights.sum()
