"""Logs with much that is nobody's business, their maps, and the search for it in these."""

from __future__ import annotations

import gzip
import hashlib
import json
from pathlib import Path
from typing import Any

from logtool.pages.map import map_data_of
from logtool.pages.map_data import MapData
from logtool.records.opening import open_with
from logtool.records.privacy import Privacy
from logtool.records.reader import OpenOptions
from logtool.tables.choice import choose
from tests.cli.calling import call
from tests.tables.making import heard, setup

AT = "QF56od12kl"
HUT, ISLE = ("JO74xa83", "JN58td25xe"), "RE78ir92ja"
SENDERS = {  # and the locators that they give
    "Q1ABC": ("KO02mc12ab", "KO02mc12"), "q2xyz": ("FN31pr21rn",), "Q3FOO/P": ("IO91wm05xx",),
    "Q5/Q4BAR": ("JO65ha38",), "Q6LONE": ("GF15vc41oo",), "Q7NOWHERE": ("",), "Q8TINY": ("JO",),
}  # fmt: skip
ADDRESSEES = ("Q9ADR", "Q0ADR/MM")
WORDS = ("grandma", "geburtstag", "no-record-but-a-diary")
FILES = ("jane-doe-hut.log", "jane-doe-isle.log.gz", "jane-doe-missing.log")
KEY = b"a key for the tests of the map"


def write_logs(folder: Path) -> None:
    """Write logs of three receivers, one of which moved; a packed one breaks off, and one is missing."""
    times = [f"2026-03-0{day}T20:{minute:02d}:00Z" for day in (1, 2, 3) for minute in range(10, 60, 5)]
    lines = {
        receiver: [
            heard(times[(3 * i + 7 * k) % len(times)], sender, locator=own, receiver=receiver, snr_db=i - k,
                  addressee=ADDRESSEES[i % 2], text=f"{sender} {own} {WORDS[i % 2]}")
            for i, (sender, locators) in enumerate(SENDERS.items()) for k in range(5)
            for own in locators[k % len(locators) :][:1]
        ]
        for receiver in ("hut", "isle", "pier")
    }  # fmt: skip
    moves = [setup("2026-03-01T19:00:00Z", HUT[0]), setup("2026-03-02T20:30:00Z", HUT[1])]
    diary = ["# jane's log", WORDS[2], lines["hut"][0]]
    first = [*moves, *lines["hut"], *lines["pier"], *diary]
    (folder / FILES[0]).write_text("".join(f"{line}\n" for line in first))
    second = [setup("2026-03-01T19:00:00Z", ISLE, receiver="isle"), *lines["isle"]]
    packed = gzip.compress("".join(f"{line}\n" for line in second).encode())
    (folder / FILES[1]).write_bytes(packed[:-4])  # the length at its end is missing, the text is whole


def data_of(paths: tuple[Path, ...], privacy: Privacy, at: str | None = None, **chosen: Any) -> MapData:
    options = OpenOptions(threads=1, others_too=True, privacy=privacy)
    with open_with(paths, at, None, options) as logs:
        return map_data_of(logs, choose(**chosen))


def page_of(folder: Path, *words: str) -> str:
    """The page as the command writes it, with every kind of option."""
    key = folder.parent / f"{folder.name}-key"
    key.write_bytes(KEY)
    hidden = ("--key", str(key)) if "--hide-senders" in words else ()
    done = call("map", *(folder / name for name in FILES), "--at", AT, *words, *hidden, "--out", "-")
    assert done.returncode == 3, done.stderr  # one input is missing, the others are read
    return done.stdout


def found(page: str, *secret: str) -> set[str]:
    """Those of the words that are anywhere in the page, in capitals or not."""
    page = page.lower()
    return {word for word in secret if word.lower() in page}


def finer(characters: int) -> set[str]:
    """The beginnings of all locators that say more than so many characters."""
    every = {own for locators in SENDERS.values() for own in locators} | {AT, *HUT, ISLE}
    return {own[: characters + 1] for own in every if len(own) > characters}


def of_files(folder: Path) -> set[str]:
    digests = [hashlib.sha256((folder / name).read_bytes()).hexdigest()[:12] for name in FILES[:2]]
    return {folder.name, *FILES, "jane", "sha256", "2026-03-01T20:10:00Z\theard", *digests}


def payload_of(page: str) -> dict[str, Any]:
    """The data inside a page."""
    return dict(json.loads(page.split('id="logtool-map-data">')[1].split("</script>")[0]))
