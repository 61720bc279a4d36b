"""A made log with the truth of each of its lines."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from datetime import date

from tests.suggest.scenario import Heard

FIELDS = ("time", "dial_hz", "audio_hz", "snr_db", "late_s", "mode", "sender", "addressee", "locator")


@dataclass
class Shape:
    """A log's bytes, and what a right reading of each message's line gives.

    Attributes
    ----------
    truth : dict
        Line number (from 1) to the fields that the log tells, after what the user fills in.
    fill : dict
        What the user knows: values for keys of the recipe, as TOML.
    day : date, optional
        The day of the first line, where the log does not tell it.
    """

    name: str
    file: str
    stored: bytes
    truth: dict[int, dict[str, object]] = field(default_factory=dict)
    fill: dict[str, str] = field(default_factory=dict)
    day: date | None = None


class Lines:
    """Collects the lines of a log, and the truth of those that are messages."""

    def __init__(self, told: Iterable[str] = FIELDS) -> None:
        self.lines: list[str] = []
        self.truth: dict[int, dict[str, object]] = {}
        self._told = tuple(told)

    def add(self, line: str) -> None:
        """Add a line that is no message."""
        self.lines.append(line)

    def heard(self, line: str, heard: Heard, **other: object) -> None:
        """Add a message's line; `other` has fields that the log tells in another way than it was."""
        self.lines.append(line)
        self.truth[len(self.lines)] = {name: getattr(heard, name) for name in self._told} | other

    def shape(self, name: str, file: str, **rest: object) -> Shape:
        """Return the log in UTF-8."""
        stored = ("\n".join(self.lines) + "\n").encode()
        return Shape(name, file, stored, self.truth, **rest)  # type: ignore[arg-type]
