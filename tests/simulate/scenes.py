"""Small scenarios, and simulated logs as plain lines."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any

from logtool.simulate import Simulated, scenario_of, simulate

QUIET = """
[nights]
number = {nights}
hours = "utc"
from_h = 20
to_h = {to_h}
[path]
at_1000_km_db = 0
db_per_decade = 0
sender_sd_db = 0
curve_db = 0
night_sd_db = 0
sender_night_sd_db = 0
[fading]
shared_sd_db = 0
[senders]
number = {senders}
power_dbm = [37]
activity_tail = 0
messages_per_hour = 120
sessions_per_night = 20
session_min = 600
audio_wander_hz = 0
audio_jumps = 0
late_sd_s = 0
"""
"""Everything sent is heard, at 0 dB, unless something is added to it."""
PLAIN = '[[receiver]]\nname = "hut"\nown_sd_db = 0\nnoise_sd_db = 0\n'
EVERYTHING = """
[nights]
number = 3
[fading]
shared_df = 5
own_correlation_s = 30
[senders]
number = 40
with_power = 0.5
audio_jumps = 1
[[antenna]]
name = "wire"
table_deg = [0, 90, 180, 270]
table_db = [0, 3, 1, -2]
[[antenna]]
name = "loop"
cosine_db = 2
noise_db = -4
distance_km = [500, 2000]
distance_db = [-3, 3]
[[receiver]]
name = "hut"
order = "random"
false_per_hour = 5
bad_per_thousand = 20
offset_hz = 3
temperature_swing_c = 5
hz_per_c = 2
clock_s = 0.4
[[receiver]]
name = "shed"
locator = "JO74"
antennas = ["loop"]
own_sd_db = 3
threshold_db = -18
false_per_hour = 3
bad_per_thousand = 10
watch_s = 90
noise_every_min = 7
clock_drift_s_per_h = 0.05
[[fault]]
kind = "outage"
receiver = "shed"
at_min = 100.5
minutes = 33.3
[[fault]]
kind = "stop"
night = 2
[[fault]]
kind = "antenna-off"
receiver = "hut"
night = 2
at_min = 200
minutes = 20
size = 60
[[fault]]
kind = "clock-step"
receiver = "hut"
night = 3
at_min = 300
size = -3600
[[fault]]
kind = "slots-missed"
night = 3
size = 50
"""
"""Two receivers, and much that goes wrong; the clock's step of an hour back gives lines that repeat earlier ones."""
COLUMNS = (
    "time", "kind", "receiver", "dial_hz", "audio_hz", "snr_db", "late_s", "mode", "sender", "addressee", "locator",
    "power_dbm", "text", "more",
)  # fmt: skip


def quiet(
    more: str = "", *, receiver: str = PLAIN, nights: int = 1, to_h: float = 22, senders: int = 1
) -> str:
    """Return a scenario in which only what is added happens."""
    return QUIET.format(nights=nights, to_h=to_h, senders=senders) + receiver + more


def made(text: str, seed: int = 1) -> Simulated:
    """Return the log of a scenario's text."""
    return simulate(scenario_of(text), seed)


@dataclass(frozen=True)
class Told:
    """A simulated log as its lines say: every good line as a table from column to text."""

    lines: tuple[dict[str, str], ...]
    truth: dict[str, Any]

    def of(self, kind: str, **fields: str) -> list[dict[str, str]]:
        """Return the lines of a kind that have such fields."""
        return [
            line
            for line in self.lines
            if line["kind"] == kind and all(line[name] == text for name, text in fields.items())
        ]


def told(text: str, seed: int = 1) -> Told:
    """Return the lines of a scenario's log, comments left out; only for scenarios without bad lines."""
    simulated = made(text, seed)
    lines = [
        dict(zip(COLUMNS, line.split("\t"), strict=True))
        for _, whole in sorted(simulated.files.items())
        for line in whole.decode().splitlines()
        if not line.startswith("#")
    ]
    return Told(tuple(lines), simulated.truth)


def put(simulated: Simulated, folder: Path) -> Path:
    """Write the logs into a folder and return it."""
    folder.mkdir(exist_ok=True)
    for name, whole in simulated.files.items():
        (folder / name).write_bytes(whole)
    return folder
