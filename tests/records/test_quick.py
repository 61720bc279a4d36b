"""The quick patterns accept no line that the judge refuses, and do accept ordinary lines."""

from __future__ import annotations

import random
import re
from collections.abc import Callable, Iterator

import duckdb
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logtool.records.judge import Record, judge
from logtool.records.layout import COLUMNS, KEY_FORM, KNOWN_KEYS, NUMBER_FORM, TIME_FORM
from logtool.records.quick import accepts_sql, below
from tests.records import comparing, slow_reader
from tests.records.cases import BAD_LINES, GOOD_LINES
from tests.records.comparing import line

Accepts = Callable[[str, list[str]], list[bool]]
PATTERNS = {"heard": ("heard",), "event": ("watch", "noise")}  # pattern to the kinds it may accept

# Values near the edges of what is good, for any number, and others beside.
EDGES = sorted({edge for bounds in slow_reader.COLUMN_BOUNDS.values() for edge in bounds})
KEY_EDGES = sorted({edge for bounds in slow_reader.KEY_BOUNDS.values() if bounds for edge in bounds})
WHOLES = ["", "0", "00", "1", "2", "4", "9", "10", "59", "61", "99", "100", "9999999999", "12345678901"]
NUMBERS = [
    sign + whole + decimals
    for whole in WHOLES
    for sign in ("", "-", "+", "--", " ")
    for decimals in ("", ".", ".0", ".5", ".000001", ".999999", ".1234567", "e3")
] + [edge + end for edge in EDGES + KEY_EDGES for end in ("", ".0", ".000000", ".000001", "1", "0", " ")]
NUMBERS += ["nan", "inf", "\u0663", "23999.999999", "24001", "86399.5", "2999999999", "3000000001", "0.09"]
FIELDS: dict[str, list[str]] = {
    "time": [
        f"{date}T{clock}Z"
        for date in (
            *(f"{year}-02-29" for year in (1968, 1970, 1972, 1996, 1999, 2000, 2024, 2026, 2096, 2099, 2100)),
            "1969-12-31", "1970-01-01", "2099-12-31", "2100-01-01", "2026-02-28", "2026-04-30", "2026-04-31",
            "2026-06-31", "2026-09-31", "2026-11-31", "2026-12-31", "2026-01-32", "2026-00-01", "2026-13-01",
            "2026-10-00", "2026-8-01", "02026-08-01", "2026-08-01 ",
        )
        for clock in ("00:00:00", "23:59:59.999999", "24:00:00", "23:60:00", "23:59:60", "1:00:00",
                      "19:05:05.", "09:00:00.1234567")
    ],
    "kind": ["heard", "watch", "noise", "setup", "stop", "note", "Heard", "heard ", "hear", "heardwatch", ""],
    "receiver": ["hut", "h" * 32, "h" * 33, "", "a b", "a.b", "\u00fc", "_-9"],
    "mode": ["K8", "", "a_./+-9", "M" * 16, "M" * 17, "K 8", "K8\\"],
    "sender": ["Q1ABC", "", "q1/_-", "Q" * 20, "Q" * 21, "Q1,", "<Q1>"],
    "addressee": ["Q1ABC", "", "q1/_-", "Q" * 20, "Q" * 21, "Q.", "\u017f"],
    "locator": ["", "JN", "JN58", "rr99xx", "JN58td25", "JN58td25xe", "JN5", "SN58", "JN58ty",
                "JN58td25xe0", "58"],
    "text": ["", "hello", "\\\\", "\\t\\n\\r", "\\", "\\\\\\", "\\x", "\u00b5 \u2028", "a\u0085", "a\x00",
             "a\x02", "x" * 4000, "x" * 4001, "a\x7f", " ", "#", '"', "\ufeff", "\U0001f4fb"],
}  # fmt: skip
DIALS = ["", "7078000", "0", "1", "007078000", "999999999", "1000000000", "3000000000", "3000000001", "1.0"]
UNKNOWN_KEYS = ["a" * 32, "a" * 33, "x", "own", "on", "on_", "on_sx", "onset", "surely", "agc2", "d", "dbf"]
BAD_KEYS = ["", "A", "1a", "_a", "a-b", "\u00e4", " on_s", "on_s "]
VALUES = ["1", "0", "0.5", "-3", "none", "on", "off", "random", "alternate", "wire", "a=b", "on_s=5", "",
          " ", "; ", "x;y", "1; ", "1; x=2", "\u00e9" * 50, "v" * 199, "v" * 200, "v" * 201, "a\x01", "a\x9f",
          "\\", "\u2028"]  # fmt: skip


@pytest.fixture(scope="module")
def accepts() -> Iterator[Accepts]:
    """Ask the engine which lines a pattern accepts."""
    with duckdb.connect() as connection:

        def ask(pattern: str, lines: list[str]) -> list[bool]:
            connection.execute("CREATE OR REPLACE TABLE asked (i INTEGER, line VARCHAR)")
            values = [list(range(len(lines))), lines]
            connection.execute("INSERT INTO asked SELECT unnest(?::INTEGER[]), unnest(?::VARCHAR[])", values)
            found = connection.execute(f"SELECT {accepts_sql(pattern)} FROM asked ORDER BY i").fetchall()
            return [answer for (answer,) in found]

        yield ask


def made(chance: random.Random, changes: int) -> str:
    """Return a line of a kind with a pattern, some of its fields chosen from all that they could be."""
    kind = chance.choice(["heard", "heard", "watch", "noise"])
    fields = line(kind).decode().split("\t")
    for _ in range(changes):
        name = chance.choice(slow_reader.COLUMNS)
        fields[slow_reader.COLUMNS.index(name)] = field(name, chance)
    if chance.random() < 0.02:
        fields = fields[:-1] if chance.random() < 0.5 else [*fields, ""]
    return "\t".join(fields)


def field(name: str, chance: random.Random) -> str:
    if name in FIELDS:
        return chance.choice(FIELDS[name])
    if name == "dial_hz":
        return chance.choice(DIALS)
    if name != "more":
        return chance.choice(["", *NUMBERS])
    items = []
    for _ in range(chance.randint(1, 4)):
        key = chance.choice([*KNOWN_KEYS, *KNOWN_KEYS, *UNKNOWN_KEYS, chance.choice(BAD_KEYS)])
        value = chance.choice(NUMBERS if chance.random() < 0.4 else VALUES)
        items.append(chance.choice([f"{key}={value}"] * 9 + [key, value]))
    return chance.choice(["; "] * 9 + [";", ";  ", "\t"]).join(items)


def check(lines: list[str], accepts: Accepts) -> dict[str, int]:
    """Hold both patterns against the judge; return how many lines each accepted."""
    counts = {}
    for pattern, kinds in PATTERNS.items():
        answers = accepts(pattern, lines)
        counts[pattern] = sum(answers)
        for text, accepted in zip(lines, answers, strict=True):
            if accepted:
                judged = judge(text.encode())
                assert isinstance(judged, Record), (text, judged)
                assert judged.kind in kinds
    return counts


@pytest.mark.parametrize("changes", [1, 2, 4])
def test_nothing_bad_is_accepted(changes: int, accepts: Accepts) -> None:
    chance = random.Random(changes)
    counts = check([made(chance, changes) for _ in range(15_000)], accepts)
    assert min(counts.values()) > 100  # the lines are near enough to good ones to mean something


@settings(max_examples=60, deadline=None, derandomize=True, database=None)
@given(
    st.lists(
        st.tuples(
            st.sampled_from(["heard", "watch", "noise"]),
            st.dictionaries(
                st.sampled_from(slow_reader.COLUMNS),
                st.one_of(
                    st.text(max_size=5).filter(lambda text: "\n" not in text),
                    st.from_regex(rf"\A(?:{NUMBER_FORM}|{TIME_FORM}|{KEY_FORM}={NUMBER_FORM})\Z"),
                ),
                max_size=2,
            ),
        ),
        min_size=20,
        max_size=60,
    )
)
def test_nothing_unheard_of_is_accepted(accepts: Accepts, drawn: list[tuple[str, dict[str, str]]]) -> None:
    lines = [line(kind, **fields).decode() for kind, fields in drawn]
    check(lines, accepts)


def test_the_cases_by_hand(accepts: Accepts) -> None:
    decoded = [raw.decode() for raw, reason in BAD_LINES if reason != "not-utf8"]
    for pattern in PATTERNS:
        assert not any(accepts(pattern, decoded))
    check([raw.decode() for raw in GOOD_LINES], accepts)


def test_every_number_up_to_its_bounds(accepts: Accepts) -> None:
    """Whole numbers and halves all round the bounds, for each column and key with bounds."""
    values = [
        (name, value) for name, bounds in slow_reader.COLUMN_BOUNDS.items() for value in around(*bounds)
    ]
    lines = [line(**{name: value}) for name, value in values]
    for name, bounds in slow_reader.KEY_BOUNDS.items():
        more = [(name, value) for value in around(*(bounds or ("-9", "9")))]
        lines += [line(more=f"{name}={value}") for _, value in more]
        values += more
    refused_good = set()
    for value, raw, accepted in zip(
        values, lines, accepts("heard", [raw.decode() for raw in lines]), strict=True
    ):
        good = isinstance(judge(raw), Record)
        assert good or not accepted, raw
        if good and not accepted:
            refused_good.add(value)
    # Only these rare good ones are left to the judge: dials of 1 GHz and more, slots of under 1 s.
    assert {name for name, _ in refused_good} == {"dial_hz", "slot_s"}
    assert all(float(value) >= 1e9 or value == "0.5" for _, value in refused_good)


def test_every_date_and_clock(accepts: Accepts) -> None:
    """All dates and more of years of all sorts, and all clocks: accepted where they are good, and only there."""
    years = (1969, 1970, 1972, 1999, 2000, 2024, 2026, 2098, 2099, 2100)
    times = [f"{y}-{m:02d}-{d:02d}T12:00:00Z" for y in years for m in range(14) for d in range(33)]
    times += [f"{year}-02-29T12:00:00Z" for year in range(1960, 2110)]
    times += [
        f"2026-03-01T{h:02d}:{m:02d}:{s:02d}Z" for h in range(26) for m in (0, 59, 60) for s in (9, 59, 60)
    ]
    lines = [line(time=time) for time in times]
    good = [isinstance(judge(raw), Record) for raw in lines]
    assert accepts("heard", [raw.decode() for raw in lines]) == good
    assert 366 * 4 < sum(good) < 366 * 9 + 300


def around(low: str, high: str) -> list[str]:
    ends = [int(float(low)), int(float(high))]
    wholes = {end + step for end in ends for step in range(-120, 121)} | {end * 10 for end in ends}
    return [f"{whole}{decimals}" for whole in sorted(wholes) for decimals in ("", ".0", ".5")]


ORDINARY_KEYS = {
    "antenna": ["wire", "none", "loop-2_N"],
    "on_s": ["60", "0", "14.5", "86400"],
    "dbfs": ["-43.5", "0", "2.9", "-0.5"],
    "peak_dbfs": ["-6", "-0.1", "0"],
    "slot_s": ["15", "7.5", "3600", "1"],
    "sure": ["0.93", "1", "0", "1.0"],
    "assisted": ["0", "1"],
    "report_db": ["-12", "0", "7.5"],
    "drift_hz": ["-1.25", "0", "3"],
    "temperature_c": ["-4.5", "21"],
    "order": ["random", "alternate"],
    "agc": ["on", "off"],
    "decoder": ["own 1.2 (test)", "x=y"],
}
ORDINARY = {
    "time": ["2026-03-01T22:00:15Z", "2026-03-01T22:00:07.5Z", "2024-02-29T23:59:59.123456Z"],
    "receiver": ["hut", "north-2_A"],
    "dial_hz": ["7078000", "136000", "50313000", "432065000"],
    "audio_hz": ["", "0", "1503.7", "2400", "24000"],
    "snr_db": ["", "-24", "0", "-7.5", "31"],
    "late_s": ["", "0.1", "-0.4", "0", "2.25"],
    "mode": ["", "K8", "SLOW-2"],
    "sender": ["", "Q1ABC", "q1abc", "Q1ABC/P"],
    "addressee": ["", "Q2XYZ"],
    "locator": ["", "JN", "JN58", "jn58td", "JN58TD25", "JN58td25xe"],
    "power_dbm": ["", "37", "-10", "0"],
    "text": ["", "Q2XYZ Q1ABC JN58", "a\\tb\\\\", "caf\u00e9 \u2013 <b> \"q\" 'q' #"],
    "more": ["", "x=1", "x=a=b; on_sx=long; own_key_2=?!", "sure=0.9; x=1; assisted=1"],
}


def test_ordinary_lines_are_accepted(accepts: Accepts) -> None:
    assert set(ORDINARY) == {column.name for column in COLUMNS} - {"kind"}
    assert set(ORDINARY_KEYS) == set(KNOWN_KEYS)
    lines = [line(**{name: value}) for name, values in ORDINARY.items() for value in values]
    lines += [line(more=f"{key}={value}") for key, values in ORDINARY_KEYS.items() for value in values]
    lines.append(line(more="; ".join(f"{key}={values[0]}" for key, values in ORDINARY_KEYS.items())))
    lines.append(line(**{name: values[0] for name, values in ORDINARY.items()}))
    for raw, accepted in zip(lines, accepts("heard", [raw.decode() for raw in lines]), strict=True):
        assert isinstance(judge(raw), Record)
        assert accepted, raw


def test_ordinary_events_are_accepted(accepts: Accepts) -> None:
    lines = [line(kind, more=more) for kind, more in (
        ("watch", "on_s=60"), ("watch", "on_s=59.5; dbfs=-43.2; x=1"), ("watch", "x=1; on_s=0"),
        ("noise", "dbfs=-43.5"), ("noise", "peak_dbfs=-3; dbfs=-43.5; agc=off"),
    )]  # fmt: skip
    lines += [line("watch", dial_hz="7078000", text="tuned"), line("noise", dial_hz="7078000", mode="K8")]
    assert all(accepts("event", [raw.decode() for raw in lines]))


def test_ordinary_logs_do_not_go_to_the_judge(accepts: Accepts) -> None:
    """But for setups, stops, notes and comments, which are few."""
    lines = [raw.decode() for raw in comparing.night(1000)]
    for pattern, kinds in PATTERNS.items():
        assert accepts(pattern, lines) == [
            text.split("\t")[1] in kinds if "\t" in text else False for text in lines
        ]


@pytest.mark.parametrize("least", [0, 1])
def test_below_is_right_for_every_number(least: int) -> None:
    for limit in [*range(least + 1, 130), 200, 999, 1000, 1001, 3600, 24_000, 86_400]:
        pattern = re.compile(below(limit, least))
        for number in {*range(min(limit + 20, 1300)), limit - 1, limit, limit + 1, 10 * limit, limit // 10}:
            assert bool(pattern.fullmatch(str(number))) == (least <= number < limit), (limit, number)
        for other in ("", "00", "01", "-1", f"0{limit - 1}", "1.", "\u0661"):
            assert not pattern.fullmatch(other)
