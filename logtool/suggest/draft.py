"""All that goes into a recipe."""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from logtool.suggest.clusters import Others
from logtool.suggest.doubts import Doubt
from logtool.suggest.looking import Look
from logtool.suggest.roles import Roles
from logtool.suggest.slots import Slots
from logtool.suggest.tables import Table


@dataclass
class Draft:
    """All that goes into a recipe."""

    look: Look
    table: Table
    roles: Roles
    others: Others
    slots: Slots
    name_date: tuple[str, list[str], re.Match[str]] | None
    second: tuple[Table, Roles] | None  # messages that lack a column
    doubts: list[Doubt] = field(default_factory=list)

    @property
    def needs_date(self) -> bool:
        """Whether the day of the times has to come from somewhere else than the text."""
        carried = "date" in self.others.carried
        return not self.roles.times.with_year and not carried and self.name_date is None

    @property
    def dial_known(self) -> bool:
        """Whether lines or the lines before them give the dial, or it follows from signal and audio."""
        roles = self.roles
        both = roles.has("signal_hz") and roles.has("audio_hz")
        return roles.has("dial_hz") or both or any("dial" in name for name in self.others.carried)
