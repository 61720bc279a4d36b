"""The same scenario and seed give the same bytes, and what is added in one place changes nothing elsewhere."""

from __future__ import annotations

import hashlib

import numpy as np
import pytest

from logtool.simulate import Plan, default_scenario, table
from logtool.simulate.streams import stream
from tests.simulate.scenes import EVERYTHING, made, quiet

# A regression value, made here: it may change with numpy's major version, and must with the scenario's meaning.
DIGEST = "e69fc00266e248eb8b467ac13a3b6e23fcf16fa5890a3264f154b3f12fa979e8"
OUTAGE = '[[fault]]\nkind = "outage"\nat_min = 30\nminutes = 30\n'
RECEIVER = '[[receiver]]\nname = "hut"\n'


def lines_of(text: str, seed: int = 1) -> list[bytes]:
    return [line for whole in made(text, seed).files.values() for line in whole.splitlines()]


def test_same_seed_same_bytes() -> None:
    one, other = made(EVERYTHING, 7), made(EVERYTHING, 7)
    assert one.files == other.files
    assert one.truth_bytes() == other.truth_bytes()
    assert made(EVERYTHING, 8).files != one.files


def test_bytes_of_the_default_scenario() -> None:
    if np.__version__.partition(".")[0] != "2":
        pytest.skip("the digest was made with numpy 2")
    whole = b"".join(one for _, one in sorted(made(default_scenario(), 1).files.items()))
    assert hashlib.sha256(whole).hexdigest() == DIGEST


def test_an_outage_only_takes_lines_away() -> None:
    """Those of its own 30 minutes, and those of the setup after it come in addition."""
    whole, cut = lines_of(RECEIVER), lines_of(RECEIVER + OUTAGE)
    new = [line for line in cut if line not in set(whole)]
    assert len(new) == 1
    assert b"\tsetup\t" in new[0]
    left = set(whole) - set(cut)
    lost = [line for line in whole if line in left]
    assert len(lost) > 30
    assert [line for line in cut if line not in new] == [line for line in whole if line not in left]


@pytest.mark.parametrize("added", ["false_per_hour = 10\n", "bad_per_thousand = 100\n"])
def test_odd_lines_only_add(added: str) -> None:
    whole, more = lines_of(RECEIVER), lines_of(RECEIVER + added)
    before = set(whole)
    assert [line for line in more if line in before] == whole
    assert len(more) > len(whole) + 10


def test_a_second_receiver_leaves_the_first_alone() -> None:
    one = lines_of(RECEIVER)
    both = lines_of(RECEIVER + '[[receiver]]\nname = "shed"\nthreshold_db = -10\n')
    assert [line for line in both if b"\tshed\t" not in line] == one


def test_a_night_more_leaves_the_first_alone() -> None:
    assert made(quiet(nights=2)).files["2026-03-01.log"] == made(quiet(nights=1)).files["2026-03-01.log"]


def test_streams_differ() -> None:
    draws = [
        float(stream(*which).random())
        for which in ((1, "calls"), (2, "calls"), (1, "places"), (1, "calls", 0))
    ]
    assert len(set(draws)) == len(draws)


def test_tables_of_a_seed() -> None:
    plan = Plan(heard=300, own_r=0.5, own_df=4.0)
    one, same, other = table(plan, 1, 5), table(plan, 1, 5), table(plan, 1, 6)
    for name in ("sender", "snr_this", "snr_that", "transmission"):
        assert np.array_equal(getattr(one, name), getattr(same, name), equal_nan=True)
    assert not np.array_equal(one.snr_this, other.snr_this, equal_nan=True)


def test_a_longer_table_begins_with_the_shorter() -> None:
    """So no table depends on how many draws its rows took."""
    short, long = table(Plan(heard=300, own_r=0.3), 1), table(Plan(heard=900, own_r=0.3), 1)
    assert np.array_equal(short.snr_that, long.snr_that[:300], equal_nan=True)
