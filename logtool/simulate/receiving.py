"""What one receiver makes of what is sent: which transmissions it decodes, and what it writes of them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logtool.simulate.antennas import gain_db
from logtool.simulate.cast import Cast
from logtool.simulate.laws import US_PER_S, BoolArray, FloatArray, IntArray, chance
from logtool.simulate.scenario import Scenario
from logtool.simulate.sending import Sent, fading, mean_levels_db
from logtool.simulate.streams import stream
from logtool.simulate.timeline import Timeline

JITTER_S = 0.02
"""Spread of the times measured, our choice."""
SURE_LOW, SURE_HIGH = 0.6, 1.0
"""Between which the sureness of right decodes lies, evenly; our choice."""


@dataclass(frozen=True)
class Received:
    """One receiver's part in all that was sent, an entry for each transmission.

    Attributes
    ----------
    mean_db : array
        SNR to be expected, without fading, with all that acts on it.
    antenna : array
        Number of the antenna in use.
    listening : array
        It listened through the whole slot.
    hearing : array
        And was neither deaf nor without its antenna.
    heard : array
        It decoded the message.
    chance, chance_planned : array
        Probability of that over fading and threshold; and had nothing gone wrong.
    label_us, snr_db, audio_hz, late_s, sure : array
        What it writes where it heard.
    """

    mean_db: FloatArray
    antenna: IntArray
    listening: BoolArray
    hearing: BoolArray
    heard: BoolArray
    chance: FloatArray
    chance_planned: FloatArray
    label_us: IntArray
    snr_db: IntArray
    audio_hz: FloatArray
    late_s: FloatArray
    sure: FloatArray


def label_and_late(
    at_us: IntArray, late_s: FloatArray, clock_s: FloatArray, slot_us: int
) -> tuple[IntArray, FloatArray]:
    """Return the slot that a receiver takes a message for, and how late it is after that. [microseconds, s]

    A clock that is fast by more than half a slot names another slot.

    Examples
    --------
    >>> at, late = label_and_late(np.array([0, 0]), np.zeros(2), np.array([0.4, 14.0]), 15_000_000)
    >>> at.tolist(), late.tolist()
    ([0, 15000000], [0.4, -1.0])
    """
    slots = np.rint(clock_s * US_PER_S / slot_us).astype(np.int64)
    return at_us + slots * slot_us, late_s + clock_s - slots * (slot_us / US_PER_S)


def mean_on_db(timeline: Timeline, cast: Cast, which: int, sent: Sent, level_db: FloatArray, antenna: IntArray | int,
               *, planned: bool = False) -> FloatArray:  # fmt: skip
    """Return the SNR to be expected of each transmission on an antenna. [dB]"""
    gains = np.array(
        [gain_db(one, cast.bearing_deg[which], cast.distance_km[which]) for one in timeline.antennas]
    )
    noise_db = timeline.noise_dbfs(sent.at_us, antenna, planned=planned) - timeline.usual_noise_dbfs
    loss_db = 0.0 if planned else timeline.loss_db(sent.at_us)
    return np.asarray(level_db + gains[antenna, sent.sender] - loss_db - noise_db)


def receive(
    scenario: Scenario, timeline: Timeline, cast: Cast, sent: Sent, which: int, shared: FloatArray, seed: int
) -> Received:
    """Return what a receiver makes of all that is sent; `shared` is the fading of deviation 1 of all receivers."""
    given, air, fades = timeline.receiver, scenario.air, scenario.fading
    slot_us = round(scenario.nights.slot_s * US_PER_S)
    antenna = timeline.antenna(sent.at_us)
    level_db = mean_levels_db(scenario, cast, sent, timeline.lon_deg, which, seed)
    mean_db = mean_on_db(timeline, cast, which, sent, level_db, antenna)
    planned_db = mean_on_db(timeline, cast, which, sent, level_db, antenna, planned=True)
    streams = stream(seed, "own fading", which), stream(seed, "own fading", which, 1)
    own = fading(sent, fades.own_df, fades.own_correlation_s, streams)
    snr_db = mean_db + fades.shared_sd_db * shared + given.own_sd_db * own
    softness = given.threshold_width_db * stream(seed, "threshold", which).standard_normal(len(snr_db))
    lateness = stream(seed, "lateness", which).standard_normal(len(snr_db))
    late_s = cast.late_s[sent.sender] + JITTER_S * lateness
    label_us, late_s = label_and_late(sent.at_us, late_s, timeline.clock_s(sent.at_us), slot_us)
    audio_hz = sent.audio_hz + timeline.offset_hz(sent.at_us)
    listening = timeline.listens(sent.at_us, sent.at_us + slot_us)
    fits = (audio_hz >= air.passband_low_hz) & (audio_hz <= air.passband_high_hz)
    fits &= np.abs(late_s) <= air.late_most_s
    missed = timeline.share_missed(sent.at_us)
    heard = (
        listening
        & fits
        & (snr_db + softness > given.threshold_db)
        & ~_lost(missed, sent, slot_us, which, seed)
    )
    fadings = ((fades.shared_sd_db, fades.shared_df), (given.own_sd_db, fades.own_df))
    margins = np.concatenate((mean_db, planned_db)) - given.threshold_db
    acted, planned = np.split(chance(margins, given.threshold_width_db, fadings), 2)
    shares = stream(seed, "sureness", which).random(len(snr_db))
    return Received(
        mean_db=mean_db,
        antenna=antenna,
        listening=listening,
        hearing=listening & timeline.hears(sent.at_us),
        heard=heard,
        chance=acted * (1.0 - missed) * (listening & fits),
        chance_planned=planned,
        label_us=label_us,
        snr_db=np.clip(np.rint(snr_db), given.lowest_db, given.highest_db).astype(np.int64),
        audio_hz=audio_hz,
        late_s=late_s,
        sure=SURE_LOW + (SURE_HIGH - SURE_LOW) * shares,
    )


def _lost(missed: FloatArray, sent: Sent, slot_us: int, which: int, seed: int) -> BoolArray:
    """Whether a transmission falls into a slot that is lost as a whole."""
    slots, slot = np.unique(sent.at_us // slot_us, return_inverse=True)
    return np.asarray(stream(seed, "missed slots", which).random(len(slots))[slot] < missed)
