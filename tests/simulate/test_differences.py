"""The truth's differences and counts against what a plain script finds in the lines themselves."""

from __future__ import annotations

from collections import Counter, defaultdict

import numpy as np
import pytest

from tests.simulate.scenes import Told, told

TOGETHER = """
[nights]
number = 3
[[antenna]]
name = "wire"
[[antenna]]
name = "loop"
gain_db = -2
cosine_db = 3
[[receiver]]
name = "hut"
antennas = ["wire"]
[[receiver]]
name = "shed"
antennas = ["loop"]
own_sd_db = 3
[[fault]]
kind = "outage"
receiver = "hut"
at_min = 200
minutes = 100
[[fault]]
kind = "deaf"
receiver = "shed"
night = 2
at_min = 200
minutes = 100
size = 8
"""
IN_TURN = """
[nights]
number = 3
[[antenna]]
name = "wire"
[[antenna]]
name = "loop"
gain_db = -2
cosine_db = 3
[[receiver]]
order = "random"
[[fault]]
kind = "noise"
at_min = 100
minutes = 200
size = 10
"""


def planted(log: Told, what: str) -> dict[str, str]:
    (one,) = [one for one in log.truth["planted"] if one["what"] == what]
    return dict(one)


def estimand(log: Told, n: Counter[str]) -> float:
    """Mean over senders, by min(n, 10), of the truth's difference for each."""
    by_sender = {one["sender"]: one["difference_db"] for one in log.truth["differences"][0]["by_sender"]}
    weights = {sender: min(many, 10) for sender, many in n.items()}
    return sum(weight * by_sender[sender] for sender, weight in weights.items()) / sum(weights.values())


def test_receivers_together() -> None:
    log = told(TOGETHER)
    (pair,) = log.truth["differences"]
    assert (pair["this"], pair["that"], pair["design"]) == (
        {"receiver": "hut"},
        {"receiver": "shed"},
        "together",
    )
    spans = [planted(log, "outage"), planted(log, "deaf")]
    sides: dict[tuple[str, str], set[str]] = defaultdict(set)
    for line in log.of("heard"):
        if not any(one["from"] <= line["time"] < one["to"] for one in spans):
            sides[line["time"], line["sender"]].add(line["receiver"])
    found = Counter(tuple(sorted(who)) for who in sides.values())
    assert found == {
        ("hut", "shed"): pair["heard_by_both"], ("hut",): pair["only_this"], ("shed",): pair["only_that"],
    }  # fmt: skip
    assert len(sides) == pair["heard_by_either"] > 3000
    n = Counter(sender for _, sender in sides)
    assert {one["sender"]: one["heard"] for one in pair["by_sender"]} == n
    assert pair["senders"] == len(n)
    assert pair["difference_db"] == pytest.approx(estimand(log, n), abs=2e-6)


def test_differences_seen_lie_round_the_true_ones() -> None:
    """No threshold matters for strong senders: the mean difference of what both heard."""
    strong = TOGETHER.replace("[[antenna]]", "[path]\nat_1000_km_db = 40\nsender_sd_db = 0\n[[antenna]]", 1)
    strong = strong.replace("own_sd_db", "highest_db = 80\nown_sd_db").replace(
        '["wire"]\n', '["wire"]\nhighest_db = 80\n'
    )
    log = told(strong)
    (pair,) = log.truth["differences"]
    seen: dict[tuple[str, str], dict[str, int]] = defaultdict(dict)
    spans = [planted(log, "outage"), planted(log, "deaf")]
    for line in log.of("heard"):
        if not any(one["from"] <= line["time"] < one["to"] for one in spans):
            seen[line["time"], line["sender"]][line["receiver"]] = int(line["snr_db"])
    both = [(sender, snr["hut"] - snr["shed"]) for (_, sender), snr in seen.items() if len(snr) == 2]
    assert len(both) == len(seen)
    true = {one["sender"]: one["difference_db"] for one in pair["by_sender"]}
    off = np.array([difference - true[sender] for sender, difference in both])
    spread = np.sqrt(2.0**2 + 3.0**2 + 2 / 12)  # own fading of both, and two roundings to whole dB
    assert abs(off.mean()) < 4 * spread / np.sqrt(len(off))
    assert off.std() == pytest.approx(spread, rel=4 / np.sqrt(2 * len(off)))


def test_antennas_in_turn() -> None:
    log = told(IN_TURN)
    (pair,) = log.truth["differences"]
    assert pair["design"] == "in-turn"
    setups = sorted((line["time"], line["more"].partition(";")[0][8:]) for line in log.of("setup"))
    heard: Counter[str] = Counter()
    n: Counter[str] = Counter()
    for line in log.of("heard"):
        heard[[name for at, name in setups if at <= line["time"]][-1]] += 1
        n[line["sender"]] += 1
    assert heard == {"wire": pair["only_this"], "loop": pair["only_that"]}
    assert pair["heard_by_both"] == 0
    antennas = {one["antenna"]: one["heard"] for one in log.truth["receivers"][0]["antennas"]}
    assert antennas == heard
    assert {one["sender"]: one["heard"] for one in pair["by_sender"]} == n
    assert pair["difference_db"] == pytest.approx(estimand(log, n), abs=2e-6)


def test_hours_count_what_the_lines_say() -> None:
    log = told(IN_TURN)
    heard = Counter(line["time"][:13] for line in log.of("heard"))
    senders: dict[str, set[str]] = defaultdict(set)
    for line in log.of("heard"):
        senders[line["time"][:13]].add(line["sender"])
    for hour in log.truth["hours"]:
        assert hour["heard"] == heard[hour["hour"][:13]]
        assert hour["senders_heard"] == len(senders[hour["hour"][:13]])
    noisy = [hour for hour in log.truth["hours"] if hour["expected"] < hour["expected_planned"] - 1e-6]
    span = planted(log, "noise")
    assert noisy
    assert all(span["from"][:13] <= hour["hour"][:13] <= span["to"][:13] for hour in noisy)


def test_pairs_of_three_sides_in_the_order_of_the_scenario() -> None:
    text = "".join(f'[[receiver]]\nname = "{name}"\n' for name in "cab")
    pairs = told(f"[nights]\nnumber = 1\n{text}").truth["differences"]
    assert [(one["this"]["receiver"], one["that"]["receiver"]) for one in pairs] == [
        ("c", "a"),
        ("c", "b"),
        ("a", "b"),
    ]
    assert {one["difference_db"] for one in pairs} == {0.0}


def test_hour_that_two_nights_share_has_a_row_of_each() -> None:
    """The first night ends at 12:15, the second begins at 12:30."""
    log = told('[nights]\nhours = "utc"\nfrom_h = 12.5\nto_h = 12.25\n[senders]\nsessions_per_night = 10\n')
    shared = [one for one in log.truth["hours"] if one["hour"] == "2026-03-02T12:00:00Z"]
    assert [(one["night"], one["listening_min"]) for one in shared] == [
        ("2026-03-01", 15),
        ("2026-03-02", 30),
    ]
    assert min(one["sent"] for one in shared) > 0
    assert sum(one["sent"] for one in log.truth["hours"]) == log.truth["sent"]
