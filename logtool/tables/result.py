"""What a figure gives: plain columns in order, with a summary and notes where there are any."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from datetime import timedelta
from typing import TYPE_CHECKING, Any

from logtool.places.wgs84 import TURN_DEG
from logtool.records.judge import EPOCH

if TYPE_CHECKING:
    import duckdb
    import pandas as pd

TIME_COLUMNS = frozenset({"hour", "from", "to", "first", "last", "time"})
DECIMALS = 3
DEGREE_DECIMALS = 4


def written_time(time_us: int) -> str:
    """Return an instant as RFC 3339 writes it, in UTC.

    >>> written_time(1_500_000)
    '1970-01-01T00:00:01.5Z'
    """
    at = (EPOCH + timedelta(microseconds=time_us)).strftime("%Y-%m-%dT%H:%M:%S")
    fraction = f"{time_us % 1_000_000:06d}".rstrip("0")
    return f"{at}.{fraction}Z" if fraction else f"{at}Z"


def output_value(name: str, value: Any) -> Any:
    """Return a value of a column as it leaves the program: times written, numbers rounded.

    >>> output_value("distance_km", 1234.56789), output_value("bearing_deg", 359.99996)
    (1234.568, 0.0)
    """
    if value is None:
        return None
    if name in TIME_COLUMNS:
        return written_time(value)
    if name == "bearing_deg":
        return round(value, DEGREE_DECIMALS) % TURN_DEG
    if isinstance(value, float):
        return round(value, DEGREE_DECIMALS if name.endswith("_deg") else DECIMALS) + 0.0
    return value


@dataclass
class Table:
    """Plain columns of equal length; times in microseconds since 1970, numbers not yet rounded."""

    columns: dict[str, list[Any]]
    summary: dict[str, Any] | None = None
    findings: list[dict[str, Any]] | None = None
    notes: list[str] = field(default_factory=list)
    lon_deg: list[float | None] | None = None  # of the receiver in each row, for the local mean solar time

    @classmethod
    def of(cls, relation: duckdb.DuckDBPyConnection) -> Table:
        """Return the result of an executed query as a table."""
        names = [column[0] for column in relation.description or ()]
        rows = relation.fetchall()
        return cls({name: list(column) for name, column in zip(names, zip(*rows, strict=True), strict=True)}
                   if rows else {name: [] for name in names})  # fmt: skip

    def __len__(self) -> int:
        return len(next(iter(self.columns.values()), []))

    def rows(self) -> Iterator[dict[str, Any]]:
        """Give the rows as they leave the program, with the keys of `--json`."""
        names = list(self.columns)
        for values in zip(*self.columns.values(), strict=True):
            yield {name: output_value(name, value) for name, value in zip(names, values, strict=True)}

    def written_summary(self) -> dict[str, Any] | None:
        """Return the summary as it leaves the program."""
        if self.summary is None:
            return None
        return {name: output_value(name, value) for name, value in self.summary.items()}

    def to_pandas(self) -> pd.DataFrame:
        """Return the rows as a data frame: times as timestamps in UTC, numbers not rounded."""
        import pandas as pd

        frame = pd.DataFrame(self.columns)
        for name in TIME_COLUMNS & set(frame.columns):
            frame[name] = pd.to_datetime(frame[name], unit="us", utc=True)
        frame.attrs["summary"] = self.written_summary()
        frame.attrs["notes"] = self.notes
        return frame
