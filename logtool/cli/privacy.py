"""What the options of `options.privacy` ask for, and the secret key that is kept for hidden senders."""

from __future__ import annotations

import os
import secrets
import tempfile
from pathlib import Path
from typing import Any

import click

from logtool.errors import FileError, UsageError
from logtool.records.privacy import Privacy
from logtool.records.sources import sources_of

KEY_BYTES = 32  # as long as the digest, RFC 2104 section 3 (from memory)
LEAST_KEY_BYTES = 16  # 128 bits cannot be tried out; our choice
MOST_KEY_BYTES = 4096  # more is another file by mistake; our choice
_FOLDER = ("logtool", "pseudonym.key")


def privacy_of(words: dict[str, Any]) -> Privacy:
    """Return what a call leaves out; a secret key that is not there yet is made, and told on standard error.

    The key lies in the user's data folder or where `--key` says, for its owner alone. It is what the
    file holds without white space at its ends, so any text or bytes will do.

    Parameters
    ----------
    words : dict
        The words of a command; without those of `options.privacy` nothing is left out.

    Raises
    ------
    UsageError
        Where `--key` hides nobody, or the key is also a log or an output.
    FileError
        Where the key cannot be read or made, or is too short.
    """
    privacy = Privacy(words.get("coarsen"), bool(words.get("without_text")))
    given = words.get("key")
    if not words.get("hide_senders"):
        if given is not None:
            raise UsageError("--key is the secret behind --hide-senders: give that too, or leave --key away")
        return privacy
    path = _kept_at() if given is None else Path(given)
    _stop_if_an_output(path, words)
    if _make_key(path, for_all=given is None) and not words.get("quiet"):
        click.echo(
            f"logtool: note: a new secret key was made in {path}: keep it, for other names go with another",
            err=True,
        )
    _stop_if_a_log(path, words)
    return Privacy(privacy.coarsen, privacy.without_text, _read_key(path))


def _kept_at() -> Path:
    """Return where the key is that is kept for the user."""
    folder = os.environ.get("XDG_DATA_HOME", "")
    if os.path.isabs(folder):  # the XDG Base Directory Specification (from memory): others are not valid
        return Path(folder, *_FOLDER)
    try:
        return Path.home().joinpath(".local", "share", *_FOLDER)
    except RuntimeError as error:
        raise FileError(
            "there is no home folder for the secret key; name a file for it with --key FILE"
        ) from error


def _make_key(path: Path, *, for_all: bool) -> bool:
    """Make a key, whole and for its owner alone, unless one is there; return whether it was made.

    Of two processes at the same time one makes it and both read that.
    """
    if os.path.lexists(path):
        return False
    try:
        if for_all:
            path.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
        handle, name = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.parent)  # rights 0600
        try:
            with os.fdopen(handle, "w") as file:
                file.write(f"{secrets.token_hex(KEY_BYTES)}\n")
                file.flush()
                os.fsync(file.fileno())
            return _put(name, path)
        finally:
            Path(name).unlink(missing_ok=True)
    except OSError as error:
        raise FileError(
            f"{path}: the secret key cannot be made there ({error.strerror or error}); "
            "name a file in a folder of yours with --key FILE"
        ) from error


def _put(name: str, path: Path) -> bool:
    """Give a file its place unless that is taken; return whether it was not."""
    try:
        os.link(name, path)
    except FileExistsError:
        return False
    except OSError:  # some file systems have no second names; there two at once may get two keys
        if path.exists():
            return False
        os.replace(name, path)
    return True


def _read_key(path: Path) -> bytes:
    try:
        with path.open("rb") as file:
            key = file.read(MOST_KEY_BYTES + 1)
    except OSError as error:
        raise FileError(
            f"{path}: the secret key cannot be read ({error.strerror or error}); "
            "check its rights, or name another file with --key FILE"
        ) from error
    if len(key) > MOST_KEY_BYTES:
        raise FileError(f"{path}: over {MOST_KEY_BYTES} bytes, so this is no secret key; check the path")
    key = key.strip()
    if len(key) < LEAST_KEY_BYTES:
        raise FileError(
            f"{path}: {len(key)} bytes are too few for a secret key, {LEAST_KEY_BYTES} are needed; "
            "name a file that is not there with --key FILE, and one is made"
        )
    return key


def _stop_if_an_output(path: Path, words: dict[str, Any]) -> None:
    real = os.path.realpath(path)
    for name in ("out", "set_aside"):
        output = words.get(name)
        if output not in (None, "-") and os.path.realpath(output) == real:
            raise UsageError(f"{output} is the secret key; name another file to write to")


def _stop_if_a_log(path: Path, words: dict[str, Any]) -> None:
    real = os.path.realpath(path)
    for source in sources_of(words["paths"], unread=[]):
        if source.path is not None and os.path.realpath(source.path) == real:
            raise UsageError(f"{path} is the secret key and would be read as a log; keep it elsewhere")
