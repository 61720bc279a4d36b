"""What the map page is made from: plain values, all places in degrees and all distances in km.

Tables point at each other by index: a pair names its sender and receiver, a count its sender, group and
hour, by their positions in the tuples of `MapData`. So a sender that several receivers heard stands once,
at one place.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple


class MapLine(NamedTuple):
    """A line of a log: its file (index into `MapData.files`), number from 1, and time, RFC 3339 in UTC."""

    file: int
    line: int
    time: str


@dataclass(frozen=True)
class MapReceiver:
    """A receiver at one place, its locator's cell; one that moved is several, each with its own name.

    `assumed` where no watch says when it listened, so that its listening is assumed.
    """

    name: str
    locator: str
    assumed: bool = False


@dataclass(frozen=True)
class MapSender:
    """A sender and its place over all hours; `locator` and `borrowed` are None where none is known."""

    name: str
    locator: str | None = None
    borrowed: bool | None = None


@dataclass(frozen=True)
class MapPair:
    """A sender as one receiver heard it, over all hours, antennas and bands.

    `sender` and `receiver` are indices. `distance_km` and `uncertainty_km` are None without a place,
    `bearing_deg` (at the receiver, from true north) also where the distance is below its uncertainty.
    `first` and `last` are times, RFC 3339 in UTC. `lines` are up to five of the lines behind the pair.
    `locator` is the sender's place by what this receiver heard, where that is not the sender's over all.
    """

    sender: int
    receiver: int
    distance_km: float | None
    uncertainty_km: float | None
    bearing_deg: float | None
    first: str
    last: str
    heard_again: bool
    lines: tuple[MapLine, ...] = ()
    locator: str | None = None


@dataclass(frozen=True)
class MapGroup:
    """What SNR may be pooled over: a receiver (index), antenna, band and mode; None where not known."""

    receiver: int
    antenna: str | None
    band: str
    mode: str | None = None


@dataclass(frozen=True)
class MapHour:
    """One hour of UTC: its start, and the point under the sun at half past.

    `nights` names the night of the hour and `listening_min` the minutes listened in it, for each receiver
    in the order of `MapData.receivers`. A night is None where the receiver neither listened nor heard.
    Minutes are 0 where a receiver whose listening is recorded did not listen, and None where that is not
    known: receptions outside every watch, hours before its first or after its last, or gaps between records
    too long to assume listening. `listening_min` is empty where it is not told at all.
    """

    start_unix_s: int
    subsolar_lat_deg: float
    subsolar_lon_deg: float
    nights: tuple[str | None, ...]
    listening_min: tuple[float | None, ...] = ()


@dataclass(frozen=True)
class MapCounts:
    """Receptions as columns of equal length, in any order: each row one sender in one group in one hour.

    `sender`, `group` and `hour` are indices; `snr_median_db` (noise in 2500 Hz) is None where no line gives
    one or where modes mix. `located` is whether the sender has a locator in the hour (empty: all of those
    that have one over all hours).
    """

    sender: Sequence[int]
    group: Sequence[int]
    hour: Sequence[int]
    receptions: Sequence[int]
    snr_median_db: Sequence[float | None]
    located: Sequence[bool] = ()


@dataclass(frozen=True)
class MapTotals:
    """As `MapCounts`, over all hours; here the medians are those of all receptions, not of hours' medians."""

    sender: Sequence[int]
    group: Sequence[int]
    receptions: Sequence[int]
    snr_median_db: Sequence[float | None]


@dataclass(frozen=True)
class MapData:
    """All that one map page shows; `notes`, `ledger` and `options` are lines of text for "What was read"."""

    title: str
    receivers: tuple[MapReceiver, ...]
    senders: tuple[MapSender, ...]
    pairs: tuple[MapPair, ...]
    groups: tuple[MapGroup, ...]
    hours: tuple[MapHour, ...]
    counts: MapCounts
    totals: MapTotals
    files: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()
    ledger: tuple[str, ...] = ()
    options: tuple[tuple[str, str], ...] = ()
