"""Cut a line into its words, and the signs between them."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from logtool.suggest.timeforms import forms_of
from logtool.suggest.values import EMPTY_WORDS, is_call, is_locator, is_number

_MONTH = "(?:Jan|Feb|Mar|Apr|May|Jun|Jul|Aug|Sep|Oct|Nov|Dec)"
# Times and dates with blanks in them, a number with its unit, then any word without the signs between words.
_CORE = re.compile(
    rf"""\d{{1,2}}:\d\d(?::\d\d(?:\.\d+)?)?[ ][AaPp][Mm]\b
    |\d{{1,2}}:\d\d(?::\d\d(?:\.\d+)?)?[ ](?:UTC|GMT|UT|Z)\b
    |{_MONTH}[ ]+\d{{1,2}},?[ ]\d{{4}}[ ]\d{{1,2}}:\d\d(?::\d\d(?:\.\d+)?)?
    |{_MONTH}[ ]+\d{{1,2}}[ ]\d\d:\d\d:\d\d[ ]\d{{4}}\b
    |{_MONTH}[ ]+\d{{1,2}}[ ]\d{{1,2}}:\d\d(?::\d\d(?:\.\d+)?)?
    |\d{{1,2}}[ ]{_MONTH}[ ]\d{{4}}\b
    |<[^\s<>]+>
    |[+-]?\d+(?:[.,]\d+)?(?=(?:kHz|MHz|Hz|dBm|dB|ms|mW|W|s)\b)
    |(?:(?<=\d),(?=\d)|[^\s\[\]{{}}();|"'=,<>])+""",
    re.VERBOSE,
)


@dataclass(frozen=True)
class Core:
    """A word of a line, the signs before it, and where it begins."""

    text: str
    glue: str
    start: int

    @property
    def kind(self) -> str:
        """`time`, `number`, `locator`, `call`, `empty` or `word`."""
        return core_kind(self.text)


def cores_of(line: str) -> tuple[list[Core], str]:
    """Return the words of a line and the signs after the last.

    >>> cores, end = cores_of("[22:15] Q1ABC, -12dB.")
    >>> [(core.glue, core.text) for core in cores], end
    ([('[', '22:15'), ('] ', 'Q1ABC'), (', ', '-12'), ('', 'dB')], '.')
    """
    cores: list[Core] = []
    end = 0
    for match in _CORE.finditer(line):
        text = match[0]
        stop = match.end()
        while len(text) > 1 and text[-1] in ".:" and text not in EMPTY_WORDS:
            text, stop = text[:-1], stop - 1
        if text in (".", ":"):
            continue
        cores.append(Core(text, line[end : match.start()], match.start()))
        end = stop
    return cores, line[end:]


@lru_cache(maxsize=50_000)
def core_kind(text: str) -> str:
    """Return what a word is. See `Core.kind`."""
    if text in EMPTY_WORDS:
        return "empty"
    if is_number(text):
        return "number"
    if not text.isalpha() and forms_of(text):
        return "time"
    if is_locator(text):
        return "locator"
    return "call" if is_call(text) else "word"
