"""What a log's own names of its columns may mean: the trade's words in plain language. Values decide."""

from __future__ import annotations

import re

# Each word with the names of pieces that it may stand for.
_WORDS = {
    "time": "utc time gmt clock timestamp at when stamp hour z",
    "date": "date day",
    "snr": "snr sn s/n db ratio",
    "late": "dt late lateness delay",
    "audio": "audio af tone df",
    "dial": "dial vfo qrg carrier",
    "rf": "rf band_hz",
    "frequency": "freq frequency f hz khz mhz",
    "mode": "mode modulation",
    "sender": "from sender heard call callsign de station source src caller dx",
    "addressee": "to addressee called calling dest destination target",
    "locator": "locator loc grid square maidenhead qth",
    "power": "power pwr dbm watt watts mw",
    "text": "message msg text decode decoded content payload",
    "receiver": "receiver rx listener",
    "antenna": "antenna ant",
    "late_or_audio": "offset off",
    "signal": "signal sig level strength",
    "report": "report rprt rst",
    "drift": "drift",
    "dbfs": "dbfs",
    "other": "temp temperature km distance dist bearing azimuth az count nr no id number index seq quality score"
    " sure confidence volt volts age band speed width bandwidth lat lon latitude longitude rms peak"
    " duration length cycles errors err bits phase status state channel ch s2n prob",
}
_MEANS = {word: name for name, words in _WORDS.items() for word in words.split()}
_UNITS = {
    "hz": "Hz",
    "khz": "kHz",
    "mhz": "MHz",
    "db": "dB",
    "dbm": "dBm",
    "ms": "ms",
    "s": "s",
    "sec": "s",
    "w": "W",
    "mw": "mW",
}
_UNIT = re.compile(r"dBFS|dBm|dB|[kM]?Hz|mW")
_WORD = re.compile(r"[A-Za-z]+/[A-Za-z]+|[A-Z]+(?![a-z])|[A-Z]?[a-z]+")


def words_of(hint: str) -> list[str]:
    """Return the words of a name in small letters.

    >>> words_of("dialFreq_kHz"), words_of("S/N (dB)"), words_of("report.snr")
    (['dial', 'freq', 'khz'], ['s/n', 'db'], ['report', 'snr'])
    """
    return [word.lower() for word in _WORD.findall(_UNIT.sub(lambda unit: f" {unit[0].lower()} ", hint))]


def meanings_of(hint: str) -> set[str]:
    """Return what a column's name may mean: names of `_WORDS`; empty where no word is known.

    >>> sorted(meanings_of("Audio (Hz)")), meanings_of("blue")
    (['audio', 'frequency'], set())
    """
    return {_MEANS[word] for word in words_of(hint) if word in _MEANS}


def unit_of(hint: str) -> str:
    """Return the unit that a column's name ends with, or an empty text.

    >>> unit_of("QRG/kHz"), unit_of("time"), unit_of("dt_ms")
    ('kHz', '', 'ms')
    """
    last = words_of(hint)[-1:]
    return _UNITS.get(last[0], "") if last else ""
