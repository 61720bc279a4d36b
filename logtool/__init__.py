"""Turn the text logs of an unattended HF receiver into figures that can be defended.

Open logs with `open_logs` and ask for a table: each is a pandas data frame, in the words of the command
line.
"""

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from logtool.errors import FileError, LogtoolError, NoRecordsError, PlaceError, UsageError
    from logtool.records.opening import open_logs
    from logtool.tables.between import between
    from logtool.tables.checks import check
    from logtool.tables.lines import lines
    from logtool.tables.nights import nights
    from logtool.tables.reach import reach
    from logtool.tables.records import receptions
    from logtool.tables.sectors import sectors
    from logtool.tables.senders import senders

__version__ = "0.1.0"
__all__ = [
    "FileError",
    "LogtoolError",
    "NoRecordsError",
    "PlaceError",
    "UsageError",
    "between",
    "check",
    "lines",
    "nights",
    "open_logs",
    "reach",
    "receptions",
    "sectors",
    "senders",
]

_ROOMS = {"open_logs": "records.opening", "check": "tables.checks", "receptions": "tables.records"}


def __getattr__(name: str) -> Any:
    """Import a public name when it is first asked for, so that a shell call starts quickly."""
    if name not in __all__:
        raise AttributeError(f"module 'logtool' has no attribute {name!r}")
    room = _ROOMS.get(name) or ("errors" if name.endswith("Error") else f"tables.{name}")
    return getattr(import_module(f"logtool.{room}"), name)
