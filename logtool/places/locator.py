"""Maidenhead locators: the cell a locator names, its centre, its size, and the locator of a place.

From locator to place the work is done by the `maidenhead` package, which is exact there but does not check
the letters' ranges; `check` does. From place to locator that package rounds at the edges of cells
(0.0001 degrees south-west of 0, 0 it names the cell north-east of it), so `locator_at` has its own exact
arithmetic.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from math import floor, prod
from string import ascii_lowercase, ascii_uppercase, digits

import maidenhead
import numpy as np

from logtool.errors import PlaceError
from logtool.places.wgs84 import FloatArray, check_degrees, inverse

LOCATOR_PATTERN = r"[A-Ra-r]{2}(?:[0-9]{2}(?:[A-Xa-x]{2}(?:[0-9]{2}(?:[A-Xa-x]{2})?)?)?)?"
"""Matches a whole locator, any case; use it with `re.fullmatch` or what equals it."""

LENGTHS = (2, 4, 6, 8, 10)
PAIR_BASES = (18, 10, 24, 10, 24)
PAIR_DIGITS = (ascii_uppercase, digits, ascii_lowercase, digits, ascii_lowercase)
EXAMPLE = "JN58td25xe"
LAT_SPAN_DEG, LON_SPAN_DEG = 180, 360
SHOWN_CHARACTERS = 20

_PAIR_RULES = (
    (r"[A-Ra-r]{2}", "its first two letters go from A to R"),
    (r"[0-9]{2}", "its third and fourth characters are digits"),
    (r"[A-Xa-x]{2}", "its fifth and sixth letters go from A to X"),
    (r"[0-9]{2}", "its seventh and eighth characters are digits"),
    (r"[A-Xa-x]{2}", "its ninth and tenth letters go from A to X"),
)
_WHOLE = re.compile(LOCATOR_PATTERN)


@dataclass(frozen=True)
class Cell:
    """The box that a locator names, in degrees; its south and west edges belong to it, the others do not."""

    south_deg: float
    west_deg: float
    north_deg: float
    east_deg: float


def check(locator: str) -> None:
    """Raise unless the word is a locator of 2, 4, 6, 8 or 10 characters, in any case.

    Raises
    ------
    PlaceError
        Says which characters are wrong, with an example of right ones.

    Examples
    --------
    >>> check("jn58TD")
    >>> check("ZZ99")
    Traceback (most recent call last):
    ...
    logtool.errors.PlaceError: 'ZZ99' is not a locator: its first two letters go from A to R (as in JN58td)
    """
    if _WHOLE.fullmatch(locator):
        return
    shown = locator if len(locator) <= SHOWN_CHARACTERS else locator[:SHOWN_CHARACTERS] + "..."
    if len(locator) not in LENGTHS:
        plural = "" if len(locator) == 1 else "s"
        why = f"it has {len(locator)} character{plural}, a locator has 2, 4, 6, 8 or 10"
    else:
        pairs = (locator[at : at + 2] for at in range(0, len(locator), 2))
        rules = zip(pairs, _PAIR_RULES, strict=False)
        why = next(rule for pair, (form, rule) in rules if not re.fullmatch(form, pair))
    example = EXAMPLE if len(locator) in LENGTHS[3:] else EXAMPLE[:6]
    raise PlaceError(f"{shown!r} is not a locator: {why} (as in {example})")


def written(locator: str) -> str:
    """Return the locator in the case that the project writes.

    Examples
    --------
    >>> written("jN58TD25XE")
    'JN58td25xe'
    """
    check(locator)
    return locator[:2].upper() + locator[2:].lower()


def cell(locator: str) -> Cell:
    """Return the box that a locator names. [deg]

    Examples
    --------
    >>> cell("JO62")
    Cell(south_deg=52.0, west_deg=12.0, north_deg=53.0, east_deg=14.0)
    """
    (south, west), (north, east), _ = _corners_and_centre(locator)
    return Cell(south, west, north, east)


def centre(locator: str) -> tuple[float, float]:
    """Return latitude and longitude of the middle of a locator's cell. [deg]

    A locator names a box, not a point: see `half_diagonal_km` for how far off the middle may be.

    Examples
    --------
    >>> centre("JO62")
    (52.5, 13.0)
    """
    return _corners_and_centre(locator)[2]


def centres(locators: Sequence[str]) -> tuple[FloatArray, FloatArray]:
    """Return the latitudes and longitudes of the middles of many cells. [deg]

    Parameters
    ----------
    locators : sequence of str
        n locators; lengths may differ.

    Returns
    -------
    lat_deg, lon_deg : arrays of shape (n,)

    Raises
    ------
    PlaceError
        The first word that is no locator.

    Examples
    --------
    >>> lat_deg, lon_deg = centres(["JO62", "FM18"])
    >>> lat_deg.tolist(), lon_deg.tolist()
    ([52.5, 38.5], [13.0, -77.0])
    """
    places = np.array([centre(locator) for locator in locators], dtype=np.float64).reshape(-1, 2)
    return places[:, 0].copy(), places[:, 1].copy()


def locator_at(lat_deg: float, lon_deg: float, characters: int = 6) -> str:
    """Return the locator of the cell that holds a place.

    A place on an edge belongs to the cell north and east of it; longitude 180 is -180; the north pole belongs
    to the top row. The degrees are taken as the decimal number that they print as, so that an edge written in
    decimals is met exactly.

    Parameters
    ----------
    lat_deg, lon_deg : float
        -90..90 and -180..180, north and east positive.
    characters : int
        2, 4, 6, 8 or 10.

    Raises
    ------
    PlaceError
        Degrees out of bounds or NaN, or another number of characters.

    Examples
    --------
    >>> locator_at(48.14666, 11.60833, 8)
    'JN58td25'
    """
    if characters not in LENGTHS:
        raise PlaceError(f"a locator has 2, 4, 6, 8 or 10 characters, not {characters}")
    check_degrees(lat_deg, lon_deg)
    pairs = characters // 2
    cells = prod(PAIR_BASES[:pairs])
    row = min(_steps(lat_deg, LAT_SPAN_DEG, cells), cells - 1)
    column = _steps(lon_deg, LON_SPAN_DEG, cells) % cells
    word = ""
    for base, symbols in reversed(list(zip(PAIR_BASES, PAIR_DIGITS, strict=True))[:pairs]):
        column, east = divmod(column, base)
        row, north = divmod(row, base)
        word = symbols[east] + symbols[north] + word
    return word


def half_diagonals_km(locators: Sequence[str]) -> FloatArray:
    """Return the greatest WGS84 distance from the centre to a corner of each cell. [km]

    That is the most that the centre can be off; half the width of a cell is less.

    Returns
    -------
    array of shape (n,)

    Examples
    --------
    >>> half_diagonals_km(["JO62", "JO62qm"]).round(2).tolist()
    [88.09, 3.66]
    """
    boxes = [cell(locator) for locator in locators]
    lat_deg, lon_deg = centres(locators)
    edges = [[box.south_deg for box in boxes], [box.north_deg for box in boxes]]
    corners = inverse(lat_deg, lon_deg, edges, [box.west_deg for box in boxes])
    return np.asarray(corners.distance_km.max(axis=0), dtype=np.float64)


def half_diagonal_km(locator: str) -> float:
    """Return the greatest WGS84 distance from the centre to a corner of one cell. [km]

    Examples
    --------
    >>> round(half_diagonal_km("JJ00"), 2)
    124.29
    """
    return float(half_diagonals_km([locator])[0])


def uncertainty_km(locator_a: str, locator_b: str) -> float:
    """Return the most that the distance between two cells' centres may be off. [km]

    Both cells' half diagonals, added: two stations anywhere in their cells are that near to or far from the
    distance between the centres.

    Examples
    --------
    >>> round(uncertainty_km("JO62", "JO62qm"), 1)
    91.7
    """
    return float(half_diagonals_km([locator_a, locator_b]).sum())


@lru_cache(maxsize=1 << 16)
def _corners_and_centre(
    locator: str,
) -> tuple[tuple[float, float], tuple[float, float], tuple[float, float]]:
    check(locator)
    south_west, north_east, middle = maidenhead.to_location_rect(locator)
    return south_west, north_east, middle


def _steps(degrees: float, span_deg: int, cells: int) -> int:
    """Whole cells between the south pole (or 180 W) and a latitude (or longitude), counted exactly."""
    exact = Fraction(repr(float(degrees)))
    return floor((exact + Fraction(span_deg, 2)) * cells / span_deg)
