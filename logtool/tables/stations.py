"""Receivers at their places: which antenna and place were in force, and which night it was.

A receiver whose setups lie over 10 km apart counts as several, named `NAME@LOCATOR`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from logtool.places.locator import centre, written

if TYPE_CHECKING:
    from logtool.records.privacy import Privacy
    from logtool.records.reader import Logs
    from logtool.records.setups import Setup

APART_KM = 10.0  # places farther apart are different receivers; design, section 4
BEFORE_ALL_US = -(2**62)


@dataclass(frozen=True)
class Station:
    """What holds for a receiver from an instant on; `lon_deg` is that of the receiver's first place."""

    receiver: str
    start_us: int
    name: str
    antenna: str | None
    place: str | None
    lon_deg: float | None


def stations(logs: Logs, receivers: list[str]) -> list[Station]:
    """Return what holds when for each receiver, by receiver and time.

    Parameters
    ----------
    logs : Logs
        Opened logs.
    receivers : list of str
        All receivers that have any record.

    Returns
    -------
    list of Station
        For each receiver one from before all time, and one for each of its setups.
    """
    found = []
    for receiver in sorted(set(receivers) | set(logs.setups)):
        setups = logs.setups.get(receiver)
        if setups:
            found.append(Station(receiver, BEFORE_ALL_US, receiver, None, None, None))
            found += _set_up(receiver, setups, logs.privacy)
        else:
            place = written(logs.privacy.locator(logs.at)) if logs.at else None
            lon_deg = _lon_deg(place) if place else None
            antenna = logs.antenna_name
            found.append(Station(receiver, BEFORE_ALL_US, receiver, antenna, place, lon_deg))
    return found


def _set_up(receiver: str, setups: list[Setup], privacy: Privacy) -> list[Station]:
    locators = [privacy.locator(setup.locator) for setup in setups]
    first_of = _first_places(locators)
    several = len(set(first_of.values())) > 1
    found = []
    for setup, locator in zip(setups, locators, strict=True):
        place = written(locator)
        first = first_of[place]
        name = f"{receiver}@{first}" if several else receiver
        found.append(Station(receiver, setup.time_us, name, setup.antenna, place, _lon_deg(first)))
    return found


def _first_places(locators: list[str]) -> dict[str, str]:
    """Return for each place the first of those that are linked to it by steps of at most 10 km.

    A locator that begins another one is taken as the same place.
    """
    places = list(dict.fromkeys(written(locator) for locator in locators))
    if len(places) == 1:
        return {places[0]: places[0]}
    from logtool.places.geodesic import distance_km

    first_of = {place: place for place in places}
    for i, place in enumerate(places):
        for other in places[:i]:
            near = place.startswith(other) or other.startswith(place)
            if near or distance_km(place, other) <= APART_KM:
                one, two = first_of[place], first_of[other]
                first, second = sorted((one, two), key=places.index)
                first_of = {key: first if value == second else value for key, value in first_of.items()}
    return first_of


def _lon_deg(locator: str) -> float:
    return centre(locator)[1]
