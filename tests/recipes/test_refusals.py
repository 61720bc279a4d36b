"""What commands say of files that a recipe does not fit, and that nothing is left half written."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.cli.calling import HEADER, call, heard
from tests.recipes.comparing import recipe, rule

DATA = "2026-03-01T18:00:00Z,Q1A,-3\n"
RULE = rule(separator=",", columns=["time", "sender", "snr_db"])


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "r.toml").write_text(recipe(RULE))
    (tmp_path / "a.txt").write_text(DATA)
    return tmp_path


def refused(status: int, *words: str | Path) -> str:
    """Return what a call says that ends so, and that it neither prints a table nor a trace."""
    done = call(*words)
    assert done.returncode == status
    assert "Traceback" not in done.stderr
    return done.stderr


def test_a_recipe_that_matches_nothing(folder: Path) -> None:
    (folder / "a.txt").write_text("\none\n\ntwo three\n2026-03-01,Q1A,1\nfour\n")
    said = refused(3, "reach", "--recipe", folder / "r.toml", "-o", folder / "out", folder / "a.txt")
    assert f"{folder / 'a.txt'}: the recipe {folder / 'r.toml'} makes no record of its first 6 lines" in said
    assert "(3 no-rule, 1 bad-time of 4)" in said
    shown = [line.strip() for line in said.splitlines() if line.startswith("  line")]
    assert shown == [
        "line 2 (no-rule): 'one'",
        "line 4 (no-rule): 'two three'",
        "line 5 (bad-time): '2026-03-01,Q1A,1'",
    ]
    assert "--anyway reads on" in said


def test_a_file_that_does_not_fit_keeps_no_other_from_being_read(folder: Path) -> None:
    (folder / "b.txt").write_text("one\n")
    done = call("senders", "--csv", "--recipe", folder / "r.toml", folder / "a.txt", folder / "b.txt")
    assert done.returncode == 3
    assert "Q1A" in done.stdout
    assert "b.txt: the recipe" in done.stderr


def test_only_blank_lines_and_remarks_are_no_record(folder: Path) -> None:
    (folder / "a.txt").write_text("\n \n")
    assert "the inputs hold no record" in refused(1, "reach", "--recipe", folder / "r.toml", folder / "a.txt")


@pytest.mark.parametrize(
    ("status", "text", "says"),
    [
        (3, None, "the recipe cannot be read (No such file or directory); check the path"),
        (2, "recipe = 1\n", "it has no [[line]]"),
        (2, HEADER + heard("2026-03-01T18:00:00Z"), "it is no TOML"),
    ],
)
def test_nothing_is_written_where_a_recipe_cannot_be_used(
    status: int, text: str | None, says: str, folder: Path
) -> None:
    (folder / "r.toml").unlink() if text is None else (folder / "r.toml").write_text(text)
    out = folder / "out"
    out.write_text("as it was")
    for command in ("reach", "convert"):
        said = refused(status, command, "--recipe", folder / "r.toml", "-o", out, folder / "a.txt")
        assert says in said
    assert out.read_text() == "as it was"
    assert sorted(path.name for path in folder.iterdir() if path.name != "r.toml") == ["a.txt", "out"]


def test_a_files_name_that_does_not_match(folder: Path) -> None:
    (folder / "r.toml").write_text(recipe(RULE) + "[name]\npattern = '(?P<receiver>rx[0-9])'\n")
    (folder / "rx1.txt").write_text(DATA)
    said = refused(3, "reach", "--recipe", folder / "r.toml", folder / "a.txt", folder / "rx1.txt")
    assert f"{folder / 'a.txt'}: its name does not match `name.pattern` of {folder / 'r.toml'}" in said
    assert "rx1.txt" not in said


def test_a_header_without_a_column(folder: Path) -> None:
    (folder / "r.toml").write_text(recipe(rule(separator=",", header=True, columns={"time": "UTC"})))
    said = refused(3, "reach", "--recipe", folder / "r.toml", folder / "a.txt")
    assert "a.txt, line 1: `columns.time` of" in said
    assert "and the header has none: 2026-03-01T18:00:00Z, Q1A, -3" in said


def test_a_date_in_the_files_name_that_is_none(folder: Path) -> None:
    (folder / "r.toml").write_text(
        recipe(RULE) + "[name]\npattern = '(?P<date>[0-9]{8})'\ndate_form = '%Y%m%d'\n"
    )
    (folder / "20260230.txt").write_text(DATA)
    said = refused(3, "reach", "--recipe", folder / "r.toml", folder / "20260230.txt")
    assert "20260230.txt: '20260230' in its name is no date of the form '%Y%m%d'" in said


def test_a_header_with_a_column_twice(folder: Path) -> None:
    (folder / "r.toml").write_text(recipe(rule(separator=",", header=True, columns={"time": "UTC"})))
    (folder / "a.txt").write_text("\nUTC,x,UTC\n")
    said = refused(3, "reach", "--recipe", folder / "r.toml", folder / "a.txt")
    assert "a.txt, line 2: `columns.time` of" in said
    assert "wants a column 'UTC', and the header has several: UTC, x, UTC" in said


def test_the_date_option(folder: Path) -> None:
    (folder / "l.log").write_text(HEADER + heard("2026-03-01T18:00:00Z"))
    assert "--date is for texts that a recipe reads; give --recipe" in refused(
        2, "reach", "--date", "2026-03-01", folder / "l.log"
    )
    words = ("reach", "--recipe", folder / "r.toml", folder / "a.txt", "--date")
    for date in ("2026-02-30", "1.3.2026", "", "2026-03-01T18:00:00Z"):
        assert "is no date; write it like 2026-03-01" in refused(2, *words, date)


def test_layout_text_from_standard_input_needs_no_recipe(folder: Path) -> None:
    done = call("reach", "--recipe", folder / "r.toml", "-", input=HEADER + heard("2026-03-01T18:00:00Z"))
    assert done.returncode == 3
    assert "-: it follows the log layout already; leave --recipe away" in done.stderr
    assert call("reach", "--recipe", folder / "r.toml", "-", input=DATA).returncode == 0
