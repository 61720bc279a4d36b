"""The ledger: what became of every line of every input file."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from typing import Any


@dataclass
class FileLedger:
    """The count of one file's lines; `lines = blank + comments + records + repeated + set_aside`."""

    file: str
    digest: str | None
    bytes: int
    lines: int
    blank: int = 0
    comments: int = 0
    records: int = 0
    repeated: int = 0
    reasons: Counter[str] = field(default_factory=Counter)
    rules: dict[str, int] | None = None  # lines by the rule of a recipe; with the blank ones they are all

    @property
    def set_aside(self) -> int:
        """Return how many lines break the layout."""
        return sum(self.reasons.values())

    def as_dict(self) -> dict[str, Any]:
        """Return the ledger with the keys of `--json`, reasons by name."""
        told = {
            "file": self.file,
            "digest": self.digest,
            "bytes": self.bytes,
            "lines": self.lines,
            "blank": self.blank,
            "comments": self.comments,
            "records": self.records,
            "repeated": self.repeated,
            "set_aside": self.set_aside,
            "reasons": dict(sorted(self.reasons.items())),
        }
        return told if self.rules is None else told | {"rules": dict(sorted(self.rules.items()))}
