"""Run the cells of `docs/week.ipynb` without a notebook server, and gather what each shows.

`python -m tests.docs.notebook` writes what they show into the notebook.
"""

from __future__ import annotations

import ast
import io
import json
from contextlib import chdir, redirect_stdout
from typing import Any

from tests.docs.running import ROOT

NOTEBOOK = ROOT / "docs" / "week.ipynb"
FRAMES = ("display.width", 100, "display.max_columns", 20, "display.max_rows", 60)  # as wide as a page


def notebook() -> dict[str, Any]:
    """Return the notebook as it is stored."""
    stored: dict[str, Any] = json.loads(NOTEBOOK.read_text(encoding="utf-8"))
    return stored


def code_cells(stored: dict[str, Any]) -> list[dict[str, Any]]:
    """Return the cells of code in order."""
    return [cell for cell in stored["cells"] if cell["cell_type"] == "code"]


def run() -> tuple[list[str], dict[str, Any]]:
    """Return what each cell of code shows, and the names that they leave, from a run in the project's folder."""
    import pandas as pd

    names: dict[str, Any] = {"__name__": "__main__"}
    with chdir(ROOT), pd.option_context(*FRAMES):
        return [_shown("".join(cell["source"]), names) for cell in code_cells(notebook())], names


def _shown(source: str, names: dict[str, Any]) -> str:
    """Run a cell; return what it prints and, as a notebook does, the value of its last expression."""
    tree = ast.parse(source)
    last = tree.body.pop() if tree.body and isinstance(tree.body[-1], ast.Expr) else None
    printed = io.StringIO()
    with redirect_stdout(printed):
        exec(compile(tree, "cell", "exec"), names)
        if last is not None:
            value = eval(compile(ast.Expression(last.value), "cell", "eval"), names)
            if value is not None:
                print(repr(value))
    return "\n".join(line.rstrip() for line in printed.getvalue().splitlines())


def stored_output(cell: dict[str, Any]) -> str:
    """Return what a cell is stored to show."""
    return "".join(line for output in cell["outputs"] for line in output["text"]).rstrip("\n")


def write() -> None:
    """Write what the cells show into the notebook."""
    stored = notebook()
    shown, _ = run()
    for number, (cell, text) in enumerate(zip(code_cells(stored), shown, strict=True), 1):
        cell["execution_count"] = number
        lines = [f"{line}\n" for line in text.splitlines()]
        cell["outputs"] = [{"name": "stdout", "output_type": "stream", "text": lines}] if lines else []
    NOTEBOOK.write_text(json.dumps(stored, indent=1, ensure_ascii=False) + "\n", encoding="utf-8")


if __name__ == "__main__":
    write()
