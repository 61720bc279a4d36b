"""Turn the text logs of an unattended HF receiver into figures that can be defended."""

from logtool.errors import FileError, LogtoolError, NoRecordsError, PlaceError, UsageError
from logtool.records.opening import open_logs

__version__ = "0.1.0"
__all__ = ["FileError", "LogtoolError", "NoRecordsError", "PlaceError", "UsageError", "open_logs"]
