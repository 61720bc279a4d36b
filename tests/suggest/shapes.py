"""Invented shapes of logs, each made from a known truth. No line follows any program's layout."""

from __future__ import annotations

import json
from datetime import UTC, date, datetime, timedelta

from tests.suggest.scenario import make
from tests.suggest.shape import Lines, Shape

START = datetime(2026, 3, 1, 18, 0, tzinfo=UTC)


def name_dated() -> Shape:
    """Blanks between columns in an own order, the date in the file's name."""
    made, out = make(1), Lines()
    for h in made.heard:
        out.heard(f"{h.snr_db:>4} {h.late_s:>5.1f}  {h.time:%H:%M:%S}  {h.mode} {h.audio_hz:>5} {h.text}", h)
    return out.shape("name-dated", "garden_2026-03-01.txt", fill={"dial_hz": "7078000"})


def semicolons() -> Shape:
    """Semicolons, decimal commas, days first, a header in the trade's words."""
    made, out = make(2, dials=3, start=datetime(2026, 3, 2, 23, 30, tzinfo=UTC)), Lines()
    out.add("Date;UTC;Frequency kHz;AF;S/N;DT;Mode;Message")
    for h in made.heard:
        khz = f"{h.dial_hz / 1000:.1f}".replace(".", ",")
        late = f"{h.late_s:.1f}".replace(".", ",")
        out.heard(
            f"{h.time:%d.%m.%Y};{h.time:%H:%M:%S};{khz};{h.audio_hz};{h.snr_db};{late};{h.mode};{h.text}", h
        )
    return out.shape("semicolons", "evening.txt")


def json_nested() -> Shape:
    """One JSON object a line, with objects in it and other objects between."""
    made, out = make(3, dials=2), Lines()
    for i, h in enumerate(made.heard):
        if i % 60 == 0:
            out.add(json.dumps({"event": "alive", "at": h.time.isoformat(), "uptime": i}))
        told = {
            "event": "decode",
            "at": h.time.isoformat().replace("+00:00", "Z"),
            "radio": {"dial_hz": h.dial_hz, "af": h.audio_hz},
            "report": {"snr": h.snr_db, "dt": h.late_s},
            "mode": h.mode,
            "from": h.sender,
            "to": h.addressee or None,
            "grid": h.locator or None,
        }
        out.heard(json.dumps(told), h)
    return out.shape("json-nested", "objects.log")


def pairs() -> Shape:
    """Keys and values in changing order, some left out."""
    made, out = make(4), Lines()
    for h in made.heard:
        items = [f"snr={h.snr_db}", f"dt={h.late_s}", f"freq={h.audio_hz}", f"mode={h.mode}"]
        if made.draw.random() < 0.3:
            items.reverse()
        late: float | None = h.late_s
        if made.draw.random() < 0.1:
            items = [item for item in items if not item.startswith("dt=")]
            late = None
        out.heard(f'{h.time:%Y-%m-%dT%H:%M:%SZ} {" ".join(items)} msg="{h.text}"', h, late_s=late)
    return out.shape("pairs", "pairs.log", fill={"dial_hz": "7078000"})


def journal() -> Shape:
    """A journal's lines without a year, and remarks between."""
    made, out = make(5), Lines(("time", "dial_hz", "snr_db", "sender", "addressee", "locator"))
    for i, h in enumerate(made.heard):
        if i % 70 == 5:
            out.add(
                f"{h.time:%b} {h.time.day:>2} {h.time:%H:%M:%S} shed clockd[88]: offset checked, all well"
            )
        out.heard(
            f"{h.time:%b} {h.time.day:>2} {h.time:%H:%M:%S} shed ear[412]: got <{h.text}> at {h.snr_db} dB", h
        )
    return out.shape("journal", "journal.txt", fill={"dial_hz": "7078000"}, day=date(2026, 3, 1))


def carried() -> Shape:
    """Times of day only; lines between give the date and the dial."""
    made, out = make(6, dials=3, count=600, start=datetime(2026, 3, 1, 22, 40, tzinfo=UTC)), Lines()
    day = dial = None
    for h in made.heard:
        if h.time.date() != day:
            day = h.time.date()
            out.add(f"=== {h.time:%d-%b-%Y} ===")
        if h.dial_hz != dial:
            dial = h.dial_hz
            out.add(f">> dial {dial / 1000:.1f} kHz")
        out.heard(f"{h.time:%H%M%S} {h.audio_hz:04d} {h.snr_db:+03d} {h.late_s:+.1f} {h.text}", h, mode=None)
    return out.shape("carried", "diary.txt")


def unix() -> Shape:
    """Seconds since 1970 and TABs, no header; sender, addressee and locator in columns."""
    made, out = (
        make(7),
        Lines(("time", "dial_hz", "audio_hz", "snr_db", "mode", "sender", "addressee", "locator")),
    )
    for h in made.heard:
        out.heard(
            "\t".join([h.sender, h.addressee or "CQ", h.locator, str(h.snr_db), str(int(h.time.timestamp())),
                       str(h.dial_hz + h.audio_hz), str(h.audio_hz), h.mode]), h,
        )  # fmt: skip
    return out.shape("unix", "seconds.tsv")


def fixed() -> Shape:
    """Columns at fixed places, the level and the lateness sometimes blank."""
    made, out = make(8), Lines()
    for h in made.heard:
        snr = "" if made.draw.random() < 0.2 else str(h.snr_db)
        late = "" if made.draw.random() < 0.2 else f"{h.late_s:.1f}"
        out.heard(
            f"{h.time:%Y-%m-%d %H:%M:%S} {snr:>4}{late:>6} {h.audio_hz:>6}  {h.mode:<6}{h.text}", h,
            snr_db=h.snr_db if snr else None, late_s=h.late_s if late else None,
        )  # fmt: skip
    return out.shape("fixed", "table.txt", fill={"dial_hz": "7078000"})


def wide() -> Shape:
    """UTF-16, a header every hundred lines, a remark with an umlaut in each line."""
    made, out = (
        make(9, count=450),
        Lines(("time", "dial_hz", "audio_hz", "snr_db", "sender", "addressee", "locator")),
    )
    header = "When (UTC),Place,Dial MHz,Tone,Level dB,Text"
    for i, h in enumerate(made.heard):
        if i % 100 == 0:
            out.add(header)
        out.heard(
            f"{h.time:%Y/%m/%d %H:%M:%S},Hütte,{h.dial_hz / 1e6:.4f},{h.audio_hz},{h.snr_db},{h.text}", h
        )
    shape = out.shape("wide", "wide.txt")
    shape.stored = b"\xff\xfe" + shape.stored.decode().replace("\n", "\r\n").encode("utf-16-le")
    return shape


def status() -> Shape:
    """Reports of the receiver every minute, comments and a banner among the messages."""
    made, out = make(10, count=500), Lines()
    out.add("ear of the garden, build seven")
    out.add("# noise is that of the evening")
    minute = made.heard[0].time
    for h in made.heard:
        while h.time >= minute + timedelta(seconds=60):
            minute += timedelta(seconds=60)
            out.add(f"{minute:%Y-%m-%d %H:%M:%S} listened 60 s, queue {made.draw.randrange(4)}")
        out.heard(
            f"{h.time:%Y-%m-%d %H:%M:%S} {h.mode} {h.dial_hz / 1000:.1f} {h.audio_hz} {h.snr_db} {h.late_s} [{h.text}]",
            h,
        )
    return out.shape("status", "status.log")


def megahertz() -> Shape:
    """The signal's own frequency in MHz, bars between columns, no audio; the dial is the user's."""
    made, out = (
        make(11),
        Lines(("time", "dial_hz", "audio_hz", "snr_db", "mode", "sender", "addressee", "locator")),
    )
    for h in made.heard:
        signal = (h.dial_hz + h.audio_hz) / 1e6
        out.heard(f"{h.time:%Y%m%d%H%M%S}|{signal:.6f}|{h.mode}|{h.snr_db}|{h.text}", h)
    return out.shape("megahertz", "bars.txt", fill={"dial_hz": "7078000"})


def no_log() -> Shape:
    """A text that is no log."""
    lines = [
        "The hut stands on the north side of the hill, some way above the last fence.",
        "In winter the path is often closed, so bring enough wood for three nights.",
        "The lamp is in the left cupboard. The well is frozen until April 12.",
        "Whoever comes first lights the stove and writes the date into the book.",
    ] * 12
    return Shape("no-log", "hut.txt", "\n".join(lines).encode())


def binary() -> Shape:
    """Bytes that are no text."""
    draw = make(12, count=5).draw
    return Shape("binary", "picture.log", bytes(draw.randrange(256) for _ in range(20_000)))


DEVELOPED = (
    name_dated,
    semicolons,
    json_nested,
    pairs,
    journal,
    carried,
    unix,
    fixed,
    wide,
    status,
    megahertz,
    no_log,
    binary,
)
