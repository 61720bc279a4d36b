"""A small, slow reader of layout 1, written from its description alone.

It shares nothing with the package: it goes line by line, field by field, with plain Python, so that a
disagreement with the real reader is a fault of one of the two.
"""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field
from decimal import Decimal

from tests.records.slow_forms import (
    DIGITS,
    is_locator,
    is_number,
    more_keys,
    only,
    plain_text,
    time_parts,
    word,
)

COLUMNS = [
    "time", "kind", "receiver", "dial_hz", "audio_hz", "snr_db", "late_s", "mode", "sender", "addressee",
    "locator", "power_dbm", "text", "more",
]  # fmt: skip
KINDS = ("heard", "setup", "watch", "noise", "stop", "note")
NEEDED_COLUMNS = {
    "heard": ["receiver", "dial_hz"],
    "setup": ["receiver", "dial_hz", "locator"],
    "watch": ["receiver"],
    "noise": ["receiver"],
    "stop": ["receiver"],
    "note": ["receiver"],
}
NEEDED_KEYS = {"setup": "antenna", "watch": "on_s", "noise": "dbfs"}
COLUMN_BOUNDS = {
    "dial_hz": ("1", "3000000000"),
    "audio_hz": ("0", "24000"),
    "snr_db": ("-60", "80"),
    "late_s": ("-60", "60"),
    "power_dbm": ("-30", "70"),
}
# None: any number will do.
KEY_BOUNDS = {
    "on_s": ("0", "86400"),
    "dbfs": ("-200", "3"),
    "peak_dbfs": ("-200", "0"),
    "slot_s": ("0.1", "3600"),
    "sure": ("0", "1"),
    "report_db": None,
    "drift_hz": None,
    "temperature_c": None,
}
KEY_WORDS = {"order": ("random", "alternate"), "agc": ("on", "off")}


@dataclass(frozen=True)
class Record:
    """The fields of one record as values: numbers exact, sender upper-cased, text without escapes."""

    time: datetime.datetime
    kind: str
    receiver: str
    dial_hz: int | None
    audio_hz: Decimal | None
    snr_db: Decimal | None
    late_s: Decimal | None
    mode: str
    sender: str
    addressee: str
    locator: str
    power_dbm: Decimal | None
    text: str
    more: tuple[tuple[str, str], ...]


@dataclass
class Account:
    """What became of the lines of one file."""

    name: str
    lines: int = 0
    blank: int = 0
    comments: int = 0
    repeated: int = 0
    set_aside: list[tuple[int, str, bytes]] = field(default_factory=list)
    records: list[tuple[int, bytes, Record]] = field(default_factory=list)

    def counts(self) -> dict[str, object]:
        reasons: dict[str, int] = {}
        for _, reason, _ in self.set_aside:
            reasons[reason] = reasons.get(reason, 0) + 1
        return {
            "lines": self.lines,
            "blank": self.blank,
            "comments": self.comments,
            "records": len(self.records),
            "repeated": self.repeated,
            "set_aside": len(self.set_aside),
            "reasons": reasons,
        }


def raw_lines(data: bytes) -> Iterator[bytes]:
    """Give each line without its ending; a mark of byte order at the very start is dropped once."""
    if data[:3] == b"\xef\xbb\xbf":
        data = data[3:]
    while data:
        place = data.find(b"\n")
        if place < 0:
            yield data
            return
        line, data = data[:place], data[place + 1 :]
        yield line[:-1] if line[-1:] == b"\r" else line


def read_line(line: bytes) -> str | Record:
    """Return 'blank', 'comment', the record, or the reason for which the line is set aside."""
    if all(byte in b" \t" for byte in line):
        return "blank"
    if line[:1] == b"#":
        return "comment"
    try:
        text = line.decode("utf-8")
    except UnicodeDecodeError:
        return "not-utf8"
    if len(line) > 8192:
        return "too-long"
    for character in text:
        code = ord(character)
        if (code < 0x20 and character != "\t") or code == 0x7F or 0x80 <= code <= 0x9F:
            return "control-character"
    fields = text.split("\t")
    if len(fields) < 14:
        return "too-few-fields"
    if len(fields) > 14:
        return "too-many-fields"
    return judge_fields(dict(zip(COLUMNS, fields, strict=True)))


def judge_fields(row: dict[str, str]) -> str | Record:
    when = time_parts(row["time"])
    if when is None:
        return "bad-time"
    if row["kind"] not in KINDS:
        return "bad-kind"
    keys = more_keys(row["more"])
    held = dict(keys or ())
    for name in NEEDED_COLUMNS[row["kind"]]:
        if row[name] == "":
            return "missing-" + name
    needed_key = NEEDED_KEYS.get(row["kind"])
    if needed_key is not None and needed_key not in held:
        return "missing-more"
    for name in COLUMNS[2:]:
        if row[name] != "" and not form_is_good(name, row[name]):
            return "bad-" + name
    if not 1970 <= when[0] <= 2099:
        return "range-time"
    for name in COLUMNS[3:]:
        if out_of_bounds(name, row, held):
            return "range-" + name
    assert keys is not None
    return make_record(row, when, keys)


def form_is_good(name: str, text: str) -> bool:
    if name == "receiver":
        return word(text, "_-", 32)
    if name == "dial_hz":
        return 1 <= len(text) <= 10 and only(text, DIGITS)
    if name == "mode":
        return word(text, "_./+-", 16)
    if name in ("sender", "addressee"):
        return word(text, "/_-", 20)
    if name == "locator":
        return is_locator(text)
    if name == "text":
        return len(text.encode()) <= 4000 and plain_text(text) is not None
    if name == "more":
        pairs = more_keys(text)
        return pairs is not None and all(key_is_good(key, value) for key, value in pairs)
    return is_number(text)


def key_is_good(key: str, value: str) -> bool:
    if key == "antenna":
        return word(value, "_-", 32)
    if key in KEY_WORDS:
        return value in KEY_WORDS[key]
    if key in KEY_BOUNDS or key == "assisted":
        return is_number(value)
    return True


def outside(value: str, bounds: tuple[str, str] | None) -> bool:
    return bounds is not None and not Decimal(bounds[0]) <= Decimal(value) <= Decimal(bounds[1])


def out_of_bounds(name: str, row: dict[str, str], held: dict[str, str]) -> bool:
    if name == "locator":
        return row["kind"] == "setup" and len(row["locator"]) == 2
    if name == "more":
        if "assisted" in held and Decimal(held["assisted"]) not in (0, 1):
            return True
        return any(outside(held[key], KEY_BOUNDS[key]) for key in KEY_BOUNDS if key in held)
    return name in COLUMN_BOUNDS and row[name] != "" and outside(row[name], COLUMN_BOUNDS[name])


def make_record(row: dict[str, str], when: tuple[int, ...], keys: list[tuple[str, str]]) -> Record:
    def number(name: str) -> Decimal | None:
        return Decimal(row[name]) if row[name] else None

    text = plain_text(row["text"])
    assert text is not None
    return Record(
        time=datetime.datetime(*when),  # type: ignore[arg-type]
        kind=row["kind"],
        receiver=row["receiver"],
        dial_hz=int(row["dial_hz"]) if row["dial_hz"] else None,
        audio_hz=number("audio_hz"),
        snr_db=number("snr_db"),
        late_s=number("late_s"),
        mode=row["mode"],
        sender=row["sender"].upper(),
        addressee=row["addressee"].upper(),
        locator=row["locator"],
        power_dbm=number("power_dbm"),
        text=text,
        more=tuple(keys),
    )


def read_files(files: Iterable[tuple[str, bytes]]) -> list[Account]:
    """Account for files in the order given: a record seen before, in any file, is a repeat."""
    seen: set[bytes] = set()
    accounts = []
    for name, data in files:
        account = Account(name)
        for line in raw_lines(data):
            account.lines += 1
            what = read_line(line)
            if what == "blank":
                account.blank += 1
            elif what == "comment":
                account.comments += 1
            elif isinstance(what, str):
                account.set_aside.append((account.lines, what, line))
            elif line in seen:
                account.repeated += 1
            else:
                seen.add(line)
                account.records.append((account.lines, line, what))
        accounts.append(account)
    return accounts
