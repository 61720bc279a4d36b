"""Links between the documents lead somewhere, and so do the anchors that code and documents name."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.docs.running import ROOT

DOCUMENTS = sorted([*ROOT.glob("*.md"), *ROOT.glob("docs/*.md"), ROOT / "sample_logs" / "README.md"])
LINK = re.compile(r"!?\[[^\]]*\]\(([^)\s]+)\)")
NAMED = re.compile(r"docs/[\w-]+\.md(?:#[\w-]+)?")
CODE = [path for room in ("logtool", "scripts", "tests") for path in sorted((ROOT / room).rglob("*.py"))]


def without_blocks(text: str) -> str:
    return re.sub(r"^ *```.*?^ *```", "", text, flags=re.DOTALL | re.MULTILINE)


def anchors(document: Path) -> set[str]:
    """The anchors of a document's headings, as the usual viewers make them."""
    heads = re.findall(
        r"^#+ +(.+)$", without_blocks(document.read_text(encoding="utf-8")), flags=re.MULTILINE
    )
    return {re.sub(r"[^\w\- ]", "", head.lower()).replace(" ", "-") for head in heads}


def test_there_are_documents() -> None:
    assert {path.name for path in DOCUMENTS} >= {
        "README.md", "DEVELOPERS.md", "CHANGELOG.md", "LICENCES.md", "commands.md", "conventions.md",
        "data-flow.md", "methods.md", "privacy.md", "safety.md", "log-layout.md",
    }  # fmt: skip


@pytest.mark.parametrize("document", DOCUMENTS, ids=lambda path: path.name)
def test_links_lead_somewhere(document: Path) -> None:
    for link in LINK.findall(without_blocks(document.read_text(encoding="utf-8"))):
        assert "://" not in link, f"{link}: no document needs a network"
        place, _, anchor = link.partition("#")
        target = (document.parent / place).resolve() if place else document
        assert target.is_relative_to(ROOT), link
        assert target.exists(), link
        if anchor:
            assert anchor in anchors(target), link


def test_places_named_in_code_exist() -> None:
    named = {(path, name) for path in CODE for name in NAMED.findall(path.read_text(encoding="utf-8"))}
    assert named
    for path, name in sorted(named):
        document, _, anchor = name.partition("#")
        assert (ROOT / document).is_file(), f"{path.relative_to(ROOT)} names {name}"
        assert not anchor or anchor in anchors(ROOT / document), f"{path.relative_to(ROOT)} names {name}"


def test_every_document_is_reached_from_the_readme() -> None:
    reached, waiting = set(), [ROOT / "README.md"]
    while waiting:
        document = waiting.pop()
        if document in reached or document.suffix != ".md":
            continue
        reached.add(document)
        links = LINK.findall(without_blocks(document.read_text(encoding="utf-8")))
        waiting += [(document.parent / link.partition("#")[0]).resolve() for link in links if link[0] != "#"]
    assert reached >= {path.resolve() for path in ROOT.glob("docs/*.md")}
    assert ROOT / "DEVELOPERS.md" in reached
