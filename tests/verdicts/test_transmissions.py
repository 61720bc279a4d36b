"""The table of transmissions, its weights, and the ends of scales."""

from __future__ import annotations

import numpy as np
import pytest

from logtool.errors import UsageError
from logtool.verdicts.compare.scales import find_ends
from logtool.verdicts.compare.transmissions import Transmissions, capped_weights, effective_number

NAN = np.nan


def test_counts_by_hand() -> None:
    heard = Transmissions(np.array([0, 2, 2]), np.array([-1.0, NAN, -3]), np.array([NAN, -2.0, -4]))
    assert heard.per_sender.tolist() == [1, 0, 2]
    assert heard.counted(heard.by_this & heard.by_that).tolist() == [0, 0, 1]
    assert heard.summed(np.array([1.0, 2.0, 3.0])).tolist() == [1.0, 0.0, 5.0]


def test_a_row_that_neither_heard_is_refused() -> None:
    with pytest.raises(UsageError, match=r"row 1: neither side decoded it; leave such rows out"):
        Transmissions(np.array([0, 1]), np.array([-1.0, NAN]), np.array([NAN, NAN]))


def test_columns_of_different_lengths_are_refused() -> None:
    with pytest.raises(UsageError, match=r"columns of 1 and 2 rows; give columns of one length"):
        Transmissions(np.array([0, 1]), np.array([-1.0, -2]), np.array([-1.0, -2]), spell=np.array([0]))


def test_effective_number() -> None:
    assert effective_number(np.array([4, 4, 4, 0])) == 3.0
    assert effective_number(np.array([3, 1])) == 1.6
    assert effective_number(np.zeros(3)) == 0.0


def test_weights_stop_at_ten() -> None:
    sender = np.array([0] * 40 + [1] * 3)
    weight = capped_weights(sender, np.bincount(sender))
    assert weight[sender == 0].sum() == pytest.approx(10.0)
    assert weight[sender == 1].tolist() == [1.0, 1.0, 1.0]


def test_ends_of_a_scale() -> None:
    values = np.concatenate([np.arange(-20.0, 10.0), np.full(6, 10.0)])
    ends = find_ends(values)
    assert (ends.low_db, ends.high_db, ends.ended) == (-np.inf, 10.0, True)
    assert ends.share_high == 6 / 36
    assert not find_ends(np.arange(-20.0, 10.0)).ended
    assert not find_ends(np.zeros(0)).ended


def test_two_percent_are_a_pile_and_fewer_are_not() -> None:
    inner = np.tile(np.arange(-20.0, 0.0), 49)  # 980 values
    assert find_ends(np.concatenate([inner, np.full(20, 5.0)])).ended
    assert not find_ends(np.concatenate([inner, np.full(19, 5.0)])).ended
