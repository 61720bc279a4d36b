"""Setups in force: where each receiver stands, from when on."""

from __future__ import annotations

from dataclasses import dataclass

from logtool.records.scan import Scan


@dataclass(frozen=True)
class Setup:
    """A setup in force from `time_us` on: where the receiver stands, its antenna and its dial."""

    receiver: str
    time_us: int
    locator: str
    antenna: str
    dial_hz: int
    more: str  # its details as written


def setups_of(scans: list[Scan]) -> dict[str, list[Setup]]:
    """Return the setups of each receiver in the order of time; of two at one time the later read."""
    latest: dict[tuple[str, int], Setup] = {}
    known: set[tuple[str, ...]] = set()  # a repeated line is no later setup
    for seen in scans:
        for _, record in seen.setups:
            if record.fields in known:
                continue
            known.add(record.fields)
            receiver = record.field("receiver")
            latest[receiver, record.time_us] = Setup(
                receiver,
                record.time_us,
                record.field("locator"),
                record.keys["antenna"],
                int(record.field("dial_hz")),
                record.field("more"),
            )
    setups: dict[str, list[Setup]] = {}
    for key in sorted(latest):
        setups.setdefault(key[0], []).append(latest[key])
    return setups
