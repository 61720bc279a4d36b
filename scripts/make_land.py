"""Make the map's land from Natural Earth: `python scripts/make_land.py land-50m.json`.

The input is `land-50m.json` of the npm package `world-atlas` 2.0.2 (`npm pack world-atlas`), a TopoJSON of
Natural Earth's land, which is in the public domain. The output is `logtool/pages/assets/land.json`: rings
whose longitudes run on past 180 degrees instead of jumping back, thinned to `TOLERANCE_DEG`, on a grid of
`STEP_DEG`, each as differences from point to point in a base 64 text of numbers of variable length.
"""

from __future__ import annotations

import base64
import json
import sys
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

STEP_DEG = 0.02  # grid of the output, 2.2 km: a third of a pixel at the deepest zoom that the map allows
TOLERANCE_DEG = 0.03  # a coast may move by this much, under a pixel until one is deep in
SMALLEST_DEG2 = 0.004  # islands under this area are left out, about 7 km square at the equator
POLE_DEG = 89.0  # a ring wholly this near a pole is left over from cutting a polygon there, and no coast
OUTPUT = Path(__file__).parent.parent / "logtool" / "pages" / "assets" / "land.json"

Ring = NDArray[np.float64]


def rings_of(topology: dict[str, Any]) -> list[Ring]:
    """Return every ring of the land as longitudes and latitudes, shape (n, 2). [deg]"""
    scale, shift = np.array(topology["transform"]["scale"]), np.array(topology["transform"]["translate"])
    arcs = [np.cumsum(np.array(arc), axis=0) * scale + shift for arc in topology["arcs"]]
    rings = []
    for geometry in topology["objects"]["land"]["geometries"]:
        for polygon in geometry["arcs"]:
            for ring in polygon:
                parts = [arcs[i] if i >= 0 else arcs[~i][::-1] for i in ring]
                rings.append(np.vstack([parts[0], *(part[1:] for part in parts[1:])]))
    return rings


def unwrapped(ring: Ring) -> Ring:
    """Return the ring with longitudes that run on, closed over the pole where it goes round one. [deg]"""
    lon = np.degrees(np.unwrap(np.radians(ring[:, 0])))
    gap = lon[-1] - lon[0]
    if abs(gap) > 180.0:
        pole = np.copysign(90.0, ring[:, 1].mean())
        start, end = lon[0], lon[0] + np.copysign(360.0, gap)
        lon = np.concatenate([lon, [end, end, start, start]])
        lat = np.concatenate([ring[:, 1], [ring[0, 1], pole, pole, ring[0, 1]]])
    else:
        lat = ring[:, 1]
    lon = lon - 360.0 * np.floor((lon.min() + 180.0) / 360.0)
    return np.column_stack([lon, lat])


def thinned(ring: Ring, tolerance_deg: float) -> Ring:
    """Return the ring without the points that lie within the tolerance of its other points' line."""
    keep = np.zeros(len(ring), dtype=bool)
    keep[[0, -1]] = True
    far = int(np.argmax(((ring - ring[0]) ** 2).sum(axis=1)))
    keep[far] = True
    spans = [(0, far), (far, len(ring) - 1)]
    while spans:
        first, last = spans.pop()
        if last - first < 2:
            continue
        along = ring[last] - ring[first]
        away = ring[first + 1 : last] - ring[first]
        share = np.clip((away @ along) / max(float(along @ along), 1e-12), 0.0, 1.0)
        off = np.hypot(*(away - share[:, None] * along).T)
        if off.max() > tolerance_deg:
            middle = first + 1 + int(np.argmax(off))
            keep[middle] = True
            spans += [(first, middle), (middle, last)]
    return ring[keep]


def area_deg2(ring: Ring) -> float:
    """Return the area of a ring in square degrees of longitude and latitude."""
    lon, lat = ring[:, 0], ring[:, 1]
    return (
        abs(float((lon[:-1] * lat[1:] - lon[1:] * lat[:-1]).sum() + lon[-1] * lat[0] - lon[0] * lat[-1])) / 2
    )


def packed(steps: NDArray[np.int64]) -> str:
    """Return whole numbers as base 64 of bytes: sign in the lowest bit, seven bits a byte, lowest first."""
    out = bytearray()
    for number in steps.ravel().tolist():
        rest = number * 2 if number >= 0 else -number * 2 - 1
        while rest > 127:
            out.append(rest & 127 | 128)
            rest >>= 7
        out.append(rest)
    return base64.b64encode(bytes(out)).decode("ascii")


def main(source: Path) -> None:
    """Read Natural Earth's land and write the map's asset."""
    rings = rings_of(json.loads(source.read_text("utf-8")))
    rings = [unwrapped(ring) for ring in rings if (np.abs(ring[:, 1]) < POLE_DEG).any()]
    rings = sorted(
        (ring for ring in rings if area_deg2(ring) >= SMALLEST_DEG2), key=lambda ring: -area_deg2(ring)
    )
    grid = []
    for ring in rings:
        points = np.round(thinned(ring, TOLERANCE_DEG) / STEP_DEG).astype(np.int64)
        moved = np.concatenate([[True], (np.diff(points, axis=0) != 0).any(axis=1)])
        grid.append(points[moved])
    steps = np.concatenate([np.diff(points, axis=0, prepend=np.zeros((1, 2), np.int64)) for points in grid])
    land = {
        "from": "Natural Earth 1:50 million, land, public domain",
        "step_deg": STEP_DEG,
        "points": [len(points) for points in grid],
        "steps": packed(steps),
    }
    OUTPUT.write_text(json.dumps(land, separators=(",", ":")) + "\n", "utf-8")
    sys.stdout.write(f"{len(grid)} rings, {len(steps)} points, {OUTPUT.stat().st_size} bytes\n")


if __name__ == "__main__":
    main(Path(sys.argv[1]))
