"""Open logs: find the files, look them over, and make the tally and the ledger on first use."""

from __future__ import annotations

import os
import tempfile
from collections import defaultdict
from collections.abc import Iterable
from dataclasses import dataclass, field
from itertools import pairwise
from pathlib import Path
from types import TracebackType
from typing import TYPE_CHECKING

from logtool.records.engine import connect, create_table, lines_sql
from logtool.records.ledger import FileLedger
from logtool.records.marks import MARK
from logtool.records.privacy import Privacy
from logtool.records.progress import LOOK_SHARE, RECIPE_SHARE, Polled, Progress
from logtool.records.recipes.recipe import RecipeError
from logtool.records.scan import LEAST_MEMORY_MB, EndlessLineError, Scan, ScanOptions, scan
from logtool.records.setups import setups_of
from logtool.records.sources import STDIN, Source, UnreadableError, sources_of
from logtool.records.tally import BLANK, COMMENT, HOUR_US, Cuts, Odd, Repeats, create_tally, drop_repeated

if TYPE_CHECKING:
    import duckdb
    import pandas as pd
    import pyarrow as pa

    from logtool.records.recipes.recipe import Recipe

MEMORY_SHARE = 0.8  # of the text's size, above that


@dataclass(frozen=True)
class OpenOptions:
    """How logs are opened beside their places: threads, memory, digests, strangers, and so on."""

    threads: int | None = None
    memory_mb: int | None = None
    with_digest: bool = True
    anyway: bool = False
    others_too: bool = (
        False  # read the other files where one is missing or unreadable, and name it in `refused`
    )
    progress: Progress | None = None
    privacy: Privacy = field(default_factory=Privacy)
    recipe: Recipe | None = None  # how files that do not follow the layout are read
    day_us: int | None = None  # the date at which such files begin, where they name none


class Logs:
    """Opened logs; use with `with`, or `close` them. Made by `logtool.open_logs`.

    Attributes
    ----------
    setups : dict
        The setups of each receiver in the order of time; of two at one time the later read.
    refused : list of str
        The files that were not read, each with the reason.
    notes : list of str
        What a user should know of the reading.
    """

    def __init__(
        self,
        paths: tuple[str | os.PathLike[str], ...],
        *,
        at: str | None = None,
        antenna_name: str | None = None,
        options: OpenOptions = OpenOptions(),
    ) -> None:
        self.at = at
        self.antenna_name = antenna_name
        self._options = options
        self._look_share = RECIPE_SHARE if options.recipe else LOOK_SHARE
        self._folder = tempfile.TemporaryDirectory(prefix="logtool-", ignore_cleanup_errors=True)
        self._connection: duckdb.DuckDBPyConnection | None = None
        self._bounds: frozenset[int] | None = None
        self._ledger: list[FileLedger] | None = None
        self._odd: list[Odd] = []
        self.read_times = 0
        self.rolled_up_for: tuple[int, float] | None = None
        self.refused: list[str] = []
        self.notes: list[str] = []
        try:
            self._scans = self._look_over(paths)
            self.setups = setups_of(self._scans)
        except BaseException:
            self.close()
            raise

    def __enter__(self) -> Logs:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, value: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    def close(self) -> None:
        """Close the engine and remove what was copied; twice does no harm."""
        if self._connection is not None:
            self._connection.close()
            self._connection = None
        self._folder.cleanup()

    @property
    def connection(self) -> duckdb.DuckDBPyConnection:
        """The engine's connection, opened on first use."""
        if self._connection is None:
            memory_mb = self._options.memory_mb or self._enough_mb()
            self._connection = connect(Path(self._folder.name), self._options.threads, memory_mb)
        return self._connection

    def _enough_mb(self) -> int:
        """Return how much memory the engine may take, unless it is told: more for more text."""
        text_bytes = sum(path.stat().st_size for path in self.paths)
        return max(LEAST_MEMORY_MB, round(MEMORY_SHARE * text_bytes / 1e6))

    @property
    def privacy(self) -> Privacy:
        """What is left out or made coarse; locators are cut before anything is learned from them."""
        return self._options.privacy

    @property
    def lines(self) -> str:
        """SQL of the relation of `file` and `line` over all files, empty lines left out."""
        return lines_sql(self.paths)

    @property
    def file_names(self) -> list[str]:
        """The names of the files as given, by the index `file`."""
        return [scan.source.name for scan in self._scans]

    @property
    def source_paths(self) -> list[Path]:
        """The paths of the files that are read, as the user names them; standard input has none."""
        return [scan.source.path for scan in self._scans if scan.source.path is not None]

    @property
    def inputs(self) -> list[FileLedger]:
        """The ledger of each file that was read."""
        self.tally()
        assert self._ledger is not None
        return self._ledger

    @property
    def paths(self) -> list[Path]:
        """Where the text of each file can be read again, line numbers unchanged."""
        self._keep_as_seen()
        return [scan.path for scan in self._scans]

    @property
    def bounds(self) -> frozenset[int]:
        """The instants (microseconds since 1970) at which the tally cuts hours."""
        return self._bounds or frozenset()

    def tally(self, bounds: Iterable[int] = ()) -> None:
        """Make the tables `tally` and `odd_records`, unless they are there and cut at the bounds.

        Parameters
        ----------
        bounds : iterable of int
            Instants (microseconds since 1970) that cut their hours in two.
        """
        inner = frozenset(bound for bound in bounds if bound % HOUR_US)
        if self._bounds is not None and inner <= self._bounds:
            return
        self._make_tally_as_seen(inner)
        self._bounds = inner
        self.read_times += 1

    def set_aside(self) -> list[tuple[str, int, str, bytes]]:
        """Return the file, line number, reason and bytes of every line set aside, in that order."""
        from logtool.records.locate import line_numbers

        self.tally()
        wanted: dict[int, dict[bytes, str]] = defaultdict(dict)
        for odd in self._odd:
            if odd.why not in (BLANK, COMMENT):
                wanted[odd.file][odd.line.encode()] = self._why(odd)
        found = [
            (i, number, reason, line)
            for i, scan in enumerate(self._scans)
            for number, reason, line in scan.set_aside
        ]
        paths = self.paths
        for i, reasons in wanted.items():
            numbered = list(line_numbers(paths[i], reasons))
            as_given = self._as_given(i, {n for n, _ in numbered})
            found += [(i, n, reasons[line], as_given.get(n, line)) for n, line in numbered]
        names = self.file_names
        return [(names[i], n, reason, line) for i, n, reason, line in sorted(found)]

    def _why(self, odd: Odd) -> str:
        """Return why a line is no record: by the recipe, where one says so, else by the judge."""
        if self._scans[odd.file].rules is not None and odd.line.startswith(MARK):
            return odd.line.removeprefix(MARK)
        return odd.why

    def _as_given(self, file: int, numbers: set[int]) -> dict[int, bytes]:
        """Return lines by their numbers as they stand in a file that was read by a recipe."""
        seen = self._scans[file]
        if seen.rules is None or self._options.recipe is None:
            return {}
        from logtool.records.recipes.reading import source_lines

        return source_lines(self._options.recipe, seen.source, numbers)

    def to_arrow(self) -> pa.Table:
        """Return all records as a table of the layout's columns, typed; see `logtool.records.arrow`."""
        from logtool.records.arrow import records_arrow

        return records_arrow(self)

    def to_pandas(self) -> pd.DataFrame:
        """Return all records as a frame of the layout's columns, typed: one row a record, in order of time.

        Each record stands there once; what is not known is missing; `time` is in UTC.
        """
        import pandas as pd
        import pyarrow as pa

        return self.to_arrow().to_pandas(types_mapper={pa.int64(): pd.Int64Dtype()}.get)

    def _scan(self, source: Source, path: Path, options: ScanOptions) -> Scan:
        """Look over a file: ADI by its name; by the recipe, where there is one, unless it is in the layout."""
        if source.is_adi:
            from logtool.records.adi import scan_adi

            return scan_adi(source, path, options)
        recipe = self._options.recipe
        if recipe is not None:
            from logtool.records.recipes.reading import in_layout, scan_by

            if source.name == STDIN or not in_layout(source):
                return scan_by(recipe, source, path, options, day_us=self._options.day_us)
        return scan(source, path, options)

    def _look_over(self, paths: tuple[str | os.PathLike[str], ...]) -> list[Scan]:
        unread: list[str] = []
        by_recipe = self._options.recipe is not None
        sources = sources_of(paths, unread if self._options.others_too else None, with_tables=by_recipe)
        sizes = [source.path.stat().st_size if source.path else 0 for source in sources]
        done, whole = 0, max(1, sum(sizes))

        def told(file_bytes: int) -> None:
            self._tell("looking over the files", self._look_share * min(1, (done + file_bytes) / whole))

        options = ScanOptions(self._options.with_digest, self._options.anyway, told, self._options.threads)
        scans: list[Scan] = []
        for source, size in zip(sources, sizes, strict=True):
            path = self._path_of(len(scans))
            try:
                seen = self._scan(source, path, options)
                refused = seen.refused and f"{source.name}: {seen.refused}"
            except EndlessLineError as error:
                refused = str(error)
            except (UnreadableError, RecipeError) as error:
                if not self._options.others_too:
                    raise
                unread.append(str(error))
                continue
            done += size
            if refused:
                self.refused.append(refused)
                path.unlink(missing_ok=True)
                continue
            self.notes += [f"{source.name}: {note}" for note in seen.notes]
            if seen.broken:
                self.notes.append(f"{source.name}: read up to a break: {seen.broken}")
            scans.append(seen)
        if unread and not scans and not self.refused:
            raise UnreadableError("\n".join(unread))
        self.refused += unread
        return scans

    def _path_of(self, index: int, again: str = "") -> Path:
        folder = Path(self._folder.name) / f"text{again}"
        folder.mkdir(exist_ok=True)
        return folder / f"{index:08d}"

    def _keep_as_seen(self) -> bool:
        """Copy what was seen of each file that has another size by now; return whether there is any."""
        changed = [i for i, seen in enumerate(self._scans) if _has_changed(seen)]
        options = ScanOptions(self._options.with_digest, anyway=True)
        for i in changed:
            seen = self._scans[i]
            path = self._path_of(i, "-as-seen")
            self._scans[i] = scan(seen.source, path, options, only_bytes=seen.stored_bytes)
        if changed:
            self.setups = setups_of(self._scans)
        return bool(changed)

    def _make_tally_as_seen(self, bounds: frozenset[int]) -> None:
        """Make the tally of the files as they were looked over, even where one changes meanwhile."""
        import duckdb

        failure = None
        try:
            self._make_tally(bounds)
        except duckdb.Error as error:
            failure = error
        if self._keep_as_seen():
            self._make_tally(bounds)
        elif failure is not None:
            raise failure

    def _make_tally(self, bounds: frozenset[int]) -> None:
        cuts = Cuts(self._make_cuts(), tuple(sorted(bounds)), self.privacy.coarsen)
        lines = self.lines  # once: a file that changes from here on is read anew as a whole
        with Polled(self.connection, self._options.progress, self._look_share):
            self._odd = create_tally(self.connection, lines, cuts=cuts)
            repeats = drop_repeated(self.connection, lines, cuts=cuts)
        self._ledger = self._count(repeats)
        self._tell("", 1)

    def _make_cuts(self) -> bool:
        """Make the table of the pieces of hours that setups cut; return whether there are any."""
        rows = []
        for receiver, setups in self.setups.items():
            for setup, following in pairwise([*setups, None]):
                assert setup is not None
                hour = setup.time_us // HOUR_US
                if setup.time_us % HOUR_US:
                    end = (hour + 1) * HOUR_US
                    stop = end if following is None else min(end, following.time_us)
                    rows.append([receiver, hour, setup.time_us, stop])
        columns = {"receiver": "VARCHAR", "hour": "BIGINT", "start_us": "BIGINT", "stop_us": "BIGINT"}
        create_table(self.connection, "cuts", columns, list(zip(*rows, strict=True)))
        return bool(rows)

    def _count(self, repeats: list[Repeats]) -> list[FileLedger]:
        ledger = []
        for seen in self._scans:
            file = FileLedger(seen.source.name, seen.digest, seen.stored_bytes, seen.lines, rules=seen.rules)
            file.blank, file.comments = seen.blank, seen.comments
            file.reasons.update(reason for _, reason, _ in seen.set_aside)
            ledger.append(file)
        kept = self.connection.execute("""
            SELECT file, sum(n)::BIGINT FROM (
                SELECT file, n FROM tally UNION ALL SELECT file, 1 FROM odd_records)
            GROUP BY file""").fetchall()
        for i, records in kept:
            ledger[i].records = records
        for i, count in repeats:
            ledger[i].repeated += count
        for odd in self._odd:
            if odd.why == COMMENT:
                ledger[odd.file].comments += odd.copies
            elif odd.why != BLANK:
                ledger[odd.file].reasons[self._why(odd)] += odd.copies
        for file in ledger:
            file.blank = file.lines - file.comments - file.records - file.repeated - file.set_aside
        return ledger

    def _tell(self, what: str, share: float) -> None:
        if self._options.progress is not None:
            self._options.progress(what, share)


def _has_changed(seen: Scan) -> bool:
    """Return whether a file that is read where it is has another size than when it was looked over."""
    if seen.copied:
        return False
    try:
        return seen.path.stat().st_size != seen.stored_bytes
    except OSError:  # it is gone; to copy it will say so
        return True
