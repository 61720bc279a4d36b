"""Columns that are not read: what they could be is told."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.numbers import (
    Spread,
)
from logtool.suggest.tables import Column
from logtool.suggest.values import (
    given,
    is_locator,
    is_mode_word,
    quoted,
)

if TYPE_CHECKING:
    from logtool.suggest.roles import Roles

KEPT_FOR_CHECK = ("other", "report", "drift", "dbfs", "power")


_ENOUGH_ROWS = 8


def doubt_left_out(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
    for k, column in enumerate(columns):
        values = given(column.values)
        if k in roles.names or k in roles.where or not values:
            continue
        mentioned = any(column.label in str(doubt) for doubt in roles.doubts)
        could = _could_be(roles, column, spreads.get(k))
        if len(set(values)) == 1 and not could:
            roles.notes.setdefault(k, f"always {values[0]!r}")
            continue
        if mentioned:
            continue
        note = roles.notes.get(k)
        shown = quoted(values)
        if note is not None and not could:
            continue
        if could:
            roles.doubts.append(
                Doubt(
                    ", ".join(could),
                    f"{column.label} ({shown}) is left out: its values do not tell whether it is"
                    f" {'one of these' if len(could) > 1 else 'this'}",
                )
            )
        elif len(set(values)) > 1:
            roles.doubts.append(Doubt("left out", f"{column.label} ({shown}) is not read", essential=False))


def _could_be(roles: Roles, column: Column, spread: Spread | None) -> list[str]:
    """Return which targets that no column has become a column could be."""
    means = meanings_of(column.hint)
    if means and means <= set(KEPT_FOR_CHECK) - {"report"}:
        return []
    could: list[str] = []
    always = len(set(given(column.values))) == 1 and len(column.values) >= _ENOUGH_ROWS
    if (spread is not None and always) or (
        column.literal and (meanings_of(column.values[0]) or unit_of(column.values[0]))
    ):
        return []
    if spread is not None:
        if spread.p5 >= -60 and spread.middle <= 80:
            could.append("snr_db")
        if spread.p5 >= -60 and spread.p95 <= 60:
            could.append("late_s")
        if spread.low >= 0 and spread.high <= 24_000:
            could.append("audio_hz")
        if spread.low > 0 and (spread.high >= 100 or spread.decimals > 1):
            could.append("dial_hz")
    elif column.kind == "call":
        could += ["sender", "addressee"]
    elif column.kind == "locator":
        could.append("locator")
    elif (
        column.kind == "word"
        and all(map(is_mode_word, given(column.values)))
        and not (always and column.values[0].islower())
    ):
        places = means & {"locator", "receiver"} and all(map(is_locator, given(column.values)))
        could.append("locator" if places else "mode")
    elif column.kind == "other" and not always and any(c.isdigit() for value in column.values for c in value):
        could += ["snr_db", "late_s", "audio_hz", "dial_hz"]
    elif column.kind == "text":
        could += ["sender", "addressee"]
    if "sender" in could and roles.calls.message:
        return []
    if roles.has("signal_hz"):
        could = [name for name in could if name not in ("dial_hz", "audio_hz")]
    return [name for name in could if roles.free(name)]
