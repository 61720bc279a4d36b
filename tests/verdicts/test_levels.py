"""Heights above a common floor, counted by hand."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from logtool.verdicts.compare.levels import Levels
from logtool.verdicts.compare.missed import missed_though_strong, with_missed
from logtool.verdicts.compare.scales import Scale
from logtool.verdicts.compare.thresholds import Threshold
from logtool.verdicts.compare.transmissions import Transmissions

NAN = np.nan
OPEN = Scale(-np.inf, np.inf, 0.0)
SHARP = Threshold(-20.1, 0.1)  # all from -20 dB on is decoded, so the floor is at -20 dB
EXACT = {"rel": 0, "abs": 1e-9}


def levels(sender: list[int], this_db: list[float], that_db: list[float], **more: object) -> Levels:
    heard = Transmissions(np.array(sender), np.array(this_db), np.array(that_db))
    return replace(Levels(heard, (SHARP, SHARP), (OPEN, OPEN)), **more)


def test_heights_by_hand() -> None:
    """3 dB off this side; the floor is where that side's lies, for this side's is now 3 dB lower."""
    made = levels([0, 0, 0, 1], [-10.0, -15, -18, NAN], [-14.0, NAN, NAN, -12])
    assert made.floor_db(3.0) == pytest.approx(-20.0, **EXACT)
    heights = made.heights(3.0)
    assert heights.this_db == pytest.approx([7, 2, 0, 0], abs=1e-6)
    assert heights.that_db == pytest.approx([6, 0, 0, 8], abs=1e-6)
    assert heights.inside.tolist() == [True, False, False, False]
    assert made.excess_db(3.0) == pytest.approx([1 + 2, -8], abs=1e-6)


def test_the_floor_is_the_higher_of_the_two() -> None:
    made = levels([0], [-10.0], [-14.0])
    assert made.floor_db(-3.0) == pytest.approx(-17.0, **EXACT)
    assert replace(made, raised_db=4.0).floor_db(-3.0) == pytest.approx(-13.0, **EXACT)
    low = replace(made, scales=(Scale(-15.0, np.inf, 0.0), OPEN))
    assert low.floor_db(0.0) == pytest.approx(-14.0, **EXACT)


def test_the_lower_ceiling_holds_for_both() -> None:
    """This side's scale ends at -5 dB, so with 3 dB off it nothing counts above -8 dB, 12 dB above the floor."""
    made = levels([0, 0], [-5.0, -10.0], [-2.0, -14.0], scales=(Scale(-np.inf, -5.0, 0.5), OPEN))
    heights = made.heights(3.0)
    assert heights.this_db == pytest.approx([12, 7], abs=1e-6)
    assert heights.that_db == pytest.approx([12, 6], abs=1e-6)
    assert heights.inside.tolist() == [False, True]


def test_a_busy_sender_counts_as_ten() -> None:
    """Twenty transmissions above the floor weigh a half each, and the five below it do not count."""
    made = levels([0] * 25 + [1], [-10.0] * 20 + [-21.0] * 5 + [-10.0], [-12.0] * 20 + [NAN] * 5 + [-10.0])
    assert made.heights(0.0).weight == pytest.approx([0.5] * 25 + [1.0])
    assert made.excess_db(0.0) == pytest.approx([20.0, 0.0], abs=1e-6)


def test_balance_of_pairs_far_above_is_their_mean() -> None:
    made = levels([0, 1, 2], [-3.0, -4.0, -5.0], [-5.0, -5.0, -5.0])
    assert made.balance(0.0) == pytest.approx(1.0, abs=2e-4)
    assert made.weights(1.0) == pytest.approx([1.0, 1.0, 1.0], abs=1e-6)


def test_balance_takes_in_what_one_side_missed() -> None:
    """Two pairs of equal SNR, and one transmission 2 dB above the floor by this alone.

    With d off, this side's heights are 10 - d, 10 - d and 2 - d above the floor of that side, that side's 10, 10
    and 0. For d under 2 the sum is 2 - 3 d, so d = 2/3.
    """
    made = levels([0, 1, 2], [-10.0, -10.0, -18.0], [-10.0, -10.0, NAN])
    assert made.balance(0.0) == pytest.approx(2 / 3, abs=2e-4)


def test_no_balance_where_nothing_is_above_the_floor() -> None:
    assert levels([0, 1], [-23.0, NAN], [NAN, -23.0]).balance(0.0) is None


def test_what_is_strong_and_missed() -> None:
    """Of ten that this side heard 15 dB above the floor that side missed two; ten more rows stand for no misses."""
    made = levels(list(range(10)), [-5.0] * 10, [-5.0] * 8 + [NAN] * 2)
    shares, influence = missed_though_strong(made, 0.0, spread_db=3.0)
    assert shares == pytest.approx([0.0, 2 / 20])
    assert influence[:, 1] == pytest.approx(([-2 / 20 / 20] * 8) + [(1 - 2 / 20) / 20] * 2)
    known = with_missed(made, shares)
    assert known.heights(0.0).this_db == pytest.approx([15 * (1 - 2 / 20)] * 10)
    assert known.heights(0.0).that_db == pytest.approx([15] * 8 + [0] * 2)
