"""Random logs: the tables against the slow reference, and against themselves read in other ways."""

from __future__ import annotations

import tempfile
from pathlib import Path

from hypothesis import given, settings
from hypothesis import strategies as st

from tests.tables.comparing import compare
from tests.tables.drawing import drawn
from tests.tables.making import write


@settings(max_examples=30, deadline=None, derandomize=True, database=None)
@given(seed=st.integers(0, 10**6))
def test_tables_are_the_references(seed: int) -> None:
    log = drawn(seed)
    with tempfile.TemporaryDirectory() as folder:
        compare(write(Path(folder), *log.files), at=log.at, antenna_name=log.antenna_name, **log.words)
