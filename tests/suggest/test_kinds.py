"""What values are, and what follows from how they lie and spread."""

from __future__ import annotations

import pytest

from logtool.suggest.frequencies import in_band, radio_of
from logtool.suggest.messages import find_calls
from logtool.suggest.numbers import could_be_late, could_be_snr, spread_of
from logtool.suggest.tables import Column
from logtool.suggest.values import is_call, is_locator


@pytest.mark.parametrize("word", ["Q1ABC", "Q0X", "Q1ABC/P", "QX/Q1ABC", "<Q1ABC>", "<...>", "q1abc"])
def test_call_signs(word: str) -> None:
    assert is_call(word)


@pytest.mark.parametrize("word", ["CQ", "73", "JO62", "R-12", "RRR", "KB15", "Q1", "1503", "-12", ""])
def test_no_call_signs(word: str) -> None:
    assert not is_call(word)


def test_locators() -> None:
    assert [is_locator(word) for word in ("JO62", "JO62qm", "JO62QM", "RR73", "SO62", "JO6", "jo62")] == [
        True, True, True, False, False, False, False,
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("value", "unit"),
    [("7078000", "Hz"), ("7078.5", "kHz"), ("7.0785", "MHz"), ("144.1740", "MHz"), ("474.2", "kHz")],
)
def test_the_unit_of_a_frequency_follows_from_the_bands(value: str, unit: str) -> None:
    found = radio_of(0, Column("column 1", [value] * 30))
    assert found is not None
    assert (found.unit, found.few, found.sure) == (unit, True, True)


@pytest.mark.parametrize("value", ["7", "14", "1503", "6100", "40"])
def test_what_is_no_radio_frequency(value: str) -> None:
    assert radio_of(0, Column("column 1", [value] * 30)) is None


def test_bands_begin_a_little_lower_for_dials() -> None:
    assert [in_band(khz) for khz in (6996, 6998, 7300, 7301)] == [False, True, True, False]


def test_levels_and_lateness() -> None:
    level = spread_of(Column("", [str(n) for n in range(-20, 5)]))
    late = spread_of(Column("", ["-0.3", "0.1", "0.4", "1.2"] * 5))
    assert level is not None
    assert late is not None
    assert (could_be_snr(level), could_be_late(level)) == (True, False)
    assert (could_be_snr(late), could_be_late(late)) == (False, True)


def names(messages: list[str]) -> tuple[tuple[str, ...], list[str]]:
    found = find_calls([Column("column 1", messages)], set())
    return found.patterns, [doubt.about for doubt in found.doubts]


def test_locators_tell_who_is_the_sender() -> None:
    called_first = [f"CQ Q{n}ABC JO6{n}" for n in range(5)] + [
        f"Q{m}ABC Q{n}ABC JO6{n}" for m in range(5) for n in range(5) if m != n
    ]
    caller_first = [f"CQ Q{n}ABC JO6{n}" for n in range(5)] + [
        f"Q{n}ABC Q{m}ABC JO6{n}" for m in range(5) for n in range(5) if m != n
    ]
    assert names(called_first) == ((), [])
    patterns, doubts = names(caller_first)
    assert patterns[0].startswith("{sender}")
    assert doubts == []


def test_without_locators_the_order_is_in_doubt() -> None:
    patterns, doubts = names([f"Q{m}ABC Q{n}ABC 73" for m in range(5) for n in range(5) if m != n])
    assert (patterns, doubts) == ((), ["sender, addressee"])


def test_two_columns_of_calls_without_any_sign_are_in_doubt() -> None:
    pairs = [(f"Q{m}ABC", f"Q{n}ABC") for m in range(5) for n in range(5) if m != n]
    found = find_calls(
        [Column("column 1", [a for a, _ in pairs]), Column("column 2", [b for _, b in pairs])], set()
    )
    assert found.names == {0: "addressee", 1: "sender"}
    assert [doubt.about for doubt in found.doubts] == ["sender, addressee"]


def test_a_column_with_general_calls_is_the_addressee() -> None:
    callers = [f"Q{n % 9}ABC" for n in range(40)]
    called = ["CQ" if n % 3 else f"Q{n % 7}XYZ" for n in range(40)]
    found = find_calls([Column("column 1", callers), Column("column 2", called)], set())
    assert found.names == {0: "sender", 1: "addressee"}
    assert found.values == {"addressee": {"CQ": ""}}
    assert found.doubts == []
