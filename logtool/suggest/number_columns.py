"""Which columns of numbers are frequencies, levels and lateness."""

from __future__ import annotations

from typing import TYPE_CHECKING

from logtool.records.recipes.names import target_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.frequencies import Frequency, could_be_audio, lies_above_dials, name_radio, radio_of
from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.message_order import read_usually
from logtool.suggest.numbers import (
    Spread,
    could_be_late,
    could_be_power,
    could_be_snr,
    hinted_number,
)
from logtool.suggest.tables import Column
from logtool.suggest.values import (
    is_call,
    is_number,
    number_of,
)

if TYPE_CHECKING:
    from logtool.suggest.roles import Roles

_CLEARLY_WIDER = 2.5  # times; our choice
_VARYING_SENDERS = 2


def name_by_hints(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
    for k, spread in spreads.items():
        column = columns[k]
        name, trouble = hinted_number(column, spread)
        if name and roles.free(target_of(name)):
            roles.names[k] = name
            roles.notes[k] = f"by its name or unit; {spread.low:g} to {spread.high:g}"
            if trouble:
                roles.doubts.append(Doubt(target_of(name), f"{column.label}: {trouble}"))
        elif name:
            roles.doubts.append(Doubt(target_of(name), f"{column.label} could be it too; the first is taken"))
        elif trouble:
            roles.notes[k] = trouble
            roles.doubts.append(Doubt("snr_db, late_s, power_dbm", f"{column.label} is left out: {trouble}"))


def name_frequencies(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
    free = [k for k in spreads if k not in roles.names and k not in roles.notes]
    radio: list[Frequency] = []
    audio: list[int] = []
    for k in free:
        column = columns[k]
        means = meanings_of(column.hint)
        one = radio_of(k, column)
        unit = column.unit or unit_of(column.hint)
        if one is not None and "audio" not in means:
            radio.append(one)
        elif "audio" in means and unit == "kHz" and spreads[k].low >= 0:
            roles.names[k] = "audio_khz"
        elif (could_be_audio(column) and unit not in ("kHz", "MHz", "dB", "s", "ms", "W", "mW", "dBm")) or (
            "audio" in means and spreads[k].low >= 0 and spreads[k].high <= 24_000
        ):
            audio.append(k)
    if len(audio) > 1:
        audio = [
            k for k in audio if any(not one.few and lies_above_dials(one, _hz(columns[k])) for one in radio)
        ] or audio
    _name_audio(roles, columns, audio)
    chosen = next((k for k, name in roles.names.items() if target_of(name) == "audio_hz"), None)
    heard_hz: tuple[float | None, ...] | None = None
    if chosen is not None:
        heard_hz = _hz(columns[chosen], 1000 if roles.names[chosen] == "audio_khz" else 1)
    names, doubts = name_radio(radio, heard_hz)
    roles.names |= names
    roles.doubts += doubts
    for k in names:
        roles.notes[k] = "radio frequencies by the amateur bands" + (
            ", few different ones" if "dial" in names[k] else ""
        )
    for one in radio:
        if one.column not in names:
            roles.notes.setdefault(one.column, "radio frequencies")


def _hz(column: Column, factor: int = 1) -> tuple[float | None, ...]:
    return tuple(number_of(value) * factor if is_number(value) else None for value in column.values)


def _name_audio(roles: Roles, columns: list[Column], audio: list[int]) -> None:
    if not audio or roles.has("audio_hz"):
        return
    named = [k for k in audio if meanings_of(columns[k].hint) & {"audio", "frequency", "late_or_audio"}]
    named = [k for k in named if "audio" in meanings_of(columns[k].hint)] or named
    blank = [k for k in audio if not meanings_of(columns[k].hint)]
    candidates = named or blank
    if len(candidates) == 1:
        k = candidates[0]
        roles.names[k] = "audio_hz"
        roles.notes[k] = "audio frequencies by size and spread"
        if not named and columns[k].hint.strip():
            roles.doubts.append(
                Doubt("audio_hz", f"{columns[k].label} is taken by its values; its name does not say so")
            )
    elif candidates:
        labels = ", ".join(columns[k].label for k in candidates)
        roles.doubts.append(Doubt("audio_hz", f"NOT SURE which column it is: {labels}; none is read"))
        for k in candidates:
            roles.notes[k] = "could be audio frequencies"


def name_by_values(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
    free = {
        k: spread
        for k, spread in spreads.items()
        if k not in roles.names and k not in roles.notes and not meanings_of(columns[k].hint)
        and columns[k].unit not in ("kHz", "MHz", "Hz", "W", "mW")
    }  # fmt: skip
    loose = {
        k: spread
        for k, spread in spreads.items()
        if k not in roles.names
        and k not in roles.notes
        and meanings_of(columns[k].hint) & {"signal", "report", "late_or_audio"}
    }
    if roles.free("snr_db"):
        snr = [
            k
            for k, spread in (free | loose).items()
            if could_be_snr(spread) and not could_be_power(columns[k], spread)
        ]
        _take(roles, columns, spreads, snr, "snr_db")
    if roles.free("late_s"):
        late = [k for k, spread in (free | loose).items() if could_be_late(spread) and k not in roles.names]
        _take(roles, columns, spreads, late, "late_s")


def _width(spread: Spread) -> float:
    return spread.p95 - spread.p5


def _take(
    roles: Roles, columns: list[Column], spreads: dict[int, Spread], candidates: list[int], name: str
) -> None:
    negative = [k for k in candidates if spreads[k].negative]
    kept = negative or candidates
    if not kept:
        return
    wide = sorted(kept, key=lambda k: -_width(spreads[k]))
    if (
        name == "snr_db"
        and len(wide) > 1
        and _width(spreads[wide[0]]) >= _CLEARLY_WIDER * _width(spreads[wide[1]])
    ):
        first, other = columns[wide[0]].label, columns[wide[1]].label
        roles.doubts.append(
            Doubt(name, f"NOT SURE: {first} is taken because it spreads most; {other} could be it")
        )
        kept = wide[:1]
    k = kept[0]
    spread = spreads[k]
    if len(kept) > 1:
        labels = ", ".join(columns[k].label for k in kept)
        for k in kept:
            roles.notes[k] = f"could be {name}"
        roles.doubts.append(Doubt(name, f"NOT SURE which column it is: {labels} could all be; none is read"))
        return
    roles.names[k] = name
    roles.notes[k] = f"by its values, {spread.low:g} to {spread.high:g}"
    if not negative or columns[k].hint.strip():
        why = "never below 0" if not negative else "its name does not say so"
        roles.doubts.append(
            Doubt(name, f"NOT SURE that {columns[k].label} ({spread.low:g} to {spread.high:g}) is it: {why}")
        )
    elif len(candidates) > 1:
        labels = ", ".join(columns[j].label for j in candidates if j != k)
        roles.doubts.append(
            Doubt(name, f"{columns[k].label} is taken because it goes below 0; {labels} could be it too")
        )


def doubt_distances(roles: Roles, columns: list[Column]) -> None:
    """Doubt an audio frequency that is not seen to vary for each sender: it could be a distance."""
    audio = next((k for k, name in roles.names.items() if name == "audio_hz"), None)
    if audio is None or meanings_of(columns[audio].hint) & {"audio", "frequency"} or columns[audio].unit:
        return
    sender = next((k for k, name in roles.names.items() if name == "sender"), None)
    text = next((k for k, name in roles.names.items() if name == "text"), None)
    if sender is not None:
        calls = columns[sender].values
    elif text is not None:
        calls = [read_usually(value).get("sender", "") for value in columns[text].values]
    else:
        calls = []
    by_sender: dict[str, set[str]] = {}
    count: dict[str, int] = {}
    for call, value in zip(calls, columns[audio].values, strict=False):
        if is_call(call):
            by_sender.setdefault(call, set()).add(value)
            count[call] = count.get(call, 0) + 1
    varying = sum(len(by_sender[call]) > 1 for call, n in count.items() if n > 1)
    if varying < _VARYING_SENDERS:
        roles.doubts.append(
            Doubt(
                "audio_hz",
                f"{columns[audio].label} is not seen to vary for one sender: it could be a distance too",
            )
        )
