"""What each column of the messages' table is, by its values; names in the log are hints only."""

from __future__ import annotations

from dataclasses import dataclass, field

from logtool.records.layout import NAME_FORM
from logtool.records.recipes.names import target_of
from logtool.suggest.doubts import Doubt
from logtool.suggest.frequencies import Frequency, could_be_audio, lies_above_dials, name_radio, radio_of
from logtool.suggest.hints import meanings_of, unit_of
from logtool.suggest.messages import Calls, find_calls, read_usually
from logtool.suggest.numbers import (
    Spread,
    could_be_late,
    could_be_power,
    could_be_snr,
    hinted_number,
    spread_of,
)
from logtool.suggest.tables import Column, Table
from logtool.suggest.times import Times, find_times, name_date_of
from logtool.suggest.values import (
    given,
    is_call,
    is_mode_word,
    is_number,
    number_of,
    quoted,
    words_for_nothing,
)
from logtool.suggest.wordy import name_words

KEPT_FOR_CHECK = ("other", "report", "drift", "dbfs", "power")
_VARYING_SENDERS = 2
_ENOUGH_ROWS = 8


@dataclass
class Roles:
    """What was found of a table: the name of each column that is wanted, and what is in doubt."""

    names: dict[int, str] = field(default_factory=dict)
    notes: dict[int, str] = field(default_factory=dict)
    doubts: list[Doubt] = field(default_factory=list)
    values: dict[str, dict[str, str]] = field(default_factory=dict)
    where: dict[int, str] = field(default_factory=dict)
    empty: set[str] = field(default_factory=set)
    decimal: str = "."
    times: Times = field(default_factory=Times)
    calls: Calls = field(default_factory=Calls)

    def has(self, target: str) -> bool:
        """Return whether a column becomes a target."""
        return any(target_of(name) == target for name in self.names.values())

    def free(self, target: str) -> bool:
        """Return whether no column has become a target yet."""
        return not self.has(target)


def find_roles(table: Table, parts: list[int], file_name: str) -> Roles:
    """Return what the columns of a table are.

    Parameters
    ----------
    table : Table
    parts : list of int
        The part of the file to which each row belongs.
    file_name : str
        Its date may tell the order of day and month.
    """
    roles = Roles()
    columns = table.columns
    roles.times = find_times(columns, parts, name_date_of(file_name))
    roles.doubts += roles.times.doubts
    for k, name in ((roles.times.time, "time"), (roles.times.date, "date")):
        if k is not None:
            roles.names[k] = name
    roles.calls = find_calls(columns, set(roles.names))
    roles.names |= roles.calls.names
    roles.values |= roles.calls.values
    roles.notes |= roles.calls.notes
    roles.doubts += roles.calls.doubts
    spreads = {
        k: spread
        for k, column in enumerate(columns)
        if k not in roles.names and (spread := spread_of(column))
    }
    _by_hints(roles, columns, spreads)
    _frequencies(roles, columns, spreads)
    _by_values(roles, columns, spreads)
    name_words(roles, columns)
    _doubt_places(roles, columns)
    _left_out(roles, columns, spreads)
    _written(roles, columns)
    return roles


def _by_hints(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
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


def _frequencies(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
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
        elif (could_be_audio(column) and unit not in ("kHz", "MHz", "dB", "s", "ms", "W", "mW", "dBm")) or ("audio" in means and spreads[k].low >= 0 and spreads[k].high <= 24_000):
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


def _by_values(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
    free = {
        k: spread
        for k, spread in spreads.items()
        if k not in roles.names and k not in roles.notes and not meanings_of(columns[k].hint)
        and columns[k].unit not in ("kHz", "MHz", "Hz", "W", "mW")
    }  # fmt: skip
    loose = {
        k: spread for k, spread in spreads.items()
        if k not in roles.names and k not in roles.notes and meanings_of(columns[k].hint) & {"signal", "report", "late_or_audio"}
    }  # fmt: skip
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


def _take(
    roles: Roles, columns: list[Column], spreads: dict[int, Spread], candidates: list[int], name: str
) -> None:
    negative = [k for k in candidates if spreads[k].negative]
    kept = negative or candidates
    if not kept:
        return
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


def _doubt_places(roles: Roles, columns: list[Column]) -> None:
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


def _left_out(roles: Roles, columns: list[Column], spreads: dict[int, Spread]) -> None:
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
                    f"{column.label} ({shown}) is left out: its values do not tell whether it is one of these",
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
        if spread.low >= -60 and spread.high <= 80:
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
        could.append("mode")
    elif column.kind == "text":
        could += ["sender", "addressee"]
    if "sender" in could and roles.calls.message:
        return []
    if roles.has("signal_hz"):
        could = [name for name in could if name not in ("dial_hz", "audio_hz")]
    return [name for name in could if roles.free(name)]


def _written(roles: Roles, columns: list[Column]) -> None:
    """Find out how the numbers of the wanted columns are written, and which words stand for nothing."""
    commas = points = 0
    for k, name in roles.names.items():
        if name == "text":
            continue
        roles.empty |= words_for_nothing(columns[k].values)
        if columns[k].kind == "number":
            commas += sum("," in value for value in columns[k].values)
            points += sum("." in value for value in columns[k].values)
    if commas:
        roles.decimal = ","
        if points:
            roles.doubts.append(
                Doubt("decimal", "numbers are written with points and with commas; the comma is taken")
            )


__all__ = ["NAME_FORM", "Roles", "find_roles"]
