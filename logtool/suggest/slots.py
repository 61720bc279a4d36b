"""How far apart times are: slots, and steps of the clock that wrote them."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from datetime import datetime

from logtool.suggest.doubts import Doubt

_CANDIDATES_S = (1800, 900, 600, 300, 240, 120, 60, 30, 20, 15, 12, 10, 7.5, 6, 5, 3.75, 3, 2)
_LEAST_SLOT_S = 2
_LEAST_TIMES = 6
_SURE_SHARE = 0.97


def grid_of(moments: list[datetime]) -> tuple[float, float] | None:
    """Return the step on which all times lie and how far they lie behind its multiples, both in s; else None.

    Parameters
    ----------
    moments : list of datetime
        In the order of the lines.
    """
    of_day = [
        moment.hour * 3600 + moment.minute * 60 + moment.second + moment.microsecond / 1e6
        for moment in moments
    ]
    if len(set(of_day)) < _LEAST_TIMES:
        return None
    for step_s in _CANDIDATES_S:
        phases = Counter(round(second % step_s, 3) for second in of_day)
        phase, times = phases.most_common(1)[0]
        if times >= _SURE_SHARE * len(of_day):
            return (step_s, phase) if times == len(of_day) or step_s >= 5 else None
    return None


def is_cut_grid(moments: list[datetime], step_s: float) -> bool:
    """Return whether whole seconds are those of a step of parts of a second with the parts left out."""
    if any(moment.microsecond for moment in moments):
        return False
    seconds = {(moment.hour * 3600 + moment.minute * 60 + moment.second) % 60 for moment in moments}
    wanted = {int(k * step_s) for k in range(int(60 / step_s))}
    return len(seconds) >= _LEAST_TIMES and seconds <= wanted


@dataclass
class Slots:
    """What the times tell of slots.

    Attributes
    ----------
    slot_s, step_s : float, optional
        Length of a slot, and step of the written times where it is longer than a slot may be.
    """

    slot_s: float | None = None
    step_s: float | None = None
    doubts: list[Doubt] = field(default_factory=list)


def find_slots(moments: list[datetime | None], form: str, parts: list[int]) -> Slots:
    """Return slots and steps by the differences of times."""
    found = Slots()
    known = [moment for moment in moments if moment is not None]
    if not has_seconds(form) and not any(moment.second for moment in known):
        found.step_s = 60.0
        return found
    grid = grid_of(known)
    if grid is not None and grid[0] >= _LEAST_SLOT_S:
        step_s, phase_s = grid
        shortest = _shortest_step_s(moments, parts)
        if shortest is not None and abs(shortest - step_s) < 0.01:
            found.slot_s = step_s
        elif shortest is not None:
            found.doubts.append(
                Doubt(
                    "slot_s",
                    f"all times lie {step_s:g} s apart or multiples of it, but never follow each other so closely; give"
                    " the length of a slot if you know it",
                    essential=False,
                )
            )
        if phase_s:
            found.doubts.append(
                Doubt(
                    "time",
                    f"the times lie {phase_s:g} s behind the multiples of {step_s:g} s, so they may be neither the"
                    " start nor the end of a slot",
                )
            )
        return found
    for step_s in (7.5, 3.75):
        if is_cut_grid(known, step_s):
            found.doubts.append(
                Doubt("time", f"slots seem to be {step_s:g} s long, but the times are cut to whole seconds")
            )
            break
    return found


def _shortest_step_s(moments: list[datetime | None], parts: list[int]) -> float | None:
    steps: Counter[float] = Counter()
    last: tuple[int, datetime] | None = None
    for part, moment in zip(parts, moments, strict=True):
        if moment is None:
            continue
        if last is not None and last[0] == part and moment > last[1]:
            steps[round((moment - last[1]).total_seconds(), 3)] += 1
        last = (part, moment)
    often = [step for step, times in steps.items() if times > 1]
    return min(often, default=None)


def has_seconds(form: str) -> bool:
    """Return whether a form of times gives seconds."""
    return form in ("iso", "unix_s", "unix_ms") or "%S" in form
