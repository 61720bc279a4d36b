"""One browser for all tests of pages."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent.parent))

from tests.browser import Page, browser_page


@pytest.fixture(scope="session")
def page() -> Iterator[Page]:
    """Return a tab of headless Chromium with every host blocked."""
    with browser_page() as tab:
        yield tab
