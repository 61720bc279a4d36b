"""The document on the layout says what the code does: its tables, its example, its cases."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from logtool.records import layout
from logtool.records.judge import Record, judge
from logtool.records.opening import open_logs
from logtool.records.scan import LONGEST_LINE_BYTES, STRANGER_LINES
from tests.records import comparing, slow_reader
from tests.records.comparing import line

TEXT = (Path(__file__).parents[2] / "docs" / "log-layout.md").read_text(encoding="utf-8")
BULLETS = [" ".join(bullet.split()) for bullet in re.findall(r"^- (.*?)$(?!\n  )", TEXT, flags=re.S | re.M)]

FORMS_IN_WORDS = {
    layout.TIME_FORM: "`YYYY-MM-DDThh:mm:ssZ`, a real date, seconds 00 to 59,"
    " with a point and one to six decimals if any",
    "|".join(layout.KINDS): ", ".join(f"`{kind}`" for kind in layout.KINDS),
    layout.NAME_FORM: "1 to 32 of `A-Z` `a-z` `0-9` `_` `-`",
    layout.INTEGER_FORM: "integer",
    layout.NUMBER_FORM: "number",
    layout.MODE_FORM: "1 to 16 of `A-Z` `a-z` `0-9` `_` `.` `/` `+` `-`",
    layout.CALL_FORM: "1 to 20 of `A-Z` `a-z` `0-9` `/` `_` `-`",
    layout.LOCATOR_FORM: "locator of 2, 4, 6, 8 or 10 characters, any case",
    layout.TEXT_FORM: f"at most {layout.MAX_TEXT_BYTES} bytes as written;"
    r" `\t` `\n` `\r` `\\` escaped, no other escape",
}


def table(first_column: str) -> list[list[str]]:
    """The rows of the table whose first column has this name."""
    (found,) = re.findall(rf"^\| {re.escape(first_column)} \|.*\n\|[-|]+\n((?:\|.*\n)+)", TEXT, flags=re.M)
    return [[cell.strip() for cell in row.strip("|").split("|")] for row in found.splitlines()]


def bounds(low: float | None, high: float | None) -> str:
    if low is None or high is None:
        return ""
    return f"{low:,.10g} to {high:,.10g}".replace(",", " ")


def test_the_table_of_columns_is_the_codes() -> None:
    expected = [
        [
            str(number),
            f"`{column.name}`",
            "`key=value` joined by `; `" if column.name == "more" else FORMS_IN_WORDS[column.form],
            f"years {layout.FIRST_YEAR} to {layout.LAST_YEAR}"
            if column.name == "time"
            else bounds(column.low, column.high),
            column.unit,
            column.meaning,
        ]
        for number, column in enumerate(layout.COLUMNS, 1)
    ]
    assert table("#") == expected


def test_the_table_of_kinds_is_the_codes() -> None:
    least = f" of {layout.SETUP_LOCATOR_CHARACTERS} or more characters"
    expected = []
    for kind in layout.KINDS:
        columns, keys = layout.NEEDS[kind]
        needs = [f"`{name}`{least * (kind == 'setup' and name == 'locator')}" for name in columns]
        expected.append([f"`{kind}`", ", ".join(needs + [f"`{key}` in `more`" for key in keys])])
    rows = table("kind")
    assert [row[:2] for row in rows] == expected
    assert all(row[2] for row in rows)


def test_the_table_of_keys_is_the_codes() -> None:
    expected = []
    for key in layout.KNOWN_KEYS.values():
        words = " or ".join(f"`{word}`" for word in key.words)
        if words and key.form:
            words = f"the number {words}"
        form = words or (FORMS_IN_WORDS[key.form] if key.form else "any value")
        expected.append([f"`{key.name}`", form, bounds(key.low, key.high), key.meaning])
    assert table("key") == expected


def test_the_table_of_reasons_is_the_codes() -> None:
    rows = table("reason")
    assert [name for name, _ in rows] == [f"`{reason}`" for reason in layout.REASONS]
    assert all(meaning for _, meaning in rows)


@pytest.mark.parametrize(
    ("form", "good", "bad"),
    [
        (layout.NAME_FORM, ["a", "Z_-9", "a" * 32], ["", "a" * 33, "a b", "a.b"]),
        (layout.CALL_FORM, ["q", "Q/_-9", "Q" * 20], ["", "Q" * 21, "Q.", "Q+"]),
        (layout.MODE_FORM, ["a", "Z_./+-9", "M" * 16], ["", "M" * 17, "a b"]),
        (layout.INTEGER_FORM, ["0", "0012", "9" * 10], ["", "9" * 11, "-1", "1.0"]),
        (
            layout.NUMBER_FORM,
            ["0", "-1.5", "-0.000001", "9999999999.123456"],
            ["+1", "1e3", ".5", "1.", "1.1234567"],
        ),
        (
            layout.LOCATOR_FORM,
            ["JN", "jn58", "JN58td", "JN58TD25", "RR99xx99xx"],
            ["J", "SN", "JN5", "JN58ty", "JN58td25x"],
        ),
    ],
)
def test_the_words_for_a_form_mean_the_form(form: str, good: list[str], bad: list[str]) -> None:
    assert form in FORMS_IN_WORDS
    assert all(re.fullmatch(form, text) for text in good)
    assert not any(re.fullmatch(form, text) for text in bad)


def test_the_limits_in_the_text_are_the_codes() -> None:
    assert f"over {layout.MAX_LINE_BYTES} bytes" in TEXT
    assert f"1 to {layout.MAX_VALUE_BYTES} bytes" in TEXT
    assert f"`{layout.LAYOUT_LINE}{layout.LAYOUT_VERSION}`" in TEXT
    assert f"no record on its first {STRANGER_LINES:,} lines".replace(",", " ") in " ".join(TEXT.split())
    assert f"longer than {LONGEST_LINE_BYTES >> 20} MB" in TEXT


def example() -> bytes:
    (block,) = re.findall(r"^```text\n(.*?)^```", TEXT, flags=re.S | re.M)
    return block.encode()


def test_the_example_is_a_log_of_all_kinds_and_adds_up(tmp_path: Path) -> None:
    log = tmp_path / "example.log"
    log.write_bytes(example())
    lines = example().decode().splitlines()
    assert lines[:2] == [f"{layout.LAYOUT_LINE}{layout.LAYOUT_VERSION}", layout.NAMES_LINE]
    with open_logs(log) as logs:
        told = logs.inputs[0].as_dict()
        comparing.compare_opened(logs, slow_reader.read_files([(str(log), example())]))
    said = re.search(
        r"(\d+) lines = (\d+) blank \+ (\d+) comments \+ (\d+) records \+ 0 repeated \+ 0 set aside", TEXT
    )
    assert said is not None
    names = ("lines", "blank", "comments", "records")
    assert [told[name] for name in names] == [int(count) for count in said.groups()]
    assert told["lines"] == told["blank"] + told["comments"] + told["records"]
    assert {text.split("\t")[1] for text in lines if "\t" in text and text[0] != "#"} == set(layout.KINDS)


# Each case of the last part: words of its bullet, a line, and what becomes of it.
CASES = [
    ("year 0000", line(time="0000-01-01T00:00:00Z"), "bad-time"),
    ("`1.0` too", line(more="assisted=1.0"), None),
    ("Another number is `range-more`", line(more="assisted=2"), "range-more"),
    ("what is no number is `bad-more`", line(more="assisted=yes"), "bad-more"),
    ("CR at the very end of a file", line() + b"\r", "control-character"),
    ("U+2028", line(text="a\u2028b"), None),
    ("U+0085", line(text="a\u0085b"), "control-character"),
    ("no-break space", "\u00a0".encode(), "too-few-fields"),
    ("`order=Random`", line(more="order=Random"), "bad-more"),
    ("`7.50` for `7.5`", line(snr_db="7.50"), None),
]


@pytest.mark.parametrize(("words", "raw", "reason"), CASES)
def test_the_cases_are_as_the_document_says(words: str, raw: bytes, reason: str | None) -> None:
    assert sum(words in bullet for bullet in BULLETS) == 1
    judged = judge(raw)
    assert isinstance(judged, Record) if reason is None else judged == reason
