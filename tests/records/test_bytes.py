"""Bytes that a reader of lines would trip over, alone and among good lines."""

from __future__ import annotations

from pathlib import Path

import pytest

from logtool.records.opening import open_logs
from tests.records import comparing
from tests.records.cases import padded
from tests.records.comparing import line

BOM = b"\xef\xbb\xbf"
ONE, TWO, THREE = (line(sender=f"Q{i}ABC") for i in (1, 2, 3))
TEN_MB = 10_000_000

TEXTS: dict[str, bytes] = {
    "empty file": b"",
    "a line ending alone": b"\n",
    "CR LF alone": b"\r\n",
    "CR alone": b"\r",
    "only comments": b"# a\n#\xff\r\n#\r\r\n#\x00\x01\n#" + b"x" * 20_000,
    "only blank lines": b" \n\t\t\n \t \r\n\r\n\n   ",
    "blank line of 9000 spaces": ONE + b"\n" + b" " * 9000 + b"\n" + TWO,
    "no line ending at the end": ONE + b"\n" + TWO,
    "CR LF": ONE + b"\r\n" + TWO + b"\r\n",
    "CR LF and LF": ONE + b"\r\n" + TWO + b"\n" + THREE + b"\r\n",
    "LF, then CR LF": ONE + b"\n" + TWO + b"\r\n" + THREE + b"\n",
    "CR instead of LF": ONE + b"\r" + TWO + b"\r" + THREE + b"\r",
    "one lone CR": ONE + b"\n" + TWO + b"\r" + THREE + b"\n" + THREE + b"\n",
    "CR CR LF": ONE + b"\r\r\n" + TWO + b"\r\n\r\r\n" + THREE + b"\n",
    "LF CR": ONE + b"\n\r" + TWO + b"\n\r" + THREE,
    "CR at the end of the file": ONE + b"\n" + TWO + b"\r",
    "BOM": BOM + ONE + b"\n" + TWO,
    "BOM and a comment": BOM + b"# logtool layout 1\n" + ONE,
    "BOM and a bad line": BOM + b"zzz\n" + ONE,
    "BOM and a line taken out": BOM + b"\xff\n" + ONE,
    "BOM, a line taken out later": BOM + ONE + b"\nzzz\n\xff\n" + TWO,
    "two BOMs": BOM + BOM + ONE + b"\n" + TWO,
    "two BOMs, a line taken out later": BOM + BOM + ONE + b"\n\r" + TWO + b"\n",
    "two BOMs and a comment": BOM + BOM + b"# no comment\n\xff\n" + ONE,
    "three BOMs": BOM + BOM + BOM,
    "BOM in the middle": ONE + b"\n" + BOM + TWO + b"\n" + THREE,
    "BOM only": BOM,
    "BOM and a line ending": BOM + b"\n",
    "BOM before a blank line": BOM + b" \n" + BOM + b" \n",
    "half a BOM": b"\xef\xbb",
    "UTF-16 with BOM": (ONE + b"\r\n" + TWO + b"\n").decode().encode("utf-16"),
    "UTF-16, most significant first": (ONE + b"\r\n" + TWO + b"\n").decode().encode("utf-16-be"),
    "Latin-1": (line(text="\u00e9t\u00e9") + b"\n" + ONE).decode().encode("latin-1"),
    "U+0085 and others that end lines elsewhere": "\u0085\n\u2028\n\x0b\n\x0c\n\x1c\n".encode() + ONE,
    "U+0085 in a record": line(text="a\u0085b") + b"\n" + line(text="a\u2028b") + b"\n" + ONE,
    "NUL": ONE + b"\x00\n\x00\n" + TWO + b"\n\x00\x00",
    "byte 1 on lines": b"\x01\n" + ONE + b"\n\x01\x01\n" + TWO + b"\n\x01",
    "byte 2 on lines": b"\x02\n" + ONE + b"\n\x02\x02\n" + TWO + b"\n\x02",
    "byte 2 among blank lines": b"\n\x02\n\n" + ONE + b"\n\n\x02\n",
    "every control byte alone": b"\n".join(bytes([byte]) for byte in (*range(32), 127)) + b"\n" + ONE,
    "every control byte in a record": b"\n".join(line(text=f"a{chr(code)}b") for code in range(160)),
    "quotes": b'"\n' + ONE + b'\n"x"\n' + line(text='a "b" c') + b'\n"' + TWO + b"\"\n'\n" + THREE,
    "backslashes": b"\\\n" + line(text="\\\\") + b"\n\\N\n" + ONE,
    "words that mean no value elsewhere": b"NULL\nnull\nNaN\n" + ONE,
    "commas and semicolons": b"a,b;c|d\n" + line(text="a,b;c|d") + b"\n",
    "line of 8192 bytes": padded(8192) + b"\n" + ONE,
    "line of 8192 bytes at the end": ONE + b"\n" + padded(8192),
    "line of 8192 bytes, CR LF": padded(8192) + b"\r\n" + ONE,
    "line of 8192 bytes beside a line taken out": b"\xff\n" + padded(8192) + b"\n" + padded(8191) + b"\r\n",
    "line of 8192 bytes and a lone CR": padded(8192) + b"\r\r\n" + ONE,
    "line of 8193 bytes": padded(8193) + b"\n" + ONE,
    "line of 8193 bytes, CR LF": ONE + b"\n" + padded(8193) + b"\r\n" + TWO,
    "line of 20000 bytes": ONE + b"\n" + line(text="x" * 20_000) + b"\n" + TWO,
    "line repeated": ONE + b"\n" + ONE + b"\r\n" + TWO + b"\n" + ONE,
    "event repeated": line("stop") + b"\n" + ONE + b"\n" + line("stop") + b"\r\n" + line("stop"),
    "bad line repeated": b"x\n\xff\n" + ONE + b"\nx\n\xff\n#\n#\n",
    "numbers in other words": line(dial_hz="0007078000", snr_db="-00.50") + b"\n" + ONE,
}


@pytest.mark.parametrize("data", TEXTS.values(), ids=TEXTS.keys())
def test_a_text_alone(data: bytes, tmp_path: Path) -> None:
    comparing.compare(tmp_path, data)


def test_all_texts_together(tmp_path: Path) -> None:
    comparing.compare(tmp_path, *TEXTS.values(), *reversed(TEXTS.values()))


def test_all_texts_in_one_file(tmp_path: Path) -> None:
    comparing.compare(tmp_path, b"\n".join(TEXTS.values()))


@pytest.mark.parametrize(
    "filler", [b"x", b"\xff", b" ", b"\t", b"\x01"], ids=["x", "FF", "blank", "TAB", "01"]
)
def test_a_line_of_ten_megabytes(filler: bytes, tmp_path: Path) -> None:
    comparing.compare(tmp_path, ONE + b"\n" + filler * TEN_MB + b"\n" + TWO, filler * TEN_MB)


def test_a_comment_of_ten_megabytes(tmp_path: Path) -> None:
    comparing.compare(tmp_path, ONE + b"\n#" + b"\r" * TEN_MB + b"\n" + TWO)


def test_blocks_end_anywhere(tmp_path: Path) -> None:
    """Texts of over half a megabyte, so that blocks meet at every kind of line and ending."""
    lines = [ONE, b"\xff", TWO + b"\r", b"", b" \t", line(text="\u00e9" * 700), b"\x02", THREE + b"\r\r"]
    data = b"\n".join(
        raw.replace(b"22:00:00", b"22:%02d:%02d" % (i // 60 % 60, i % 60))
        for i, raw in enumerate(lines * 700)
    )
    assert len(data) > 1_200_000
    comparing.compare(tmp_path, data, data[17:], data[:-1])


def test_blanks_are_counted_where_the_rest_adds_up(tmp_path: Path) -> None:
    """The reader takes the blank lines as what remains; here they are known."""
    log = tmp_path / "night.log"
    log.write_bytes(b"\n" + ONE + b"\n \n\t\n# a\nbad\n\n\xff\n" + ONE + b"\n" + line("stop") + b"\n \r\n   ")
    with open_logs(log) as logs:
        told = logs.inputs[0].as_dict()
    assert {key: told[key] for key in ("lines", "blank", "comments", "records", "repeated", "set_aside")} == {
        "lines": 12,
        "blank": 6,
        "comments": 1,
        "records": 2,
        "repeated": 1,
        "set_aside": 2,
    }
    assert told["reasons"] == {"not-utf8": 1, "too-few-fields": 1}
