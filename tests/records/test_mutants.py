"""Logs changed at random, read by the reader and the slow reader."""

from __future__ import annotations

import random
import tempfile
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logtool.records.judge import Record, judge
from tests.records import comparing, slow_reader
from tests.records.cases import BAD_LINES, GOOD_LINES
from tests.records.comparing import line

SNIPPETS = [
    b"\n", b"\r", b"\r\n", b"\r\r\n", b"\t", b" ", b"#", b"\\", b'"', b"; ", b"=", b"-", b"0", b".5", b"Z",
    b"\x00", b"\x01", b"\x02", b"\x7f", b"\xff", b"\xc2", b"\xc2\x85", b"\xef\xbb\xbf", b"\xe2\x80\xa8",
    b"x" * 5000, b"\tsetup\t", b"\theard\t", b"antenna=", b"on_s=1", b"\n\n", b"# logtool layout 1\n",
]  # fmt: skip
LINES = [*GOOD_LINES, *(raw for raw, _ in BAD_LINES)]
texts = st.lists(
    st.one_of(st.sampled_from(LINES), st.sampled_from(comparing.night(25)), st.binary(max_size=12)),
    max_size=12,
).flatmap(
    lambda raws: st.lists(st.sampled_from([b"\n", b"\r\n"]), min_size=len(raws), max_size=len(raws)).map(
        lambda ends: b"".join(raw + end for raw, end in zip(raws, ends, strict=True))
    )
)


@st.composite
def mutants(draw: st.DrawFn) -> bytes:
    data = draw(texts)
    for _ in range(draw(st.integers(0, 5))):
        at = draw(st.integers(0, len(data)))
        upto = at + draw(st.integers(0, 3))
        data = data[:at] + draw(st.sampled_from([b"", *SNIPPETS])) + data[upto:]
    return data[: draw(st.integers(0, len(data)))] if draw(st.booleans()) else data


@settings(max_examples=70, deadline=None, derandomize=True, database=None)
@given(st.lists(mutants(), min_size=1, max_size=6))
def test_mutants_of_small_logs(datas: list[bytes]) -> None:
    with tempfile.TemporaryDirectory() as folder:
        comparing.compare(Path(folder), *datas)


@settings(max_examples=400, deadline=None, derandomize=True, database=None)
@given(mutants())
def test_the_judge_on_mutants(data: bytes) -> None:
    for raw in slow_reader.raw_lines(data):
        slow = slow_reader.read_line(raw)
        if slow in ("blank", "comment"):
            continue
        judged = judge(raw)
        if isinstance(slow, slow_reader.Record):
            assert isinstance(judged, Record)
            assert (judged.time_us, tuple(judged.keys.items())) == (comparing.us(slow), slow.more)
        else:
            assert judged == slow


@pytest.mark.parametrize("seed", range(3))
def test_many_mutants_of_a_log_in_one_pass(seed: int, tmp_path: Path) -> None:
    """Every mutant has its own receiver, but for one in four, which repeat each other's lines."""
    chance = random.Random(seed)
    datas = []
    for n in range(500):
        data = b"\n".join(comparing.night(20, "hut" if n % 4 == 0 else f"h{n}")) + b"\n"
        if n % 3 == 0:
            data = data.replace(b"\n", b"\r\n")
        for _ in range(chance.randint(1, 4)):
            data = _changed(data, chance)
        datas.append(data)
    comparing.compare(tmp_path, *datas)


def _changed(data: bytes, chance: random.Random) -> bytes:
    at = chance.randrange(len(data))
    how = chance.randrange(6)
    if how == 0:  # flip a bit
        return data[:at] + bytes([data[at] ^ 1 << chance.randrange(8)]) + data[at + 1 :]
    if how == 1:  # put something in
        return data[:at] + chance.choice(SNIPPETS) + data[at:]
    if how == 2:  # lose a few bytes
        return data[:at] + data[at + chance.randint(1, 4) :]
    lines = data.split(b"\n")
    i = chance.randrange(len(lines))
    if how == 3:  # repeat a line
        return b"\n".join([*lines[:i], lines[i], lines[chance.randrange(len(lines))], *lines[i:]])
    if how == 4:  # put in a bad line
        return b"\n".join([*lines[:i], chance.choice(BAD_LINES)[0], *lines[i:]])
    fields = lines[i].split(b"\t")  # change a field
    fields[chance.randrange(len(fields))] = chance.choice(
        [b"", b"x", b"0", b"-1", b"1e9", b"JN58", b"999999"]
    )
    return b"\n".join([*lines[:i], b"\t".join(fields), *lines[i + 1 :]])


def test_a_log_with_every_hundredth_line_bad(tmp_path: Path) -> None:
    lines = [
        line(time=f"2026-03-0{1 + i // 3600}T{i // 60 % 24:02d}:{i % 60:02d}:00Z", sender=f"Q{i % 90}ABC")
        for i in range(12_000)
    ]
    for i in range(0, len(lines), 100):
        lines[i] = BAD_LINES[i // 100 % len(BAD_LINES)][0]
    comparing.compare(tmp_path, b"\n".join(lines))
