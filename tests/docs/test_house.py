"""What DEVELOPERS.md says of the house: imports go one way, and what is heavy is imported inside."""

from __future__ import annotations

import ast
import re
from collections.abc import Iterator
from pathlib import Path

import pytest

from tests.docs.running import ROOT

HOUSE = ROOT / "logtool"
GUIDE = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
ROOMS = ["records", "suggest", "places", "simulate", "tables", "verdicts", "exports", "pages", "cli"]
# What proves the others shares no code with them: it imports these rooms only, and only the commands import it.
APART = {"simulate": {"places"}}
USERS_OF_APART = {"cli"}
HEAVY = {"pandas", "folium", "branca", "jinja2", "rich", "pyproj", "duckdb", "zstandard", "pyarrow", "scipy"}
MODULES = sorted(HOUSE.rglob("*.py"))


def imports(tree: ast.AST) -> Iterator[str]:
    """The modules that a part of a program imports, wherever in it."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, "imports name the whole path"
            yield from (f"{node.module}.{alias.name}" for alias in node.names)


def at_import(tree: ast.Module) -> list[ast.stmt]:
    """The statements that run when a module is imported, but for those for type checkers."""
    return [
        node
        for node in tree.body
        if not isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef)
        and not (isinstance(node, ast.If) and ast.unparse(node.test) == "TYPE_CHECKING")
    ]


def room_of(name: str) -> str | None:
    parts = name.split(".")
    return parts[1] if parts[0] == "logtool" and len(parts) > 1 and parts[1] in ROOMS else None


def test_rooms_are_those_of_the_guide() -> None:
    drawn = re.search(r"```\nlogtool/\n(.*?)tests/", GUIDE, flags=re.DOTALL)
    assert drawn is not None
    assert re.findall(r"^  (\w+)/", drawn[1], flags=re.MULTILINE) == ROOMS
    assert sorted(path.name for path in HOUSE.iterdir() if (path / "__init__.py").exists()) == sorted(ROOMS)


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(HOUSE)))
def test_imports_go_one_way(path: Path) -> None:
    own = path.relative_to(HOUSE).parts[0]
    if own not in ROOMS:
        return
    for name in imports(ast.parse(path.read_text(encoding="utf-8"))):
        room = room_of(name)
        assert room is None or ROOMS.index(room) <= ROOMS.index(own), f"{path.name} imports {name}"


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(HOUSE)))
def test_rooms_apart_share_no_code(path: Path) -> None:
    own = path.relative_to(HOUSE).parts[0]
    for name in imports(ast.parse(path.read_text(encoding="utf-8"))):
        room = room_of(name)
        if own in APART:
            assert room is None or room in APART[own] | {own}, f"{path.name} imports {name}"
        elif own not in USERS_OF_APART:
            assert room not in APART, f"{path.name} imports {name}"


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(HOUSE)))
def test_heavy_packages_are_imported_inside(path: Path) -> None:
    tree = ast.parse(path.read_text(encoding="utf-8"))
    for node in at_import(tree):
        assert not {name.split(".")[0] for name in imports(node)} & HEAVY, ast.unparse(node)


def test_a_wrong_import_would_be_seen() -> None:
    tree = ast.parse(
        "from logtool.tables.reach import reach\nimport pandas\ndef f() -> None:\n    import rich\n"
    )
    assert [room_of(name) for name in imports(tree)] == ["tables", None, None]
    assert {name for node in at_import(tree) for name in imports(node)} & HEAVY == {"pandas"}
