"""Scenarios: what is wrong in one is told with file, line and key and what to do; the docs name every key."""

from __future__ import annotations

import doctest
from pathlib import Path

import pytest

from logtool.errors import FileError, UsageError
from logtool.simulate import (
    Plan,
    Scenario,
    ScenarioError,
    default_scenario,
    load_scenario,
    scenario_of,
    simulate,
    table,
)
from logtool.simulate.printing import key_tables, kind_table
from logtool.simulate.streams import PURPOSES, stream
from tests.docs.running import ROOT

WRONG = [
    ("[senders]\nnumbr = 5", "my.toml, line 2: `senders.numbr`: there is no such key; did you mean `number`?"),
    ("[senders]\nnumber = 0", "my.toml, line 2: `senders.number`: 0 is out of bounds; give 1 to 50000"),
    ("[senders]\nnumber = 5.5", "my.toml, line 2: `senders.number`: 5.5 cannot be used; write a whole number"),
    ("[senders]\nnumber = true", "line 2: `senders.number`: True cannot be used; write a whole number"),
    ("[senders]\npower_dbm = 37", "line 2: `senders.power_dbm`: 37 is no list; write [..., ...]"),
    ("[senders]\npower_dbm = []", "line 2: `senders.power_dbm`: it is empty; give one power at least"),
    ("[senders]\npower_dbm = [90]", "line 2: `senders.power_dbm`: 90 is out of bounds; give -30 to 70"),
    ("[senders]\nnear_km = 500\nfar_km = 100", "line 2: `senders.near_km`: 500 is not below `far_km`, 100"),
    ('[senders]\nspread = "even"', "line 2: `senders.spread`: 'even' is none of distance, area"),
    ('[senders]\nlocators = ["JO62", "ZZ99"]', "line 2: `senders.locators`: 'ZZ99' is not a locator"),
    ("[senders]\nlocator_characters = 5", "line 2: `senders.locator_characters`: 5 is none of 4, 6"),
    ("[nights]\nfirst = 2026-03-01T12:00:00Z", "line 2: `nights.first`: "),
    ('[nights]\nfirst = "2026-03-01"', "write a date like 2026-03-01"),
    ("[fading]\nown_df = 2", "line 2: `fading.own_df`: with 2 the spread is infinite; give over 2, or 0 for normal"),
    ("# one\n[air]\ndial_hz = 0", "line 3: `air.dial_hz`: 0 is out of bounds; give 1 to 3e+09"),
    ('[air]\nmode = "K B"', "line 2: `air.mode`: 'K B' has not the form"),
    ("[air]\npassband_low_hz = 3000", "line 2: `air.passband_low_hz`: 3000 is not below `passband_high_hz`, 3000"),
    ("[sender]\nnumber = 5", "line 1: `sender`: there is no such key; did you mean `senders`?"),
    ("scenario = 2", "line 1: `scenario`: 2 is out of bounds; give 1 to 1"),
    ("senders = 5", "line 1: `senders`: it is a table: write [senders] above its keys"),
    ("[receiver]\nname = 'a'", "line 1: `receiver`: there may be several: write [[receiver]] above the keys of each"),
    ('[[receiver]]\n[[receiver]]\nlocator = "JO"', "line 3: `receiver.locator`: 'JO' is too wide a place"),
    ("[[receiver]]\n[[receiver]]", "line 2: `receiver.name`: 'hut' is taken; give each receiver another name"),
    ('[[receiver]]\nantennas = ["loop"]', "line 2: `receiver.antennas`: there is no antenna 'loop'; there are wire"),
    ('[[receiver]]\nantennas = ["wire", "wire"]', "line 2: `receiver.antennas`: 'wire' stands twice"),
    ("[[receiver]]\nlowest_db = 20", "line 2: `receiver.lowest_db`: 20 is not below `highest_db`, 20"),
    ('[[antenna]]\nname = "none"', "line 2: `antenna.name`: 'none' is taken"),
    ("[[antenna]]\n[[antenna]]\nname='b'\ntable_deg = [1, 2]", "line 2: `antenna.table_db`: it has 0 values and"),
    ("[[antenna]]\ntable_deg = [2, 1]\ntable_db = [0, 0]", "line 2: `antenna.table_deg`: it does not rise; sort both"),
    ("[[antenna]]\ntable_deg = [0, 360]\ntable_db = [0, 0]", "0 and 360 are one bearing; leave one out"),
    ('[[fault]]\nkind = "deaf"', "line 1: `fault.size`: deaf needs a loss above 0 dB, like size = 60"),
    ('[[fault]]\nkind = "def"', "line 2: `fault.kind`: 'def' is none of stop, outage, deaf"),
    ('[[fault]]\nkind = "stop"\nreceiver = "x"', "line 3: `fault.receiver`: there is no receiver 'x'; there are hut"),
    ('[[fault]]\nkind = "stop"\nnight = 3', "line 3: `fault.night`: there are 2 nights; give one of them"),
    ('[[fault]]\nkind = "slots-missed"\nsize = 101', "line 3: `fault.size`: 101 is no share; give 0 to 100 %"),
    ("[air\n", "my.toml: it is no TOML ("),
]  # fmt: skip
UNDOABLE = [
    (
        '[[receiver]]\nlocator = "JQ78ab"\n[nights]\nfirst = 2026-06-21',
        'give hours = "utc" with from_h and to_h',
    ),
    (
        "[nights]\nbefore_sunset_h = -6\nafter_sunrise_h = -6\nfirst = 2026-06-21",
        "has no length; change its hours",
    ),
    (
        "[nights]\nbefore_sunset_h = 6\nafter_sunrise_h = 6\nfirst = 2026-12-21",
        "begins before the one before ends; shorten them",
    ),
    (
        '[[fault]]\nkind = "stop"\nat_min = 1400',
        "[[fault]] stop: at_min = 1400 is after the night of 2026-03-01, which",
    ),
    (
        '[nights]\nhours = "utc"\nfrom_h = 0\nto_h = 24\n[[receiver]]\nfalse_per_hour = 10000',
        "more false decodes than call signs; lower `false_per_hour`",
    ),
]


@pytest.mark.parametrize(("text", "message"), WRONG)
def test_wrong_scenarios(text: str, message: str) -> None:
    with pytest.raises(ScenarioError) as caught:
        scenario_of(text, "my.toml")
    assert message in str(caught.value)
    assert str(caught.value).startswith("my.toml")


@pytest.mark.parametrize(("text", "message"), UNDOABLE)
def test_scenarios_that_cannot_be(text: str, message: str) -> None:
    with pytest.raises(ScenarioError) as caught:
        simulate(scenario_of(text), 1)
    assert message in str(caught.value)


def test_files_that_cannot_be_read(tmp_path: Path) -> None:
    with pytest.raises(FileError, match=r"cannot be read .*; check the path"):
        load_scenario(tmp_path / "no.toml")
    (tmp_path / "odd.toml").write_bytes(b"about = '\xff'")
    with pytest.raises(FileError, match="save it as UTF-8"):
        load_scenario(tmp_path / "odd.toml")
    (tmp_path / "large.toml").write_bytes(b"#" * (1025 << 10))
    with pytest.raises(FileError, match="no scenario"):
        load_scenario(tmp_path / "large.toml")


def test_seed_below_0() -> None:
    with pytest.raises(ScenarioError, match="give a whole number of 0 or more"):
        simulate(Scenario(), -1)


@pytest.mark.parametrize(
    ("plan", "message"),
    [
        ({"own_df": 2.0}, "the spread is infinite"),
        ({"shared_r": 1.0}, "is no correlation; give 0 to under 1"),
        ({"heard": 0}, "both are 1 at least"),
    ],
)
def test_wrong_plans(plan: dict[str, float], message: str) -> None:
    with pytest.raises(UsageError, match=message):
        Plan(**plan)  # type: ignore[arg-type]


def test_table_of_what_nobody_hears() -> None:
    with pytest.raises(UsageError, match="hardly anything is heard; raise `level_db`"):
        table(Plan(heard=10, level_db=-200.0), 1)


def test_default_scenario_is_the_default() -> None:
    text = default_scenario()
    assert scenario_of(text) == scenario_of("") == Scenario()
    uncommented = "".join(
        f"{line[2:]}\n" for line in text.partition("# [[fault]]")[2].splitlines() if line.startswith("# ")
    )
    assert scenario_of("[[fault]]\n" + uncommented.replace("size = 0.0", "size = 9")).fault[0].size == 9


def test_docs_name_every_key_as_it_is() -> None:
    page = (ROOT / "docs" / "simulate.md").read_text(encoding="utf-8")
    assert key_tables() in page, "python -m tests.simulate.key_tables writes them anew"
    assert kind_table() in page


def test_docs_example_runs() -> None:
    page = (ROOT / "docs" / "simulate.md").read_text(encoding="utf-8")
    example = page.partition("```toml\n")[2].partition("```")[0]
    truth = simulate(scenario_of(example), 1).truth
    assert [one["design"] for one in truth["differences"]] == ["in-turn"]
    for key in truth:
        assert f"| `{key}` |" in page


def test_docs_example_in_python_gives_what_it_says() -> None:
    result = doctest.testfile(str(ROOT / "docs" / "simulate.md"), module_relative=False)
    assert (result.attempted, result.failed) == (3, 0)


def test_streams_are_named_once() -> None:
    assert len(set(PURPOSES)) == len(PURPOSES)
    with pytest.raises(ValueError, match="not in"):
        stream(1, "weather")
