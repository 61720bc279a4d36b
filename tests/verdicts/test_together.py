"""The design `together`: what it must not depend on, tables that hold too little, and a short trial."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import t as student

from logtool.verdicts.compare.together import Together, estimate
from logtool.verdicts.compare.transmissions import Transmissions
from tests.validation.made_transmissions import Made, Setting, make

NAN = np.nan
TRIALS = 60
# So many of 60 intervals hold the truth but once in 10 000, if 95 % do: scipy, binom.ppf(0.00005, 60, 0.95).
FEWEST_HELD = 49


def table(made: Made) -> Transmissions:
    return Transmissions(made.sender, made.this_db, made.that_db, made.spell)


def failed(found: Together) -> set[str]:
    return {check.name for check in found.checks if not check.holds}


@pytest.fixture(scope="module")
def made() -> Made:
    return make(Setting(difference_db=3, senders=60, sent=1000, activity=0.5), np.random.default_rng(12))


@pytest.fixture(scope="module")
def found(made: Made) -> Together:
    return estimate(table(made))


def numbers(found: Together) -> list[float | None]:
    return [found.difference_db, found.low_db, found.high_db, found.p_value]


def test_counts(made: Made, found: Together) -> None:
    by_this, by_that = ~np.isnan(made.this_db), ~np.isnan(made.that_db)
    assert found.transmissions == len(made.sender)
    assert found.pairs == np.sum(by_this & by_that)
    assert found.only_this == np.sum(by_this & ~by_that)
    assert found.only_that == np.sum(by_that & ~by_this)
    assert found.senders == len(np.unique(made.sender))
    sizes = np.bincount(made.sender)
    assert found.effective_senders == pytest.approx(sizes.sum() ** 2 / np.sum(sizes**2))
    assert found.sound


def test_sides_swapped(made: Made, found: Together) -> None:
    turned = estimate(Transmissions(made.sender, made.that_db, made.this_db))
    assert turned.difference_db == pytest.approx(-found.difference_db, abs=0.01)  # where the search ends
    assert turned.low_db == pytest.approx(-found.high_db, abs=0.02)  # the same
    assert turned.p_value == pytest.approx(found.p_value, rel=0.2)  # far out in the tail


def test_a_side_that_reads_higher(made: Made, found: Together) -> None:
    """Adding 5 dB to all that this side says adds 5 dB to the difference and changes nothing else."""
    higher = estimate(Transmissions(made.sender, made.this_db + 5, made.that_db))
    assert higher.difference_db == pytest.approx(found.difference_db + 5, abs=0.01)  # where the search ends
    assert higher.high_db - higher.low_db == pytest.approx(found.high_db - found.low_db, abs=0.01)  # the same


def test_order_and_names_do_not_matter(made: Made, found: Together) -> None:
    order = np.random.default_rng(1).permutation(len(made.sender))
    other = Transmissions(3 * made.sender[order] + 7, made.this_db[order], made.that_db[order])
    assert numbers(estimate(other)) == pytest.approx(numbers(found), abs=1e-3)  # sums in another order


def test_p_value_inverts_to_the_interval(made: Made, found: Together) -> None:
    for shift_db in (found.low_db, found.high_db):
        moved = estimate(Transmissions(made.sender, made.this_db - shift_db, made.that_db))
        assert moved.p_value == pytest.approx(0.05, abs=0.003)  # where the search ends


def test_spells_of_loud_noise_widen_the_interval() -> None:
    noisy = make(Setting(noise_db=4.0, tells_spells=True), np.random.default_rng(2))
    told, untold = estimate(table(noisy)), estimate(Transmissions(noisy.sender, noisy.this_db, noisy.that_db))
    assert told.difference_db == untold.difference_db
    assert told.high_db - told.low_db > 1.5 * (untold.high_db - untold.low_db)
    alone = Transmissions(noisy.sender, noisy.this_db, noisy.that_db, np.zeros(len(noisy.sender), dtype=int))
    assert estimate(alone).difference_db is None  # one spell says nothing of others


def test_the_error_is_that_of_leaving_senders_out_in_turn() -> None:
    """It counts that thresholds and missed shares are estimated: without that it would be 1.7 times as large here."""
    setting = Setting(
        between_senders_db=0.0, activity=0.3, sent=1200, level_db=-6.0, missed=(0.0, 0.1), own_db=(1.5, 1.5)
    )
    made = make(setting, np.random.default_rng(7))
    found = estimate(table(made))
    left_out_db = []
    for sender in range(setting.senders):
        rest = made.sender != sender
        without = estimate(Transmissions(made.sender[rest], made.this_db[rest], made.that_db[rest]))
        left_out_db.append(without.difference_db - found.difference_db)
    jackknife_db = np.sqrt((1 - 1 / setting.senders) * np.sum(np.square(left_out_db)))
    error_db = (found.high_db - found.low_db) / 2 / student.ppf(0.975, found.degrees_of_freedom)
    assert error_db == pytest.approx(jackknife_db, rel=0.2)  # both are estimates of one thing


@pytest.mark.parametrize("pairs", [0, 9])
def test_too_few_pairs(pairs: int) -> None:
    this_db = np.array([-5.0 - at for at in range(pairs)] + [-10.0] * 40)
    that_db = np.array([-6.0] * pairs + [NAN] * 40)
    nothing = estimate(Transmissions(np.arange(len(this_db)), this_db, that_db))
    assert numbers(nothing) == [None] * 4
    assert (nothing.pairs, nothing.only_this, nothing.only_that) == (pairs, 40, 0)
    assert failed(nothing) == {"too-little"}
    assert nothing.checks[0].why == f"{pairs} transmissions heard by both tell no difference"


def test_an_empty_table() -> None:
    nothing = estimate(Transmissions(np.zeros(0, dtype=int), np.zeros(0), np.zeros(0)))
    assert (nothing.transmissions, nothing.senders, nothing.difference_db) == (0, 0, None)


def test_all_values_equal_tell_nothing() -> None:
    heard = Transmissions(np.arange(50), np.full(50, -3.0), np.full(50, -3.0))
    assert estimate(heard).difference_db is None


def test_pairs_that_are_all_3_db_apart() -> None:
    level_db = np.arange(50.0)
    assert estimate(Transmissions(np.arange(50), level_db + 3, level_db)).difference_db == pytest.approx(
        3.0, abs=1e-3
    )


@pytest.mark.parametrize(
    ("setting", "name"),
    [
        (Setting(senders=10, sent=400), "few-senders"),
        (Setting(senders=60, sent=1200, busiest_share=0.7), "few-senders"),
        (Setting(own_db=(2.0, 9.0), senders=80, sent=1600), "unequal-spread"),
        (Setting(own_db=(9.0, 2.0), senders=80, sent=1600), "unequal-spread"),
        (Setting(per_strength=0.5, senders=80, sent=1600), "depends-on-strength"),
        (Setting(highest_db=(-16.0, -16.0), senders=80, sent=1600), "ended-scale"),
        (Setting(threshold_db=(-21.0, -9.0), senders=80, sent=1600), "weak-senders"),
    ],
    ids=lambda value: value if isinstance(value, str) else "",
)
def test_a_broken_assumption_is_told(setting: Setting, name: str) -> None:
    assert name in failed(estimate(table(make(setting, np.random.default_rng(21)))))


def test_strong_transmissions_that_one_side_misses() -> None:
    setting = Setting(level_db=-2.0, missed=(0.0, 0.2), senders=80, sent=1600)
    found = estimate(table(make(setting, np.random.default_rng(3))))
    assert "missed-strong" in failed(found)
    assert found.thresholds is not None
    assert found.thresholds[0].missed_share < 0.02
    assert found.thresholds[1].missed_share == pytest.approx(0.2, abs=0.04)  # of some 1000 transmissions
    assert found.low_db < 0 < found.high_db


@pytest.mark.slow
@pytest.mark.parametrize(
    "setting",
    [
        Setting(difference_db=4, senders=50, sent=900),
        Setting(difference_db=5, senders=30, sent=600, fading="heavy", between_senders_db=2),
    ],
    ids=["normal", "heavy"],
)
def test_intervals_hold_the_truth(setting: Setting) -> None:
    """A short trial; the long one is tests/validation/together.py. The mean over pairs fails where this one holds."""
    rng = np.random.default_rng(31)
    off_db, pairs_off_db, held = [], [], 0
    for _ in range(TRIALS):
        made = make(setting, rng)
        found = estimate(table(made))
        held += found.low_db <= setting.difference_db <= found.high_db
        off_db.append(found.difference_db - setting.difference_db)
        pairs_off_db.append(np.nanmean(made.this_db - made.that_db) - setting.difference_db)
    error_db = np.std(off_db) / np.sqrt(TRIALS)
    assert held >= FEWEST_HELD
    assert abs(np.mean(off_db)) < 4 * error_db  # once in 16 000
    assert np.mean(pairs_off_db) < -0.2
