"""Signs, ranks and middles, by tests/reference/statistics.toml and by hand."""

from __future__ import annotations

import numpy as np
import pytest

from logtool.verdicts.compare.looks import hodges_lehmann, look, mcnemar, signed_rank_table
from logtool.verdicts.compare.transmissions import Transmissions

from .fitting import STATISTICS
from .test_censored import rows

NAN = np.nan


@pytest.mark.parametrize(
    ("row", "half_digit"),
    list(zip(rows("mcnemar"), STATISTICS["mcnemar"]["half_digits"], strict=True)),
)
def test_exact_mcnemar(row: dict, half_digit: float) -> None:
    assert mcnemar(row["more"], row["less"]) == pytest.approx(row["p_value"], abs=half_digit + 1e-15, rel=0)
    assert mcnemar(row["less"], row["more"]) == mcnemar(row["more"], row["less"])


def test_mcnemar_of_nothing() -> None:
    assert mcnemar(0, 0) == 1.0


@pytest.mark.parametrize("row", rows("signed_rank"), ids=lambda row: str(row["values"]))
def test_signed_rank_tables(row: dict) -> None:
    table = signed_rank_table(row["values"])
    assert table[row["sum"]] == pytest.approx(row["chance"], abs=row["half_digit"], rel=0)
    assert table[-1] == pytest.approx(1.0)


def test_hodges_lehmann_of_hollander_and_wolfe() -> None:
    part = STATISTICS["depression"]
    values = np.array(part["first"]) - np.array(part["second"])
    found = hodges_lehmann(values)
    assert found.estimate == pytest.approx(part["estimate"], abs=0.0005, rel=0)
    assert found.low == pytest.approx(part["low"], abs=0.0005, rel=0)
    assert found.high == pytest.approx(part["high"], abs=0.0005, rel=0)
    assert found.level is not None
    assert 100 * found.level == pytest.approx(part["level_percent"], abs=0.005, rel=0)
    whole = len(values) * (len(values) + 1) // 2
    assert signed_rank_table(len(values))[whole - part["rank_sum"]] == part["p_one_sided"]


def test_hodges_lehmann_of_sleep_and_maize() -> None:
    sleep, maize = STATISTICS["sleep"], STATISTICS["maize"]
    differences = np.array(sleep["second"]) - np.array(sleep["first"])
    assert hodges_lehmann(differences).estimate == pytest.approx(sleep["hodges_lehmann"], abs=0.005, rel=0)
    assert hodges_lehmann(np.array(maize["differences"], dtype=float)).estimate == maize["hodges_lehmann"]


def test_five_values_have_no_interval_and_six_have_all() -> None:
    assert hodges_lehmann(np.arange(5.0)).low is None
    six = hodges_lehmann(np.arange(6.0))
    assert (six.low, six.high, six.level) == (0.0, 5.0, 0.96875)


def test_looks_by_hand() -> None:
    """Sender 0 is decoded once more by this, sender 1 twice more by that, sender 2 as often by both."""
    heard = Transmissions(
        np.array([0, 0, 1, 1, 1, 2, 2, 2]),
        np.array([-5.0, -6, NAN, NAN, -3, -1, NAN, -2]),
        np.array([-9.0, NAN, -8, -7, -2, -4, -20, NAN]),
    )
    looks = look(heard)
    assert (looks.more_by_this, looks.more_by_that, looks.sign_p_value) == (1, 1, 1.0)
    assert looks.pairs_db is not None
    assert looks.pairs_db.estimate == 2.25  # of 4, -1, 3 and their averages 1.5, 3.5, 1
