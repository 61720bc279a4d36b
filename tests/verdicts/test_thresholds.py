"""Soft thresholds: slopes against differences, and found again where they are known."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import approx_fprime

from logtool.verdicts.compare.scales import find_ends
from logtool.verdicts.compare.thresholds import (
    DIFFERENCE,
    HEIGHT,
    LOG_SD,
    PARAMETERS,
    SLOPE,
    Threshold,
    fit_thresholds,
    predict,
)
from logtool.verdicts.compare.transmissions import Transmissions, capped_weights
from tests.validation.made_transmissions import Setting, make


def made(setting: Setting, seed: int) -> Transmissions:
    table = make(setting, np.random.default_rng(seed))
    return Transmissions(table.sender, table.this_db, table.that_db)


@pytest.mark.parametrize("seed", range(3))
def test_slopes_and_merging(seed: int) -> None:
    heard = made(Setting(difference_db=3, highest_db=(-9.0, 50.0)), seed)
    scales = find_ends(heard.this_db[heard.by_this]), find_ends(heard.that_db[heard.by_that])
    assert scales[0].ended
    lines = predict(heard, capped_weights(heard.sender, heard.per_sender), scales, -15.0)
    assert lines.ended.any()
    start = np.array([3.0, 0, 0.9, 1, -6, 0.3, -3, -6, 0.3, -3])
    at = start + 0.2 * np.random.default_rng(seed).normal(size=PARAMETERS)
    numeric = approx_fprime(at, lambda where: lines.cost(where)[0], 1e-7)
    assert lines.cost(at)[1] == pytest.approx(numeric, abs=1e-5)
    merged = lines.merged()
    assert len(merged.known_db) < len(lines.known_db)
    assert merged.cost(at)[0] == pytest.approx(lines.cost(at)[0])
    assert merged.cost(at)[1] == pytest.approx(lines.cost(at)[1])


def test_thresholds_are_found_again() -> None:
    heard = made(
        Setting(senders=150, sent=6000, level_db=-19.0, threshold_db=(-20.0, -17.0), width_db=(0.8, 2.0)), 4
    )
    weight = np.ones(len(heard))
    fit = fit_thresholds(heard, weight, (find_ends(np.zeros(0)), find_ends(np.zeros(0))))
    this, that = fit.thresholds(fit.parameters)
    assert this.centre_db == pytest.approx(-20.0, abs=0.5)  # 6000 transmissions of normal scatter
    assert that.centre_db == pytest.approx(-17.0, abs=0.5)  # the same
    assert this.width_db < 1.3 < 1.5 < that.width_db < 2.6
    assert fit.steepest < 0.001
    free = [DIFFERENCE, HEIGHT, SLOPE, LOG_SD]  # no prior draws them
    assert fit.influence.sum(axis=0)[free] == pytest.approx(0, abs=0.01)  # where the search ends


def test_a_threshold_decodes() -> None:
    threshold = Threshold(-20.0, 2.0, missed_share=0.1)
    assert threshold.decodes(np.array([-40.0, -20.0, -18.0, 0.0])) == pytest.approx(
        [0.0, 0.45, 0.9 * 0.8413447, 0.9], abs=1e-6
    )
