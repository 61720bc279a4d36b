"""The truth beside a simulated log, as a JSON object: docs/simulate.md says what each key is."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np

from logtool import __version__
from logtool.simulate.cast import Cast
from logtool.simulate.differences import Sides, rounded, told_difference
from logtool.simulate.laws import IntArray
from logtool.simulate.loading import told_scenario
from logtool.simulate.receiving import Received
from logtool.simulate.scenario import FAULT_UNITS, Fault, Scenario
from logtool.simulate.sending import Sent
from logtool.simulate.timeline import Planted, Timeline
from logtool.simulate.times import HOUR_US, MINUTE_US, Night, written_time
from logtool.simulate.writing import Odd, Written

NEARLY_CERTAIN = 1.0 - 1e-12


def told_truth(
    scenario: Scenario,
    seed: int,
    parts: tuple[tuple[Timeline, ...], Cast, Sent, tuple[Received, ...]],
    sides: list[Sides],
    written: Written,
) -> dict[str, Any]:
    """Return all that is known of a simulated log."""
    timelines, cast, sent, got = parts
    nights = timelines[0].nights
    return {
        "logtool": __version__,
        "numpy": np.__version__,
        "seed": seed,
        "scenario": told_scenario(scenario),
        "nights": [{"night": str(night.day), **_span(night.start_us, night.end_us)} for night in nights],
        "files": written.ledgers,
        "sent": len(sent.at_us),
        "receivers": [_receiver(*both, sent, written) for both in zip(timelines, got, strict=True)],
        "differences": [told_difference(one, cast, sent) for one in sides],
        "planted": [_planted(line, one) for line in timelines for one in [*_steady(line), *line.planted]],
        "sender_jumps": [
            {"sender": cast.call[jump.sender], "at": written_time(jump.at_us), "size_hz": jump.size_hz}
            for jump in sent.jumps
        ],
        "false_decodes": [_odd(one, "sender") for one in written.false_decodes],
        "bad_lines": [_odd(one, "reason") for one in written.bad_lines],
        "senders": list(_senders(timelines, cast, sent, got)),
        "hours": [row for both in zip(timelines, got, strict=True) for row in _hours(*both, sent)],
    }


def _span(from_us: int, to_us: int) -> dict[str, str]:
    return {"from": written_time(from_us), "to": written_time(to_us)}


def _odd(one: Odd, note: str) -> dict[str, Any]:
    where = {"file": one.file, "line": one.line, "receiver": one.receiver, "at": written_time(one.at_us)}
    return {**where, note: one.note}


def _steady(timeline: Timeline) -> Iterator[Planted]:
    """What is wrong from beginning to end: it stands in the scenario's receiver, not among its faults."""
    given = timeline.receiver
    sizes = (
        ("oscillator-step", given.offset_hz), ("drift", given.drift_hz_per_h), ("clock-step", given.clock_s),
        ("clock-drift", given.clock_drift_s_per_h),
    )  # fmt: skip
    for kind, size in sizes:
        if size:
            yield Planted(
                Fault(kind=kind, size=size), timeline.nights[0].start_us, timeline.nights[-1].end_us
            )


def _planted(timeline: Timeline, one: Planted) -> dict[str, Any]:
    unit = FAULT_UNITS[one.fault.kind]
    minutes = (one.to_us - one.from_us) / MINUTE_US
    return {
        "what": one.fault.kind,
        "receiver": timeline.receiver.name,
        **_span(one.from_us, one.to_us),
        "minutes": rounded(minutes),
        "size": rounded(minutes if unit == "min" else one.fault.size),
        "unit": unit,
    }


def _receiver(timeline: Timeline, got: Received, sent: Sent, written: Written) -> dict[str, Any]:
    given = timeline.receiver
    starts, choices = timeline.blocks_us, timeline.choices
    antennas = []
    for number, antenna in enumerate(timeline.antennas):
        own = got.antenna == number
        antennas.append({
            "antenna": antenna.name,
            "listening_min": rounded(_listened_us(timeline, starts, choices, number) / MINUTE_US),
            "sent": int((got.listening & own).sum()),
            "heard": int((got.heard & own).sum()),
        })  # fmt: skip
    return {
        "receiver": given.name,
        "threshold_db": given.threshold_db,
        "threshold_width_db": given.threshold_width_db,
        "lowest_db": given.lowest_db,
        "highest_db": given.highest_db,
        "listening_min": rounded(sum(end - start for start, end in timeline.on) / MINUTE_US),
        "sent": int(got.listening.sum()),
        "expected": rounded(float(got.chance.sum())),
        "heard": int(got.heard.sum()),
        "false_decodes": sum(one.receiver == given.name for one in written.false_decodes),
        "bad_lines": sum(one.receiver == given.name for one in written.bad_lines),
        "antennas": antennas,
    }


def _listened_us(timeline: Timeline, starts: IntArray, choices: IntArray, number: int) -> int:
    """The listening in one antenna's blocks; a block ends with the next one's begin, or with listening."""
    ends = np.append(starts[1:], np.iinfo(np.int64).max)
    total = 0
    for start, end in zip(starts[choices == number].tolist(), ends[choices == number].tolist(), strict=True):
        total += sum(max(0, min(end, to) - max(start, begin)) for begin, to in timeline.on)
    return total


def _senders(
    timelines: tuple[Timeline, ...], cast: Cast, sent: Sent, got: tuple[Received, ...]
) -> Iterator[dict[str, Any]]:
    bounds = np.searchsorted(sent.sender[sent.by_sender], np.arange(len(cast.call) + 1)).tolist()
    for i, call in enumerate(cast.call):
        at = sent.by_sender[bounds[i] : bounds[i + 1]]
        yield {
            "sender": call,
            "locator": cast.locator[i],
            "sends_locator": bool(cast.with_locator[i]),
            "power_dbm": rounded(cast.power_dbm[i]),
            "activity": rounded(cast.activity[i]),
            "audio_hz": rounded(cast.audio_hz[i]),
            "sent": len(at),
            "receivers": [
                {
                    "receiver": timeline.receiver.name,
                    "distance_km": rounded(cast.distance_km[which, i]),
                    "bearing_deg": rounded(cast.bearing_deg[which, i]),
                    "snr_db": rounded(float(got[which].mean_db[at].mean()) if len(at) else float("nan")),
                    "expected": rounded(float(got[which].chance[at].sum())),
                    "heard": int(got[which].heard[at].sum()),
                }
                for which, timeline in enumerate(timelines)
            ],
        }


def _hours(timeline: Timeline, got: Received, sent: Sent) -> Iterator[dict[str, Any]]:
    """Each hour of each night: what was sent in it, and how much of that was to be expected and was heard."""
    hour = sent.at_us // HOUR_US
    order = np.argsort(hour, kind="stable")
    for night in timeline.nights:
        for number in range(night.start_us // HOUR_US, -(-night.end_us // HOUR_US)):
            bounds = np.searchsorted(hour[order], (number, number + 1))
            at = order[bounds[0] : bounds[1]]
            at = at[(sent.at_us[at] >= night.start_us) & (sent.at_us[at] < night.end_us)]
            yield _hour(timeline, night, number, got, sent, at)


def _hour(
    timeline: Timeline, night: Night, number: int, got: Received, sent: Sent, at: IntArray
) -> dict[str, Any]:
    begin, end = number * HOUR_US, (number + 1) * HOUR_US
    middle = np.array([min(max(begin + HOUR_US // 2, night.start_us), night.end_us - 1)])
    listened_us = sum(
        max(0, min(end, to, night.end_us) - max(begin, start, night.start_us)) for start, to in timeline.on
    )
    heard = at[got.heard[at]]
    senders = sent.sender[at]
    log_silent = np.bincount(senders, weights=np.log1p(-np.minimum(got.chance[at], NEARLY_CERTAIN)))
    return {
        "hour": written_time(begin),
        "night": str(night.day),
        "receiver": timeline.receiver.name,
        "listening_min": rounded(listened_us / MINUTE_US),
        "sent": len(at),
        "expected_planned": rounded(float(got.chance_planned[at].sum())),
        "expected": rounded(float(got.chance[at].sum())),
        "heard": len(heard),
        "senders_sent": len(np.unique(senders)),
        "senders_expected": rounded(float((1.0 - np.exp(log_silent)).sum())),
        "senders_heard": len(np.unique(sent.sender[heard])),
        "offset_hz": rounded(float(timeline.offset_hz(middle)[0])),
        "clock_s": rounded(float(timeline.clock_s(middle)[0])),
        "noise_dbfs": rounded(float(timeline.noise_dbfs(middle, timeline.antenna(middle))[0])),
    }
