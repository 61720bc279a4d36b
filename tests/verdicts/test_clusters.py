"""How sure a mean over clusters is: against Student's t, full matrices, and clusters of a known truth."""

from __future__ import annotations

import numpy as np
import pytest

from logtool.verdicts.compare.clusters import Sureness, sureness, two_ways

from .fitting import STATISTICS


@pytest.mark.parametrize("name", ["sleep", "maize"])
def test_equal_clusters_are_students_t(name: str) -> None:
    part = STATISTICS[name]
    values = np.array(part["differences"] if name == "maize" else np.subtract(part["second"], part["first"]))
    mean = float(values.mean())
    sure = sureness(values - mean, np.ones(len(values)))
    assert sure is not None
    assert mean / sure.standard_error == pytest.approx(
        part["t"], abs=0.0005 if name == "maize" else 0.5e-4, rel=0
    )
    assert sure.degrees_of_freedom == pytest.approx(len(values) - 1)
    assert sure.p_value(mean) == pytest.approx(
        part["p_value"], abs=0.5e-5 if name == "maize" else 0.5e-6, rel=0
    )


def test_p_value_and_interval_agree() -> None:
    sure = Sureness(0.7, 9.3)
    low, high = sure.interval(2.0, 0.95)
    assert sure.p_value(2.0, truth=low) == pytest.approx(0.05)
    assert sure.p_value(2.0, truth=high) == pytest.approx(0.05)
    assert sure.p_value(2.0, truth=low - 0.01) < 0.05 < sure.p_value(2.0, truth=low + 0.01)


def test_against_full_matrices() -> None:
    rng = np.random.default_rng(3)
    weight = rng.uniform(0.2, 8, 15)
    values = rng.normal(2, 1, 15)
    mean = np.average(values, weights=weight)
    excess = weight * (values - mean)
    sure = sureness(excess, weight)
    assert sure is not None
    variance, whole = np.diag(weight**2), weight.sum()
    taken = np.eye(15) - np.outer(weight / whole, np.ones(15))
    covariance = taken @ variance @ taken.T
    right = np.diag(variance) / np.diag(covariance)
    product = np.diag(right) @ covariance
    assert sure.standard_error == pytest.approx(np.sqrt(np.sum(right * excess**2)) / whole)
    assert sure.degrees_of_freedom == pytest.approx(np.trace(product) ** 2 / np.trace(product @ product))


def test_one_heavy_cluster_leaves_few_degrees_of_freedom() -> None:
    weight = np.array([30.0, *[1.0] * 20])
    rng = np.random.default_rng(5)
    excess = weight * rng.normal(size=21)
    sure = sureness(excess - weight / weight.sum() * excess.sum(), weight)
    assert sure is not None
    assert sure.degrees_of_freedom < 4


def test_too_few_clusters() -> None:
    assert sureness(np.array([0.0, 0.0]), np.array([3.0, 0.0])) is None
    assert sureness(np.array([0.0, 0.0, 0.0]), np.array([1.0, 2.0, 3.0])) is None


def test_twelve_unequal_clusters_cover() -> None:
    """Of 2000 means 1860 to 1936 hold it, but once in 10 000, if 95 % do; a plain sandwich falls short."""
    rng = np.random.default_rng(11)
    weight = np.array([10.0, 10, 10, 8, 6, 4, 3, 2, 2, 1, 1, 1])
    covered = plain = 0
    for _ in range(2000):
        values = rng.normal(size=12)
        mean = float(np.average(values, weights=weight))
        excess = weight * (values - mean)
        sure = sureness(excess, weight)
        assert sure is not None
        low, high = sure.interval(mean, 0.95)
        covered += low <= 0 <= high
        plain += abs(mean) <= 1.96 * np.sqrt(np.sum(excess**2)) / weight.sum()
    assert 1860 <= covered <= 1936
    assert plain < 1800


def test_two_ways_by_hand() -> None:
    both = two_ways(Sureness(3.0, 10.0), Sureness(4.0, 5.0), crossed_error=2.0)
    assert both.standard_error == pytest.approx(np.sqrt(9 + 16 - 4))
    assert both.degrees_of_freedom == pytest.approx(25**2 / (81 / 10 + 256 / 5))
    assert two_ways(Sureness(3.0, 10.0), Sureness(1.0, 5.0), crossed_error=2.0).standard_error == 3.0
