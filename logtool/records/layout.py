"""The log layout, version 1: its columns, kinds, keys and reasons, defined here and nowhere else.

The judge, the quick pattern, the writer and the tables in `docs/log-layout.md` all come from this
module.
"""

from __future__ import annotations

from dataclasses import dataclass

LAYOUT_VERSION = 1
LAYOUT_LINE = "# logtool layout "  # a log's first line is this and the layout's number
MAX_LINE_BYTES = 8192  # without the line's ending
MAX_TEXT_BYTES = 4000  # as written, escapes counted as written
MAX_VALUE_BYTES = 200  # of one value in `more`

NUMBER_FORM = r"-?[0-9]{1,10}(\.[0-9]{1,6})?"
INTEGER_FORM = r"[0-9]{1,10}"
NAME_FORM = r"[A-Za-z0-9_-]{1,32}"
CALL_FORM = r"[A-Za-z0-9/_-]{1,20}"
MODE_FORM = r"[A-Za-z0-9_./+-]{1,16}"
LOCATOR_FORM = r"[A-Ra-r]{2}([0-9]{2}([A-Xa-x]{2}([0-9]{2}([A-Xa-x]{2})?)?)?)?"
TIME_FORM = r"([0-9]{4})-([0-9]{2})-([0-9]{2})T([0-9]{2}):([0-9]{2}):([0-9]{2})(\.[0-9]{1,6})?Z"
TEXT_FORM = r"([^\\]|\\[tnr\\])*"
KEY_FORM = r"[a-z][a-z0-9_]{0,31}"
FIRST_YEAR, LAST_YEAR = 1970, 2099

KINDS = ("heard", "setup", "watch", "noise", "stop", "note")


@dataclass(frozen=True)
class Column:
    """One column of the layout: its form as a regular expression, bounds, unit and meaning."""

    name: str
    form: str
    shape: str  # `time`, `word`, `integer`, `number`, `text` or `more`
    low: float | None
    high: float | None
    unit: str
    meaning: str


@dataclass(frozen=True)
class Key:
    """A known key of the column `more`: a number with bounds, or one of some words, or a form."""

    name: str
    low: float | None = None
    high: float | None = None
    words: tuple[str, ...] = ()
    form: str = NUMBER_FORM
    meaning: str = ""


COLUMNS = (
    Column("time", TIME_FORM, "time", None, None, "UTC", "for `heard`, the start of the message's time slot"),
    Column("kind", "|".join(KINDS), "word", None, None, "", "what the line records"),
    Column("receiver", NAME_FORM, "word", None, None, "", "the user's name for one receiver"),
    Column("dial_hz", INTEGER_FORM, "integer", 1, 3_000_000_000, "Hz",
           "frequency of the (suppressed) carrier that audio is counted from"),
    Column("audio_hz", NUMBER_FORM, "number", 0, 24_000, "Hz", "audio frequency of the lowest tone"),
    Column("snr_db", NUMBER_FORM, "number", -60, 80, "dB", "signal-to-noise ratio, noise counted in 2500 Hz"),
    Column("late_s", NUMBER_FORM, "number", -60, 60, "s",
           "start of the message after the start of its slot, by the receiver's clock"),
    Column("mode", MODE_FORM, "word", None, None, "", "the digital mode"),
    Column("sender", CALL_FORM, "word", None, None, "",
           "call sign, upper-cased when read; empty where the message gives none"),
    Column("addressee", CALL_FORM, "word", None, None, "", "to whom, where the message says so"),
    Column("locator", LOCATOR_FORM, "word", None, None, "",
           "`heard`: the sender's; `setup`: the receiver's (4 characters or more)"),
    Column("power_dbm", NUMBER_FORM, "number", -30, 70, "dBm",
           "the sender's power, where the message says so"),
    Column("text", TEXT_FORM, "text", None, None, "", "the message or remark, in any kind"),
    Column("more", "", "more", None, None, "", "details as `key=value` joined by `; `"),
)  # fmt: skip
COLUMN_NAMES = tuple(column.name for column in COLUMNS)
NAMES_LINE = "# " + "\t".join(COLUMN_NAMES)

KNOWN_KEYS = {
    key.name: key
    for key in (
        Key("antenna", form=NAME_FORM, meaning="the antenna in use; `none` when it is taken off"),
        Key("on_s", 0, 86_400, meaning="seconds listened, ending at the line's time"),
        Key("dbfs", -200, 3, meaning="audio level, RMS against a full-scale sine"),
        Key("peak_dbfs", -200, 0, meaning="audio peak level against full scale"),
        Key("slot_s", 0.1, 3_600, meaning="length of a time slot"),
        Key("sure", 0, 1, meaning="the decoder's own sureness"),
        Key("assisted", words=("0", "1"), meaning="1: decoded with the help of what was known before"),
        Key("report_db", meaning="the report that the message carries"),
        Key("drift_hz", meaning="drift of the signal during the message"),
        Key("temperature_c", meaning="temperature at the receiver"),
        Key("order", words=("random", "alternate"), form="", meaning="how antennas are switched"),
        Key("agc", words=("on", "off"), form="", meaning="automatic gain control"),
        Key("decoder", form="", meaning="the decoder's name"),
    )
}

# What each kind needs beside `receiver`: columns, and keys of `more`.
NEEDS: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "heard": (("dial_hz",), ()),
    "setup": (("dial_hz", "locator"), ("antenna",)),
    "watch": ((), ("on_s",)),
    "noise": ((), ("dbfs",)),
    "stop": ((), ()),
    "note": ((), ()),
}
SETUP_LOCATOR_CHARACTERS = 4  # a setup's locator has at least so many

LINE_REASONS = (
    "not-utf8",
    "too-long",
    "control-character",
    "too-few-fields",
    "too-many-fields",
    "bad-time",
    "bad-kind",
)
REASONS = (
    LINE_REASONS
    + tuple(f"missing-{n}" for n in ("receiver", "dial_hz", "locator", "more"))
    + tuple(f"bad-{n}" for n in COLUMN_NAMES[2:])
    + tuple(f"range-{c.name}" for c in COLUMNS if c.low is not None or c.name in ("time", "locator", "more"))
)
