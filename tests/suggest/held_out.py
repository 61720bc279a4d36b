"""Further invented shapes of logs, written after the rules by which recipes are suggested."""

from __future__ import annotations

import gzip
import json
from datetime import UTC, datetime
from zoneinfo import ZoneInfo

from tests.suggest.scenario import make
from tests.suggest.shape import Lines, Shape


def shifting() -> Shape:
    """Blanks between columns; the lateness is left out of some lines, so that later columns shift."""
    made, out = make(21), Lines()
    for h in made.heard:
        late = "" if made.draw.random() < 0.1 else f" {h.late_s:+.2f}"
        out.heard(
            f"{h.time:%Y-%m-%dT%H:%M:%SZ} {h.audio_hz}{late} {h.snr_db} {h.mode} {h.text}", h,
            late_s=h.late_s if late else None,
        )  # fmt: skip
    return out.shape("shifting", "shift.log", fill={"dial_hz": "7078000"})


def commas_in_text() -> Shape:
    """Commas between columns and, unquoted, in the text, which is the last."""
    made, out = make(22), Lines()
    out.add("time,mode,snr,af,dial_khz,dt,decoded")
    for h in made.heard:
        more = made.draw.choice(["", "", ", tnx", ", 73, gn"])
        out.heard(
            f"{h.time:%Y-%m-%d %H:%M:%S},{h.mode},{h.snr_db},{h.audio_hz},{h.dial_hz / 1000:.2f},{h.late_s},"
            f"{h.text}{more}",
            h,
        )
    return out.shape("commas-in-text", "commas.txt")


def short_years() -> Shape:
    """Days first, years of two digits, over two midnights; bars."""
    made, out = make(23, count=900, start=datetime(2026, 3, 3, 22, 0, tzinfo=UTC), share=0.1), Lines()
    for h in made.heard:
        out.heard(
            f"{h.time:%d/%m/%y|%H:%M:%S}|{h.dial_hz / 1000:.1f}|{h.audio_hz}|{h.snr_db}|{h.late_s}|{h.text}", h,
            mode=None,
        )  # fmt: skip
    return out.shape("short-years", "bars.log")


def twelve_hours() -> Shape:
    """Months first and a clock of twelve hours, in a file of the user's zone."""
    zone = ZoneInfo("America/Halifax")
    made, out = make(24, start=datetime(2026, 7, 14, 14, 0, tzinfo=UTC)), Lines()
    out.add("Mode\tLocal time\tS/N\tFreq (MHz)\tDF\tFrom\tTo\tGrid")
    for h in made.heard:
        at = h.time.astimezone(zone)
        out.heard(
            "\t".join([h.mode, f"{at:%m/%d/%Y %I:%M:%S %p}", str(h.snr_db), f"{h.dial_hz / 1e6:.4f}", str(h.audio_hz),
                       h.sender, h.addressee, h.locator]), h, late_s=None,
        )  # fmt: skip
    return out.shape("twelve-hours", "summer.tsv", fill={"zone": '"America/Halifax"'})


def minutes() -> Shape:
    """Hours and minutes only, packed; a line in words gives the day, another the frequency."""
    made, out = make(25, count=700, dials=2, start=datetime(2026, 5, 9, 22, 50, tzinfo=UTC)), Lines()
    day = dial = None
    for h in made.heard:
        if h.time.date() != day:
            day = h.time.date()
            out.add(f"~~ {h.time.day} {h.time:%B %Y} ~~")
        if h.dial_hz != dial:
            dial = h.dial_hz
            out.add(f"receiver tuned to {dial / 1e6:.4f} MHz")
        out.heard(
            f"{h.time:%H%M} {h.snr_db:>3} {h.audio_hz:>4} {h.text}", h,
            time=h.time.replace(second=0), late_s=None, mode=None,
        )  # fmt: skip
    shape = out.shape("minutes", "minutes.log.gz")
    shape.stored = gzip.compress(shape.stored)
    return shape


def prose() -> Shape:
    """Sentences."""
    made, out = make(26), Lines()
    for h in made.heard:
        where = f" ({h.locator})" if h.locator else ""
        whom = h.addressee or "CQ"
        out.heard(
            f"{h.time:%Y-%m-%d %H:%M:%S} UTC: heard {h.sender}{where} calling {whom} at {h.late_s:+.1f} s,"
            f" {h.audio_hz} Hz, {h.snr_db} dB", h, mode=None,
        )  # fmt: skip
    return out.shape("prose", "sentences.txt", fill={"dial_hz": "7078000"})


def own_words() -> Shape:
    """JSON with words of its own for everything, milliseconds since 1970, numbers as texts."""
    made, out = make(27), Lines()
    for h in made.heard:
        told = {
            "w": {"u": int(h.time.timestamp() * 1000)},
            "y": [h.snr_db],
            "lvl": h.snr_db,
            "shift": h.late_s,
            "pitch": str(h.audio_hz),
            "carr": f"{h.dial_hz / 1000:.1f}",
            "said": h.text,
        }
        out.heard(json.dumps(told), h, mode=None)
    return out.shape("own-words", "own.log")


def both_ways() -> Shape:
    """Received and sent lines; what was sent is no reception."""
    made, out = make(28), Lines()
    for i, h in enumerate(made.heard):
        if i % 9 == 4:
            out.add(
                f"{h.time:%y%m%d %H%M%S} TX {h.mode} {h.dial_hz} {made.draw.randrange(300, 2500)}"
                " 0 0.0 Q1SHY Q0HUT R-05"
            )
        out.heard(
            f"{h.time:%y%m%d %H%M%S} RX {h.mode} {h.dial_hz} {h.audio_hz} {h.snr_db} {h.late_s} {h.text}", h
        )
    return out.shape("both-ways", "both.txt")


def caller_first() -> Shape:
    """Messages that name the caller first; umlauts of one byte; decimal commas; hours with points."""
    made, out = make(29, count=500), Lines()
    for h in made.heard:
        words = h.text.split()
        text = h.text if words[0] == "CQ" else " ".join([words[1], words[0], *words[2:]])
        out.heard(
            f"{h.time:%d.%m.%Y} {h.time:%H.%M.%S};Gartenhütte;{h.dial_hz / 1e6:.4f};{h.audio_hz};"
            f"{h.snr_db};{h.late_s};{h.mode};{text}".replace(f"{h.late_s};", f"{h.late_s};".replace(".", ",")), h,
        )  # fmt: skip
    shape = out.shape("caller-first", "caller.txt")
    shape.stored = shape.stored.decode().replace("7.0780", "7,0780").encode("cp1252")
    return shape


HELD_OUT = (
    shifting,
    commas_in_text,
    short_years,
    twelve_hours,
    minutes,
    prose,
    own_words,
    both_ways,
    caller_first,
)
