"""Censored and truncated normal values, by tests/reference/statistics.toml."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import approx_fprime, minimize

from logtool.verdicts.compare.censored import Piece, above, below, decoded, hazard, seen

from .fitting import STATISTICS, fit


def rows(name: str) -> list[dict]:
    part = STATISTICS[name]
    return [dict(zip(part["columns"], row, strict=True)) for row in part["rows"]]


def repeated(piece: Piece, times: int) -> Piece:
    return Piece(*(np.repeat(part, times) for part in piece))


def test_mice_of_which_three_lived_longer() -> None:
    mice = STATISTICS["mice"]
    limit = mice["values"][-1]
    mean, sd, _ = fit(
        lambda mean, sd: [seen(mice["values"], mean, sd), repeated(above(limit, mean, sd), mice["above"])],
        1.7,
        0.1,
    )
    assert mean == pytest.approx(mice["mean"], abs=0.0005, rel=0)
    assert sd == pytest.approx(mice["sd"], abs=0.0005, rel=0)


@pytest.mark.parametrize("row", rows("cohen"), ids=lambda row: f"{row['share']} {row['gamma']}")
def test_cohens_factors(row: dict) -> None:
    """The mean is moved down by the factor times the distance from the limit to the mean of what was seen."""
    missing, half = round(20 * row["share"]), round(10 * (1 - row["share"]))
    apart = np.sqrt(row["gamma"])
    values = np.repeat([1 - apart, 1 + apart], half)
    mean, _, _ = fit(
        lambda mean, sd: [seen(values, mean, sd), repeated(below(0.0, mean, sd), missing)], 0.8, 0.7
    )
    assert 1 - mean == pytest.approx(row["factor"], abs=row["half_digit"], rel=0)


def test_book_example_left_censored() -> None:
    part = STATISTICS["limit_6"]
    mean, sd, _ = fit(
        lambda mean, sd: [
            seen(part["values"], mean, sd),
            repeated(below(part["limit"], mean, sd), part["below"]),
        ],
        7.9,
        1.0,
    )
    assert mean == pytest.approx(part["mean"], abs=0.5e-5, rel=0)
    assert sd == pytest.approx(part["sd"], abs=0.5e-5, rel=0)
    assert mean == pytest.approx(part["book_mean"], abs=0.01, rel=0)  # the book reads a factor from a table
    assert sd == pytest.approx(part["book_sd"], abs=0.01, rel=0)  # the same


def test_sulfate_left_censored() -> None:
    part = STATISTICS["sulfate"]
    mean, sd, _ = fit(
        lambda mean, sd: [
            seen(part["values"], mean, sd),
            repeated(below(part["limit"], mean, sd), part["below"]),
        ],
        1750.0,
        120.0,
    )
    assert mean == pytest.approx(part["mean"], abs=0.5e-3, rel=0)
    assert sd == pytest.approx(part["sd"], abs=0.5e-3, rel=0)


def test_censored_on_both_sides() -> None:
    part = STATISTICS["two_sided"]
    mean, sd, cost = fit(
        lambda mean, sd: [
            seen(part["values"], mean, sd),
            repeated(below(part["low"], mean, sd), part["below"]),
            repeated(above(part["high"], mean, sd), part["above"]),
        ],
        -5.0,
        10.0,
    )
    assert mean == pytest.approx(part["mean"], abs=0.5e-5, rel=0)
    assert sd == pytest.approx(part["sd"], abs=0.5e-5, rel=0)
    assert cost == pytest.approx(part["cost"], abs=0.5e-6, rel=0)


def test_truncated_on_both_sides() -> None:
    part = STATISTICS["two_sided"]

    def cost(at: np.ndarray) -> float:
        mean, sd = at[0], np.exp(at[1])
        outside = np.exp(below(part["low"], mean, sd).log_likelihood) + np.exp(
            above(part["high"], mean, sd).log_likelihood
        )
        return float(-np.sum(seen(part["values"], mean, sd).log_likelihood - np.log(1 - outside)))

    found = minimize(cost, [-5.0, 2.0], method="Nelder-Mead", options={"xatol": 1e-9, "fatol": 1e-12})
    assert found.x[0] == pytest.approx(part["truncated_mean"], abs=0.5e-4, rel=0)  # the search is flat here
    assert np.exp(found.x[1]) == pytest.approx(part["truncated_sd"], abs=0.5e-4, rel=0)  # the same


def test_tobit() -> None:
    part = STATISTICS["tobit"]
    x = part["first"] + part["step"] * np.arange(len(part["errors"]))
    y = part["height"] + x + np.array(part["errors"])
    on = y > part["limit"]
    assert np.sum(~on) == part["censored"]

    def cost(at: np.ndarray) -> tuple[float, np.ndarray]:
        mean, sd = at[0] + at[1] * x, float(np.exp(at[2]))
        known, missing = seen(y[on], mean[on], sd), below(part["limit"], mean[~on], sd)
        by_mean = np.concatenate([known.by_mean, missing.by_mean])
        slopes = [by_mean.sum(), by_mean @ np.concatenate([x[on], x[~on]])]
        slopes.append(known.by_log_sd.sum() + missing.by_log_sd.sum())
        return -known.log_likelihood.sum() - missing.log_likelihood.sum(), -np.array(slopes)

    found = minimize(cost, [0.0, 1.0, 0.0], jac=True, method="BFGS", options={"gtol": 1e-8})
    assert found.x[0] == pytest.approx(part["b0"], abs=0.5e-5, rel=0)
    assert found.x[1] == pytest.approx(part["b1"], abs=0.5e-5, rel=0)
    assert np.exp(found.x[2]) == pytest.approx(part["sd"], abs=0.5e-5, rel=0)
    assert found.fun == pytest.approx(part["cost"], abs=0.5e-6, rel=0)


def test_moments_of_truncated_values() -> None:
    part = STATISTICS["normal"]
    at_0 = float(hazard(0.0))
    assert at_0 == pytest.approx(part["mean_above_0"], abs=0.5e-6, rel=0)
    assert 1 - at_0**2 == pytest.approx(part["variance_above_0"], abs=0.5e-6, rel=0)
    assert float(hazard(-1.0)) == pytest.approx(part["hazard_at_1"], abs=0.5e-6, rel=0)
    for end, variance in ((1.0, part["variance_within_1"]), (2.0, part["variance_within_2"])):
        chance = float(np.exp(below(end, 0.0, 1.0).log_likelihood))
        within = 1 - 2 * end * float(hazard(end)) * chance / (2 * chance - 1)
        assert within == pytest.approx(variance, abs=0.5e-6, rel=0)


def test_hazard_far_below_stays_finite() -> None:
    assert float(hazard(-40.0)) == pytest.approx(40.0, abs=0.03)  # z + 1/z, to the first order
    assert float(hazard(40.0)) == 0.0


def test_a_soft_limit_widens_the_spread() -> None:
    soft, hard = below(1.0, -1.0, 3.0, width=4.0), below(1.0, -1.0, 5.0)
    assert soft.log_likelihood == pytest.approx(hard.log_likelihood)
    assert soft.by_mean == pytest.approx(hard.by_mean)
    assert soft.by_log_sd + soft.by_log_width == pytest.approx(hard.by_log_sd)


@pytest.mark.parametrize("piece", ["seen", "below", "above", "decoded"])
def test_slopes(piece: str) -> None:
    def log_likelihood(at: np.ndarray) -> float:
        mean, sd, width = at[0], float(np.exp(at[1])), float(np.exp(at[2]))
        if piece == "decoded":
            return float(decoded(2.0, mean, width).log_likelihood)
        if piece == "below":
            return float(below(2.0, mean, sd, width).log_likelihood)
        return float({"seen": seen, "above": above}[piece](2.0, mean, sd).log_likelihood)

    at = np.array([0.7, 0.4, 0.2])
    sd, width = float(np.exp(at[1])), float(np.exp(at[2]))
    made = {
        "seen": seen(2.0, at[0], sd),
        "below": below(2.0, at[0], sd, width),
        "above": above(2.0, at[0], sd),
        "decoded": decoded(2.0, at[0], width),
    }[piece]
    slopes = [float(made.by_mean), float(made.by_log_sd), float(made.by_log_width)]
    assert slopes == pytest.approx(approx_fprime(at, log_likelihood, 1e-7), abs=1e-5)
