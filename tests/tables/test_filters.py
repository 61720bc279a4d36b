"""Filters only choose: what is learned stays learned, and parts add up to the whole."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from logtool import UsageError, open_logs
from logtool.records.reader import Logs
from logtool.tables.choice import choose
from tests.tables.drawing import drawn
from tests.tables.making import TABLES, heard, rows_of, setup, table, watch, write

SEEDS = (3, 13, 59, 170, 693)  # full ones: several receivers, moved ones, modes and days


@pytest.fixture(scope="module", params=SEEDS)
def logs(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Any:
    with open_logs(write(tmp_path_factory.mktemp("drawn"), *drawn(request.param).files), threads=1) as opened:
        yield opened


def rows(logs: Logs, name: str, **words: Any) -> list[dict[str, Any]]:
    return list(table(logs, name, **words).rows())


@pytest.mark.parametrize("key", ["receiver", "antenna", "band", "night"])
@pytest.mark.parametrize("name", ["reach", "sectors", "nights", "senders"])
def test_one_choice_gives_the_rows_it_has_without_it(logs: Logs, name: str, key: str) -> None:
    by = () if name == "nights" else (key,)
    whole = rows(logs, name, by=by)
    values = {row[key] for row in whole} - {None}
    for value in values:
        assert rows(logs, name, by=by, **{key: value}) == [row for row in whole if row[key] == value]


@pytest.mark.parametrize("name", ["reach", "sectors", "nights", "senders"])
def test_by_mode_gives_the_rows_that_each_mode_has(logs: Logs, name: str) -> None:
    split = rows(logs, name, by="mode")
    receptions = sum(row["receptions"] for row in rows(logs, name))
    assert name == "sectors" or sum(row["receptions"] for row in split) == receptions
    for mode in {row["mode"] for row in split} - {None}:
        alone = rows(logs, name, by="mode", mode=mode)
        assert [row for row in alone if row["mode"] == mode] == [row for row in split if row["mode"] == mode]


def test_receptions_add_up_over_the_tables(logs: Logs) -> None:
    with_unnamed = sum(row["receptions"] for row in rows(logs, "reach"))
    unnamed = sum(row["unnamed"] for row in rows(logs, "reach"))
    assert sum(row["receptions"] for row in rows(logs, "nights")) == with_unnamed
    assert sum(row["receptions"] for row in rows(logs, "senders")) == with_unnamed - unnamed
    assert len(rows(logs, "lines")) == with_unnamed
    assert table(logs, "reach").summary["receptions"] == with_unnamed


def test_the_parts_of_a_span_add_up(logs: Logs) -> None:
    cut = "2026-12-31T12:14:59.999Z"  # within an hour, and an instant at which something may be heard
    for name in ("reach", "nights"):
        for column in ("receptions", "listening_min"):
            whole = sum(row[column] for row in rows(logs, name))
            parts = [*rows(logs, name, to=cut), *rows(logs, name, from_=cut)]
            # Each of the rows, at most 400, was rounded to three decimals.
            assert sum(row[column] for row in parts) == pytest.approx(whole, abs=400 * 0.5e-3)
    times = {row["time"] for row in rows(logs, "lines")}
    assert {row["time"] for row in rows(logs, "lines", from_=cut)} == {at for at in times if at >= cut[:-1]}


def test_a_span_within_an_hour_cuts_it_exactly(tmp_path: Path) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z"),
        watch("2026-03-01T22:00:00Z", 3600),
        heard("2026-03-01T21:10:00Z", "Q1"),
        heard("2026-03-01T21:20:00Z", "Q2"),
        heard("2026-03-01T21:30:00Z", "Q3"),
    ]
    span = {"from_": "2026-03-01T21:10:00.000001Z", "to": "2026-03-01T21:30:00Z"}
    (row,) = rows_of(tmp_path, lines, "reach", **span)
    assert (row["hour"], row["receptions"]) == ("2026-03-01T21:00:00Z", 1)
    assert row["listening_min"] == 20.0
    (whole,) = rows_of(
        tmp_path, lines, "reach", from_="2026-03-01T21:10:00Z", to="2026-03-01T21:30:00.000001Z"
    )
    assert whole["receptions"] == 3


def test_heard_again_and_locators_are_learned_before_the_filter(tmp_path: Path) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z"),
        heard("2026-03-01T21:10:00Z", "Q1", locator="JN48"),
        heard("2026-03-01T22:10:00Z", "Q1"),
    ]
    (row,) = rows_of(tmp_path, lines, "senders", from_="2026-03-01T22:00:00Z")
    assert (row["receptions"], row["heard_again"], row["locator"], row["borrowed"]) == (1, True, "JN48", True)


def test_antenna_none_is_left_out_unless_asked_for(tmp_path: Path) -> None:
    lines = [
        setup("2026-03-01T20:00:00Z", antenna="none"),
        heard("2026-03-01T20:10:00Z", "Q1", addressee="Q2", locator="JN48"),
        watch("2026-03-01T20:30:00Z", 1800),
        setup("2026-03-01T20:30:00Z", antenna="wire"),
        heard("2026-03-01T20:40:00Z", "Q1"),
        watch("2026-03-01T21:00:00Z", 1800),
    ]
    expected = {"reach": 1, "senders": 1, "sectors": 16, "nights": 1, "between": 0, "lines": 1}
    assert {name: len(rows_of(tmp_path, lines, name)) for name in TABLES} == expected
    (row,) = rows_of(tmp_path, lines, "reach")
    assert (row["antenna"], row["listening_min"], row["receptions"], row["heard_once"]) == (
        "wire",
        30.0,
        1,
        0,
    )
    assert row["located"] == 1  # the locator of the hour was heard without the antenna
    (asked,) = rows_of(tmp_path, lines, "reach", antenna="none")
    assert (asked["antenna"], asked["listening_min"], asked["receptions"]) == ("none", 30.0, 1)
    assert len(rows_of(tmp_path, lines, "reach", antenna=("none", "wire"))) == 2


@pytest.mark.parametrize(
    ("words", "message"),
    [
        ({"night": "2026-13-45"}, "--night '2026-13-45': a night is named by the date it begins on"),
        ({"night": "2026-02-29"}, "--night '2026-02-29'"),
        ({"from_": "yesterday"}, "--from 'yesterday' is neither a date nor a time"),
        ({"from_": "2026-03-02", "to": "2026-03-02"}, "--from 2026-03-02 is not before --to 2026-03-02"),
        ({"by": "sender"}, "--by 'sender': rows can be split by antenna, band, mode, night, receiver"),
        ({"gap_min": 0.0}, "--gap-min 0 cannot be used"),
        ({"gap_min": float("nan")}, "--gap-min nan cannot be used"),
        ({"sender": "Q1 ABC"}, "--sender 'Q1 ABC' is not a call sign"),
    ],
)
def test_words_that_cannot_be_used_are_refused(words: dict[str, Any], message: str) -> None:
    with pytest.raises(UsageError) as refused:
        choose(**words)
    assert message in str(refused.value)


def test_words_are_text_never_commands(tmp_path: Path) -> None:
    lines = [setup("2026-03-01T20:00:00Z"), heard("2026-03-01T20:10:00Z", "Q1")]
    with open_logs(write(tmp_path, lines)) as logs:
        for key in ("receiver", "antenna", "band", "mode"):
            made = table(logs, "senders", **{key: "a' OR '1'='1"})
            assert len(made) == 0
            assert "no " + key in json.dumps(made.notes)
        assert len(table(logs, "senders")) == 1
