"""A second set of invented shapes, written after the first held-out set had been mended."""

from __future__ import annotations

from datetime import UTC, datetime

from tests.suggest.scenario import make
from tests.suggest.shape import Lines, Shape


def halves_apart() -> Shape:
    """AM and PM in a column of their own, which no recipe can join with the time."""
    made, out = make(41, start=datetime(2026, 3, 20, 14, 0, tzinfo=UTC)), Lines()
    for h in made.heard:
        out.heard(
            f"{h.time:%Y-%m-%d;%I:%M:%S;%p};{h.dial_hz};{h.audio_hz};{h.snr_db};{h.late_s};{h.mode};{h.text}",
            h,
        )
    return out.shape("halves-apart", "halves.txt")


def day_of_year() -> Shape:
    """Days of the year, a level in dBm beside the ratio, a mode in small letters."""
    made, out = make(42, modes=("kb15", "kb60")), Lines()
    out.add("utc\tlevel dBm\tsnr dB\tmode\tdial kHz\taudio Hz\tdt s\tmessage")
    for h in made.heard:
        out.heard(
            f"{h.time:%Y-%j %H:%M:%S}\t{h.snr_db - 101}\t{h.snr_db}\t{h.mode}\t{h.dial_hz / 1000:.3f}\t{h.audio_hz}"
            f"\t{h.late_s}\t{h.text}",
            h,
        )
    return out.shape("day-of-year", "days.tsv")


def with_colons() -> Shape:
    """Keys, colons and commas."""
    made, out = make(43), Lines()
    for h in made.heard:
        out.heard(
            f"at: {h.time:%Y-%m-%d %H:%M:%S}, from: {h.sender}, to: {h.addressee or 'CQ'}, level: {h.snr_db},"
            f" pitch: {h.audio_hz}",
            h,
            late_s=None, mode=None, locator=None,
        )  # fmt: skip
    return out.shape("with-colons", "colons.txt", fill={"dial_hz": "7078000"})


def blank_calls() -> Shape:
    """Fixed places with names above them; addressee and locator blank in general calls."""
    made, out = make(44), Lines()
    out.add("Day        UTC      Signal kHz   S/N  Caller     Called     Loc")
    for h in made.heard:
        out.heard(
            f"{h.time:%d %b %Y %H:%M:%S} {(h.dial_hz + h.audio_hz) / 1000:>10.3f} {h.snr_db:>4}  {h.sender:<10} "
            f"{h.addressee:<10} {h.locator}".rstrip(),
            h,
            late_s=None, mode=None,
        )  # fmt: skip
    return out.shape("blank-calls", "calls.txt", fill={"dial_hz": "7078000"})


def short_codes() -> Shape:
    """Seconds since 1970 with parts, DE between call signs, some of them in brackets; a drift beside the level."""
    made, out = make(45), Lines()
    for h in made.heard:
        words = h.text.split()
        if words[0] != "CQ":
            words.insert(1, "DE")
            if made.draw.random() < 0.2:
                words[0] = f"<{words[0]}>"
        drift = made.draw.randrange(-3, 4)
        out.heard(
            f"{h.time.timestamp():.1f},{h.dial_hz},{h.audio_hz},{drift},{h.snr_db},{' '.join(words)}", h,
            late_s=None, mode=None,
        )  # fmt: skip
    return out.shape("short-codes", "codes.csv")


def tiny() -> Shape:
    """A few lines only."""
    made, out = make(46, count=6), Lines()
    out.add("time;dial;audio;snr;dt;mode;message")
    for h in made.heard:
        out.heard(
            f"{h.time:%Y-%m-%dT%H:%M:%SZ};{h.dial_hz};{h.audio_hz};{h.snr_db};{h.late_s};{h.mode};{h.text}", h
        )
    return out.shape("tiny", "tiny.csv")


def two_receivers() -> Shape:
    """Two receivers in one log, named in a column; columns of calls without a header word that is known."""
    made, out = make(47, dials=2), Lines()
    out.add("rx,stamp,mhz,pitch_hz,db,kind,worked,heard,square")
    for h in made.heard:
        out.heard(
            f"{made.draw.choice(['hut', 'barn'])},{h.time:%d.%m.%Y %H:%M:%S},{h.dial_hz / 1e6:.4f},{h.audio_hz},"
            f"{h.snr_db},{h.mode},{h.addressee},{h.sender},{h.locator}", h, late_s=None,
        )  # fmt: skip
    return out.shape("two-receivers", "two.csv")


LATER = (halves_apart, day_of_year, with_colons, blank_calls, short_codes, tiny, two_receivers)
