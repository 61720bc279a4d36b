"""One receiver through the nights: listening, antenna, noise, oscillator and clock, and what goes wrong."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from logtool.places.locator import centre
from logtool.simulate.antennas import blocks, in_use
from logtool.simulate.laws import BoolArray, FloatArray, IntArray, power_sum_db
from logtool.simulate.scenario import STEPS, Antenna, Fault, Receiver, Scenario, ScenarioError
from logtool.simulate.times import HOUR_US, MINUTE_US, Night

WARMEST_H = 15.0
"""Local mean solar time of the warmest hour, our choice."""
DEAF = ("deaf", "antenna-off")
OFF = ("stop", "outage")
_OFFSET_KINDS = {"oscillator-step": "step", "drift": "ramp"}
_CLOCK_KINDS = {"clock-step": "step", "clock-drift": "ramp"}

Span = tuple[int, int]


@dataclass(frozen=True)
class Planted:
    """A fault of one receiver, with the instants between which it lasts; the first is held, the last is not."""

    fault: Fault
    from_us: int
    to_us: int


class Timeline:
    """What one receiver does at any instant; instants in microseconds since 1970, UTC, by a right clock."""

    def __init__(self, scenario: Scenario, which: int, nights: tuple[Night, ...], seed: int) -> None:
        self.receiver: Receiver = scenario.receiver[which]
        self.antennas: tuple[Antenna, ...] = scenario.antennas_of(self.receiver)
        self.nights = nights
        self.lon_deg = centre(self.receiver.locator)[1]
        self.blocks_us, self.choices = blocks(self.receiver, len(self.antennas), nights, seed, which)
        self.planted = tuple(
            self._plant(fault) for fault in scenario.fault if fault.receiver in ("", self.receiver.name)
        )

    def _plant(self, fault: Fault) -> Planted:
        """Steps stay to the end, all else ends with its night at the latest."""
        night = self.nights[fault.night - 1]
        from_us = night.start_us + round(fault.at_min * MINUTE_US)
        if from_us >= night.end_us:
            lasts_min = (night.end_us - night.start_us) // MINUTE_US
            raise ScenarioError(
                f"[[fault]] {fault.kind}: at_min = {fault.at_min:g} is after the night of {night.day}, "
                f"which lasts {lasts_min} min; give less"
            )
        end_us = min(from_us + round(fault.minutes * MINUTE_US), night.end_us)
        return Planted(fault, from_us, self.nights[-1].end_us if fault.kind in STEPS else end_us)

    def _of(self, *kinds: str) -> list[Planted]:
        return [one for one in self.planted if one.fault.kind in kinds]

    @cached_property
    def on(self) -> tuple[Span, ...]:
        """The spans in which it listens: the nights without stops and outages."""
        spans = [(night.start_us, night.end_us) for night in self.nights]
        for off in self._of(*OFF):
            cut = [piece for a, b in spans for piece in ((a, min(b, off.from_us)), (max(a, off.to_us), b))]
            spans = [(a, b) for a, b in cut if b > a]
        return tuple(spans)

    def listens(self, from_us: IntArray, to_us: IntArray) -> BoolArray:
        """Return whether it listens all the time from one instant to another."""
        starts, ends = (np.array(edges) for edges in (list(zip(*self.on, strict=True)) or ([0], [0])))
        span = np.searchsorted(starts, from_us, side="right") - 1
        return np.asarray((span >= 0) & (to_us <= ends[span]))

    def hears(self, at_us: IntArray) -> BoolArray:
        """Return whether it is neither deaf nor without its antenna."""
        return np.asarray(self.loss_db(at_us) == 0.0)

    def antenna(self, at_us: IntArray) -> IntArray:
        """Return the number of the antenna in use."""
        return in_use(at_us, self.blocks_us, self.choices)

    def loss_db(self, at_us: IntArray) -> FloatArray:
        """Return what signals and noise from outside lose on their way in. [dB]"""
        return self._sum_of(at_us, *DEAF)

    def share_missed(self, at_us: IntArray) -> FloatArray:
        """Return the share of slots that are lost."""
        return np.minimum(self._sum_of(at_us, "slots-missed"), 100.0) / 100.0

    def _sum_of(self, at_us: IntArray, *kinds: str) -> FloatArray:
        total = np.zeros(np.shape(at_us))
        for one in self._of(*kinds):
            total = total + np.where((at_us >= one.from_us) & (at_us < one.to_us), one.fault.size, 0.0)
        return total

    def noise_dbfs(self, at_us: IntArray, antenna: IntArray | int, *, planned: bool = False) -> FloatArray:
        """Return the level of all noise on an antenna. [dB of full scale]

        With `planned`, as it would be had nothing gone wrong.
        """
        brought_db = np.array([one.noise_db for one in self.antennas])[antenna]
        from_outside = np.broadcast_to(self.receiver.noise_dbfs + brought_db, np.shape(at_us))
        if not planned:
            from_outside = from_outside + self._sum_of(at_us, "noise") - self.loss_db(at_us)
        return power_sum_db(from_outside, self.receiver.own_noise_dbfs)

    @cached_property
    def usual_noise_dbfs(self) -> float:
        """The noise for which the scenario's SNR holds: an antenna that brings none of its own."""
        return float(power_sum_db(np.array(self.receiver.noise_dbfs), self.receiver.own_noise_dbfs))

    def temperature_c(self, at_us: IntArray) -> FloatArray:
        """Return the temperature at the receiver. [deg C]"""
        sun_h = at_us / HOUR_US + self.lon_deg / 15.0
        swing = self.receiver.temperature_swing_c * np.cos(2.0 * np.pi * (sun_h - WARMEST_H) / 24.0)
        return np.asarray(self.receiver.temperature_c + swing)

    def offset_hz(self, at_us: IntArray) -> FloatArray:
        """Return what is added to audio frequencies. [Hz]"""
        given = self.receiver
        steady = given.offset_hz + given.drift_hz_per_h * self._hours(at_us)
        warmth = given.hz_per_c * (self.temperature_c(at_us) - given.temperature_c)
        return steady + warmth + self._grown(at_us, _OFFSET_KINDS)

    def clock_s(self, at_us: IntArray) -> FloatArray:
        """Return by how much the clock is fast. [s]"""
        steady = self.receiver.clock_s + self.receiver.clock_drift_s_per_h * self._hours(at_us)
        return steady + self._grown(at_us, _CLOCK_KINDS)

    def _hours(self, at_us: IntArray) -> FloatArray:
        return np.asarray((at_us - self.nights[0].start_us) / HOUR_US)

    def _grown(self, at_us: IntArray, kinds: dict[str, str]) -> FloatArray:
        """The sum of steps, and of ramps that grow while they last and then stay."""
        total = np.zeros(np.shape(at_us))
        for one in self._of(*kinds):
            passed_us = np.clip(at_us - one.from_us, 0, one.to_us - one.from_us)
            how_far = (at_us >= one.from_us) if kinds[one.fault.kind] == "step" else passed_us / HOUR_US
            total = total + one.fault.size * how_far
        return total
