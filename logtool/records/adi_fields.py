"""What the reader and the writer of ADI share: the names of the fields and how other letters are held.

References
----------
ADIF 3.1.6, Amateur Data Interchange Format (2025-09-15), fields and ADI from memory but for the rule of lengths.
"""

from __future__ import annotations

import re
import sys

APP = "APP_LOGTOOL_"
APP_COLUMNS = {
    "receiver": f"{APP}RECEIVER",
    "dial_hz": f"{APP}DIAL_HZ",
    "audio_hz": f"{APP}AUDIO_HZ",
    "snr_db": f"{APP}SNR_DB",
    "late_s": f"{APP}LATE_S",
    "addressee": f"{APP}ADDRESSEE",
    "power_dbm": f"{APP}POWER_DBM",
    "text": f"{APP}TEXT",
    "more": f"{APP}MORE",
}
"""Columns of the layout that have a field of our own, since ADIF has none or a coarser one."""

APP_TIME = f"{APP}TIME"  # only where the time has decimals, which TIME_ON cannot hold
APP_ANTENNA = f"{APP}ANTENNA"
HZ_PER_MHZ = 1_000_000
DBM_OF_1_W = 30
GRID_CHARACTERS = 8  # of GRIDSQUARE and MY_GRIDSQUARE; the rest goes into ..._EXT

_FIRST_BEYOND = 0x80  # an escape of ASCII is none of ours: it could hide a line's end
_SURROGATES = (0xD800, 0xDFFF)  # no characters: RFC 3629, section 3
_BEYOND_ASCII = re.compile(r"[^\x00-\x7f]")
_ESCAPE = re.compile(r"\\(?:(\\)|u([0-9a-f]{4})|U([0-9a-f]{8}))")


def ascii_text(text: str) -> str:
    r"""Return a field `text` with what is not ASCII as `\uXXXX` or `\UXXXXXXXX`: ADI holds ASCII only.

    The layout's own escapes stay; a lone backslash is none of them, so both can be told apart.

    >>> print(ascii_text("grüße \\\\ 73"))
    gr\u00fc\u00dfe \\ 73
    """
    return text if text.isascii() else _BEYOND_ASCII.sub(_escaped, text)


def text_of_ascii(held: str) -> str:
    r"""Return the field `text` that `ascii_text` made the text of."""
    return _ESCAPE.sub(lambda match: match[0] if match[1] else _letter(match), held) if "\\" in held else held


def ascii_more(more: str) -> str:
    r"""Return a field `more` as ADI can hold it: it has no escapes of its own, so a backslash is doubled.

    >>> print(ascii_more("path=a\\b; decoder=ü"))
    path=a\\b; decoder=\u00fc
    """
    return ascii_text(more.replace("\\", "\\\\"))


def more_of_ascii(held: str) -> str:
    r"""Return the field `more` that `ascii_more` made the text of."""
    return _ESCAPE.sub(lambda match: match[1] or _letter(match), held) if "\\" in held else held


def _escaped(match: re.Match[str]) -> str:
    code = ord(match[0])
    return f"\\u{code:04x}" if code <= 0xFFFF else f"\\U{code:08x}"


def _letter(match: re.Match[str]) -> str:
    code = int(match[2] or match[3], 16)
    is_letter = _FIRST_BEYOND <= code <= sys.maxunicode and not _SURROGATES[0] <= code <= _SURROGATES[1]
    return chr(code) if is_letter else match[0]
