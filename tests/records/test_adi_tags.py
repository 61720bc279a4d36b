"""Fields of ADI by their lengths, by tests/reference/adif.toml, and letters that ASCII does not have."""

from __future__ import annotations

from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logtool.records.adi_fields import ascii_more, ascii_text, more_of_ascii, text_of_ascii
from logtool.records.adi_tags import AdiEntry, adi_entries
from tests.places.sources import read

ADIF = read("adif.toml")


@pytest.mark.parametrize(("text", "calls"), ADIF["specifiers"])
def test_data_specifiers(text: str, calls: list[str]) -> None:
    for cut in range(len(text) + 1):
        entries = list(adi_entries([text[:cut].encode(), text[cut:].encode()], {"CALL"}))
        assert entries == [AdiEntry({"CALL": call}, whole=True) for call in calls]


NAMES = st.sampled_from(["CALL", "call", "Mode", "NOTES", "APP_LOGTOOL_TEXT"])
DATA = st.text(st.sampled_from("<>:EOR eorh5\u00fc\n"), max_size=12).map(str.encode)
BETWEEN = st.text(st.sampled_from(" \r\n:>x5"), max_size=4).map(str.encode)


@given(
    st.lists(st.lists(st.tuples(NAMES, DATA, BETWEEN), max_size=4), max_size=4),
    st.lists(st.integers(0, 400), max_size=6),
)
def test_lengths_count_whatever_the_data(
    entries: list[list[tuple[str, bytes, bytes]]], cuts: list[int]
) -> None:
    text, wanted = b"", []
    for fields in entries:
        held: dict[str, str] = {}
        for name, data, between in fields:
            text += f"<{name}:{len(data)}>".encode() + data + between
            if name.upper() != "NOTES":
                held.setdefault(name.upper(), data.decode().replace("\n", "?"))
        text += b"<eor>"
        wanted.append(AdiEntry(held, whole=True))
    bounds = sorted({0, len(text), *(cut for cut in cuts if cut < len(text))})
    blocks = [text[a:b] for a, b in pairwise(bounds)]
    assert list(adi_entries(blocks, {"CALL", "MODE", "APP_LOGTOOL_TEXT"})) == wanted


LAYOUT_TEXT = st.lists(
    st.sampled_from(["\\\\", "\\t", "\\n", "\\r"])
    | st.characters(exclude_categories=["Cs", "Cc"], exclude_characters="\\")
).map("".join)


@given(LAYOUT_TEXT)
def test_text_comes_back(text: str) -> None:
    assert ascii_text(text).isascii()
    assert text_of_ascii(ascii_text(text)) == text


@given(st.text(st.characters(exclude_categories=["Cs", "Cc"])) | st.text("\\uU0a"))
def test_more_comes_back(more: str) -> None:
    assert ascii_more(more).isascii()
    assert more_of_ascii(ascii_more(more)) == more


@pytest.mark.parametrize(
    "escape", ["\\u0009", "\\u000a", "\\u0041", "\\ud800", "\\U00110000", "\\Uffffffff", "\\u12"]
)
def test_escapes_that_are_none_stay(escape: str) -> None:
    assert text_of_ascii(escape) == more_of_ascii(escape) == escape
