"""A log of 30 lines, cut at every byte, read in one pass over all the cut files."""

from __future__ import annotations

from pathlib import Path

from tests.records import comparing


def test_cuts_at_every_byte_of_a_log(tmp_path: Path) -> None:
    bad = [b"\xff\xfe", b"x\ry", b" \t", b"# \xff", comparing.line(time="never")]
    lines = comparing.night(30 - len(bad))
    for i, raw in enumerate(bad):
        lines.insert(4 + 5 * i, raw)
    log = b"\r\n".join(lines[:15]) + b"\n" + b"\n".join(lines[15:]) + b"\r\n"
    assert log.count(b"\n") == 30
    # Each file is of its own receiver, so that none repeats another's lines.
    cuts = [log.replace(b"\thut\t", b"\t%03x\t" % cut)[:cut] for cut in range(len(log) + 1)]
    assert len(cuts) < 0x1000
    comparing.compare(tmp_path, *cuts)


def test_cut_files_repeat_each_others_lines(tmp_path: Path) -> None:
    log = b"\n".join([*comparing.night(30), b"\xff", b""])
    comparing.compare(tmp_path, *(log[:cut] for cut in range(0, len(log) + 1, 13)))


def test_cuts_from_the_front(tmp_path: Path) -> None:
    log = b"\xef\xbb\xbf" + b"\r\n".join([*comparing.night(12), b"a\x01b", b""])
    comparing.compare(tmp_path, *(log.replace(b"hut", b"h%04d" % cut)[cut:] for cut in range(len(log) // 2)))
