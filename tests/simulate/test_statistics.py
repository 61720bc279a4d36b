"""Chance in the simulated logs and tables against closed forms, scipy's distributions and reference/chance.toml.

Tolerances are four standard errors of the figure (five for the few with many senders): so rarely a right program
would fail, and a seed is fixed besides.
"""

from __future__ import annotations

import math
import tomllib
from typing import Any

import numpy as np
import pytest
from scipy import integrate, stats

from logtool.simulate import Plan, scenario_of, simulate, table
from logtool.simulate.cast import activity_of
from logtool.simulate.differences import weighted_difference
from logtool.simulate.laws import chance, correlated, correlations, normal_share, tail_factor, with_tails
from tests.docs.running import ROOT
from tests.simulate.scenes import quiet, told

REFERENCE = tomllib.loads((ROOT / "tests" / "reference" / "chance.toml").read_text(encoding="utf-8"))
ERRORS = 4.0
NEVER_DB = (-500.0, -500.0)
ROWS = 60_000
LON_DEG = 14 + 23.5 / 12  # of JO74xa
ALIKE = {
    "senders": 1,
    "level_db": 0.0,
    "level_sd_db": 0.0,
    "step_db": 0.0,
    "lowest_db": -500.0,
    "highest_db": 500.0,
}


def rng(seed: int = 1) -> np.random.Generator:
    return np.random.Generator(np.random.PCG64(seed))


def test_differences_without_a_threshold() -> None:
    """Mean and deviation of the differences: shared fading drops out, own fading adds by squares."""
    plan = Plan(
        heard=ROWS,
        difference_db=1.7,
        own_sd_db=(3.0, 4.0),
        threshold_db=NEVER_DB,
        **(ALIKE | {"senders": 40}),
    )
    made = table(plan, 1)
    difference = made.snr_this - made.snr_that
    assert made.sent == ROWS
    assert abs(difference.mean() - 1.7) < ERRORS * 5.0 / math.sqrt(ROWS)
    assert abs(difference.std() - 5.0) < ERRORS * 5.0 / math.sqrt(2 * ROWS)
    shared = np.cov(made.snr_this, made.snr_that)[0, 1]
    assert shared == pytest.approx(4.0**2, abs=ERRORS * 25.0 / math.sqrt(ROWS))


def test_difference_is_normal() -> None:
    made = table(Plan(heard=ROWS, own_sd_db=(1.0, 2.0), threshold_db=NEVER_DB, **ALIKE), 1)
    assert stats.kstest((made.snr_this - made.snr_that) / math.sqrt(5.0), "norm").pvalue > 1e-3


@pytest.mark.parametrize("margin_db", [-6.0, -1.0, 0.0, 2.5])
def test_share_decoded_is_the_probits(margin_db: float) -> None:
    """Phi of the margin over the root of all variances, 4^2 + 2^2 + 1.5^2; the other side hears nothing."""
    plan = Plan(
        heard=ROWS, threshold_db=(-margin_db, 500.0), width_db=(1.5, 0.0), shared_sd_db=4.0, own_sd_db=(2.0, 0.0),
        **ALIKE,
    )  # fmt: skip
    made = table(plan, 1)
    share = ROWS / made.sent
    right = stats.norm.cdf(margin_db / math.sqrt(16 + 4 + 2.25))
    assert abs(share - right) < ERRORS * math.sqrt(right * (1 - right) / made.sent)
    assert float(chance(np.array([margin_db]), 1.5, ((4.0, 0.0), (2.0, 0.0)))[0]) == pytest.approx(
        right, abs=1e-6
    )


def test_softness_alone() -> None:
    """Without fading the share decoded is Phi((SNR - centre) / width)."""
    log = told(
        quiet(receiver="[[receiver]]\nown_sd_db = 0\nthreshold_db = 1\nthreshold_width_db = 2\n", senders=60)
    )
    sent, right = log.truth["sent"], stats.norm.cdf(-0.5)
    assert sent > 10_000
    assert abs(len(log.of("heard")) / sent - right) < ERRORS * math.sqrt(right * (1 - right) / sent)
    assert log.truth["receivers"][0]["expected"] == pytest.approx(sent * right, rel=1e-6)


@pytest.mark.parametrize("case", REFERENCE["above"], ids=lambda case: str(case["bound"]))
def test_what_is_heard_over_a_hard_threshold_is_a_normal_cut_off(case: dict[str, Any]) -> None:
    """Moments by tests/reference/chance.toml."""
    hard = {"shared_sd_db": 1.0, "own_sd_db": (0.0, 0.0), "width_db": (0.0, 0.0)}
    made = table(Plan(heard=ROWS, threshold_db=(case["bound"], 500.0), **hard, **ALIKE), 1)
    assert np.isnan(made.snr_that).all()
    assert made.snr_this.min() > case["bound"]
    spread = made.snr_this.std()
    assert abs(made.snr_this.mean() - case["mean"]) < ERRORS * spread / math.sqrt(ROWS)
    if "variance" in case:
        fourth = stats.moment(made.snr_this, 4)
        error = math.sqrt((fourth - spread**4) / ROWS)
        assert abs(spread**2 - case["variance"]) < ERRORS * error


@pytest.mark.parametrize("df", [3.0, 5.0, 30.0])
def test_tails_are_those_of_t(df: float) -> None:
    draws = with_tails(rng().standard_normal(ROWS), df, rng(2))
    scale = math.sqrt((df - 2) / df)
    assert stats.kstest(draws / scale, stats.t(df).cdf).pvalue > 1e-3
    assert with_tails(draws, 0.0, rng(2)) is draws


@pytest.mark.parametrize(("shared_df", "own_df"), [(3.0, 0.0), (5.0, 4.0), (60.0, 2.5)])
def test_chance_with_tails(shared_df: float, own_df: float) -> None:
    """Against integrals over scipy's densities: own fading and softness inside, shared fading outside."""
    fadings = ((4.0, shared_df), (2.0, own_df))
    margins = np.array([-12.0, -3.0, 0.0, 1.0, 7.0])
    outside, inside = np.linspace(-150, 150, 1001), np.linspace(-60, 60, 601)
    law = stats.t.pdf(outside, shared_df, scale=4.0 * math.sqrt((shared_df - 2) / shared_df))
    for margin, share in zip(margins.tolist(), chance(margins, 1.0, fadings).tolist(), strict=True):
        shifted = margin + outside
        if own_df:
            own = stats.t.pdf(inside, own_df, scale=2.0 * math.sqrt((own_df - 2) / own_df))
            decoded = integrate.trapezoid(own * stats.norm.cdf(shifted[:, None] + inside), inside, axis=1)
        else:
            decoded = stats.norm.cdf(shifted / math.sqrt(4.0 + 1.0))
        right = float(integrate.trapezoid(law * decoded, outside))
        assert share == pytest.approx(right, abs=2e-4)  # the integrals end at 60 and 150 dB


@pytest.mark.parametrize("df", [2.5, 3.0, 10.0, 100.0])
def test_chance_with_tails_alone(df: float) -> None:
    """Without a softness of the threshold it is the t distribution's own."""
    margins = np.linspace(-40, 40, 161)
    right = stats.t.cdf(margins, df, scale=4.0 * math.sqrt((df - 2) / df))
    assert np.abs(chance(margins, 0.0, ((4.0, df),)) - right).max() < 5e-5  # linear between points of a table


def test_ends_of_the_scale_and_whole_decibels() -> None:
    """A normal of deviation 10 in steps of 2 dB from -24 to 20: shares at the ends by half a step within."""
    plan = Plan(
        heard=ROWS, senders=1, level_db=0.0, level_sd_db=0.0, shared_sd_db=10.0, own_sd_db=(0.0, 0.0), step_db=2.0,
        threshold_db=NEVER_DB,
    )  # fmt: skip
    snr_db = table(plan, 1).snr_this
    assert set(np.unique(snr_db)) == set(range(-24, 21, 2))
    for value, right in (
        (-24, stats.norm.cdf(-2.3)),
        (20, stats.norm.sf(1.9)),
        (0, 2 * stats.norm.cdf(0.1) - 1),
    ):
        assert abs((snr_db == value).mean() - right) < ERRORS * math.sqrt(right * (1 - right) / ROWS)


def test_normal_share() -> None:
    x = np.linspace(-12, 12, 4801)
    assert np.abs(normal_share(x) - stats.norm.cdf(x)).max() < 1e-7


@pytest.mark.parametrize(("r", "share"), list(zip(*REFERENCE["effective"].values(), strict=True)))
def test_series_is_worth_fewer_values(r: float, share: float) -> None:
    """Spread of the means of many series, by tests/reference/chance.toml; with the exact form for a finite length."""
    n, series = 500, 4000
    links = np.tile(np.concatenate(([0.0], np.full(n - 1, r))), series)
    means = correlated(rng().standard_normal(n * series), links).reshape(series, n).mean(axis=1)
    long = 1.0 / (n * share)
    exact = ((1 + r) / (1 - r) - 2 * r * (1 - r**n) / (n * (1 - r) ** 2)) / n
    assert long == pytest.approx(
        exact, rel=2e-2
    )  # a series of 500 is not endless: off by 2 r / (n (1 - r^2)) at most
    assert means.var() == pytest.approx(exact, rel=ERRORS * math.sqrt(2 / series))


def test_correlation_of_unequal_gaps() -> None:
    """exp(-gap / time) between neighbours, whatever the gap; none between senders."""
    at_us = np.cumsum(np.tile([15_000_000, 60_000_000, 240_000_000], 40_000))
    group = np.arange(len(at_us)) // 3000
    x = correlated(rng().standard_normal(len(at_us)), correlations(at_us, group, 60.0))
    assert abs(x.std() - 1) < ERRORS * 2 / math.sqrt(len(x))
    for first, gap_s in ((0, 60.0), (1, 240.0), (2, 15.0)):
        a, b = x[first:-1:3], x[first + 1 :: 3][: len(x[first:-1:3])]
        r = float(np.corrcoef(a[: len(b)], b)[0, 1])
        assert abs(r - math.exp(-gap_s / 60.0)) < ERRORS * 2 / math.sqrt(len(b)), gap_s
    assert correlations(at_us, group, 60.0)[::3000].tolist() == [0.0] * 40
    assert not correlations(at_us, group, 0.0).any()


def test_plain_recursion() -> None:
    """The same as a loop that is obviously right."""
    r = np.where(rng(3).random(200) < 0.2, 0.0, rng(4).random(200))
    r[0] = 0.0
    draws = rng().standard_normal(200)
    slow = [0.0] * 200
    for i in range(200):
        slow[i] = (r[i] * slow[i - 1] if r[i] else 0.0) + math.sqrt(1 - r[i] ** 2) * draws[i]
    assert correlated(draws, r).tolist() == pytest.approx(slow, abs=1e-12)


def test_autocorrelation_left_by_tails() -> None:
    links = np.concatenate(([0.0], np.full(300_000, 0.8)))
    x = with_tails(correlated(rng().standard_normal(len(links)), links), 8.0, rng(2))
    r = float(np.corrcoef(x[:-1], x[1:])[0, 1])
    assert r == pytest.approx(
        0.8 * tail_factor(8.0), abs=0.02
    )  # heavy tails: four errors of batches of the series


def test_activity_is_paretos() -> None:
    """The median is 1, and a share of x^-tail / 2 is over x."""
    activity = activity_of(ROWS, 1.5, rng())
    for x in (0.8, 1.0, 3.0, 10.0):
        right = 0.5 * x**-1.5
        assert abs((activity > x).mean() - right) < ERRORS * math.sqrt(right * (1 - right) / ROWS)
    assert activity_of(3, 0.0, rng()).tolist() == [1.0, 1.0, 1.0]


def test_estimand_by_hand() -> None:
    """Three senders: 30 transmissions count as 10, 4 as 4, none as none: (10 * 2 + 4 * -1) / 14."""
    sender = np.array([0] * 30 + [2] * 4)
    n, mean_db, whole = weighted_difference(sender, np.array([2.0] * 30 + [-4.0, 2.0, -1.0, -1.0]), 3)
    assert n.tolist() == [30, 0, 4]
    assert mean_db[[0, 2]].tolist() == [2.0, -1.0]
    assert whole == pytest.approx(16 / 14)
    assert math.isnan(weighted_difference(sender[:0], np.zeros(0), 3)[2])


def test_table_is_as_a_log() -> None:
    made = table(Plan(heard=3000, difference_sd_db=1.0, threshold_db=(-20.0, -18.0)), 1)
    assert len(made.sender) == 3000
    assert not (np.isnan(made.snr_this) & np.isnan(made.snr_that)).any()
    assert np.isnan(made.snr_that).sum() > np.isnan(made.snr_this).sum() > 20
    for snr_db in (made.snr_this, made.snr_that):
        known = snr_db[~np.isnan(snr_db)]
        assert (known == np.rint(known)).all()
        assert known.min() >= -24
        assert known.max() <= 20
    assert (np.diff(made.transmission) > 0).all()
    n = np.bincount(made.sender, minlength=60)
    weight = np.minimum(n, 10)
    assert made.difference_db == pytest.approx(float(weight @ made.sender_difference_db / weight.sum()))
    right = stats.norm.cdf((made.sender_level_db + made.sender_difference_db + 20) / math.sqrt(16 + 4 + 1))
    heard_this = np.bincount(made.sender[~np.isnan(made.snr_this)], minlength=60).sum()
    expected = made.sent * made.sender_share @ right
    assert abs(heard_this - expected) < ERRORS * math.sqrt(expected)


def test_logs_hear_as_many_as_expected() -> None:
    """Without autocorrelation, so that transmissions are independent but for the senders' luck, which is known."""
    fading = "[fading]\nshared_df = 4\nown_df = 6\nshared_correlation_s = 0\n"
    truth = simulate(scenario_of(f"[nights]\nnumber = 4\n[senders]\nnumber = 200\n{fading}"), 1).truth
    (one,) = truth["receivers"]
    assert one["sent"] > 20_000
    assert abs(one["heard"] - one["expected"]) < ERRORS * math.sqrt(one["sent"]) / 2
    hours = truth["hours"]
    assert sum(hour["heard"] for hour in hours) == one["heard"]
    assert sum(hour["sent"] for hour in hours) == one["sent"]
    assert sum(hour["expected"] for hour in hours) == pytest.approx(one["expected"], abs=1e-3)
    assert sum(hour["listening_min"] for hour in hours) == pytest.approx(one["listening_min"])
    senders = sum(hour["senders_heard"] for hour in hours)
    assert abs(senders - sum(hour["senders_expected"] for hour in hours)) < ERRORS * math.sqrt(senders)


def test_path_law_and_curve() -> None:
    """Without luck and fading: 20 dB for ten times the distance, and a cosine of the mean solar hour."""
    text = (
        quiet(senders=30)
        .replace("db_per_decade = 0", "db_per_decade = 20")
        .replace("curve_db = 0", "curve_db = 3")
    )
    text = text.replace("at_1000_km_db = 0", "at_1000_km_db = 5")
    log = told(text)
    for sender in log.truth["senders"]:
        (site,) = sender["receivers"]
        for line in log.of("heard", sender=sender["sender"]):
            at_h = int(line["time"][11:13]) + int(line["time"][14:16]) / 60 + int(line["time"][17:19]) / 3600
            curve = 3 * math.cos(2 * math.pi * (at_h + LON_DEG / 15) / 24)
            right = 5 - 20 * math.log10(site["distance_km"] / 1000) + curve
            assert float(line["snr_db"]) == pytest.approx(max(min(right, 20), -24), abs=0.5001)
