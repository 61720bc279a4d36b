"""What is sent: each transmission with its slot, sender, addressee and audio frequency, whoever hears it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logtool.simulate.cast import Cast
from logtool.simulate.laws import US_PER_S, FloatArray, IntArray, correlated, correlations, with_tails
from logtool.simulate.scenario import Scenario
from logtool.simulate.streams import stream
from logtool.simulate.times import HOUR_US, Night, slots_of

MOST_SLOTS = 0.5
"""A sender sends in half of the slots at most; between, it listens. Our choice."""
ANSWER_WITHIN_SLOTS = 4
MESSAGES = 3  # draws a transmission: whether it answers, the report in it, and one in reserve
REPORT_LOW_DB, REPORT_HIGH_DB = -24, 10


@dataclass(frozen=True)
class Jump:
    """A sender's frequency jumps and stays there."""

    sender: int
    at_us: int
    size_hz: float


@dataclass(frozen=True)
class Sent:
    """All transmissions in the order of their slots, then senders; an entry each.

    `by_sender` sorts them by sender, then slot. `addressee` is -1 where a message calls everybody.
    """

    night: IntArray
    at_us: IntArray
    sender: IntArray
    addressee: IntArray
    report_db: IntArray
    audio_hz: FloatArray
    by_sender: IntArray
    jumps: tuple[Jump, ...]

    def in_order(self, sorted_by_sender: FloatArray) -> FloatArray:
        """Return values that are sorted by sender in the order of the transmissions."""
        back = np.empty_like(sorted_by_sender)
        back[self.by_sender] = sorted_by_sender
        return back


def send(scenario: Scenario, nights: tuple[Night, ...], cast: Cast, seed: int) -> Sent:
    """Return all that is sent in the nights."""
    slot_us = round(scenario.nights.slot_s * US_PER_S)
    slots, senders, counts = [], [], []
    for number, night in enumerate(nights):
        at_us, sender = _sent_in(scenario, slots_of(night, slot_us), cast, stream(seed, "sessions", number))
        slots.append(at_us)
        senders.append(sender)
        counts.append(len(at_us))
    at_us, sender = np.concatenate(slots), np.concatenate(senders)
    by_sender = np.lexsort((at_us, sender))
    jumps = _jumps(scenario, nights, seed)
    addressee, report_db = _answers(scenario, at_us, sender, slot_us, stream(seed, "messages"))
    return Sent(
        night=np.repeat(np.arange(len(nights)), counts),
        at_us=at_us,
        sender=sender,
        addressee=addressee,
        report_db=report_db,
        audio_hz=_audio_hz(scenario, cast, at_us, sender, by_sender, jumps, seed),
        by_sender=by_sender,
        jumps=jumps,
    )


def _sent_in(
    scenario: Scenario, slots_us: IntArray, cast: Cast, dice: np.random.Generator
) -> tuple[IntArray, IntArray]:
    """Slots and senders of one night's transmissions, in order."""
    given, n = scenario.senders, len(cast.call)
    slot_us = round(scenario.nights.slot_s * US_PER_S)
    share = given.messages_per_hour * cast.activity * slot_us / HOUR_US
    sessions = dice.poisson(given.sessions_per_night, n)
    owner = np.repeat(np.arange(n), sessions)
    start = (dice.random(len(owner)) * len(slots_us)).astype(np.int64)
    length = np.ceil(dice.exponential(given.session_min, len(owner)) * 60.0 / scenario.nights.slot_s)
    length = np.minimum(length.astype(np.int64), len(slots_us) - start)
    before = np.repeat(np.cumsum(length) - length, length)
    slot = np.repeat(start, length) + np.arange(int(length.sum())) - before
    sender = np.repeat(owner, length)
    taken = dice.random(len(slot)) < np.minimum(share, MOST_SLOTS)[sender]
    both = np.unique(slot[taken] * n + sender[taken])
    return slots_us[both // n], both % n


def _answers(
    scenario: Scenario, at_us: IntArray, sender: IntArray, slot_us: int, dice: np.random.Generator
) -> tuple[IntArray, IntArray]:
    """Whom each transmission answers: the last one of an earlier slot, if it is near and another's; and a report."""
    draws = dice.random((len(at_us), MESSAGES))
    before = np.searchsorted(at_us, at_us, side="left") - 1
    near = (before >= 0) & (at_us - at_us[before] <= ANSWER_WITHIN_SLOTS * slot_us)
    answers = near & (sender[before] != sender) & (draws[:, 0] < scenario.senders.answers)
    reports = REPORT_LOW_DB + (draws[:, 1] * (REPORT_HIGH_DB - REPORT_LOW_DB)).astype(np.int64)
    return np.where(answers, sender[before], -1), reports


def _jumps(scenario: Scenario, nights: tuple[Night, ...], seed: int) -> tuple[Jump, ...]:
    found = []
    for number, night in enumerate(nights):
        dice = stream(seed, "jumps", number)
        many = dice.poisson(scenario.senders.audio_jumps, scenario.senders.number)
        owner = np.repeat(np.arange(len(many)), many)
        seconds = np.floor(dice.random(len(owner)) * (night.end_us - night.start_us) / US_PER_S)
        at_us = night.start_us + US_PER_S * seconds.astype(np.int64)
        sizes_hz = np.round(scenario.senders.audio_jump_hz * dice.standard_normal(len(owner)), 1)
        found += [Jump(*one) for one in zip(owner.tolist(), at_us.tolist(), sizes_hz.tolist(), strict=True)]
    return tuple(sorted(found, key=lambda jump: (jump.sender, jump.at_us)))


def _audio_hz(
    scenario: Scenario,
    cast: Cast,
    at_us: IntArray,
    sender: IntArray,
    by_sender: IntArray,
    jumps: tuple[Jump, ...],
    seed: int,
) -> FloatArray:
    """Each sender's steady offset, a random walk from its first transmission on, and its jumps."""
    walked = np.zeros(len(at_us))
    order, own = by_sender, sender[by_sender]
    if len(at_us) > 1:
        same = np.diff(own) == 0
        step_h = np.where(same, np.diff(at_us[order]) / HOUR_US, 0.0)
        draws = stream(seed, "wander").standard_normal(len(at_us))[1:]
        sums = np.concatenate(([0.0], np.cumsum(scenario.senders.audio_wander_hz * np.sqrt(step_h) * draws)))
        first = np.concatenate(([0], np.flatnonzero(~same) + 1))
        walked[order] = sums - np.repeat(sums[first], np.diff(np.append(first, len(own))))
    for jump in jumps:
        walked[(sender == jump.sender) & (at_us >= jump.at_us)] += jump.size_hz
    return np.asarray(cast.audio_hz[sender] + walked)


def mean_levels_db(
    scenario: Scenario, cast: Cast, sent: Sent, lon_deg: float, receiver: int, seed: int
) -> FloatArray:
    """Return each transmission's SNR at a receiver's site without fading, gain and unusual noise. [dB]

    The sender's level, the loss by distance, the curve of the day, and the night's luck.
    """
    path, dice = scenario.path, stream(seed, "nights")
    shape = (scenario.nights.number, len(cast.call))
    luck = path.night_sd_db * dice.standard_normal(shape[0])[:, None]
    luck = luck + path.sender_night_sd_db * stream(seed, "nights", 1).standard_normal(shape)
    far = np.log10(np.maximum(cast.distance_km[receiver], 1.0) / 1000.0)
    steady = cast.level_db - path.db_per_decade * far
    sun_h = sent.at_us / HOUR_US + lon_deg / 15.0
    curve = path.curve_db * np.cos(2.0 * np.pi * (sun_h - path.curve_peak_h) / 24.0)
    return np.asarray(steady[sent.sender] + luck[sent.night, sent.sender] + curve)


def fading(
    sent: Sent, df: float, correlation_s: float, streams: tuple[np.random.Generator, np.random.Generator]
) -> FloatArray:
    """Return fading of deviation 1 for each transmission, drawn for all that is sent, whoever hears it."""
    order = sent.by_sender
    r = correlations(sent.at_us[order], sent.sender[order], correlation_s)
    normal = correlated(streams[0].standard_normal(len(order)), r)
    return sent.in_order(with_tails(normal, df, streams[1]))
