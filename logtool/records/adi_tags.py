"""Entries of an ADI text: fields counted by their lengths, whatever stands between them."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from itertools import chain
from typing import NamedTuple

from logtool.records.layout import MAX_LINE_BYTES

MOST_FIELD_BYTES = (
    1 << 20
)  # a greater length is taken for damage, or all that follows would be gone; our choice
MOST_KEPT_BYTES = 4 * MAX_LINE_BYTES  # of a field: an escape is three times its letter, so more fits no line
_MOST_TAG_BYTES = 128
_MOST_DIGITS = len(str(MOST_FIELD_BYTES))
_TAG = re.compile(rb"<([A-Za-z0-9_]{1,64})(?::([0-9]{1,32})(?::[^<>]{1,8})?)?>")


_CONTROLS = dict.fromkeys((*range(0x20), 0x7F), "?")


class AdiEntry(NamedTuple):
    """One entry: the fields that were wanted by their names in upper case, and whether it is all there.

    Of several fields of one name the first counts. Bytes that are no UTF-8 are escapes, control characters are
    `?`. `whole` is false where the text ends within it, and where one
    of its lengths cannot be.
    """

    fields: dict[str, str]
    whole: bool


def adi_entries(blocks: Iterable[bytes], wanted: Iterable[str]) -> Iterator[AdiEntry]:
    """Give the entries of an ADI text, however it is cut into blocks; what stands before `<EOH>` is none.

    A length counts bytes of the field's data and nothing else, so data may hold `<EOR>`. Text between fields is
    passed over. What is left at the end without `<EOR>` is an entry that is not whole.

    Parameters
    ----------
    blocks : iterable of bytes
        The text.
    wanted : iterable of str
        Names of the fields to keep, in upper case.

    Examples
    --------
    >>> list(adi_entries([b"<call:5>Q1A", b"BC<eor> <CALL:6>Q2"], {"CALL"}))
    [AdiEntry(fields={'CALL': 'Q1ABC'}, whole=True), AdiEntry(fields={'CALL': 'Q2'}, whole=False)]

    References
    ----------
    ADIF 3.1.6, ADI data specifiers: names in any case, the length counts the data's characters, and what
    follows them is passed over up to the next `<`; the header and `<EOR>` from memory.
    """
    names = {name.encode(): name for name in wanted}
    fields: dict[str, str] = {}
    begun, whole = False, True
    held = b""
    for block in chain(blocks, (None,)):
        held, at = held + (block or b""), 0
        while match := _TAG.search(held, at):
            at = match.end()
            name, length = match.groups()
            name = name.upper()
            if length is None:
                if name == b"EOR":
                    yield AdiEntry(fields, whole)
                if name in (b"EOR", b"EOH"):
                    fields, begun, whole = {}, False, True
                continue
            begun = True
            if len(length) > _MOST_DIGITS or int(length) > MOST_FIELD_BYTES:
                whole = False
                continue
            stop = at + int(length)
            if stop > len(held) and block is not None:
                at = match.start()
                break
            if name in names and names[name] not in fields:
                fields[names[name]] = _text(held[at : min(stop, at + MOST_KEPT_BYTES)])
            at = min(stop, len(held))
        else:
            begins = held.rfind(b"<", max(at, len(held) - _MOST_TAG_BYTES))  # perhaps the first part of a tag
            at = begins if begins >= 0 else len(held)
        held = held[at:]
    if begun:
        yield AdiEntry(fields, whole=False)


def _text(data: bytes) -> str:
    text = data.decode("utf-8", "backslashreplace")
    return text if text.isprintable() else text.translate(_CONTROLS)
