"""Turn the text logs of an unattended HF receiver into figures that can be defended.

Open logs with `open_logs` and ask for a table; each is a pandas data frame in the words of the command
line.
"""

from logtool.errors import FileError, LogtoolError, NoRecordsError, PlaceError, UsageError
from logtool.records.opening import open_logs
from logtool.tables.between import between
from logtool.tables.checks import check
from logtool.tables.lines import lines
from logtool.tables.nights import nights
from logtool.tables.reach import reach
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
    "sectors",
    "senders",
]
