"""Local times of a zone to UTC, by the IANA time zone data (package tzdata, or the system's)."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta
from functools import cache
from zoneinfo import ZoneInfo

import numpy as np

_HOUR_S = 3600
_FIRST, _LAST = -2 * 86_400, 4_102_444_800 + 2 * 86_400  # 1970 to 2099, with room
_STEP_S = (
    3 * 86_400
)  # no zone changes and changes back within so little; checked by a test against every hour
_EPOCH = datetime(1970, 1, 1, tzinfo=UTC)
SECOND_US = 1_000_000


@cache
def transitions(zone: str) -> tuple[np.ndarray, np.ndarray]:
    """Return the instants (s since 1970) at which a zone's offset changes, and all offsets in s.

    There is one offset more than instants: the one before the first.
    """
    info = ZoneInfo(zone)

    def offset_s(at_s: int) -> int:
        offset = info.utcoffset((_EPOCH + timedelta(seconds=at_s)).astimezone(info))
        assert offset is not None
        return round(offset.total_seconds())

    instants: list[int] = []
    offsets = [offset_s(_FIRST)]
    low = _FIRST
    while low < _LAST:
        high = low + _STEP_S
        if offset_s(high) != offsets[-1]:
            before, after = low, high
            while after - before > 1:
                middle = (before + after) // 2
                if offset_s(middle) == offsets[-1]:
                    before = middle
                else:
                    after = middle
            instants.append(after)
            offsets.append(offset_s(after))
            low = after
        else:
            low = high
    return np.array(instants, np.int64), np.array(offsets, np.int64)


def both_utc_us(local_us: np.ndarray, zone: str) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return UTC (us) for local times: read as the earlier and as the later of two, and whether there is none.

    The two differ only where the clock was put back over the time. A local time that the clock skipped is read
    with the offset before the change.

    Parameters
    ----------
    local_us : ndarray of int64, shape (n,)
        Local times as microseconds since 1970 on the zone's clocks.
    zone : str
        IANA name.

    Returns
    -------
    earlier_us, later_us : ndarray of int64, shape (n,)
    skipped : ndarray of bool, shape (n,)
    """
    instants_s, offsets_s = transitions(zone)
    ends_us = (instants_s + np.maximum(offsets_s[:-1], offsets_s[1:])) * SECOND_US
    starts_us = (instants_s + np.minimum(offsets_s[:-1], offsets_s[1:])) * SECOND_US
    first = np.searchsorted(ends_us, local_us, side="right")
    second = np.searchsorted(starts_us, local_us, side="right")
    falls = offsets_s[second] < offsets_s[first]
    skipped = offsets_s[second] > offsets_s[first]
    earlier_us = local_us - offsets_s[first] * SECOND_US
    later_us = np.where(falls, local_us - offsets_s[second] * SECOND_US, earlier_us)
    return earlier_us, later_us, skipped
