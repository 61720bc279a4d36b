"""The secret key behind hidden senders: where it is kept, made, read and refused."""

from __future__ import annotations

import os
import secrets
import stat
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from logtool.cli.privacy import KEY_BYTES, LEAST_KEY_BYTES, MOST_KEY_BYTES, privacy_of
from logtool.errors import FileError, UsageError
from logtool.records.privacy import PSEUDONYM_CHARACTERS, Privacy
from tests.cli.calling import HEADER, ROOT, call, heard, setup
from tests.places.sources import read

LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ234567"  # of base 32, RFC 4648, table 3 (from memory)
LETTER_BITS = 5
AT_ONCE = 8
SHOW_KEY = "from logtool.cli.privacy import privacy_of; print(privacy_of({'hide_senders': True, 'paths': ('-',)}).key)"


@pytest.fixture
def kept(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Return where the key is kept for a user who has none yet."""
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "data"))
    return tmp_path / "data" / "logtool" / "pseudonym.key"


@pytest.fixture
def log(tmp_path: Path) -> Path:
    file = tmp_path / "night.log"
    file.write_text(HEADER + setup("2026-03-01T20:00:00Z") + heard("2026-03-01T20:10:00Z", locator="KO02mc"))
    return file


def asked(**words: Any) -> Privacy:
    return privacy_of({"paths": ("-",), "hide_senders": True} | words)


@pytest.mark.parametrize("case", read("hmac.toml")["case"], ids=lambda case: case["data"])
def test_names_are_made_by_hmac_with_sha_256(case: dict[str, str]) -> None:
    """By tests/reference/hmac.toml; the letters are worked out here from the digest's first bits."""
    bits = bin(int("1" + case["digest_hex"], 16))[3:]
    letters = [
        LETTERS[int(bits[LETTER_BITS * k : LETTER_BITS * (k + 1)], 2)] for k in range(PSEUDONYM_CHARACTERS)
    ]
    assert Privacy(key=bytes.fromhex(case["key_hex"])).call(case["data"]) == "S-" + "".join(letters)


def test_compound_call_signs_stay_apart_and_are_marked() -> None:
    names = [Privacy(key=b"k" * LEAST_KEY_BYTES).call(name) for name in ("Q1ABC", "Q1ABC/P", "Q5/Q1ABC", "")]
    assert len({name[: -len("/C")] if name.endswith("/C") else name for name in names}) == len(names)
    assert [name.endswith("/C") for name in names] == [False, True, True, False]
    assert names[-1] == ""


def test_words_without_these_options_leave_nothing_out() -> None:
    assert not privacy_of({"paths": ("-",)})
    assert privacy_of({"coarsen": 4, "without_text": True, "hide_senders": False}) == Privacy(4, True)


def test_a_key_is_made_once_for_its_owner_alone(kept: Path, capsys: pytest.CaptureFixture[str]) -> None:
    first = asked().key
    told = capsys.readouterr().err
    assert f"a new secret key was made in {kept}" in told
    assert first is not None
    assert len(bytes.fromhex(first.decode())) == KEY_BYTES
    assert first.decode() not in told
    assert stat.S_IMODE(kept.stat().st_mode) == 0o600
    assert stat.S_IMODE(kept.parent.stat().st_mode) == 0o700
    assert os.listdir(kept.parent) == [kept.name]
    assert asked().key == first
    assert capsys.readouterr().err == ""


def test_two_users_get_two_keys(kept: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    first = asked().key
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "another"))
    assert asked().key != first


def test_without_a_data_folder_it_is_below_home(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HOME", str(tmp_path))
    for folder in ("", "not/absolute"):
        monkeypatch.setenv("XDG_DATA_HOME", folder)
        asked(quiet=True)
    monkeypatch.delenv("XDG_DATA_HOME")
    asked(quiet=True)
    assert [path.relative_to(tmp_path) for path in tmp_path.rglob("*.key")] == [
        Path(".local/share/logtool/pseudonym.key")
    ]


def test_processes_at_once_get_one_key(kept: Path) -> None:
    processes = [
        subprocess.Popen(
            [sys.executable, "-c", SHOW_KEY],
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
            cwd=ROOT,
        )
        for _ in range(AT_ONCE)
    ]
    told = [process.communicate(timeout=120) for process in processes]
    assert {key for key, _ in told} == {f"{kept.read_bytes().strip()!r}\n"}
    assert sum("a new secret key was made" in error for _, error in told) == 1
    assert os.listdir(kept.parent) == [kept.name]


@pytest.mark.parametrize("links", [True, False], ids=["links", "no links"])
def test_the_key_of_a_faster_process_holds(
    kept: Path, monkeypatch: pytest.MonkeyPatch, *, links: bool
) -> None:
    faster = "f" * 2 * KEY_BYTES

    def slow(size: int) -> str:
        kept.write_text(faster)
        return "0" * 2 * size

    monkeypatch.setattr(secrets, "token_hex", slow)
    if not links:
        monkeypatch.setattr(os, "link", refuse)
    assert asked().key == faster.encode()
    assert os.listdir(kept.parent) == [kept.name]


def refuse(*_: object) -> None:
    raise PermissionError("there are no second names here")


def test_a_file_system_without_links_holds_a_key_too(kept: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(os, "link", refuse)
    first = asked().key
    assert asked().key == first
    assert os.listdir(kept.parent) == [kept.name]
    assert stat.S_IMODE(kept.stat().st_mode) == 0o600


def test_a_folder_that_cannot_be_written_says_what_to_do(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, log: Path
) -> None:
    (tmp_path / "data").write_text("a file, where a folder should be")
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "data"))
    done = call("map", log, "--hide-senders", "--out", tmp_path / "map.html")
    assert done.returncode == 3
    assert f"{tmp_path}/data/logtool/pseudonym.key: the secret key cannot be made there" in done.stderr
    assert "with --key FILE" in done.stderr
    assert not (tmp_path / "map.html").exists()
    key = ("--key", tmp_path / "own")
    assert call("map", log, "--hide-senders", *key, "--out", tmp_path / "map.html").returncode == 0


def test_a_key_of_ones_own_is_made_where_there_is_none(tmp_path: Path, kept: Path) -> None:
    own = tmp_path / "own"
    made = asked(key=str(own)).key
    assert made == own.read_bytes().strip()
    assert stat.S_IMODE(own.stat().st_mode) == 0o600
    assert not kept.exists()
    with pytest.raises(FileError, match=r"missing/own: the secret key cannot be made there \(No such file"):
        asked(key=str(tmp_path / "missing" / "own"))


def test_white_space_at_the_ends_is_no_part_of_a_key(tmp_path: Path) -> None:
    own = tmp_path / "own"
    keys = set()
    for text in (b"a key of my own, long enough", b"\n a key of my own, long enough \r\n"):
        own.write_bytes(text)
        keys.add(asked(key=str(own)).key)
    assert keys == {b"a key of my own, long enough"}


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"", f"own: 0 bytes are too few for a secret key, {LEAST_KEY_BYTES} are needed"),
        (b" \n\n", "own: 0 bytes are too few"),
        (b"k" * (LEAST_KEY_BYTES - 1) + b"\n", f"own: {LEAST_KEY_BYTES - 1} bytes are too few"),
        (b"k" * (MOST_KEY_BYTES + 1), f"own: over {MOST_KEY_BYTES} bytes, so this is no secret key"),
    ],
)
def test_what_is_no_key_is_refused_and_left_as_it_is(tmp_path: Path, content: bytes, message: str) -> None:
    own = tmp_path / "own"
    own.write_bytes(content)
    with pytest.raises(FileError, match=message):
        asked(key=str(own))
    assert own.read_bytes() == content


def test_keys_of_the_least_and_most_length_are_taken(tmp_path: Path) -> None:
    for size in (LEAST_KEY_BYTES, MOST_KEY_BYTES):
        (tmp_path / "own").write_bytes(b"k" * size)
        assert asked(key=str(tmp_path / "own")).key == b"k" * size


def test_a_folder_is_no_key(tmp_path: Path) -> None:
    with pytest.raises(FileError, match=r"the secret key cannot be read \(Is a directory\)"):
        asked(key=str(tmp_path))


def test_a_key_that_hides_nobody_is_wrong_usage(log: Path, tmp_path: Path) -> None:
    done = call("map", log, "--key", tmp_path / "own", "--coarsen", "4", "--out", tmp_path / "map.html")
    assert done.returncode == 2
    assert "--key is the secret behind --hide-senders: give that too" in done.stderr
    assert not (tmp_path / "own").exists()
    assert not (tmp_path / "map.html").exists()


@pytest.mark.parametrize("option", ["out", "set_aside"])
def test_no_output_takes_the_place_of_the_key(tmp_path: Path, option: str) -> None:
    own = tmp_path / "own"
    own.write_bytes(b"k" * LEAST_KEY_BYTES)
    (tmp_path / "link").symlink_to(own)
    for other in (own, tmp_path / "link"):
        with pytest.raises(UsageError, match="is the secret key; name another file to write to"):
            asked(key=str(own), **{option: str(other)})


@pytest.mark.parametrize("named", ["folder", "file"])
def test_a_key_is_no_log(tmp_path: Path, named: str) -> None:
    own = tmp_path / "logs" / "key.txt"
    own.parent.mkdir()
    with pytest.raises(UsageError, match=r"key\.txt is the secret key and would be read as a log"):
        asked(key=str(own), paths=(str(own if named == "file" else own.parent),))
    asked(key=str(own.parent / "secret.key"), paths=(str(own.parent),))  # folders hold other files too


def test_the_key_is_in_no_output(log: Path, tmp_path: Path, kept: Path) -> None:
    (log.parent / "bad.log").write_text("no record\n")
    page, aside = tmp_path / "map.html", tmp_path / "aside.txt"
    done = call("map", log, log.parent / "bad.log", "--hide-senders", "--out", page, "--set-aside", aside)
    key = kept.read_text().strip()
    assert done.returncode == 0, done.stderr
    for output in (done.stdout, done.stderr, page.read_text(), aside.read_text()):
        assert key not in output
        assert key[:LEAST_KEY_BYTES] not in output


def test_the_same_key_gives_the_same_page_and_another_other_names(log: Path, tmp_path: Path) -> None:
    pages = []
    for key in ("one", "one", "two"):
        done = call("map", log, "--hide-senders", "--key", tmp_path / key, "--out", "-")
        assert done.returncode == 0, done.stderr
        pages.append(done.stdout)
    assert pages[0] == pages[1] != pages[2]
    names = [page.split('"senders":[["')[1].split('"')[0] for page in pages]
    assert names[0] != names[2]
    for name, key in zip(names, ("one", "one", "two"), strict=True):
        assert name == Privacy(key=(tmp_path / key).read_bytes().strip()).call("Q1ABC")
