"""What `check` finds, counted by hand."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from logtool.records.opening import open_logs
from logtool.tables.checks import check_table
from logtool.tables.choice import choose
from tests.cli.calling import HEADER, heard, setup

WATCH = "2026-03-01T22:10:00Z\twatch\thut\t7041500" + "\t" * 9 + "\ton_s=600\n"


def findings(tmp_path: Path, text: str, **words: Any) -> list[dict[str, Any]]:
    """Return the findings of a log of these lines."""
    (tmp_path / "a.log").write_text(HEADER + text)
    with open_logs(tmp_path) as logs:
        return check_table(logs, choose(**words)).findings or []


def test_a_reception_without_any_watch_in_its_hour_is_told(tmp_path: Path) -> None:
    good = setup("2026-03-01T21:00:00Z") + WATCH + heard("2026-03-01T22:05:00Z")
    assert findings(tmp_path, good) == []
    (finding,) = findings(tmp_path, good + heard("2026-03-01T23:05:00Z") + heard("2026-03-01T23:30:00Z"))
    assert (finding["what"], finding["size"], finding["unit"]) == ("outside-watch", 2, "receptions")
    assert (finding["from"], finding["to"]) == ("2026-03-01T23:05:00Z", "2026-03-01T23:30:00Z")


def test_one_hole_of_eleven_minutes_is_one_gap(tmp_path: Path) -> None:
    text = setup("2026-03-01T22:00:00Z") + "".join(
        heard(f"2026-03-01T22:{minute:02d}:00Z") for minute in (1, 5, 16, 20)
    )
    (gap,) = findings(tmp_path, text)
    assert (gap["what"], gap["size"], gap["unit"]) == ("gap", 11.0, "min")
    assert (gap["from"], gap["to"]) == ("2026-03-01T22:05:00Z", "2026-03-01T22:16:00Z")
    assert "cannot be told whether it was off" in gap["why"]
    assert findings(tmp_path, text, gap_min=11.0) == []


def test_lines_before_the_first_setup_are_counted(tmp_path: Path) -> None:
    text = heard("2026-03-01T22:01:00Z") + heard("2026-03-01T22:02:00Z") + setup("2026-03-01T22:05:00Z")
    (finding,) = findings(tmp_path, text)
    assert (finding["what"], finding["size"]) == ("before-setup", 2)


def test_a_time_that_goes_back_is_a_clock_step(tmp_path: Path) -> None:
    text = setup("2026-03-01T21:59:00Z") + heard("2026-03-01T22:10:00Z") + heard("2026-03-01T22:07:59Z")
    (finding,) = findings(tmp_path, text)
    assert (finding["what"], finding["size"], finding["unit"]) == ("clock-step", 121.0, "s")
    assert findings(tmp_path, text.replace("22:07:59", "22:08:00")) == []
    assert findings(tmp_path, text, to="2026-03-01T22:00:00Z") == []
