"""Make `sample_logs/`: seven nights of an invented receiver: `python scripts/make_sample_logs.py [FOLDER]`.

`sample_logs/README.md` tells the scenario. The script prints what it wrote, file by file, as it counts it
itself. The bytes are the same on every machine: draws are raw bits put together by exact arithmetic, and what
comes from sines, powers and logarithms is rounded before it is used (only the packing of the `.gz` is up to
zlib). With the code that judges and counts logs it shares the layout's names, the distances and the sun.

The rules of the air, in plain terms (M: from memory; CP: common practice, no source):

- Spreading: free-space loss of ITU-R P.525 along the slant path, and 9 dB for all that is not named (M).
- Hops: equal ones of at most `HOP_KM` by a mirror at 300 km; each reflection at the ground takes 2 dB
  (ITU-R P.533, M).
- Absorption by day: the formula of Lucas and Haydon, ITSA-1 (1966, M), for each hop, averaged over five
  points of the path; so a path in the dark carries far, and one along the edge of the night nearly as far.
- Skip: the layer follows the sun with a lag of some hours (CP). Where the dial is above a hop's highest
  frequency (secant law) it costs 72 sqrt(f/f_highest - 1) + 5 dB, at most 60 dB: P.533's form (M) with its
  slope doubled, our choice, so that the skip zone is plain: near senders vanish in the evening.
- Antennas (CP): `wire` favours east and west, `dipole` north and south and what comes from high above.
- Noise (CP): from the antenna, some dB over ITU-R P.372's quiet rural level, more by night, wandering.
- Fading (CP): normal in dB, a slow part of each sender and a quick part of each message.
- Decoding (CP): half of the messages at -21 dB in 2500 Hz, softly; SNR in whole dB from -24 to +20.
- Frequency and clock (CP): the crystal follows the hut's temperature by 0.4 ppm a degree; the clock drifts.
- Habits (CP): most senders are on the air round eight in the evening of their sun, the others at any hour.
"""

from __future__ import annotations

import gzip
import heapq
import json
import sys
from bisect import bisect_right
from collections import Counter
from dataclasses import dataclass, replace
from datetime import UTC, datetime, timedelta
from itertools import pairwise
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from logtool.places.locator import centre, centres, locator_at
from logtool.places.sun import zenith_deg
from logtool.places.wgs84 import inverse
from logtool.records.layout import COLUMN_NAMES, LAYOUT_LINE, LAYOUT_VERSION, NAMES_LINE

SEED = 20260302
START = datetime(2026, 3, 2, 12, tzinfo=UTC)  # noon of the first night; all times below count from here
NIGHTS, DAY_S, HOUR_S, SLOT_S, BIN_S = 7, 86_400, 3_600, 15, 600
BINS = NIGHTS * DAY_S // BIN_S
RECEIVER, SITE, DIAL_HZ, MODE = "hut", "IN66lm", 7_041_500, "KB15"
SENDERS, PORTABLE, FALSE_DECODES = 350, 0.05, 9
BLUNT_KM, EARTH_KM, LAYER_KM, ABSORBING_KM, HOP_KM = 4_000, 6_371, 300, 110, 3_000
SUNSPOTS, GYRO_MHZ, DIAL_MHZ = 120, 1.2, DIAL_HZ / 1e6
POOR_NIGHT, POOR_LAYER = 4, 0.8  # the night of 6 March: the layer is thin
DECODED_DB, SOFT_DB, LOWEST_DB, HIGHEST_DB = -21.0, 0.8, -24, 20
ANTENNAS = {"wire": (-3.0, 2.5, 90), "dipole": (-3.5, 2.5, 0)}  # mean gain, swing in dB, favoured bearing
HIGH_ANGLE_DB, HIGH_ANGLE_KM = 3.0, 800  # the dipole's gain for what comes from high above
TAKEN_OFF_DB = -70.0  # what leaks in without an antenna
OWN_NOISE_DBM, FULL_SCALE_DBM = -122.0, -52.0  # the receiver's own noise; the input that fills the converter
HZ_PER_C, USUAL_C, CLOCK_S_PER_DAY = 2.8, 11.0, 0.045
ANSWERED, THANKED, IN_THE_EVENING = 0.5, 0.15, 0.7  # shares: calls, conversations, senders
PAUSE_SLOTS = (24, 200)  # of a sender between two calls or conversations: at least, and by chance
MISSED = 0.04  # of the messages that are strong enough
THANKS = ("TNX FER QSO GL 73 E E", "TNX 73 GN", "FB TNX GL", "WX RAIN 9C 73", "PSE QSL TNX")


def at(day: int, hour: int, minute: int = 0, second: int = 0) -> int:
    """Return seconds after `START` of a time on a day of March 2026."""
    return int((datetime(2026, 3, day, hour, minute, second, tzinfo=UTC) - START).total_seconds())


BREAK = at(8, 2, 14, 45)  # the recording ends without a stop
HEARING = ((at(2, 15), at(3, 23, 10)), (at(4, 3, 20), at(5, 12, 30)), (at(5, 17), BREAK),
           (at(8, 7, 5), at(9, 10, 30)))  # fmt: skip
TAKEN_OFF = (at(4, 20, 32), at(4, 20, 52))
THUNDER, THUNDER_DB = (at(4, 19, 30), at(4, 22)), 9.0
NOTES = (
    (at(2, 15), "first run, two antennas on the switch, batteries full"),
    (at(3, 23, 9), "battery at 10.9 V, charger on, back at three"),
    (at(4, 20, 31), "rain and thunder far off, antenna taken off"),
    (at(4, 20, 53), "antenna on again, thunder still about\\ttoo much for my liking"),
    (at(5, 12, 29), "off for the afternoon, new feed line for the dipole"),
    (at(7, 9, 40), "fog, sea calm, all well"),
    (at(8, 7, 6), "power had failed in the night, clock set again"),
    (at(9, 10, 29), "end of the week, everything off"),
)
# south, north, west, east in degrees, and the share of senders: where many people live, roughly
BOXES = (
    (51, 54, -3, 1, 8), (52, 54, -9, -7, 2), (55, 58, -5, -2, 2), (47.5, 48.5, -4, -2, 3),
    (44, 49, -1, 6, 9), (37, 43, -8, -1, 8), (48, 54, 5, 14, 13), (41, 46, 8, 14, 8), (56, 64, 10, 17, 5),
    (54, 63, 22, 28, 4), (46, 54, 14, 24, 9), (38, 46, 20, 27, 5), (47, 58, 28, 45, 8), (32, 41, 33, 46, 4),
    (52, 58, 55, 85, 3), (12, 28, 74, 82, 3), (24, 40, 105, 118, 3), (34, 38, 136, 140, 5),
    (13, 18, 99, 103, 1), (-8, -7, 107, 112, 2), (1, 3, 110, 116, 1), (-37, -32, 143, 150, 3),
    (-44, -38, 171, 173, 2), (31, 36, -7, 6, 3), (28, 29, -17, -14, 2), (6, 12, -8, 8, 2),
    (-33, -25, 20, 30, 2), (-4, 2, 34, 39, 1), (39, 44, -80, -71, 11), (29, 37, -90, -79, 8),
    (37, 44, -98, -83, 8), (33, 47, -122, -110, 5), (44, 48, -75, -62, 3), (18, 20, -72, -66, 2),
    (18, 24, -104, -97, 1), (-28, -10, -55, -41, 5), (-37, -28, -65, -58, 3), (4, 10, -75, -66, 2),
    (64, 66, -22, -15, 1),
)  # fmt: skip
# The reason for which a damaged line is set aside, and its damage. A change of kind makes a line of its own,
# other than a kind that does not exist.
FAULTS: tuple[tuple[str, dict[str, str]], ...] = (
    ("too-few-fields", {"cut": "38"}), ("too-few-fields", {"cut": "7"}), ("too-few-fields", {"cut": "61"}),
    ("too-many-fields", {"text": "TNX\tQSO"}), ("too-many-fields", {"more": "\t"}),
    ("too-long", {"text": "U" * 8_200}),
    ("not-utf8", {"text": "QRM \udce9t\udce9"}), ("not-utf8", {"sender": "Q1\udcff\udcfe"}),
    ("control-character", {"text": "CQ DE \x00\x00\x00"}), ("control-character", {"text": "TNX\rQSO"}),
    ("control-character", {"more": "report_db=\x1b-7"}), ("control-character", {"text": "CQ\u0085"}),
    ("bad-time", {"time": "2026-03-05T21:14:60Z"}), ("bad-time", {"time": "2026-02-31T04:00:00Z"}),
    ("bad-time", {"time": "2026-03-06 21:14:30"}),
    ("bad-kind", {"kind": "herd"}), ("bad-kind", {"kind": "HEARD"}),
    ("missing-receiver", {"receiver": ""}), ("missing-dial_hz", {"dial_hz": ""}),
    ("missing-locator", {"kind": "setup", "more": "antenna=wire"}),
    ("missing-more", {"kind": "watch", "more": "60"}),
    ("bad-receiver", {"receiver": "the hut"}), ("bad-dial_hz", {"dial_hz": "7041.5"}),
    ("bad-audio_hz", {"audio_hz": "1.2e3"}), ("bad-snr_db", {"snr_db": "+3"}),
    ("bad-late_s", {"late_s": "nan"}), ("bad-mode", {"mode": "KB 15"}), ("bad-sender", {"sender": "<...>"}),
    ("bad-addressee", {"addressee": "Q9?"}), ("bad-locator", {"locator": "ZZ99"}),
    ("bad-locator", {"locator": "JO6"}), ("bad-power_dbm", {"power_dbm": "5W"}),
    ("bad-text", {"text": "TNX \\q"}), ("bad-more", {"more": "report_db=-9; report_db=-9"}),
    ("range-time", {"time": "1969-12-31T23:59:45Z"}), ("range-dial_hz", {"dial_hz": "0"}),
    ("range-audio_hz", {"audio_hz": "-12"}), ("range-snr_db", {"snr_db": "-99"}),
    ("range-late_s", {"late_s": "3599.8"}), ("range-power_dbm", {"power_dbm": "100"}),
    ("range-locator", {"kind": "setup", "locator": "IN", "more": "antenna=wire"}),
    ("range-more", {"kind": "noise", "more": "dbfs=12.0; agc=off"}),
)  # fmt: skip
FloatArray = NDArray[np.float64]


class Dice:
    """Draws for one purpose, the same on every machine."""

    def __init__(self, *purpose: int) -> None:
        self._bits = np.random.PCG64([SEED, *purpose])

    def below(self, n: int) -> int:
        """Return a whole number from 0 to n - 1."""
        return int(self._bits.random_raw()) % n

    def shares(self, n: int) -> FloatArray:
        """Return n numbers from 0 to under 1."""
        shares: FloatArray = (self._raw(n) >> np.uint64(11)).astype(np.float64) / float(1 << 53)
        return shares

    def share(self) -> float:
        """Return a number from 0 to under 1."""
        return float(self.shares(1)[0])

    def normals(self, n: int) -> FloatArray:
        """Return n numbers, nearly normal (mean 0, deviation 1): twelve even ones added, which is exact."""
        even = self._raw(3 * n).view(np.uint16).reshape(n, 12).sum(axis=1)
        normals: FloatArray = even.astype(np.float64) / float(1 << 16) - 6.0
        return normals

    def call_sign(self) -> str:
        """Return a call sign that nobody has: Q, a digit and two or three letters."""
        letters = 2 + (self.below(4) > 0)
        return f"Q{self.below(10)}" + "".join(chr(ord("A") + self.below(26)) for _ in range(letters))

    def _raw(self, n: int) -> NDArray[np.uint64]:
        return np.asarray(self._bits.random_raw(n), dtype=np.uint64)


@dataclass(frozen=True)
class Sender:
    """One invented station: its call sign, place, power, frequency, clock and habits."""

    call: str
    locator: str
    power_dbm: float
    aerial_db: float
    audio_hz: float
    clock_s: float
    evening_s: int  # the middle of its hours, seconds after noon UTC
    hours: float
    keen: float
    names_power: bool


@dataclass(frozen=True)
class Over:
    """One message sent: when, by whom, to whom, its text, the report in it and whether it calls generally."""

    slot: int
    sender: int
    addressee: int | None
    text: str
    report_db: int | None = None
    named: bool = True


@dataclass(frozen=True)
class Entry:
    """One line of a log, and what will become of it: a kind, `comment`, `blank`, `repeated` or a reason."""

    at_s: int
    fate: str
    line: bytes


def invent_senders() -> list[Sender]:
    """Return the senders, each with a call sign of its own that begins with Q."""
    dice = Dice(1)
    senders: list[Sender] = []
    calls: set[str] = set()
    lots = [box for box in BOXES for _ in range(box[4])]
    while len(senders) < SENDERS:
        call = dice.call_sign()
        if call in calls:
            continue
        calls.add(call)
        south, north, west, east, _ = lots[dice.below(len(lots))]
        lat, lon = south + (north - south) * dice.share(), west + (east - west) * dice.share()
        portable = dice.share() < PORTABLE
        a, b, c, d = (float(x) for x in dice.normals(4))
        evening_h = 20 + 3.2 * a - lon / 15 if dice.share() < IN_THE_EVENING else 24 * dice.share()
        senders.append(Sender(
            call=call + "/P" * portable, locator=locator_at(lat, lon, 4),
            power_dbm=float(round(37 if portable else min(50, max(30, 41 + 5 * b)))),
            aerial_db=round(-6 + 3 * c - 3 * portable, 3), audio_hz=float(150 + dice.below(2_600)),
            clock_s=round(0.07 * d, 3), evening_s=round((evening_h - 12) * HOUR_S),
            hours=2 + 4 * dice.share(), keen=0.35 + 0.6 * dice.share(), names_power=dice.share() < 0.12,
        ))  # fmt: skip
    return senders


def on_the_way(share: float, arc: FloatArray, ends: tuple[FloatArray, FloatArray]) -> FloatArray:
    """Return latitudes and longitudes at a share of the way from the site to the ends. [rad]"""
    (lat, lon), home = ends, np.radians(centre(SITE))
    near, far = np.sin((1 - share) * arc) / np.sin(arc), np.sin(share * arc) / np.sin(arc)
    x = near * np.cos(home[0]) * np.cos(home[1]) + far * np.cos(lat) * np.cos(lon)
    y = near * np.cos(home[0]) * np.sin(home[1]) + far * np.cos(lat) * np.sin(lon)
    z = near * np.sin(home[0]) + far * np.sin(lat)
    return np.array([np.arctan2(z, np.hypot(x, y)), np.arctan2(y, x)])


def path_loss_db(senders: list[Sender]) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return loss by sender and ten minutes of the week [dB], and the senders' distances and bearings."""
    lat, lon = np.radians(centres([sender.locator for sender in senders]))
    lines = inverse(*centre(SITE), np.degrees(lat), np.degrees(lon))
    km = np.round(lines.distance_km, 1)
    hops = np.ceil(km / HOP_KM)
    half = km / hops / EARTH_KM / 2
    up = np.arctan2(np.cos(half) - EARTH_KM / (EARTH_KM + LAYER_KM), np.sin(half))  # the ray's elevation
    secant, flat_secant = (1 / np.sqrt(1 - (EARTH_KM * np.cos(up) / (EARTH_KM + h)) ** 2)
                           for h in (LAYER_KM, ABSORBING_KM))  # fmt: skip
    slant_km = hops * 2 * EARTH_KM * np.sin(half) / np.cos(up + half)
    loss = 32.45 + 20 * np.log10(DIAL_MHZ * slant_km) + 9 + 2 * (hops - 1)
    arc = km / EARTH_KM
    lag_bins = HOUR_S // BIN_S
    bins_s = START.timestamp() + BIN_S * (np.arange(-4 * lag_bins, BINS) + 0.5)
    layer, absorbing = [], []
    for share in (0.1, 0.3, 0.5, 0.7, 0.9):
        place = np.degrees(on_the_way(share, arc, (lat, lon)))
        zenith = zenith_deg(bins_s[None, :], place[0][:, None], place[1][:, None])
        light = np.sqrt(np.maximum(0, np.cos(np.radians(zenith))))
        lagged = sum(w * light[:, (4 - k) * lag_bins : light.shape[1] - k * lag_bins]
                     for k, w in enumerate((0.4, 0.25, 0.15, 0.12, 0.08)))  # fmt: skip
        layer.append(2.9 + 5.6 * lagged)
        low_sun = np.maximum(0, np.cos(np.radians(np.minimum(0.881 * zenith[:, 4 * lag_bins :], 90))))
        absorbing.append(np.maximum(0.1, (1 + 0.0037 * SUNSPOTS) * low_sun**1.3))
    critical = np.where(km[:, None] < BLUNT_KM, layer[2], np.minimum(layer[0], layer[4]))
    critical[:, POOR_NIGHT * DAY_S // BIN_S : (POOR_NIGHT + 1) * DAY_S // BIN_S] *= POOR_LAYER
    over = DIAL_MHZ / (critical * secant[:, None])
    skipped = np.where(over > 1, np.minimum(60, 72 * np.sqrt(np.maximum(0, over - 1)) + 5), 0)
    hop_db = 677.2 * flat_secant / ((DIAL_MHZ + GYRO_MHZ) ** 1.98 + 10.2)
    absorbed = (hops * hop_db)[:, None] * sum(absorbing) / len(absorbing)
    return np.round(loss[:, None] + absorbed + skipped, 3), km, np.round(lines.azimuth_a_deg, 3)


def noise_dbm() -> FloatArray:
    """Return the antenna's noise in 2500 Hz in each ten minutes of the week. [dBm]"""
    zenith = zenith_deg(START.timestamp() + BIN_S * (np.arange(BINS) + 0.5), *centre(SITE))
    wander = np.convolve(Dice(2).normals(BINS + 17), np.ones(18), "valid") / 18**0.5  # sums that are exact
    noise = -107 + 7 * np.clip((zenith - 80) / 25, 0, 1) + 1.2 * wander
    noise[THUNDER[0] // BIN_S : THUNDER[1] // BIN_S] += THUNDER_DB
    return np.round(noise, 1)


def overs_of_week(senders: list[Sender]) -> list[Over]:
    """Return every message sent in the week: general calls, and conversations that alternate slots."""
    dice = Dice(3)
    overs: list[Over] = []
    on_air: list[list[tuple[int, int]]] = [[] for _ in senders]
    waiting: list[tuple[int, int]] = []
    for i, sender in enumerate(senders):
        for day in range(-1, NIGHTS + 1):
            if dice.share() < sender.keen:
                middle_s = day * DAY_S + sender.evening_s + 1_800 * float(dice.normals(1)[0])
                first, last = (int(middle_s + side * sender.hours * HOUR_S / 2) // SLOT_S for side in (-1, 1))
                on_air[i].append((first, last))
                waiting.append((first, i))
    heapq.heapify(waiting)
    free_from = [-NIGHTS * DAY_S] * len(senders)
    while waiting:
        slot, i = heapq.heappop(waiting)
        if not any(first <= slot < last for first, last in on_air[i]):
            continue
        pause = PAUSE_SLOTS[0] + dice.below(PAUSE_SLOTS[1])
        if slot < free_from[i]:
            heapq.heappush(waiting, (free_from[i] + pause, i))
            continue
        me = senders[i]
        calls = 1 + dice.below(4)
        watts = f" {round(10 ** (me.power_dbm / 10 - 3))}W" if me.names_power else ""
        overs += [Over(slot + 2 * k, i, None, f"CQ DE {me.call} {me.locator}{watts}") for k in range(calls)]
        slot += 2 * calls - 1
        able = [j for j in range(len(senders)) if j != i and free_from[j] < slot
                and any(first <= slot < last for first, last in on_air[j])]  # fmt: skip
        if able and dice.share() < ANSWERED:
            j = able[dice.below(len(able))]
            there = senders[j].call
            mine, theirs = (max(-21, min(12, round(-7 + 6 * float(x)))) for x in dice.normals(2))
            said = [(j, i, f"{me.call} DE {there} RPT {mine}", mine),
                    (i, j, f"{there} DE {me.call} R RPT {theirs}", theirs),
                    (j, i, f"{me.call} DE {there} R TNX 73", None),
                    (i, j, f"{there} DE {me.call} 73", None)]  # fmt: skip
            for k, (who, whom, text, report) in enumerate(said):
                overs.append(Over(slot + k, who, whom, text, report))
            slot += len(said)
            if dice.share() < THANKED:
                overs.append(Over(slot, j, None, THANKS[dice.below(len(THANKS))], named=False))
            free_from[j] = slot + 2
        free_from[i] = slot + 2
        heapq.heappush(waiting, (slot + pause, i))
    return [over for over in overs if 0 <= over.slot * SLOT_S < NIGHTS * DAY_S]


def antennas_of_week() -> list[tuple[int, str]]:
    """Return when which antenna is switched on: each hour has both, their order by chance."""
    dice, switched = Dice(4), []
    for hour in range(NIGHTS * DAY_S // HOUR_S):
        names = list(ANTENNAS)[:: 1 - 2 * dice.below(2)]
        switched += [(hour * HOUR_S, names[0]), (hour * HOUR_S + HOUR_S // 2, names[1])]
    before = max(name for name in switched if name[0] <= TAKEN_OFF[0])[1]
    return sorted([*switched, (TAKEN_OFF[0], "none"), (TAKEN_OFF[1], before)])


def hearing(from_s: int, to_s: int) -> bool:
    """Return whether the receiver was on all that time."""
    return any(start <= from_s and to_s <= end for start, end in HEARING)


def hut_c(at_s: float) -> float:
    """Return the temperature in the hut, a day's swing and a slow fall through the week. [deg C]"""
    return round(USUAL_C + 5 * float(np.cos(2 * np.pi * (at_s / DAY_S - 0.12))) - 0.4 * at_s / DAY_S, 1)


def line_of(at_s: int, kind: str, **fields: object) -> Entry:
    """Return a record of the receiver."""
    time = (START + timedelta(seconds=at_s)).strftime("%Y-%m-%dT%H:%M:%SZ")
    given = {"time": time, "kind": kind, "receiver": RECEIVER, "dial_hz": DIAL_HZ, **fields}
    return Entry(at_s, kind, "\t".join(str(given.get(name, "")) for name in COLUMN_NAMES).encode())


def receptions(senders: list[Sender], noise: FloatArray) -> list[Entry]:
    """Return what the receiver decodes of all that is sent, and what it takes for messages by mistake."""
    loss_db, km, bearing_deg = path_loss_db(senders)
    overs = [over for over in overs_of_week(senders) if hearing(over.slot * SLOT_S, (over.slot + 1) * SLOT_S)]
    who, slot = np.array([over.sender for over in overs]), np.array([over.slot for over in overs])
    bins, dice = slot * SLOT_S // BIN_S, Dice(5)
    switched = antennas_of_week()
    gain = {name: np.round(mean + swing * np.cos(np.radians(2 * (bearing_deg - favoured))), 3)
            for name, (mean, swing, favoured) in ANTENNAS.items()}  # fmt: skip
    gain["dipole"] = gain["dipole"] + HIGH_ANGLE_DB * (km < HIGH_ANGLE_KM)
    gain["none"] = np.full(len(senders), TAKEN_OFF_DB)
    used = [switched[bisect_right(switched, (at_s, "~")) - 1][1] for at_s in (slot * SLOT_S).tolist()]
    gain_db = np.array([gain[name][i] for name, i in zip(used, who.tolist(), strict=True)])
    knots = dice.normals(len(senders) * (BINS + 1)).reshape(len(senders), BINS + 1)
    share = slot * SLOT_S % BIN_S / BIN_S
    slow_db = 3.5 * (knots[who, bins] * (1 - share) + knots[who, bins + 1] * share)
    power_db = np.array([sender.power_dbm + sender.aerial_db for sender in senders])[who]
    noises_dbm = np.where(np.array(used) == "none", OWN_NOISE_DBM, noise[bins])
    quick_db = 3.0 * dice.normals(len(overs))
    snr_db = power_db - loss_db[who, bins] + gain_db + slow_db + quick_db - noises_dbm
    chance = np.round(1 / (1 + np.exp(np.clip((DECODED_DB - snr_db) / SOFT_DB, -50, 50))), 9)
    decoded = np.flatnonzero(dice.shares(len(overs)) < (1 - MISSED) * chance)
    jitter = dice.normals(3 * len(overs)).reshape(3, -1)
    heard = []
    for k in decoded.tolist():
        over, sender, at_s = overs[k], senders[overs[k].sender], overs[k].slot * SLOT_S
        calling = over.named and over.addressee is None
        set_again_s = HEARING[3][0] if at_s >= HEARING[3][0] else 0
        late_s = 0.12 + sender.clock_s + CLOCK_S_PER_DAY * (at_s - set_again_s) / DAY_S + 0.03 * jitter[0, k]
        audio_hz = sender.audio_hz - HZ_PER_C * (hut_c(at_s) - USUAL_C) + 1.2 * jitter[1, k]
        heard.append(line_of(
            at_s, "heard", audio_hz=round(audio_hz), late_s=f"{late_s:.2f}", mode=MODE, text=over.text,
            snr_db=max(LOWEST_DB, min(HIGHEST_DB, round(float(snr_db[k] + 0.7 * jitter[2, k])))),
            sender=sender.call if over.named else "",
            addressee="" if over.addressee is None else senders[over.addressee].call,
            locator=sender.locator if calling else "",
            power_dbm=f"{sender.power_dbm:.0f}" if calling and sender.names_power else "",
            more="" if over.report_db is None else f"report_db={over.report_db}",
        ))  # fmt: skip
    return heard + false_decodes({sender.call for sender in senders})


def false_decodes(calls: set[str]) -> list[Entry]:
    """Return messages that nobody sent: call signs heard once, from places that nobody would believe."""
    dice = Dice(6)
    found: list[Entry] = []
    while len(found) < FALSE_DECODES:
        at_s = SLOT_S * dice.below(NIGHTS * DAY_S // SLOT_S)
        call, corner = dice.call_sign(), ("AA", "AR", "RA", "RR")[dice.below(4)]
        place = f"{corner}{dice.below(10)}{dice.below(10)}"
        if hearing(at_s, at_s + SLOT_S) and call not in calls and not TAKEN_OFF[0] <= at_s < TAKEN_OFF[1]:
            found.append(line_of(
                at_s, "heard", audio_hz=dice.below(2_900), snr_db=-24 + dice.below(3), mode=MODE,
                late_s=f"{(dice.below(500) - 250) / 100:.2f}", sender=call, locator=place,
                text=f"CQ DE {call} {place}",
            ))  # fmt: skip
    return found


def receiver_lines(noise: FloatArray) -> list[Entry]:
    """Return what the logging program writes beside receptions: setups, watch, noise, stops and notes."""
    lines, switched = [], antennas_of_week()
    for start, end in HEARING:
        in_force = switched[bisect_right(switched, (start, "~")) - 1][1]
        setups = [(start, in_force)] + [(at_s, name) for at_s, name in switched if start < at_s < end]
        for at_s, name in setups:
            more = f"antenna={name}; order=random; slot_s={SLOT_S}"
            lines.append(line_of(at_s, "setup", mode=MODE, locator=SITE, more=more))
        lines += [line_of(at_s, "watch", more="on_s=60") for at_s in range(start + 60, end + 1, 60)]
        for at_s in range(start + BIN_S // 2, end, BIN_S):
            bare = TAKEN_OFF[0] <= at_s < TAKEN_OFF[1]
            antenna_mw = 0.0 if bare else 10 ** (float(noise[at_s // BIN_S]) / 10)
            dbfs = 10 * float(np.log10(antenna_mw + 10 ** (OWN_NOISE_DBM / 10))) - FULL_SCALE_DBM
            more = f"dbfs={dbfs:.1f}; agc=off; temperature_c={hut_c(at_s)}"
            lines.append(line_of(at_s, "noise", more=more))
        if end != BREAK:
            lines.append(line_of(end, "stop"))
    return lines + [line_of(at_s, "note", text=text) for at_s, text in NOTES]


def damaged(entry: Entry, reason: str, changes: dict[str, str]) -> Entry:
    """Return a line that is set aside for the reason: the entry's, with other fields."""
    if "cut" in changes:
        return replace(entry, fate=reason, line=entry.line[: int(changes["cut"])])
    fields = dict(zip(COLUMN_NAMES, entry.line.decode().split("\t"), strict=True))
    if "kind" in changes and reason != "bad-kind":
        fields = {name: fields[name] if name in COLUMN_NAMES[:4] else "" for name in fields}
    whole = "\t".join({**fields, **changes}.values())
    return replace(entry, fate=reason, line=whole.encode("utf-8", "surrogateescape"))


def spoil(entries: list[Entry]) -> list[Entry]:
    """Return the lines with those that went wrong: damaged ones, and records written twice."""
    dice, cut = Dice(7), Entry(BREAK, "too-few-fields", line_of(BREAK, "heard").line[:29])
    heard = [k for k, entry in enumerate(entries) if entry.fate == "heard"]
    lots = [heard[k] for k in sorted({dice.below(len(heard)) for _ in range(len(FAULTS) + 18)})]
    for k in range(len(lots) - 1, 0, -1):  # a fair shuffle, by Fisher and Yates
        swap = dice.below(k + 1)
        lots[k], lots[swap] = lots[swap], lots[k]
    faults = dict(zip(lots, FAULTS, strict=False))
    twice, written = set(lots[len(FAULTS) :]), []
    for k, entry in enumerate(entries):
        if k in faults:
            reason, changes = faults[k]
            if "kind" in changes and reason != "bad-kind":
                written.append(entry)
            entry = damaged(entry, reason, changes)
        written += [entry, replace(entry, fate="repeated")] if k in twice else [entry]
    back = next(k for k, entry in enumerate(written) if entry.at_s >= BREAK)
    again = [
        replace(entry, fate="repeated")
        for entry in written[back - 8 : back]
        if entry.fate in ("heard", "watch")
    ]
    opened = Entry(BREAK, "comment", b"# opened again after a break")
    return [*written[:back], cut, Entry(BREAK, "blank", b""), opened, *again, *written[back:]]


def write_night(folder: Path, night: int, entries: list[Entry]) -> dict[str, object]:
    """Write one night's file and return what stands in it, as counted while it was made."""
    head = [
        Entry(0, "comment", f"{LAYOUT_LINE}{LAYOUT_VERSION}".encode()),
        Entry(0, "comment", NAMES_LINE.encode()),
    ]
    entries = head + entries
    start, ending = b"", b"\n"
    if night == 3:  # written on another computer: a BOM, and CR LF
        start, ending = b"\xef\xbb\xbf", b"\r\n"
    whole = start + ending.join(entry.line for entry in entries) + (b"" if night == NIGHTS - 1 else ending)
    name = f"{START + timedelta(days=night):%Y-%m-%d}.log" + ".gz" * (night == 2)
    if night == 2:
        with (folder / name).open("wb") as file, gzip.GzipFile("", "wb", 9, file, mtime=0) as packed:
            packed.write(whole)
    else:
        (folder / name).write_bytes(whole)
    fates = Counter(entry.fate for entry in entries)
    reasons = {fate: n for fate, n in sorted(fates.items()) if "-" in fate}
    kinds = {kind: fates[kind] for kind in ("heard", "setup", "watch", "noise", "stop", "note")}
    return {
        "file": name, "lines": len(entries), "blank": fates["blank"], "comments": fates["comment"],
        "records": sum(kinds.values()), "repeated": fates["repeated"], "set_aside": sum(reasons.values()),
        "reasons": reasons, "kinds": kinds,
    }  # fmt: skip


def main(folder: Path) -> None:
    """Write the seven files into the folder, and print what they hold."""
    folder.mkdir(parents=True, exist_ok=True)
    noise = noise_dbm()
    entries = receiver_lines(noise) + receptions(invent_senders(), noise)
    order = {kind: k for k, kind in enumerate(("watch", "noise", "stop", "setup", "heard", "note"))}
    entries.sort(key=lambda entry: (entry.at_s, order[entry.fate], entry.line))
    nights: list[list[Entry]] = [[] for _ in range(NIGHTS)]
    for entry in spoil(entries):
        nights[entry.at_s // DAY_S].append(entry)
    for before, after in pairwise(nights):  # a new file takes over the last lines
        last = [entry for entry in before[-3:] if entry.fate in ("heard", "watch", "noise")]
        after[:0] = [replace(entry, fate="repeated") for entry in last]
    files = [write_night(folder, night, lines) for night, lines in enumerate(nights)]
    print(json.dumps({"seed": SEED, "files": files}, indent=1))


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent.parent / "sample_logs")
