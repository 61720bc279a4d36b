"""Invented transmissions that two sides hear, with a known difference; shares nothing with what is tried on them.

A sender has a level and an activity of its own, and a difference of its own round the true mean. A transmission fades
for both sides together and for each on its own. A side decodes it by its SNR, softly, and reports whole dB. What
neither decodes is dropped.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
SENDERS_POWER_DB = (-7.0, 0.0, 3.0, 6.0)  # beside a usual one
BUSIEST = 60.0  # times the least active
LOGISTIC_PER_NORMAL = 0.551  # a logistic curve so wide has the spread of a normal one of width 1


@dataclass(frozen=True)
class Setting:
    """One kind of table; the defaults are a plain case. `this` comes first in pairs."""

    difference_db: float = 0.0
    senders: int = 40
    sent: int = 800
    between_senders_db: float = 1.0
    this_share_of_between: float = 0.5  # the rest falls on that side, turned; 1 is all on this side
    level_db: float = -16.0
    level_spread_db: float = 5.0
    activity: float = 0.8  # 0 is equal; larger is more unequal
    busiest_share: float = 0.0  # of all sent, by one sender
    fading: str = "normal"  # normal, heavy (t with 4 degrees of freedom), rayleigh
    together_db: float = 3.5
    own_db: tuple[float, float] = (2.5, 2.5)
    steady: float = 0.0  # how much of a sender's fading lasts to its next transmission
    noise_db: float = 0.0  # spread of this side's noise from one spell of time to the next
    spells: int = 10
    tells_spells: bool = False
    threshold_db: tuple[float, float] = (-21.0, -21.0)
    width_db: tuple[float, float] = (1.2, 1.2)
    curve: str = "normal"  # normal, logistic, hard
    missed: tuple[float, float] = (0.0, 0.0)  # share that a side misses however strong
    highest_db: tuple[float, float] = (np.inf, np.inf)
    per_strength: float = 0.0  # how much more a sender's difference is for each dB of its level


@dataclass(frozen=True)
class Made:
    """A table, and the mean of its senders' true differences, weighted by at most ten transmissions of each."""

    sender: NDArray[np.int64]
    this_db: Floats
    that_db: Floats
    of_these_db: float
    spell: NDArray[np.int64] | None


def _scatter(rng: np.random.Generator, setting: Setting, n: int) -> Floats:
    """Fading with mean 0 and spread 1."""
    if setting.fading == "heavy":
        return rng.standard_t(4, n) / np.sqrt(2)
    if setting.fading == "rayleigh":
        strength_db = 10 * np.log10(rng.exponential(size=n))
        return (strength_db + 10 * np.euler_gamma / np.log(10)) / (10 / np.log(10) * np.pi / np.sqrt(6))
    return rng.standard_normal(n)


def _fading(rng: np.random.Generator, setting: Setting, sender: NDArray[np.int64]) -> Floats:
    """Fading of each transmission, which may last within a sender."""
    fresh = _scatter(rng, setting, len(sender))
    if not setting.steady:
        return fresh
    fading = fresh.copy()
    for at in range(1, len(sender)):
        if sender[at] == sender[at - 1]:
            fading[at] = setting.steady * fading[at - 1] + np.sqrt(1 - setting.steady**2) * fresh[at]
    return fading


def _decodes(rng: np.random.Generator, setting: Setting, side: int, snr_db: Floats) -> NDArray[np.bool_]:
    n = len(snr_db)
    soft = {
        "normal": rng.standard_normal(n),
        "logistic": rng.logistic(scale=LOGISTIC_PER_NORMAL, size=n),
        "hard": np.zeros(n),
    }[setting.curve]
    above = snr_db + setting.width_db[side] * soft > setting.threshold_db[side]
    return above & (rng.random(n) >= setting.missed[side])


def make(setting: Setting, rng: np.random.Generator) -> Made:
    """Make one table."""
    power_db = rng.choice(SENDERS_POWER_DB, setting.senders)
    level_db = setting.level_db + power_db + setting.level_spread_db * rng.standard_normal(setting.senders)
    off_db = setting.between_senders_db * rng.standard_normal(setting.senders)
    off_db += setting.per_strength * (level_db - setting.level_db)
    activity = np.minimum(rng.random(setting.senders) ** -setting.activity, BUSIEST)
    share = activity / activity.sum()
    if setting.busiest_share:
        share *= (1 - setting.busiest_share) / (1 - share[0])
        share[0] = setting.busiest_share
    sent = np.maximum(1, np.round(share * setting.sent)).astype(int)
    sender = np.repeat(np.arange(setting.senders), sent)
    n = len(sender)
    spell = rng.integers(setting.spells, size=n)
    noise_db = setting.noise_db * rng.standard_normal(setting.spells)[spell]
    common_db = level_db[sender] + setting.together_db * _fading(rng, setting, sender)
    this_db = (
        common_db
        + setting.difference_db / 2
        + setting.this_share_of_between * off_db[sender]
        + setting.own_db[0] * _fading(rng, setting, sender)
        - noise_db
    )
    that_db = (
        common_db
        - setting.difference_db / 2
        - (1 - setting.this_share_of_between) * off_db[sender]
        + setting.own_db[1] * _fading(rng, setting, sender)
    )
    heard = [_decodes(rng, setting, side, snr_db) for side, snr_db in enumerate((this_db, that_db))]
    either = heard[0] | heard[1]
    weight = np.minimum(np.bincount(sender[either], minlength=setting.senders), 10)
    of_these_db = setting.difference_db + float(np.average(off_db, weights=weight))
    reported = [
        np.where(on, np.minimum(np.round(snr_db), highest), np.nan)[either]
        for on, snr_db, highest in zip(heard, (this_db, that_db), setting.highest_db, strict=True)
    ]
    return Made(
        sender[either], reported[0], reported[1], of_these_db, spell[either] if setting.tells_spells else None
    )
