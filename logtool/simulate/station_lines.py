"""What a receiver writes beside receptions: setups, watch, noise and stops, each at the slot that its clock names."""

from __future__ import annotations

import numpy as np

from logtool.simulate.laws import US_PER_S, IntArray
from logtool.simulate.receiving import label_and_late
from logtool.simulate.scenario import Scenario
from logtool.simulate.streams import stream
from logtool.simulate.timeline import Timeline
from logtool.simulate.times import MINUTE_US, written_times
from logtool.simulate.writing import NOISE, SETUP, STOP, WATCH, Lines, line_of

LOWEST_DBFS, HIGHEST_DBFS = -200.0, 3.0  # by the log layout


def add_station_lines(lines: Lines, scenario: Scenario, timeline: Timeline, which: int, seed: int) -> None:
    """Add one receiver's lines that are no receptions."""
    _add_setups(lines, scenario, timeline, which)
    _add_watch(lines, scenario, timeline, which)
    _add_noise(lines, scenario, timeline, which, seed)
    stops = np.array(_stops(timeline), dtype=np.int64)
    texts = [line_of(time, "stop", timeline.receiver.name) for time in _stamped(scenario, timeline, stops)]
    lines.add(texts, stops, order=STOP, receiver=which, place=np.arange(len(stops)))


def _stamped(scenario: Scenario, timeline: Timeline, at_us: IntArray) -> list[str]:
    slot_us = round(scenario.nights.slot_s * US_PER_S)
    label_us, _ = label_and_late(at_us, np.zeros(len(at_us)), timeline.clock_s(at_us), slot_us)
    return written_times(label_us)


def _stops(timeline: Timeline) -> list[int]:
    """Where it stops with a word: at a night's end, and at a stop, but not where the recording breaks off."""
    broken = {one.from_us for one in timeline.planted if one.fault.kind == "outage"}
    return [end for _, end in timeline.on if end not in broken]


def _add_setups(lines: Lines, scenario: Scenario, timeline: Timeline, which: int) -> None:
    """At each beginning, at each change of the antenna, and where the antenna is taken off and put on again."""
    given = timeline.receiver
    bare = [one for one in timeline.planted if one.fault.kind == "antenna-off"]
    changes = {edge for one in bare for edge in (one.from_us, one.to_us)} | set(timeline.blocks_us.tolist())
    order = f"; order={given.order}" if given.order != "nights" and len(timeline.antennas) > 1 else ""
    at: list[int] = []
    names: list[str] = []
    for start, end in timeline.on:
        inside = sorted(change for change in changes if start < change < end)
        before = ""
        for instant in [start, *inside]:
            number = int(timeline.antenna(np.array([instant]))[0])
            off = any(one.from_us <= instant < one.to_us for one in bare)
            name = "none" if off else timeline.antennas[number].name
            if name != before:
                at.append(instant)
                names.append(name)
            before = name
    at_us = np.array(at, dtype=np.int64)
    texts = [
        line_of(
            time, "setup", given.name, dial_hz=scenario.air.dial_hz, mode=scenario.air.mode, locator=given.locator,
            more=f"antenna={name}{order}; slot_s={scenario.nights.slot_s:g}",
        )
        for time, name in zip(_stamped(scenario, timeline, at_us), names, strict=True)
    ]  # fmt: skip
    lines.add(texts, at_us, order=SETUP, receiver=which, place=np.arange(len(texts)))


def _add_watch(lines: Lines, scenario: Scenario, timeline: Timeline, which: int) -> None:
    """One each `watch_s` while it listens, and one for the rest before a stop; what an outage cuts off is lost."""
    step_us = timeline.receiver.watch_s * US_PER_S
    if not step_us:
        return
    stops = set(_stops(timeline))
    ends: list[int] = []
    lengths_s: list[float] = []
    for start, end in timeline.on:
        whole = range(start + step_us, end + 1, step_us)
        ends += whole
        lengths_s += [float(timeline.receiver.watch_s)] * len(whole)
        rest_us = (end - start) % step_us
        if rest_us and end in stops:
            ends.append(end)
            lengths_s.append(rest_us / US_PER_S)
    at_us = np.array(ends, dtype=np.int64)
    name, dial_hz = timeline.receiver.name, scenario.air.dial_hz
    texts = [
        line_of(time, "watch", name, dial_hz=dial_hz, more=f"on_s={round(on_s, 6):.10g}")
        for time, on_s in zip(_stamped(scenario, timeline, at_us), lengths_s, strict=True)
    ]
    lines.add(texts, at_us, order=WATCH, receiver=which, place=np.arange(len(texts)))


def _add_noise(lines: Lines, scenario: Scenario, timeline: Timeline, which: int, seed: int) -> None:
    step_us = round(timeline.receiver.noise_every_min * 60) * US_PER_S
    if not step_us:
        return
    half_us = step_us // 2 // MINUTE_US * MINUTE_US
    each = [
        np.arange(night.start_us + half_us, night.end_us, step_us, dtype=np.int64)
        for night in timeline.nights
    ]
    planned = np.concatenate(each)
    scatter = timeline.receiver.noise_sd_db * stream(seed, "noise readings", which).standard_normal(
        len(planned)
    )
    kept = timeline.listens(planned, planned)
    at_us = planned[kept]
    read = timeline.noise_dbfs(at_us, timeline.antenna(at_us)) + scatter[kept]
    levels = np.clip(np.round(read, 1), LOWEST_DBFS, HIGHEST_DBFS) + 0.0
    warmth = np.round(timeline.temperature_c(at_us), 1) + 0.0
    texts = [
        line_of(time, "noise", timeline.receiver.name, more=f"dbfs={dbfs:.1f}; temperature_c={warm:.1f}")
        for time, dbfs, warm in zip(
            _stamped(scenario, timeline, at_us), levels.tolist(), warmth.tolist(), strict=True
        )
    ]
    lines.add(texts, at_us, order=NOISE, receiver=which, place=np.arange(len(texts)))
