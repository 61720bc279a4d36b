"""Messages: the form of call signs, the default patterns, one's own, brackets, words that are no locators."""

from __future__ import annotations

import tomllib
from pathlib import Path

import duckdb
import pytest

from logtool.records.callsigns import GIVEN_CALL
from logtool.records.quick import sql_text
from logtool.records.recipes.patterns import template_pattern
from tests.recipes.comparing import compare, recipe, rule, toml
from tests.recipes.slow_message import DEFAULT_PATTERNS, is_call
from tests.recipes.test_values import field

AT = "2026-03-01T18:00:00Z"
FORMS = tomllib.loads((Path(__file__).parents[1] / "reference" / "callsign_forms.toml").read_text())["forms"]
GOOD = [*FORMS["good"], *map("".join, FORMS["digit_first"]), *FORMS["compound"], *FORMS["bracketed"]]


@pytest.mark.parametrize("call", GOOD)
def test_forms_of_call_signs(call: str) -> None:
    """Against tests/reference/callsign_forms.toml."""
    assert is_call(call)
    assert duckdb.execute(f"SELECT regexp_full_match(?, {sql_text(GIVEN_CALL)})", [call]).fetchall() == [
        (True,)
    ]


@pytest.mark.parametrize("word", FORMS["bad"])
def test_what_has_no_form_of_a_call_sign(word: str) -> None:
    """Against tests/reference/callsign_forms.toml."""
    assert not is_call(word)
    assert duckdb.execute(f"SELECT regexp_full_match(?, {sql_text(GIVEN_CALL)})", [word]).fetchall() == [
        (False,)
    ]


def told(messages: list[str], table: str = "[message]\n", **more: object) -> list[tuple[str, ...]]:
    """Return sender, addressee, locator, report and whether it was assisted, after comparing all."""
    text = recipe(rule(separator=";", columns=["time", "text", "sender", "locator"], **more), table)
    found = compare(text, "\n".join(f"{AT};{message}" + ";;" * (";" not in message) for message in messages))
    names = ("sender", "addressee", "locator", "report_db", "assisted")
    return [tuple(line.reason or field(line.became, name) for name in names) for line in found]


@pytest.mark.parametrize(
    ("message", "wanted"),
    [
        ("CQ Q1ABC JN58", ("Q1ABC", "", "JN58", "", "")),
        ("Q1ABC JN58 37", ("Q1ABC", "", "JN58", "", "")),
        ("Q1ABC JN58TD 37", ("Q1ABC", "", "JN58TD", "", "")),  # the locator has a call sign's form as well
        ("CQ Q1ABC", ("Q1ABC", "", "", "", "")),
        ("cq dx q1abc jn58td", ("Q1ABC", "", "JN58TD", "", "")),
        ("CQ 070 Q1ABC JN58 and more", ("Q1ABC", "", "JN58", "", "")),
        ("QRZ DE Q1ABC/P", ("Q1ABC/P", "", "", "", "")),
        ("CQ TEST DE Q1ABC", ("Q1ABC", "", "", "", "")),
        ("Q2XYZ Q1ABC JO62", ("Q1ABC", "Q2XYZ", "JO62", "", "")),
        ("Q2XYZ  Q1ABC   R  JO62", ("Q1ABC", "Q2XYZ", "JO62", "", "")),
        ("Q2XYZ DE Q1ABC K", ("Q1ABC", "Q2XYZ", "", "", "")),
        ("Q2XYZ Q1ABC -07", ("Q1ABC", "Q2XYZ", "", "-07", "")),
        ("Q2XYZ Q1ABC R+7 73", ("Q1ABC", "Q2XYZ", "", "7", "")),
        ("Q2XYZ Q1ABC RR73", ("Q1ABC", "Q2XYZ", "", "", "")),
        ("Q2XYZ Q1ABC RRR", ("Q1ABC", "Q2XYZ", "", "", "")),
        ("DE Q1ABC JO62", ("Q1ABC", "", "JO62", "", "")),
        ("<Q2XYZ> Q1ABC -07", ("Q1ABC", "Q2XYZ", "", "-07", "1")),
        ("Q2XYZ <Q9/Q1ABC> JO62", ("Q9/Q1ABC", "Q2XYZ", "JO62", "", "1")),
        ("<...> Q1ABC JO62", ("Q1ABC", "", "JO62", "", "")),
        ("Q2XYZ <...> JO62", ("", "Q2XYZ", "JO62", "", "")),
        ("CQ CQ Q1ABC JN58", ("Q1ABC", "", "JN58", "", "")),
        ("CQ 40M Q1ABC", ("", "", "", "", "")),
        ("Q1ABC", ("", "", "", "", "")),
        ("73 TNX", ("", "", "", "", "")),
        ("CQ Q1ABC JN58TD25", ("Q1ABC", "", "", "", "")),
        ("XCQ Q1ABC", ("", "", "", "", "")),
    ],
)
def test_default_patterns(message: str, wanted: tuple[str, ...]) -> None:
    """Common practice, no source: see docs/recipes.md."""
    assert told([message]) == [wanted]
    assert told([message], f"[message]\npatterns = {toml(DEFAULT_PATTERNS)}\n") == [wanted]


def test_what_the_line_says_goes_before_what_the_message_says() -> None:
    found = told(
        ["CQ Q1ABC JN58;Q2XYZ;JO62", "CQ Q1ABC JN58;;", "CQ Q1ABC JN58;<Q3Z>;RR73", "CQ Q1ABC;<...>;"]
    )
    assert [row[:3] for row in found] == [
        ("Q2XYZ", "", "JO62"), ("Q1ABC", "", "JN58"), ("Q3Z", "", "JN58"), ("Q1ABC", "", ""),
    ]  # fmt: skip
    assert [row[4] for row in found] == ["", "", "1", ""]


def test_without_the_table_texts_stay_texts() -> None:
    assert told(["CQ Q1ABC JN58"], "") == [("", "", "", "", "")]


def test_other_kinds_have_no_messages() -> None:
    text = recipe(rule("note", separator=";", columns=["time", "text"]), "[message]\n")
    (line,) = compare(text, f"{AT};CQ Q1ABC JN58")
    assert (field(line.became, "sender"), field(line.became, "text")) == ("", "CQ Q1ABC JN58")


def test_words_that_are_no_locators() -> None:
    table = "[message]\nnever_locators = ['aa00', 'JN58td']\n"
    found = told(["Q2A Q1A AA00", "Q2A Q1A RR73", "Q2A Q1A JN58TD", "x;;Aa00", "x;;AA00AA"], table)
    assert [row[2] for row in found] == ["", "RR73", "", "", "AA00AA"]
    assert told(["Q2A Q1A RR73"], "[message]\nnever_locators = []\n")[0][2] == "RR73"


def test_patterns_of_ones_own() -> None:
    patterns = ["vvv {sender} [{word}] {power_dbm}", "[{addressee}] de|from {sender} [k]", "x+y {sender} ..."]
    found = told(
        [
            "VVV Q1A 37",
            "vvv Q1A ABC 37",
            "VVV Q1A ABC",
            "DE Q1A",
            "Q2B from Q1A K",
            "x+y Q1A (a[b",
            "xxy Q1A",
        ],
        f"[message]\npatterns = {toml(patterns)}\n",
    )
    assert [row[:2] for row in found] == [
        ("Q1A", ""), ("Q1A", ""), ("", ""), ("Q1A", ""), ("Q1A", "Q2B"), ("Q1A", ""), ("", ""),
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("template", "says"),
    [
        ("", "can stand at the end"),
        ("...", "can stand at the end"),
        ("... {sender}", "can stand at the end"),
        ("[{sender}]", "everything in the template may be missing"),
        ("{sender}{locator}", "a part in {} or [] stands alone between blanks"),
        ("[{sender} {locator}]", "a part in {} or [] stands alone between blanks"),
        ("{nobody}", "is no part of a message; there are: sender, addressee"),
        ("[[{sender}]] x", "stands alone"),
    ],
)
def test_templates_that_cannot_be_read(template: str, says: str) -> None:
    with pytest.raises(ValueError, match=says.replace("[", r"\[").replace("{", r"\{")):
        template_pattern(template)
