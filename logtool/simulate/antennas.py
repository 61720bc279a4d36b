"""Antennas: their gain by bearing and distance, and which of them is in use when."""

from __future__ import annotations

import math

import numpy as np

from logtool.places.wgs84 import TURN_DEG
from logtool.simulate.laws import FloatArray, IntArray
from logtool.simulate.scenario import Antenna, Receiver
from logtool.simulate.streams import stream
from logtool.simulate.times import MINUTE_US, Night


def gain_db(antenna: Antenna, bearing_deg: FloatArray, distance_km: FloatArray) -> FloatArray:
    """Return an antenna's gain towards senders. [dB]

    Examples
    --------
    >>> loop = Antenna(gain_db=1.0, cosine_db=3.0, cosine_deg=90.0)
    >>> gain_db(loop, np.array([0.0, 90.0, 270.0]), np.full(3, 1000.0)).round(6).tolist()
    [-2.0, 4.0, 4.0]
    """
    turned = np.radians(antenna.cosine_lobes * (bearing_deg - antenna.cosine_deg))
    gain = antenna.gain_db + antenna.cosine_db * np.cos(turned)
    if antenna.table_deg:
        gain = gain + np.interp(bearing_deg, antenna.table_deg, antenna.table_db, period=TURN_DEG)
    if antenna.distance_km:
        gain = gain + np.interp(distance_km, antenna.distance_km, antenna.distance_db)
    return np.asarray(gain, dtype=np.float64)


def blocks(
    receiver: Receiver, antennas: int, nights: tuple[Night, ...], seed: int, which: int
) -> tuple[IntArray, IntArray]:
    """Return when blocks on one antenna begin, and which antenna each is on, as its number in the receiver's list.

    With `random`, each antenna comes once in every round, in a random order. A night begins a round of its own.
    """
    block_us = round(receiver.block_min * MINUTE_US)
    starts, choices = [], []
    for number, night in enumerate(nights):
        if receiver.order == "nights" or antennas == 1:
            starts.append(np.array([night.start_us]))
            choices.append(np.array([number % antennas]))
            continue
        many = math.ceil((night.end_us - night.start_us) / block_us)
        turns = np.tile(np.arange(antennas), (math.ceil(many / antennas), 1))
        if receiver.order == "random":
            turns = stream(seed, "order", which, number).permuted(turns, axis=1)
        starts.append(night.start_us + block_us * np.arange(many))
        choices.append(turns.ravel()[:many])
    return np.concatenate(starts).astype(np.int64), np.concatenate(choices).astype(np.int64)


def in_use(at_us: IntArray, blocks_us: IntArray, choices: IntArray) -> IntArray:
    """Return the number of the antenna in use at each instant."""
    block = np.searchsorted(blocks_us, at_us, side="right") - 1
    return np.asarray(choices[np.maximum(block, 0)])
