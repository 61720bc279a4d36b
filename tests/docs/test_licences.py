"""`LICENCES.md` names every package that logtool needs, with the licence that the package states."""

from __future__ import annotations

import re
import tomllib
from importlib import metadata

import pytest

from tests.docs.running import ROOT

PAGE = (ROOT / "LICENCES.md").read_text(encoding="utf-8")
TOLD = {
    name.lower(): licence
    for name, licence in re.findall(r"^\| ([\w-]+) \| ([^|]+?) \| [^|]+ \|$", PAGE, flags=re.MULTILINE)
}
# What packages write instead of the short name of their licence.
WORDS = {"MIT License": "MIT", "BSD License": "BSD", "Apache Software License": "Apache-2.0"}


def plain(requirement: str) -> str:
    return re.split(r"[\s;<>=!~\[(]", requirement)[0].lower().replace("_", "-")


def direct() -> list[str]:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    return [plain(requirement) for requirement in project["dependencies"]]


def installed() -> list[str]:
    """All packages that logtool needs here, those behind others too."""
    found, waiting = set(), direct()
    while waiting:
        name = waiting.pop()
        if name in found:
            continue
        try:
            behind = metadata.requires(name) or []
        except metadata.PackageNotFoundError:
            continue
        found.add(name)
        waiting += [plain(requirement) for requirement in behind if "extra ==" not in requirement]
    return sorted(found)


@pytest.mark.parametrize("name", installed())
def test_package_is_named_with_its_licence(name: str) -> None:
    about = metadata.metadata(name)
    classified = [
        line.rpartition(" :: ")[2] for line in about.get_all("Classifier") or [] if "License ::" in line
    ]
    stated = [about.get("License-Expression"), about.get("License"), *classified]
    short = [WORDS.get(one, one).split(" ")[0] for one in stated if one and len(one) < 100]
    assert name in TOLD
    if short and short[0] != "(same":
        assert any(TOLD[name].startswith(one) for one in short), (TOLD[name], short)


def test_project_needs_what_the_page_says() -> None:
    assert set(direct()) <= set(TOLD)


def test_leaflet_in_maps_is_the_version_named() -> None:
    from importlib import resources

    head = resources.files("xstatic.pkg.leaflet").joinpath("data", "leaflet.js").read_text("utf-8")[:200]
    version = re.search(r"Leaflet ([\d.]+),", head)
    assert version is not None
    assert f"Leaflet {version[1]}, script and style" in PAGE
    for holder in re.findall(r"\(c\) ([\d-]+ [A-Z]\w+(?: [A-Z]\w+)?)", head):
        assert holder in PAGE.replace(",", "")
