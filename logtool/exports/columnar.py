"""Records as files of typed columns: Parquet and Arrow IPC."""

from __future__ import annotations

from typing import IO, TYPE_CHECKING

from logtool import __version__
from logtool.records.arrow import batches, schema_of
from logtool.records.layout import LAYOUT_VERSION
from logtool.tables.choice import Choice
from logtool.tables.records import RECORD_COLUMNS, records_query

if TYPE_CHECKING:
    import pyarrow as pa

    from logtool.records.reader import Logs

_PACKING = "zstd"


class _Sink:
    """A file that only goes forward, also where it is a pipe, which cannot tell how far it is."""

    closed = False

    def __init__(self, out: IO[bytes]) -> None:
        self._out = out
        self._bytes = 0

    def write(self, data: bytes) -> int:
        self._out.write(data)
        self._bytes += len(data)
        return len(data)

    def tell(self) -> int:
        return self._bytes

    def flush(self) -> None:
        self._out.flush()

    def close(self) -> None:  # whoever opened the file closes it
        self._out.flush()


def write_parquet(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write the records that a choice counts as a Parquet file, one row group a batch. Returns notes: none."""
    from pyarrow import parquet

    schema = _schema()
    with parquet.ParquetWriter(_Sink(out), schema, compression=_PACKING) as writer:
        for batch in batches(logs.connection, records_query(logs, choice), schema):
            writer.write_batch(batch)
    return []


def write_arrow(logs: Logs, choice: Choice, out: IO[bytes]) -> list[str]:
    """Write the records that a choice counts as an Arrow IPC file, not packed. Returns notes: none."""
    from pyarrow import ipc

    schema = _schema()
    with ipc.new_file(_Sink(out), schema) as writer:
        for batch in batches(logs.connection, records_query(logs, choice), schema):
            writer.write_batch(batch)
    return []


def _schema() -> pa.Schema:
    """Return the schema of all columns; it says which program wrote them, and nothing of its inputs."""
    return schema_of(RECORD_COLUMNS, {"logtool": __version__, "layout": str(LAYOUT_VERSION)})
