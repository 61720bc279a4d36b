"""The ways of cutting a line, by hand: what is a line of a kind, and which text each piece is."""

from __future__ import annotations

import pytest

from tests.recipes.comparing import compare, engine_lines, recipe, rule

AT = "2026-03-01T18:00:00Z"


def pieces(text: str, data: str) -> list[list[str] | str]:
    """Return sender and text of each record, or the reason, after comparing all."""
    return [
        [line.became.split("\t")[8], line.became.split("\t")[12]] if line.became else line.reason or line.rule
        for line in compare(text, data)
    ]


@pytest.mark.parametrize(
    "separator", [",", ";", "\t", "|", "^", "]", "-", "\\", ".", "*", "n", "\u00a6", "'", "$", "["]
)
def test_separators(separator: str) -> None:
    text = recipe(rule(separator=separator, columns=["sender", "text", "time"], time_form="unix_s"))
    s = separator
    data = f'Q1A{s}hi{s}0\n"Q1A"{s}"a{s}""b"""{s}"0"\nQ1A{s} x {s}0{s}\nQ1A{s}0\nQ1A{s}a"b{s}0\nQ1A{s}"{s}0\n'
    data += f'Q1A{s}"a"b{s}0\nQ1A{s}""{s}0\nQ1A{s}"a\n"Q1A{s}a{s}0\nQ1A{s}"a"{s}0"\n'
    wanted = [["Q1A", "hi"], ["Q1A", f'a{s}"b"'], ["Q1A", "x"], "no-rule", ["Q1A", 'a"b'], "no-rule"]
    wanted += ["no-rule", ["Q1A", ""], "no-rule", "no-rule", "bad-time"]
    found = pieces(text, data)
    if separator in "n\\\t":  # letters of the text, and what is written with an escape
        assert len(found) == len(wanted)
    else:
        stated = [row if row != "bad-sender" else "no-rule" for row in found]
        assert stated == [*wanted[:2], "no-rule", *wanted[3:]]


def test_further_columns() -> None:
    text = recipe(rule(separator=",", columns=["time", "", "sender", "..."]))
    data = f"{AT},x,Q1A\n{AT},x,Q1A,y,z\n{AT},x\n{AT},x,Q1A,"
    assert pieces(text, data) == [["Q1A", ""], ["Q1A", ""], "no-rule", ["Q1A", ""]]


def test_blanks() -> None:
    text = recipe(rule(separator="space", columns=["time", "", "sender", "text"]))
    data = f" {AT}\t \tx  Q1A  CQ  Q1A \n{AT} x Q1A\n{AT} x Q1A \n{AT} x Q1A z\n"
    assert pieces(text, data) == [["Q1A", "CQ  Q1A"], "no-rule", "no-rule", ["Q1A", "z"]]
    text = recipe(rule(separator="space", columns=["time", "sender", "..."]))
    data = f"{AT} Q1A\n{AT} Q1A \n{AT}\tQ1A a b\n{AT}\n"
    assert pieces(text, data) == [["Q1A", ""], ["Q1A", ""], ["Q1A", ""], "no-rule"]
    assert pieces(recipe(rule(separator="space", columns=["time"])), f" {AT} \n{AT} x") == [
        ["", ""],
        "bad-time",
    ]


def test_fixed_places_are_characters() -> None:
    fixed = {"time": [1, 4], "sender": [6, 8], "text": [10]}
    text = recipe(
        rule("carry", name="day", pattern="(?P<date>.*)-", date_form="iso")
        + rule(fixed=fixed, time_form="%H%M")
    )
    data = "2026-03-01-\n1800 Q1A \u00e9\u20ac\U0001f4fb x  \n1801 Q1\n1802\n18\u00e9 0 Q1A\n25 00 Q1A\n180"
    assert pieces(text, data) == [
        "day", ["Q1A", "\u00e9\u20ac\U0001f4fb x"], ["Q1", ""], ["", ""], "no-rule", "no-rule", "no-rule",
    ]  # fmt: skip


def test_fixed_lines_that_carry_need_their_time_too() -> None:
    text = recipe(
        rule("carry", fixed={"time": [1, 5], "mode": [7, 9]}, time_form="%H:%M")
        + rule(separator=",", columns=["time", "sender", "text"])
    )
    assert pieces(text, f"18:00 ABC\n{AT},Q1A,x\n99:00 XYZ\n") == ["carry", ["Q1A", "x"], "no-rule"]


def test_json() -> None:
    text = recipe(rule(json={"time": "at", "sender": "from.call", "text": "m", "snr_db": "n"}))
    data = "\n".join([
        f'{{"at": "{AT}", "from": {{"call": "Q1A"}}, "m": "a\\u00e9\\t\\\\ \\"b\\"", "n": -3}}',
        f'  {{"m": null, "at":"{AT}","from":"Q1A"}}\t',
        f'{{"at": "{AT}", "m": "one\\ntwo"}}',
        f'{{"at": "{AT}", "m": "\\u0000"}}',
        f'{{"at": "{AT}", "from": {{"call": "a\\tb"}}}}',
        f'[{{"at": "{AT}"}}]', '"x"', "7", "null", "{}", '{"at": null}', f'{{"at": "{AT}"', f'{{"at": "{AT}"}} x',
        f'{{"at": "{AT}", "from.call": "Q1A", "from": []}}',
    ])  # fmt: skip
    assert pieces(text, data) == [
        ["Q1A", 'a\u00e9\\t\\\\ "b"'], ["", ""], ["", "one\\ntwo"], "control-character", "too-many-fields",
        "no-rule", "no-rule", "no-rule", "no-rule", "no-rule", "no-rule", "no-rule", "no-rule", ["", ""],
    ]  # fmt: skip


def test_json_lines_that_carry_are_objects_too() -> None:
    text = recipe(rule("carry", json={"mode": "m"}) + rule(separator=",", columns=["time", "sender", "text"]))
    data = f'{{"m": "A"}}\n{{"x": 1}}\n[1]\n12\n"x"\n{AT},Q1A,x\n'
    assert pieces(text, data) == ["carry", "carry", "no-rule", "no-rule", "no-rule", ["Q1A", "x"]]


@pytest.mark.parametrize(
    ("pattern", "line", "wanted"),
    [
        (r"(?P<time>\S+) (?P<sender>\S+)", f"{AT} Q1A", ["Q1A", ""]),
        (r"(?P<time>\S+) (?P<sender>\S+)", f"{AT} Q1A ", "no-rule"),
        (r"x|(?P<time>\S+) (?P<sender>\S+)", f"{AT} Q1A", ["Q1A", ""]),
        (r"x|(?P<time>\S+) (?P<sender>\S+)", "x", "bad-time"),
        (r"(a|(b))? ?(?P<time>\S+)( (?:c|d) (?P<sender>\S+))?", f"b {AT} d Q1A", ["Q1A", ""]),
        (r"(?P<time>\S+) [](]+ (?P<sender>\S+)", f"{AT} (] Q1A", ["Q1A", ""]),
        (r"(?P<time>\S+) [^]x(]+ (?P<sender>\S+)", f"{AT} zz Q1A", ["Q1A", ""]),
        (r"(?P<time>\S+) \(\[(?P<sender>\S+)\]", f"{AT} ([Q1A]", ["Q1A", ""]),
        (r"(?i)(?P<time>\S+) de (?P<sender>\S+)", f"{AT} DE Q1A", ["Q1A", ""]),
        (r"(?P<time>\S+)\s+'(?P<text>.*)'", f"{AT}  'it''s'", ["", "it''s"]),
        (r".*(?P<time>2026\S+).*", f"'; -- {AT} {{}}", ["", ""]),
    ],
)
def test_patterns(pattern: str, line: str, wanted: object) -> None:
    assert pieces(recipe(rule(pattern=pattern)), line) == [wanted]


@pytest.mark.parametrize(
    ("pattern", "line"),
    [
        (r"(?P<time>\S+) [[:upper:](]+ (?P<sender>\S+)", f"{AT} A( Q1A"),
        (r"(?P<time>\S+)\Q (\E(?P<sender>\S+)", f"{AT} (Q1A"),
    ],
)
def test_patterns_that_only_the_linear_matcher_knows(pattern: str, line: str) -> None:
    found, _ = engine_lines(recipe(rule(pattern=pattern)), line.encode())
    assert found[0].became.split("\t")[8] == "Q1A"


def test_many_pieces() -> None:
    columns = ["time", *(f"x{i}" for i in range(60)), "sender", "text"]
    where = {f"x{i}": f"{i}" for i in range(60)}
    numbers = " ".join(map(str, range(60)))
    text = recipe(rule(separator="space", columns=columns, where=where))
    assert pieces(text, f"{AT} {numbers} Q1A a b\n{AT} {numbers[:-1]} Q1A a b") == [["Q1A", "a b"], "no-rule"]


def test_the_first_rule_that_holds_counts() -> None:
    text = recipe(
        rule("skip", name="rx-off", pattern=".*OFF.*")
        + rule(name="received", separator=",", columns=["time", "state", "text"], where={"state": "RX"})
        + rule("note", separator=",", columns=["time", "state", "text"], where={"state": "T.|"})
        + rule("stop", pattern="(?P<time>.*)"),
        "skip = ['^#', 'never']\n",
    )
    data = f"{AT}, RX ,a\n{AT},TX,b\n{AT},,c\n{AT},RXX,d\n{AT}\nOFF,RX,\n# {AT},RX,\nx never y\n"
    found = compare(text, data)
    assert [line.rule for line in found] == [
        "received", "note", "note", "stop", "stop", "rx-off", "skip", "skip",
    ]  # fmt: skip


HEADED = {"time": "UTC", "sender": "Call", "snr_db": "S/N"}


def headed(**more: object) -> str:
    return rule(separator=",", header=True, columns=HEADED, **more)


def test_a_header_names_the_columns() -> None:
    data = f'\n// x\n"Call", UTC ,z,S/N\nQ1A,{AT},,-3\n"Call", UTC ,z,S/N\nCall,UTC,z,S/N\nQ1A,{AT},-3\nQ1B,{AT},,-4\n'
    found = compare(recipe(headed(), "skip = ['^//']\n"), data)
    assert [line.rule for line in found] == ["", "skip", "header", "heard", "header", "heard", "", "heard"]
    assert [line.reason for line in found][5:7] == ["bad-time", "no-rule"]


def test_a_header_and_other_rules() -> None:
    text = recipe(rule("carry", name="dial", pattern="dial (?P<dial_khz>.*)") + headed(carry=["sender"]))
    found = compare(text, f"Call,UTC,S/N\ndial 7074\nQ1A,{AT},-3\n,{AT},5\n")
    assert [line.became.split("\t")[3:9:5] for line in found[2:]] == [["7074000", "Q1A"], ["7074000", "Q1A"]]
