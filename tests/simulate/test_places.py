"""Where senders are and what antennas make of that, against pyproj on the truth's locators."""

from __future__ import annotations

import math

import numpy as np
import pytest
from pyproj import Geod
from scipy import stats

from logtool.simulate import scenario_of, simulate
from logtool.simulate.cast import call_numbers, call_sign
from tests.simulate.scenes import quiet, told

MANY = 400
CELL_KM = 8.0  # half a cell of six characters, where places are rounded to, is 5 km at most
WGS84 = Geod(ellps="WGS84")


def degrees(locator: str) -> tuple[float, float]:
    """Longitude and latitude of the middle of a cell of six characters, by the rule itself."""
    a, b, c, d, e, f = locator.upper()
    lon = (ord(a) - 65) * 20 - 180 + int(c) * 2 + (ord(e) - 65 + 0.5) / 12
    return lon, (ord(b) - 65) * 10 - 90 + int(d) + (ord(f) - 65 + 0.5) / 24


def way(site: str, locator: str) -> tuple[float, float]:
    """Distance in km and bearing at the site."""
    bearing_deg, _, length_m = WGS84.inv(*degrees(site), *degrees(locator))
    return length_m / 1000, bearing_deg % 360


def test_distances_and_bearings() -> None:
    two = '[[receiver]]\nname = "a"\nlocator = "JO74xa"\n[[receiver]]\nname = "b"\nlocator = "GG40gb"\n'
    truth = simulate(scenario_of(f"[nights]\nnumber = 1\n[senders]\nnumber = {MANY}\n{two}"), 1).truth
    for sender in truth["senders"]:
        for one, site in zip(sender["receivers"], ("JO74xa", "GG40gb"), strict=True):
            distance_km, bearing_deg = way(site, sender["locator"])
            assert one["distance_km"] == pytest.approx(distance_km, abs=1e-6)
            assert one["bearing_deg"] == pytest.approx(bearing_deg, abs=1e-6)


@pytest.mark.parametrize(("spread", "power"), [("distance", 1), ("area", 2)])
def test_senders_lie_evenly_where_they_shall(spread: str, power: int) -> None:
    """Even in the distance or its square between both ends, and in the bearing."""
    text = (
        f'[senders]\nnumber = {MANY}\nnear_km = 500\nfar_km = 2500\nspread = "{spread}"\n'
        "bearing_from_deg = 40\nbearing_to_deg = 130\n"
    )
    truth = simulate(scenario_of(text), 1).truth
    ways = [way("JO74xa", one["locator"]) for one in truth["senders"]]
    distances, bearings = np.array(ways).T
    assert distances.min() > 500 - CELL_KM
    assert distances.max() < 2500 + CELL_KM
    low, high = 500**power, 2500**power
    assert stats.kstest((distances**power - low) / (high - low), "uniform").pvalue > 1e-3
    assert stats.kstest((bearings - 40) / 90, "uniform").pvalue > 1e-3


def test_places_from_a_list() -> None:
    truth = simulate(scenario_of('[senders]\nnumber = 5\nlocators = ["jo62", "KP20le"]\n'), 1).truth
    assert [one["locator"] for one in truth["senders"]] == ["JO62", "KP20le", "JO62", "KP20le", "JO62"]


def test_locators_sent_are_those_of_the_senders() -> None:
    log = told(quiet(senders=40))
    places = {one["sender"]: one for one in log.truth["senders"]}
    calling = [line for line in log.of("heard") if line["addressee"] == ""]
    assert len(calling) > 1000
    for line in calling:
        sender = places[line["sender"]]
        assert line["locator"] == (sender["locator"][:4] if sender["sends_locator"] else "")
    assert {line["locator"] for line in log.of("heard") if line["addressee"]} == {""}


def test_answers_go_to_one_heard_just_before() -> None:
    log = told(quiet(senders=10))
    heard = log.of("heard")
    answers = [line for line in heard if line["addressee"]]
    assert 0.3 < len(answers) / len(heard) < 0.45
    slots = {(line["time"], line["sender"]) for line in heard}
    for line in answers[:200]:
        assert line["addressee"] != line["sender"]
        before = sorted(time for time, sender in slots if sender == line["addressee"] and time < line["time"])
        assert before
        assert (
            line["text"]
            == f"{line['addressee']} DE {line['sender']} {int(line['more'].split('report_db=')[1]):+d}"
        )


def test_antenna_pattern_by_bearing_and_distance() -> None:
    """A cosine, a table over the bearing and one over the distance, all added; noise against the receiver's own."""
    antennas = (
        '[[antenna]]\nname = "a"\ngain_db = 1.5\ncosine_db = 4\ncosine_deg = 30\ncosine_lobes = 1\n'
        '[[antenna]]\nname = "b"\ntable_deg = [90, 180, 270]\ntable_db = [2, -1, 5]\n'
        "distance_km = [500, 1500]\ndistance_db = [0, 6]\nnoise_db = -4\n"
    )
    truth = told(quiet(antennas, senders=60)).truth
    (pair,) = truth["differences"]
    assert (pair["this"], pair["that"]) == (
        {"receiver": "hut", "antenna": "a"},
        {"receiver": "hut", "antenna": "b"},
    )
    assert pair["design"] == "in-turn"
    locators = {one["sender"]: one["locator"] for one in truth["senders"]}
    noise_b = 10 * math.log10((10**-5.4 + 10**-6.5) / (10**-5 + 10**-6.5))
    assert len(pair["by_sender"]) == 60
    for one in pair["by_sender"]:
        distance_km, bearing_deg = way("JO74xa", locators[one["sender"]])
        a = 1.5 + 4 * math.cos(math.radians(bearing_deg - 30))
        turn = (bearing_deg - 270) % 360
        if turn < 180:  # from 5 dB at 270 over north to 2 dB at 90
            table_db = 5 - 3 * turn / 180
        else:
            table_db = (
                2 - 3 * (bearing_deg - 90) / 90 if bearing_deg < 180 else -1 + 6 * (bearing_deg - 180) / 90
            )
        b = table_db + 6 * min(max((distance_km - 500) / 1000, 0), 1) - noise_b
        assert one["difference_db"] == pytest.approx(a - b, abs=2e-6)


def test_call_signs_are_all_different_and_nobodys() -> None:
    numbers = call_numbers(1)
    calls = {call_sign(number) for number in numbers}
    assert len(calls) == len(numbers) == 175_760
    assert all(call[0] == "Q" and call[1].isdigit() and call[2:].isalpha() for call in calls)
