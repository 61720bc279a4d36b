"""Chance: one stream of draws for each purpose, so that what is added in one place changes nothing elsewhere."""

from __future__ import annotations

import numpy as np

# The number of a purpose is its place here: add new ones at the end, and the old streams stay as they are.
PURPOSES = (
    "calls",
    "places",
    "powers",
    "habits",
    "sender levels",
    "nights",
    "sessions",
    "messages",
    "wander",
    "jumps",
    "shared fading",
    "own fading",
    "threshold",
    "lateness",
    "sureness",
    "order",
    "noise readings",
    "false decodes",
    "bad lines",
    "missed slots",
    "pairs",
)


def stream(seed: int, purpose: str, *which: int) -> np.random.Generator:
    """Return the stream of draws of a purpose, or of one receiver or night of it.

    Streams of one seed are independent of each other: each is a child of the seed, as `SeedSequence.spawn` makes
    them. The bits of PCG64 are fixed by numpy; how its methods turn them into draws may change with a version.

    Examples
    --------
    >>> int(stream(1, "calls").integers(100)) == int(stream(1, "calls").integers(100))
    True
    """
    key = (PURPOSES.index(purpose), *which)
    return np.random.Generator(np.random.PCG64(np.random.SeedSequence(seed, spawn_key=key)))
