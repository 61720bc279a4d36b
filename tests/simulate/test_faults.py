"""Planted faults are where the truth says and as large: counted by hand on nights of two hours from 20:00 to 22:00."""

from __future__ import annotations

import math

import pytest

from tests.simulate.scenes import PLAIN, Told, quiet, told

NIGHT = "2026-03-01T"
SLOT_S = 15
LON_DEG = 14 + 23.5 / 12  # JO74xa: from 14 E, the last of 24 strips of 5 minutes, its middle
CERTAIN_TAIL = 1e-6


def fault(kind: str, **keys: float | str) -> str:
    given = "".join(f"{key} = {value!r}\n" for key, value in keys.items())
    return f'[[fault]]\nkind = "{kind}"\n{given}'


def between(lines: list[dict[str, str]], start: str, end: str) -> list[dict[str, str]]:
    return [line for line in lines if NIGHT + start <= line["time"] < NIGHT + end]


def values(lines: list[dict[str, str]], name: str) -> list[float]:
    return [float(line[name]) for line in lines]


def dbfs(log: Told) -> dict[str, float]:
    return {
        line["time"][11:16]: float(line["more"].split("dbfs=")[1].split(";")[0]) for line in log.of("noise")
    }


def planted(log: Told, what: str) -> dict[str, object]:
    (one,) = [one for one in log.truth["planted"] if one["what"] == what]
    return dict(one)


def test_nothing_wrong() -> None:
    log = told(quiet())
    assert len(log.of("watch")) == 120
    assert {line["more"] for line in log.of("watch")} == {"on_s=60"}
    assert [line["time"] for line in log.of("setup")] == [NIGHT + "20:00:00Z"]
    assert [line["time"] for line in log.of("stop")] == [NIGHT + "22:00:00Z"]
    assert list(dbfs(log)) == [f"{h}:{m:02d}" for h in (20, 21) for m in range(5, 60, 10)]
    assert set(values(log.of("heard"), "snr_db")) == {0.0}
    assert log.truth["planted"] == []
    assert log.truth["sent"] == log.truth["receivers"][0]["heard"] == len(log.of("heard"))
    assert log.truth["receivers"][0]["listening_min"] == 120


def test_stop() -> None:
    log = told(quiet(fault("stop", at_min=30, minutes=30)))
    assert [line["time"][11:] for line in log.of("stop")] == ["20:30:00Z", "22:00:00Z"]
    assert [line["time"][11:] for line in log.of("setup")] == ["20:00:00Z", "21:00:00Z"]
    assert len(log.of("watch")) == 90
    assert between(list(log.lines), "20:30:01", "21:00:00") == []
    assert planted(log, "stop") == {
        "what": "stop", "receiver": "hut", "from": NIGHT + "20:30:00Z", "to": NIGHT + "21:00:00Z", "minutes": 30.0,
        "size": 30.0, "unit": "min",
    }  # fmt: skip
    told_receiver = log.truth["receivers"][0]
    assert told_receiver["listening_min"] == 90
    assert told_receiver["sent"] < log.truth["sent"]


def test_outage_leaves_no_word_and_loses_the_last_watch() -> None:
    log = told(quiet(fault("outage", at_min=30.5, minutes=30)))
    assert [line["time"][11:] for line in log.of("stop")] == ["22:00:00Z"]
    assert len(log.of("watch")) == 30 + 59 + 1  # 59 whole minutes from 21:00:30, and the half before the stop
    assert log.of("watch")[-1]["more"] == "on_s=30"
    assert between(log.of("watch"), "20:30:01", "21:01:30") == []
    assert between(log.of("heard"), "20:30:30", "21:00:30") == []
    assert planted(log, "outage")["to"] == NIGHT + "21:00:30Z"


def test_slots_that_are_cut_are_not_heard() -> None:
    """From 20:30:05 on: the slot of 20:30:00 is cut, and that of 20:40:00 too, in which it comes back at 20:40:05."""
    busy = quiet(fault("outage", at_min=30 + 5 / 60, minutes=10), senders=20)
    times = {line["time"][11:19] for line in told(busy).of("heard")}
    assert "20:29:45" in times
    assert "20:40:15" in times
    assert not {"20:30:00", "20:40:00"} & times


@pytest.mark.parametrize("kind", ["deaf", "antenna-off"])
def test_deafness(kind: str) -> None:
    """Noise from outside at -50 falls by 60 dB under the receiver's own at -65: SNR falls by 60 - 14.9 dB."""
    log = told(quiet(fault(kind, at_min=30, minutes=30, size=60)))
    assert between(log.of("heard"), "20:30:00", "21:00:00") == []
    assert len(between(log.of("heard"), "20:00:00", "20:30:00")) > 20
    assert len(log.of("watch")) == 120
    levels = dbfs(log)
    whole = 10 * math.log10(10**-5 + 10**-6.5)
    deaf = 10 * math.log10(10**-11 + 10**-6.5)
    assert levels["20:25"] == pytest.approx(whole, abs=0.05)
    assert [levels[at] for at in ("20:35", "20:45", "20:55")] == pytest.approx([deaf] * 3, abs=0.05)
    assert levels["21:05"] == pytest.approx(whole, abs=0.05)
    names = [line["more"].partition(";")[0] for line in log.of("setup")]
    assert names == (["antenna=wire"] if kind == "deaf" else ["antenna=wire", "antenna=none", "antenna=wire"])


def test_deafness_of_some_decibels_lowers_snr_by_the_closed_form() -> None:
    log = told(quiet(fault("deaf", at_min=60, minutes=60, size=10)))
    noise_fall = 10 * math.log10((10**-5 + 10**-6.5) / (10**-6 + 10**-6.5))
    assert set(values(between(log.of("heard"), "21:00:00", "22:00:00"), "snr_db")) == {
        round(-10 + noise_fall)
    }


def test_noise() -> None:
    log = told(quiet(fault("noise", at_min=60, minutes=30, size=12)))
    rise = 10 * math.log10((10**-3.8 + 10**-6.5) / (10**-5 + 10**-6.5))
    levels = dbfs(log)
    assert levels["21:15"] - levels["20:55"] == pytest.approx(rise, abs=0.1)  # two readings, each to 0.1 dB
    assert set(values(between(log.of("heard"), "21:00:00", "21:30:00"), "snr_db")) == {round(-rise)}
    assert set(values(between(log.of("heard"), "21:30:00", "22:00:00"), "snr_db")) == {0.0}
    assert (planted(log, "noise")["size"], planted(log, "noise")["unit"]) == (12.0, "dB")


def test_oscillator_step() -> None:
    log = told(quiet(fault("oscillator-step", at_min=60, size=-42.5)))
    before = set(values(between(log.of("heard"), "20:00:00", "21:00:00"), "audio_hz"))
    after = set(values(between(log.of("heard"), "21:00:00", "22:00:00"), "audio_hz"))
    assert len(before) == len(after) == 1
    assert after.pop() - before.pop() == pytest.approx(-42.5, abs=0.1)  # two values, each to 0.1 Hz
    assert (planted(log, "oscillator-step")["from"], planted(log, "oscillator-step")["to"]) == (
        NIGHT + "21:00:00Z",
        NIGHT + "22:00:00Z",
    )


def test_drift_lasts_and_stays() -> None:
    log = told(quiet(fault("drift", at_min=30, minutes=60, size=20)))
    heard = {line["time"][11:19]: float(line["audio_hz"]) for line in log.of("heard")}
    base = log.truth["senders"][0]["audio_hz"]
    assert len(heard) > 100
    for time, audio_hz in heard.items():
        hours = (int(time[:2]) - 20) + int(time[3:5]) / 60 + int(time[6:]) / 3600
        assert audio_hz - base == pytest.approx(20 * min(max(hours - 0.5, 0.0), 1.0), abs=0.05)
    assert planted(log, "drift")["unit"] == "Hz/h"


def test_steady_errors_of_a_receiver_are_told() -> None:
    receiver = PLAIN + "offset_hz = 5\ndrift_hz_per_h = 2\nclock_s = 0.5\nclock_drift_s_per_h = 0.25\n"
    log = told(quiet(receiver=receiver))
    sizes = {one["what"]: (one["size"], one["unit"]) for one in log.truth["planted"]}
    assert sizes == {
        "oscillator-step": (5.0, "Hz"), "drift": (2.0, "Hz/h"), "clock-step": (0.5, "s"), "clock-drift": (0.25, "s/h"),
    }  # fmt: skip
    hours = {one["hour"][11:13]: one for one in log.truth["hours"]}
    assert (hours["20"]["offset_hz"], hours["21"]["offset_hz"]) == (6.0, 8.0)
    assert (hours["20"]["clock_s"], hours["21"]["clock_s"]) == (0.625, 0.875)


def test_swing_with_temperature() -> None:
    """Warmest at 15 h of the mean solar time."""
    receiver = PLAIN + "temperature_swing_c = 6\nhz_per_c = 3\n"
    log = told(quiet(receiver=receiver))
    base = log.truth["senders"][0]["audio_hz"]
    for line in log.of("heard"):
        at_h = int(line["time"][11:13]) + int(line["time"][14:16]) / 60 + int(line["time"][17:19]) / 3600
        swing_c = 6 * math.cos(2 * math.pi * (at_h + LON_DEG / 15 - 15) / 24)
        assert float(line["audio_hz"]) - base == pytest.approx(3 * swing_c, abs=0.051)
    warm = {line["time"][11:16]: float(line["more"].split("temperature_c=")[1]) for line in log.of("noise")}
    swing_c = 6 * math.cos(2 * math.pi * (20 + 5 / 60 + LON_DEG / 15 - 15) / 24)
    assert warm["20:05"] == pytest.approx(10 + swing_c, abs=0.05)


def test_clock_step_under_half_a_slot_shows_in_lateness() -> None:
    log = told(quiet(fault("clock-step", at_min=60, size=1.25)))
    before = values(between(log.of("heard"), "20:00:00", "21:00:00"), "late_s")
    after = values(between(log.of("heard"), "21:00:00", "22:00:00"), "late_s")
    assert sum(before) / len(before) == pytest.approx(
        0, abs=0.02
    )  # 4 s.e. of a jitter of 0.02 s and 30 messages
    assert sum(after) / len(after) == pytest.approx(1.25, abs=0.02)


def test_clock_beyond_the_limit_hears_nothing() -> None:
    log = told(quiet(fault("clock-step", at_min=60, size=4)))
    assert between(log.of("heard"), "21:00:00", "23:00:00") == []
    assert log.truth["hours"][1]["expected"] == 0
    assert log.truth["hours"][1]["expected_planned"] > 30


def test_clock_of_whole_slots_moves_all_times() -> None:
    log = told(quiet(fault("clock-step", at_min=60, size=3600)))
    assert [line["time"][11:] for line in log.of("stop")] == ["23:00:00Z"]
    assert between(list(log.lines), "21:00:01", "22:00:00") == []
    assert (
        len(between(log.of("watch"), "22:00:00", "23:00:01")) == 61
    )  # that of 21:00:00 too: written after the step


def test_slots_missed() -> None:
    """Slots are lost whole: of ten senders' transmissions in one, all or none."""
    log = told(quiet(fault("slots-missed", at_min=0, minutes=120, size=30), senders=10))
    heard, sent = len({line["time"] for line in log.of("heard")}), 480
    assert abs(heard / sent - 0.7) < 4 * math.sqrt(0.3 * 0.7 / sent)
    assert log.truth["receivers"][0]["expected"] == pytest.approx(0.7 * log.truth["sent"], rel=CERTAIN_TAIL)


def test_fault_of_one_receiver_leaves_the_other_alone() -> None:
    shed = PLAIN.replace("hut", "shed")
    text = quiet(fault("stop", receiver="shed", at_min=30, minutes=30), receiver=PLAIN + shed)
    log = told(text)
    assert len(log.of("watch", receiver="hut")) == 120
    assert len(log.of("watch", receiver="shed")) == 90
    assert [one["receiver"] for one in log.truth["planted"]] == ["shed"]


def test_fault_ends_with_its_night() -> None:
    log = told(quiet(fault("stop", at_min=90, minutes=600), nights=2))
    assert planted(log, "stop")["to"] == NIGHT + "22:00:00Z"
    assert planted(log, "stop")["minutes"] == 30
    assert log.truth["receivers"][0]["listening_min"] == 210


def test_sender_jumps_where_the_truth_says() -> None:
    text = quiet(senders=5).replace("audio_jumps = 0", "audio_jumps = 2\naudio_jump_hz = 50")
    log = told(text)
    jumps = log.truth["sender_jumps"]
    assert len(jumps) > 3
    for sender in log.truth["senders"]:
        for line in log.of("heard", sender=sender["sender"]):
            passed = [
                one["size_hz"]
                for one in jumps
                if one["sender"] == sender["sender"] and one["at"] <= line["time"]
            ]
            assert float(line["audio_hz"]) == pytest.approx(sender["audio_hz"] + sum(passed), abs=0.051)


def test_blocks_alternate() -> None:
    antennas = '[[antenna]]\nname = "wire"\n[[antenna]]\nname = "loop"\ngain_db = 6\n'
    log = told(quiet(antennas, receiver=PLAIN + "block_min = 20\n"))
    told_setups = [(line["time"][11:16], line["more"].partition(";")[0][8:]) for line in log.of("setup")]
    names = ["wire", "loop"] * 3
    assert told_setups == list(
        zip(["20:00", "20:20", "20:40", "21:00", "21:20", "21:40"], names, strict=True)
    )
    assert all("order=alternate" in line["more"] for line in log.of("setup"))
    assert set(values(between(log.of("heard"), "20:20:00", "20:40:00"), "snr_db")) == {6.0}
    assert set(values(between(log.of("heard"), "20:40:00", "21:00:00"), "snr_db")) == {0.0}
    assert [one["listening_min"] for one in log.truth["receivers"][0]["antennas"]] == [60, 60]


def test_blocks_at_random_have_each_antenna_once_a_round() -> None:
    antennas = "".join(f'[[antenna]]\nname = "{name}"\n' for name in "abc")
    text = quiet(antennas, receiver=PLAIN + 'block_min = 10\norder = "random"\n', nights=10)
    log = told(text)
    assert [one["listening_min"] for one in log.truth["receivers"][0]["antennas"]] == [400, 400, 400]
    firsts = {line["more"][8] for line in log.of("setup") if line["time"].endswith("T20:00:00Z")}
    assert firsts == {"a", "b", "c"}
    assert all("order=random" in line["more"] for line in log.of("setup"))


def test_whole_nights_apart() -> None:
    antennas = '[[antenna]]\nname = "wire"\n[[antenna]]\nname = "loop"\n'
    log = told(quiet(antennas, receiver=PLAIN + 'order = "nights"\n', nights=3))
    assert [line["more"] for line in log.of("setup")] == [
        f"antenna={name}; slot_s={SLOT_S}" for name in ("wire", "loop", "wire")
    ]
    assert [one["design"] for one in log.truth["differences"]] == ["apart"]
