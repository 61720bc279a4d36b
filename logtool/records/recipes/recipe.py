"""A recipe as it is used: checked, with every pattern and name known to be good."""

from __future__ import annotations

from dataclasses import dataclass, field

from logtool.errors import UsageError

RECIPE_VERSION = 1
CARRY, SKIP = "carry", "skip"
HEADER_RULE = "header"  # the name, in the ledger, of lines that name the columns
NO_RULE, NO_DATE, BAD_TIME, BAD_ENCODING = "no-rule", "no-date", "bad-time", "bad-encoding"
REASONS = (NO_RULE, NO_DATE, BAD_TIME, BAD_ENCODING, "control-character", "too-long")
SPACE = "space"  # the separator that stands for runs of blanks
MORE_COLUMNS = "..."


class RecipeError(UsageError):
    """A recipe that cannot be used; the message names its file, line and key."""


@dataclass(frozen=True)
class Form:
    """How a line is cut into pieces: one of the four ways, by which attribute is set.

    Attributes
    ----------
    pattern : str, optional
        Of the whole line.
    separator : str, optional
        One character or `SPACE`, with `columns`.
    columns : tuple of str
        The piece of each column in order; empty for one that is not wanted.
    more_columns : bool
        Further columns may follow.
    header : dict, optional
        Name of each piece to the name of its column in the file's first line.
    fixed : dict
        Name of each piece to its first and last character, from 1; the last may be None.
    json : dict
        Name of each piece to the names that lead to it.
    """

    pattern: str | None = None
    separator: str | None = None
    columns: tuple[str, ...] = ()
    more_columns: bool = False
    header: dict[str, str] | None = None
    fixed: dict[str, tuple[int, int | None]] = field(default_factory=dict)
    json: dict[str, tuple[str, ...]] = field(default_factory=dict)


@dataclass(frozen=True)
class Rule:
    """One kind of line: how it is told, what is cut out of it, and which record it becomes."""

    name: str
    kind: str
    form: Form
    pieces: tuple[str, ...]
    where: dict[str, str] = field(default_factory=dict)
    time_form: str = "iso"
    date_form: str | None = None
    carry: tuple[str, ...] = ()
    constants: dict[str, str] = field(default_factory=dict)

    @property
    def is_record(self) -> bool:
        """Whether the line becomes a record."""
        return self.kind not in (CARRY, SKIP)


@dataclass(frozen=True)
class Recipe:
    """How the lines of some text become records; made by `load_recipe`."""

    name: str
    text: str
    rules: tuple[Rule, ...]
    about: str = ""
    encoding: str = "utf-8"
    zone: str = "UTC"
    slot_s: str | None = None
    marks_end: bool = False
    time_step_s: float | None = None
    decimal: str = "."
    empty: tuple[str, ...] = ()
    skip: tuple[str, ...] = ()
    keep: tuple[str, ...] = ()
    constants: dict[str, str] = field(default_factory=dict)
    name_pattern: str | None = None
    name_date_form: str | None = None
    values: dict[str, dict[str, str]] = field(default_factory=dict)
    messages: tuple[str, ...] | None = (
        None  # patterns with named groups, in the order in which they are tried
    )
    never_locators: tuple[str, ...] = ()
