"""What the two peers share: geodesics on unique pairs, and the rows they print for the comparison."""

from __future__ import annotations

import json

import numpy as np

COLUMNS = (
    "hour",
    "listening_min",
    "receptions",
    "senders",
    "heard_once",
    "senders_in_30",
    "located",
    "squares",
    "nearest_km",
    "median_km",
    "p90_km",
    "farthest_km",
    "farthest_sender",
    "farthest_once_km",
    "snr_median_db",
)
RECEIVER = "JO74XA"


def centre_and_half(locators: list[str]) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return centres and half diagonals of 4- and 6-character cells. [deg, deg, km]"""
    from pyproj import Geod

    code = np.array([[ord(c) for c in locator.ljust(6, "?")] for locator in locators])
    fine = code[:, 4] != ord("?")
    lon = (code[:, 0] - 65) * 20 + (code[:, 2] - 48) * 2 - 180 + np.where(fine, (code[:, 4] - 65) / 12, 0)
    lat = (code[:, 1] - 65) * 10 + (code[:, 3] - 48) - 90 + np.where(fine, (code[:, 5] - 65) / 24, 0)
    wide, high = np.where(fine, 1 / 12, 2), np.where(fine, 1 / 24, 1)
    half = np.zeros(len(locators))
    for corner in (lat, lat + high):
        half = np.maximum(half, Geod(ellps="WGS84").inv(lon + wide / 2, lat + high / 2, lon, corner)[2])
    return lat + high / 2, lon + wide / 2, half / 1000


def distances(locators: list[str]) -> tuple[np.ndarray, np.ndarray]:
    """Return distance and uncertainty from the receiver to each locator. [km]"""
    from pyproj import Geod

    lat, lon, half = centre_and_half([RECEIVER, *locators])
    there = np.full(len(locators), lat[0]), np.full(len(locators), lon[0])
    metres = Geod(ellps="WGS84").inv(there[1], there[0], lon[1:], lat[1:])[2]
    return metres / 1000, half[1:] + half[0]


def print_rows(rows: list[tuple[object, ...]]) -> None:
    """Print the rows as JSON, rounded as logtool rounds."""
    told = [
        {
            name: round(value, 3) if isinstance(value, float) else value
            for name, value in zip(COLUMNS, row, strict=True)
        }
        for row in rows
    ]
    print(json.dumps(told))
