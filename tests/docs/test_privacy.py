"""What `docs/privacy.md` says that outputs hold, and do not hold."""

from __future__ import annotations

import csv
import io
import re
from pathlib import Path

import pytest

from tests.docs.running import SAMPLES, logtool

SITE = "IN66lm"
CALL = re.compile(r"\bQ\d[A-Z]+(?:/P)?\b")
NIGHT = ("--night", "2026-03-02")


@pytest.fixture(scope="module")
def map_page(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, str]:
    """A map written to, and made from, folders with names that are nobody's business."""
    folder = tmp_path_factory.mktemp("jane-doe")
    (folder / "logs").symlink_to(SAMPLES)
    out = folder / "map.html"
    aside = folder / "aside.txt"
    done = logtool(
        "map", str(folder / "logs"), *NIGHT, "--out", str(out), "--set-aside", str(aside), folder=folder
    )
    assert done.returncode == 0, done.stderr
    return folder, out.read_text(encoding="utf-8")


@pytest.mark.parametrize("command", ["reach", "sectors", "nights", "senders", "between"])
def test_csv_has_no_paths_and_no_own_place(command: str) -> None:
    told = logtool(command, str(SAMPLES), *NIGHT, "--csv").stdout
    assert told.count("\n") > 1
    assert "sample_logs" not in told
    assert SITE not in told
    assert "sha256" not in told
    assert "DE Q" not in told


@pytest.mark.parametrize("command", ["reach", "nights"])
def test_only_the_farthest_is_named(command: str) -> None:
    rows = list(csv.DictReader(io.StringIO(logtool(command, str(SAMPLES), *NIGHT, "--csv").stdout)))
    assert any(CALL.search(row["farthest_sender"]) for row in rows)
    for row in rows:
        row.pop("farthest_sender")
        assert not CALL.search(" ".join(row.values()))


def test_sectors_name_nobody() -> None:
    assert not CALL.search(logtool("sectors", str(SAMPLES), *NIGHT, "--csv").stdout)


def test_json_has_paths_as_typed_and_digests() -> None:
    told = logtool("sectors", str(SAMPLES), *NIGHT, "--at", "JN58", "--json").stdout
    assert f'"file": "{SAMPLES}/2026-03-02.log"' in told
    assert '"digest": "sha256:' in told
    assert '"at": "JN58"' in told


def test_lines_hold_the_words() -> None:
    assert "DE Q" in logtool("lines", str(SAMPLES / "2026-03-02.log"), "--sender", "Q7XS", "--csv").stdout


def test_map_holds_places_and_no_words(map_page: tuple[Path, str]) -> None:
    _, page = map_page
    assert f'"{SITE}"' in page
    assert CALL.search(page)
    assert "2026-03-02.log" in page
    assert "DE Q" not in page


def test_map_holds_no_path(map_page: tuple[Path, str]) -> None:
    folder, page = map_page
    assert folder.name not in page
    assert str(SAMPLES.parent) not in page


def test_map_asks_for_nothing(map_page: tuple[Path, str]) -> None:
    _, page = map_page
    assert "default-src 'none'" in page
    addresses = re.findall(r"<(?:script|link|img|iframe)\b[^>]*?\b(?:src|href)=[\"']?([^\"'>\s]+)", page)
    assert addresses  # the empty icon, without which a browser asks for one
    assert all(address.startswith("data:") for address in addresses)
