"""What a figure is made of: the filters, the extra keys and the longest gap."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import UTC, date, datetime

from logtool.errors import UsageError
from logtool.records.judge import EPOCH, time_of
from logtool.records.layout import CALL_FORM

GAP_MIN = 10.0  # records so far apart still mean listening, where no watch says so; design, section 4
LEAST_GAP_MIN, GREATEST_GAP_MIN = 0.1, 10_080.0  # up to a week; our choice
BY_KEYS = ("antenna", "band", "mode", "night", "receiver")
NO_ANTENNA = "none"  # left out of every figure except where it is asked for


@dataclass(frozen=True)
class Choice:
    """Filters, extra keys and the longest gap, checked by `choose`; an empty tuple filters nothing."""

    from_us: int | None = None
    to_us: int | None = None
    receivers: tuple[str, ...] = ()
    antennas: tuple[str, ...] = ()
    bands: tuple[str, ...] = ()
    modes: tuple[str, ...] = ()
    nights: tuple[str, ...] = ()
    senders: tuple[str, ...] = ()
    by: tuple[str, ...] = ()
    gap_min: float = GAP_MIN

    @property
    def bounds(self) -> tuple[int, ...]:
        """The instants that cut hours in two."""
        return tuple(bound for bound in (self.from_us, self.to_us) if bound is not None)


def instant(written: str, option: str) -> int:
    """Return a date (its start, UTC) or a time of RFC 3339 in microseconds since 1970.

    >>> instant("1970-01-02", "--from")
    86400000000
    >>> instant("1970-01-01T01:00:00+01:00", "--from")
    0
    """
    exact = time_of(written)
    if exact is not None:
        return exact
    try:
        at = datetime.fromisoformat(written)
    except ValueError as error:
        raise UsageError(
            f"{option} {written!r} is neither a date nor a time; write 2026-03-01 or 2026-03-01T22:00:00Z"
        ) from error
    at = at if at.tzinfo else at.replace(tzinfo=UTC)
    since = at - EPOCH
    return (since.days * 86_400 + since.seconds) * 1_000_000 + since.microseconds


def choose(
    *,
    from_: str | None = None,
    to: str | None = None,
    receiver: tuple[str, ...] | str = (),
    antenna: tuple[str, ...] | str = (),
    band: tuple[str, ...] | str = (),
    mode: tuple[str, ...] | str = (),
    night: tuple[str, ...] | str = (),
    sender: tuple[str, ...] | str = (),
    by: tuple[str, ...] | str = (),
    gap_min: float = GAP_MIN,
) -> Choice:
    """Return the checked choice for the words of the command line.

    Parameters
    ----------
    from_, to : str, optional
        Count from this date or time on, and before that one; UTC.
    receiver, antenna, band, mode, night, sender : str or tuple of str
        Count only these.
    by : str or tuple of str
        Further keys that split the rows: of `BY_KEYS`.
    gap_min : float
        Where no watch is recorded, listening is assumed over gaps of at most so many minutes.

    Raises
    ------
    UsageError
        Where a word cannot be used; the message says what can.
    """
    from_us = None if from_ is None else instant(from_, "--from")
    to_us = None if to is None else instant(to, "--to")
    if from_us is not None and to_us is not None and from_us >= to_us:
        raise UsageError(f"--from {from_} is not before --to {to}; --to itself is not counted any more")
    if not LEAST_GAP_MIN <= gap_min <= GREATEST_GAP_MIN:
        raise UsageError(
            f"--gap-min {gap_min:g} cannot be used; give {LEAST_GAP_MIN:g} to {GREATEST_GAP_MIN:g} minutes"
        )
    for key in _words(by):
        if key not in BY_KEYS:
            raise UsageError(f"--by {key!r}: rows can be split by {', '.join(BY_KEYS)}")
    for name in _words(night):
        if not _is_date(name):
            raise UsageError(f"--night {name!r}: a night is named by the date it begins on, like 2026-03-01")
    for call in _words(sender):
        if not re.fullmatch(CALL_FORM, call):
            raise UsageError(f"--sender {call!r} is not a call sign: 1 to 20 of A-Z, digits, / _ and -")
    return Choice(
        from_us=from_us,
        to_us=to_us,
        receivers=_words(receiver),
        antennas=_words(antenna),
        bands=_words(band),
        modes=_words(mode),
        nights=_words(night),
        senders=tuple(call.upper() for call in _words(sender)),
        by=_words(by),
        gap_min=gap_min,
    )


def _is_date(name: str) -> bool:
    if not re.fullmatch(r"[0-9]{4}-[0-9]{2}-[0-9]{2}", name):
        return False
    try:
        date.fromisoformat(name)
    except ValueError:
        return False
    return True


def _words(given: tuple[str, ...] | str) -> tuple[str, ...]:
    return (given,) if isinstance(given, str) else tuple(dict.fromkeys(given))
