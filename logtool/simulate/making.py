"""A scenario and a seed in, the files of a log and its truth out."""

from __future__ import annotations

import json
from dataclasses import dataclass
from typing import Any

from logtool.simulate.cast import invent
from logtool.simulate.differences import sides_of
from logtool.simulate.receiving import receive
from logtool.simulate.receptions import add_false, add_heard
from logtool.simulate.scenario import Scenario, ScenarioError
from logtool.simulate.sending import fading, mean_levels_db, send
from logtool.simulate.station_lines import add_station_lines
from logtool.simulate.streams import stream
from logtool.simulate.timeline import Timeline
from logtool.simulate.times import nights_of
from logtool.simulate.truth import told_truth
from logtool.simulate.writing import Lines, write

TRUTH_FILE = "truth.json"


@dataclass(frozen=True)
class Simulated:
    """A simulated log: its files by name, and the truth."""

    files: dict[str, bytes]
    truth: dict[str, Any]

    def truth_bytes(self) -> bytes:
        """Return the truth as the file `truth.json` holds it: JSON in ASCII, an entry of a list a line."""
        return (_written(self.truth) + "\n").encode("ascii")


def simulate(scenario: Scenario, seed: int) -> Simulated:
    """Return the log of a scenario, with the truth.

    The same scenario and seed give the same bytes with the same major version of numpy.

    Parameters
    ----------
    scenario : Scenario
        From `load_scenario` or `scenario_of`.
    seed : int
        0 or more.

    Returns
    -------
    Simulated

    Raises
    ------
    ScenarioError
        Where nights cannot be had, or a seed is below 0.

    Examples
    --------
    >>> from logtool.simulate import scenario_of
    >>> made = simulate(scenario_of("[nights]\\nnumber = 1"), seed=1)
    >>> list(made.files), made.truth["receivers"][0]["receiver"]
    (['2026-03-01.log'], 'hut')
    """
    if seed < 0:
        raise ScenarioError(f"the seed is {seed}; give a whole number of 0 or more")
    nights = nights_of(scenario)
    cast = invent(scenario, seed)
    sent = send(scenario, nights, cast, seed)
    fades = scenario.fading
    streams = stream(seed, "shared fading"), stream(seed, "shared fading", 1)
    shared = fading(sent, fades.shared_df, fades.shared_correlation_s, streams)
    many = range(len(scenario.receiver))
    timelines = tuple(Timeline(scenario, which, nights, seed) for which in many)
    got = tuple(receive(scenario, timelines[which], cast, sent, which, shared, seed) for which in many)
    levels_db = tuple(
        mean_levels_db(scenario, cast, sent, timelines[which].lon_deg, which, seed) for which in many
    )
    lines = Lines()
    for which, timeline in enumerate(timelines):
        add_station_lines(lines, scenario, timeline, which, seed)
        add_heard(lines, scenario, timeline, cast, sent, got[which], which, seed)
    add_false(lines, scenario, timelines, seed)
    written = write(scenario, nights, lines)
    sides = sides_of(timelines, cast, sent, got, levels_db)
    return Simulated(written.files, told_truth(scenario, seed, (timelines, cast, sent, got), sides, written))


def _written(truth: dict[str, Any]) -> str:
    entries = []
    for name, value in truth.items():
        text = json.dumps(value, allow_nan=False)
        if isinstance(value, list) and value:
            text = "[\n" + ",\n".join(f"  {json.dumps(one, allow_nan=False)}" for one in value) + "\n ]"
        entries.append(f" {json.dumps(name)}: {text}")
    return "{\n" + ",\n".join(entries) + "\n}"
