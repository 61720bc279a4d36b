"""Write the tables of keys in `docs/simulate.md` anew: `python -m tests.simulate.key_tables`."""

from __future__ import annotations

import re

from logtool.simulate.printing import key_tables, kind_table
from tests.docs.running import ROOT

PAGE = ROOT / "docs" / "simulate.md"


def put_between(text: str, name: str, table: str) -> str:
    """Return a page with a table in place of the one between two marks."""
    begin, end = f"<!-- {name} -->\n", f"\n<!-- end of {name} -->"
    pattern = re.escape(begin) + ".*?" + re.escape(end)
    return re.sub(pattern, lambda _: begin + table + end, text, flags=re.DOTALL)


if __name__ == "__main__":
    page = PAGE.read_text(encoding="utf-8")
    page = put_between(page, "keys", key_tables())
    PAGE.write_text(put_between(page, "kinds", kind_table()), encoding="utf-8")
