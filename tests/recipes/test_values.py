"""Values by hand: units, unknown words, value maps, where a value comes from, and signals."""

from __future__ import annotations

import pytest

from tests.recipes.comparing import CONSTANTS, RECEIVER, compare, engine_lines, recipe, rule
from tests.records.slow_reader import COLUMNS

AT = "2026-03-01T18:00:00Z"


def field(became: str, name: str) -> str:
    """Return a column of a made line, or a key of its details."""
    fields = became.split("\t")
    if name in COLUMNS:
        return fields[COLUMNS.index(name)]
    return dict(item.split("=", 1) for item in fields[-1].split("; ") if item).get(name, "")


def values(name: str, text: str, data: str) -> list[str]:
    """Return a value of each record, or the reason, after comparing all."""
    return [line.reason or field(line.became, name) for line in compare(text, data) if line.rule != "carry"]


@pytest.mark.parametrize(
    ("piece", "target", "written", "wanted"),
    [
        ("dial_hz", "dial_hz", "7041500", "7041500"),
        ("dial_hz", "dial_hz", "7041500.5", "7041501"),
        ("dial_hz", "dial_hz", "x", "bad-dial_hz"),
        ("dial_khz", "dial_hz", "7041.5", "7041500"),
        ("dial_khz", "dial_hz", "7041.0004999", "7041000"),
        ("dial_khz", "dial_hz", "7041.0005", "7041001"),
        ("dial_khz", "dial_hz", "0", "range-dial_hz"),
        ("dial_khz", "dial_hz", "-7", "bad-dial_hz"),
        ("dial_khz", "dial_hz", "7k", "bad-dial_hz"),
        ("dial_mhz", "dial_hz", "7.0415", "7041500"),
        ("dial_mhz", "dial_hz", "14.070001", "14070001"),
        ("dial_mhz", "dial_hz", "0.1360005", "136001"),
        ("dial_mhz", "dial_hz", "9999999999999", "bad-dial_hz"),
        ("dial_mhz", "dial_hz", "9" * 30, "bad-dial_hz"),
        ("dial_mhz", "dial_hz", "nan", "bad-dial_hz"),
        ("audio_khz", "audio_hz", "1.5037255", "1503.7255"),
        ("audio_khz", "audio_hz", "0.0000000004", "0"),
        ("audio_khz", "audio_hz", "-0.001", "range-audio_hz"),
        ("late_ms", "late_s", "100", "0.1"),
        ("late_ms", "late_s", "-1", "-0.001"),
        ("late_ms", "late_s", "0.0005", "0.000001"),
        ("late_ms", "late_s", "", ""),
        ("late_s", "late_s", "+0.10", "0.10"),
        ("snr_db", "snr_db", "+05", "05"),
        ("snr_db", "snr_db", "\u221205", "bad-snr_db"),
        ("snr_db", "snr_db", "-5 dB", "bad-snr_db"),
        ("snr_db", "snr_db", "1e1", "bad-snr_db"),
        # dBm = 10 lg (P / 1 mW): by the definition of the unit
        ("power_w", "power_dbm", "1", "30"),
        ("power_w", "power_dbm", "5", "36.99"),
        ("power_w", "power_dbm", "0.001", "0"),
        ("power_w", "power_dbm", "0", "bad-power_dbm"),
        ("power_w", "power_dbm", "-5", "bad-power_dbm"),
        ("power_mw", "power_dbm", "200", "23.01"),
        ("power_mw", "power_dbm", "0.0005", "range-power_dbm"),
        ("power_w", "power_dbm", "inf", "bad-power_dbm"),
        ("power_w", "power_dbm", "nan", "bad-power_dbm"),
        ("power_w", "power_dbm", "9" * 400, "bad-power_dbm"),
        ("audio_khz", "audio_hz", "9" * 15, "bad-audio_hz"),
        ("sure", "sure", "1.5", "range-more"),
        ("assisted", "assisted", "2", "range-more"),
    ],
)
def test_units(piece: str, target: str, written: str, wanted: str) -> None:
    text = recipe(rule(separator=",", columns=["time", piece]))
    assert values(target, text, f"{AT},{written}") == [wanted]
    if wanted and "-" not in wanted[1:] and "+" not in written:  # a constant stands for the same
        dial = "" if piece.startswith("dial") else "dial_hz = 1\n"
        constants = f"[constants]\n{RECEIVER}{dial}{piece} = '{written}'\n"
        text = recipe(rule(pattern="(?P<time>.*)"), constants=constants)
        found, _ = engine_lines(text, AT.encode())
        assert float(field(found[0].became, target)) == float(wanted)


def test_minutes_and_watches() -> None:
    text = recipe(rule("watch", separator=",", columns=["time", "on_min", "audio_hz", "mode"]))
    assert values("on_s", text, f"{AT},0.25,,\n{AT},1,5,KB\n{AT},,,\n") == ["15", "60", "missing-more"]


def test_decimal_comma() -> None:
    text = recipe(rule(separator=";", columns=["time", "dial_khz", "snr_db"]), "decimal = ','\n")
    assert values("dial_hz", text, f"{AT};7041,5;-3,5\n{AT};7.041,5;1\n{AT};7041.5;1\n") == [
        "7041500", "bad-dial_hz", "7041500",
    ]  # fmt: skip
    assert values("snr_db", text, f"{AT};7041;-3,5\n{AT};7041;1,2,3") == ["-3.5", "bad-snr_db"]


def test_words_that_stand_for_not_known_and_value_maps() -> None:
    top = "empty = ['--', 'none']\n[values.mode]\n'~' = 'KB15'\n'#' = ''\n'none' = 'X'\n'a b' = \"it's\"\n"
    text = recipe(rule(separator=",", columns=["time", "mode", "snr_db"]), top, f"{CONSTANTS}mode = 'C'\n")
    data = "".join(f"{AT},{mode},--\n" for mode in ["~", "#", "none", "--", "", "K", "~~", "None", "a b"])
    assert values("mode", text, data) == ["KB15", "C", "C", "C", "C", "K", "bad-mode", "None", "bad-mode"]


def test_an_unknown_word_in_the_time_is_a_bad_time() -> None:
    text = recipe(rule(separator=",", columns=["time", "sender"]), "empty = ['-']\n")
    assert [line.reason for line in compare(text, "-,Q1A\n,Q1A\n")] == ["bad-time", "bad-time"]


FROM_NAME = "[name]\npattern = '(?P<mode>[A-Z]+)_'\n"
FROM_RULE = {"constants": {"mode": "RULE"}}
FROM_TOP = f"{CONSTANTS}mode = 'TOP'\n"


@pytest.mark.parametrize(
    ("line", "carried", "ruled", "named", "wanted"),
    [
        ("LINE", True, True, True, "LINE"),
        ("", True, True, True, "CARRIED"),
        ("", False, True, True, "RULE"),
        ("", False, False, True, "NAME"),
        ("", False, False, False, "TOP"),
        ("LINE", False, False, False, "LINE"),
        ("", True, False, False, "CARRIED"),
    ],
)
def test_where_a_value_comes_from(line: str, carried: bool, ruled: bool, named: bool, wanted: str) -> None:
    rules = rule("carry", pattern="= (?P<mode>.*)")
    rules += rule(separator=",", columns=["time", "mode"], **(FROM_RULE if ruled else {}))
    text = recipe(rules, FROM_NAME if named else "", FROM_TOP)
    data = ("= CARRIED\n= \n" if carried else "") + f"{AT},{line}\n"
    found = compare(text, data, "NAME_1.txt")
    assert field(found[-1].became, "mode") == wanted


def test_carried_values_hold_until_the_next_and_only_after_their_line() -> None:
    rules = rule("carry", pattern="= (?P<dial_khz>.*)")
    rules += rule(separator=",", columns=["time", "dial_hz", "sender"], carry=["dial_hz"])
    rules += rule("noise", separator=";", columns=["time", "dbfs"])
    data = f"{AT},,Q1A\n= 1\n{AT},,Q1B\n{AT},5,Q1C\n{AT};-3\n{AT},,Q1D\n= 2\n{AT};-4\n= x\n{AT},,Q1E\n"
    text = recipe(rules)
    assert values("dial_hz", text, data) == [
        "7041500", "1000", "5", "5", "5", "2000", "bad-dial_hz",
    ]  # fmt: skip


def test_carried_values_are_not_those_of_another_file() -> None:
    text = recipe(rule("carry", pattern="= (?P<mode>.*)") + rule(separator=",", columns=["time", "mode"]))
    assert values("mode", text, f"= A\n{AT},\n") == ["A"]
    assert values("mode", text, f"{AT},\n") == [""]


def test_place_and_antenna_go_into_setups_only() -> None:
    constants = f"{CONSTANTS}place = 'JN58td'\nantenna = 'wire'\nmode = 'KB'\nsure = 0.5\n"
    rules = rule(separator=",", columns=["time", "sender"])
    rules += rule("setup", pattern="up (?P<time>\\S+) ?(?P<place>.*)") + rule(
        "note", pattern="(?P<text>.*) (?P<time>.*)"
    )
    found = compare(
        recipe(rules, "slot_s = 15\n", constants), f"{AT},Q1A\nup {AT}\nup {AT} JO62\nhello {AT}\n"
    )
    assert [line.became.split("\t", 2)[2] for line in found] == [
        "hut\t7041500\t\t\t\tKB\tQ1A\t\t\t\t\tsure=0.5",
        "hut\t7041500\t\t\t\tKB\t\t\tJN58td\t\t\tantenna=wire; slot_s=15",
        "hut\t7041500\t\t\t\tKB\t\t\tJO62\t\t\tantenna=wire; slot_s=15",
        "hut\t7041500\t\t\t\t\t\t\t\t\thello\t",
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("dial", "audio", "signal", "wanted"),
    [
        ("", "", "7042.25", ("7042250", "")),
        ("", "750.5", "7042.25", ("7041500", "750.5")),  # the dial is a whole number of Hz
        ("7041500", "", "7042.25", ("7041500", "750")),
        ("7041500", "", "7042.2504", ("7041500", "750.4")),
        ("7041500", "800", "7042.25", ("7041500", "800")),
        ("7041500", "", "7041", "range-audio_hz"),
        ("", "", "", "missing-dial_hz"),
        ("7041500", "x", "7042", "bad-audio_hz"),
        ("7041500", "", "x", "bad-audio_hz"),  # what cannot be read is told, and not left out
        ("", "", "x", "bad-dial_hz"),
    ],
)
def test_the_frequency_of_the_signal_itself(dial: str, audio: str, signal: str, wanted: object) -> None:
    text = recipe(
        rule(separator=",", columns=["time", "dial_hz", "audio_hz", "signal_khz"]),
        constants=f"[constants]\n{RECEIVER}",
    )
    (line,) = compare(text, f"{AT},{dial},{audio},{signal}")
    found = line.reason or (field(line.became, "dial_hz"), field(line.became, "audio_hz"))
    assert found == wanted


def test_details_do_not_pass_for_others() -> None:
    text = recipe(rule(separator=",", columns=["time", "decoder", "sure", "own"]), "keep = ['own']\n")
    data = f"{AT},x; sure=1,,\n{AT},,0.5; drift_hz=3,\n{AT},,,a; b=c\n{AT},x;y,,\n{AT},a=b,,c d\n"
    assert [line.reason for line in compare(text, data)] == [
        "bad-more",
        "bad-more",
        "bad-more",
        "bad-more",
        "",
    ]


def test_words_of_the_engines_language_are_names_like_others() -> None:
    keep = ["select", "order_", "table", "from", "value", "line", "raw", "end", "case", "null", "user", "all"]
    text = recipe(
        rule(separator=",", columns=["time", *keep, "order"])
        + rule("carry", separator=";", columns=["end", "line"]),
        f"keep = {keep}\n",
    )
    found = compare(
        text, f"E;L\n{AT}," + ",".join("" if k in ("end", "line") else "v" for k in keep) + ",random\n"
    )
    assert field(found[1].became, "end") == "E"
    assert field(found[1].became, "select") == "v"
    assert field(found[1].became, "order") == "random"


@pytest.mark.parametrize("piece", ["signal_hz", "signal_khz", "signal_mhz"])
@pytest.mark.parametrize("far", ["99999999999999", "-99999999999999", "9" * 25, "inf", "1e300"])
def test_signals_beyond_all_bounds_cost_their_own_line(piece: str, far: str) -> None:
    text = recipe(
        rule(separator=",", columns=["time", "dial_hz", piece]), constants=f"[constants]\n{RECEIVER}"
    )
    found, _ = engine_lines(text, f"{AT},,{far}\n{AT},1000,{far}\n{AT},1000,\n".encode())
    assert [line.reason for line in found] == ["bad-dial_hz", "bad-audio_hz", ""]
