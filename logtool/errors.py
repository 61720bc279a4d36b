"""The one family of errors: each message says what is wrong, where, and what to do next."""

from __future__ import annotations


class LogtoolError(Exception):
    """Base of every error that a user of logtool can meet; `exit_status` is the shell's."""

    exit_status = 3


class UsageError(LogtoolError):
    """An option or argument that cannot be used as given."""

    exit_status = 2


class PlaceError(UsageError, ValueError):
    """A locator, latitude or longitude that names no place on the Earth."""


class FileError(LogtoolError):
    """A file that cannot be read or written."""


class NoRecordsError(LogtoolError):
    """Inputs in which no record was found."""

    exit_status = 1
