"""A scenario: what is simulated. Each key with its default, unit, bounds and meaning, defined here and nowhere else.

The loader, the commented scenario that `--print-scenario` shows and the tables of `docs/simulate.md` come from it.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from datetime import date
from typing import Any

from logtool.errors import UsageError

SCENARIO_VERSION = 1
NAME_FORM = r"[A-Za-z0-9_-]{1,32}"
"""Names of receivers and antennas, by the log layout."""
MODE_FORM = r"[A-Za-z0-9_./+-]{1,16}"
MOST_SENDERS = 50_000
CERTAIN_DB = 1000.0

# What a fault's size is; those of `SPANS` last for `minutes`, the others stay.
FAULT_UNITS = {
    "stop": "min",
    "outage": "min",
    "deaf": "dB",
    "antenna-off": "dB",
    "noise": "dB",
    "oscillator-step": "Hz",
    "drift": "Hz/h",
    "clock-step": "s",
    "clock-drift": "s/h",
    "slots-missed": "%",
}
STEPS = ("oscillator-step", "clock-step")


class ScenarioError(UsageError):
    """A scenario that cannot be simulated; the message names its file, line and key."""


def _key(
    default: Any,
    unit: str,
    meaning: str,
    bounds: tuple[float, float] | None = None,
    *,
    words: tuple[str, ...] = (),
    form: str = "",
) -> Any:
    told = {"unit": unit, "meaning": meaning, "bounds": bounds, "words": words, "form": form}
    return field(default=default, metadata=told)


@dataclass(frozen=True)
class Nights:
    """When the receivers listen."""

    first: date = _key(date(2026, 3, 1), "date", "date on which the first night begins, by mean solar time")  # noqa: RUF009 - a date cannot be changed
    number: int = _key(2, "nights", "nights, one after the other", (1, 400))
    hours: str = _key(
        "sun", "", "`sun`: by the first receiver's sun; `utc`: by the clock", words=("sun", "utc")
    )
    before_sunset_h: float = _key(1.0, "h", "with `sun`: a night begins so long before sunset", (-6, 6))
    after_sunrise_h: float = _key(1.0, "h", "with `sun`: it ends so long after sunrise", (-6, 6))
    from_h: float = _key(18.0, "h UTC", "with `utc`: a night begins at this hour of its date", (0, 24))
    to_h: float = _key(
        6.0, "h UTC", "with `utc`: it ends at this hour, of the next date where not later", (0, 24)
    )
    slot_s: float = _key(15.0, "s", "length of a time slot, counted from midnight UTC", (0.1, 3600))


@dataclass(frozen=True)
class Air:
    """The frequency, and what a decoder can take."""

    dial_hz: int = _key(7_041_500, "Hz", "dial frequency", (1, 3_000_000_000))
    mode: str = _key("KB15", "", "name of the mode", form=MODE_FORM)
    passband_low_hz: float = _key(100.0, "Hz", "nothing is decoded below this audio frequency", (0, 24_000))
    passband_high_hz: float = _key(3000.0, "Hz", "nor above this one", (0, 24_000))
    late_most_s: float = _key(
        2.5, "s", "nothing is decoded that comes so much earlier or later by the receiver's clock", (0, 60)
    )


@dataclass(frozen=True)
class Path:
    """Signal-to-noise ratio of a sender without fading, on an antenna without gain, in the usual noise."""

    at_1000_km_db: float = _key(-10.0, "dB", "of a sender of 37 dBm at 1000 km", (-200, 200))
    db_per_decade: float = _key(20.0, "dB", "loss for ten times the distance", (-100, 100))
    sender_sd_db: float = _key(6.0, "dB", "spread of the senders (site, aerial), normal", (0, 60))
    curve_db: float = _key(
        3.0, "dB", "slow curve of the day: so much at its peak, and under it half a day on", (0, 60)
    )
    curve_peak_h: float = _key(0.0, "h", "local mean solar time of the peak", (0, 24))
    night_sd_db: float = _key(2.0, "dB", "spread from night to night, all senders alike", (0, 60))
    sender_night_sd_db: float = _key(2.0, "dB", "spread from night to night, each sender of its own", (0, 60))


@dataclass(frozen=True)
class Fading:
    """What is added to each transmission's signal-to-noise ratio, mean 0."""

    shared_sd_db: float = _key(4.0, "dB", "fading that all receivers have alike", (0, 60))
    shared_df: float = _key(
        0.0, "", "its tails: degrees of freedom of a t distribution, over 2; 0 for normal", (0, 1000)
    )
    shared_correlation_s: float = _key(
        60.0, "s", "its autocorrelation for one sender falls to 1/e in this time; 0 for none", (0, 86_400)
    )
    own_df: float = _key(0.0, "", "tails of each receiver's own fading (see `own_sd_db`)", (0, 1000))
    own_correlation_s: float = _key(0.0, "s", "autocorrelation of the own fading", (0, 86_400))


@dataclass(frozen=True)
class Senders:
    """Who sends, from where, and how often."""

    number: int = _key(60, "senders", "how many there are", (1, MOST_SENDERS))
    locators: tuple[str, ...] = _key(
        (), "", "their places, dealt out in turn; empty: places in the area below"
    )
    near_km: float = _key(300.0, "km", "nearest to the first receiver", (1, 19_000))
    far_km: float = _key(3000.0, "km", "farthest", (1, 19_000))
    bearing_from_deg: float = _key(0.0, "deg", "bearings from here clockwise", (0, 360))
    bearing_to_deg: float = _key(360.0, "deg", "to here", (0, 360))
    spread: str = _key(
        "distance", "", "evenly over `distance` or over the `area`", words=("distance", "area")
    )
    power_dbm: tuple[float, ...] = _key((30.0, 37.0, 40.0, 47.0), "dBm", "powers, drawn evenly", (-30, 70))
    messages_per_hour: float = _key(20.0, "1/h", "sent in a session by the median sender", (0, 36_000))
    activity_tail: float = _key(
        1.5,
        "",
        "exponent of the senders' unequal activity (Pareto; smaller is more unequal); 0 for equal",
        (0, 100),
    )
    sessions_per_night: float = _key(1.5, "1/night", "mean number of sessions (Poisson)", (0, 100))
    session_min: float = _key(60.0, "min", "mean length of a session (exponential)", (0.1, 1440))
    answers: float = _key(0.4, "share", "messages that answer another sender heard just before", (0, 1))
    with_locator: float = _key(0.7, "share", "senders that send their locator when they call", (0, 1))
    locator_characters: int = _key(4, "", "characters of the locator that they send", words=("4", "6"))
    with_power: float = _key(0.1, "share", "senders that send their power when they call", (0, 1))
    audio_low_hz: float = _key(300.0, "Hz", "lowest audio frequency", (0, 24_000))
    audio_high_hz: float = _key(2700.0, "Hz", "highest", (0, 24_000))
    audio_wander_hz: float = _key(
        0.5, "Hz", "random walk of each sender: standard deviation after an hour", (0, 1000)
    )
    audio_jumps: float = _key(0.05, "1/night", "mean number of jumps of a sender's frequency", (0, 100))
    audio_jump_hz: float = _key(100.0, "Hz", "standard deviation of a jump", (0, 10_000))
    late_sd_s: float = _key(0.1, "s", "spread of the senders' clocks, each steady", (0, 10))


@dataclass(frozen=True)
class Antenna:
    """An antenna: its gain by bearing and distance, and its noise."""

    name: str = _key("wire", "", "its name", form=NAME_FORM)
    gain_db: float = _key(0.0, "dB", "gain for all", (-200, 200))
    cosine_db: float = _key(
        0.0, "dB", "adds cosine_db * cos(cosine_lobes * (bearing - cosine_deg))", (-100, 100)
    )
    cosine_deg: float = _key(0.0, "deg", "bearing that the cosine favours", (0, 360))
    cosine_lobes: int = _key(2, "", "its lobes: 2 for an antenna alike to both sides", (1, 36))
    table_deg: tuple[float, ...] = _key(
        (), "deg", "bearings of a table, rising; between them in proportion", (0, 360)
    )
    table_db: tuple[float, ...] = _key((), "dB", "gain added at each of them", (-200, 200))
    distance_km: tuple[float, ...] = _key(
        (), "km", "distances of a table, rising; beyond its ends as at them", (0, 20_100)
    )
    distance_db: tuple[float, ...] = _key((), "dB", "gain added at each of them", (-200, 200))
    noise_db: float = _key(0.0, "dB", "noise that it brings, against the usual", (-100, 100))


@dataclass(frozen=True)
class Receiver:
    """A receiver with its decoder, oscillator, clock and log."""

    name: str = _key("hut", "", "its name", form=NAME_FORM)
    locator: str = _key("JO74xa", "", "its place, 4 characters or more")
    antennas: tuple[str, ...] = _key(
        (), "", "its antennas by name, switched in turn; empty: all of the scenario"
    )
    order: str = _key(
        "alternate",
        "",
        "how they are switched: `alternate`, `random` (each once a round), or one a night (`nights`)",
        words=("alternate", "random", "nights"),
    )
    block_min: float = _key(30.0, "min", "time on one antenna", (0.5, 1440))
    threshold_db: float = _key(
        -20.0, "dB", "half of the messages of this SNR are decoded", (-CERTAIN_DB, CERTAIN_DB)
    )
    threshold_width_db: float = _key(
        1.0, "dB", "softness: standard deviation of the threshold (probit)", (0, 60)
    )
    lowest_db: int = _key(-24, "dB", "lowest SNR that is written", (-60, 80))
    highest_db: int = _key(20, "dB", "highest; SNR is written in whole dB", (-60, 80))
    own_sd_db: float = _key(2.0, "dB", "fading of its own, see `[fading]`", (0, 60))
    noise_dbfs: float = _key(-50.0, "dBFS", "usual noise that comes from the antenna", (-190, 0))
    own_noise_dbfs: float = _key(-65.0, "dBFS", "the receiver's own noise", (-200, 0))
    noise_sd_db: float = _key(0.3, "dB", "spread of the noise readings", (0, 60))
    noise_every_min: float = _key(10.0, "min", "a noise record each so often; 0 for none", (0, 1440))
    watch_s: int = _key(60, "s", "a watch record each so often; 0 for none", (0, 86_400))
    offset_hz: float = _key(0.0, "Hz", "added to all audio frequencies", (-5000, 5000))
    drift_hz_per_h: float = _key(
        0.0, "Hz/h", "and grows by so much from the first night's begin on", (-1000, 1000)
    )
    temperature_c: float = _key(10.0, "deg C", "mean temperature", (-80, 80))
    temperature_swing_c: float = _key(
        0.0, "deg C", "so much warmer at 15 h, and colder at 3 h, mean solar time", (0, 60)
    )
    hz_per_c: float = _key(
        0.0, "Hz/deg C", "added to the audio frequencies for each degree over the mean", (-1000, 1000)
    )
    clock_s: float = _key(0.0, "s", "its clock is fast by so much", (-86_400, 86_400))
    clock_drift_s_per_h: float = _key(
        0.0, "s/h", "and gains so much from the first night's begin on", (-3600, 3600)
    )
    false_per_hour: float = _key(
        0.0, "1/h", "false decodes: random call sign and locator, low `sure`", (0, 10_000)
    )
    bad_per_thousand: float = _key(
        0.0, "1/1000", "lines that break the layout, each beside a heard line", (0, 1000)
    )


@dataclass(frozen=True)
class Fault:
    """Something that goes wrong at a known time."""

    kind: str = _key("deaf", "", "what it is, see the table of kinds", words=tuple(FAULT_UNITS))
    receiver: str = _key("", "", "receiver's name; empty: all of them")
    night: int = _key(1, "", "number of the night, the first is 1", (1, 400))
    at_min: float = _key(60.0, "min", "begins so long after the night's begin", (0, 1440))
    minutes: float = _key(60.0, "min", "lasts so long; steps stay", (0, 1440))
    size: float = _key(0.0, "by kind", "how much", (-86_400, 86_400))


@dataclass(frozen=True)
class Files:
    """How the lines are spread over files."""

    split: str = _key(
        "night", "", "a log each `night`, each `receiver`, or `one`", words=("night", "receiver", "one")
    )


@dataclass(frozen=True)
class Scenario:
    """All that is simulated, given a seed."""

    scenario: int = _key(
        SCENARIO_VERSION, "", "version of the scenario's keys", (SCENARIO_VERSION, SCENARIO_VERSION)
    )
    about: str = _key("", "", "a remark")
    nights: Nights = field(default_factory=Nights)
    air: Air = field(default_factory=Air)
    path: Path = field(default_factory=Path)
    fading: Fading = field(default_factory=Fading)
    senders: Senders = field(default_factory=Senders)
    files: Files = field(default_factory=Files)
    antenna: tuple[Antenna, ...] = (Antenna(),)
    receiver: tuple[Receiver, ...] = (Receiver(),)
    fault: tuple[Fault, ...] = ()

    def antennas_of(self, receiver: Receiver) -> tuple[Antenna, ...]:
        """Return the antennas that a receiver is switched to, in their order."""
        named = {antenna.name: antenna for antenna in self.antenna}
        return tuple(named[name] for name in receiver.antennas) or self.antenna


TABLES: dict[str, type] = {
    "nights": Nights, "air": Air, "path": Path, "fading": Fading, "senders": Senders, "files": Files,
}  # fmt: skip
LISTS: dict[str, type] = {"antenna": Antenna, "receiver": Receiver, "fault": Fault}
