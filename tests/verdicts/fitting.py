"""Fit a normal distribution by the pieces of the likelihood, and outside values to hold it against."""

from __future__ import annotations

import tomllib
from collections.abc import Callable, Sequence
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize

from logtool.verdicts.compare.censored import Piece

STATISTICS = tomllib.loads((Path(__file__).parents[1] / "reference" / "statistics.toml").read_text("utf-8"))
CLOSE = 1e-10


def fit(
    pieces: Callable[[float, float], Sequence[Piece]], mean: float, sd: float
) -> tuple[float, float, float]:
    """Mean, spread and cost where the sum of the pieces' likelihoods is largest, by their own slopes."""

    def cost(at: NDArray[np.float64]) -> tuple[float, NDArray[np.float64]]:
        parts = pieces(float(at[0]), float(np.exp(at[1])))
        slopes = [sum(float(np.sum(part[which])) for part in parts) for which in (1, 2)]
        return -sum(float(np.sum(part.log_likelihood)) for part in parts), -np.array(slopes)

    found = minimize(cost, [mean, np.log(sd)], jac=True, method="BFGS", options={"gtol": CLOSE * 1e3})
    return float(found.x[0]), float(np.exp(found.x[1])), float(found.fun)
