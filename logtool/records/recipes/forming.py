"""How a rule of a recipe cuts lines into pieces: by a pattern, a separator, positions or JSON."""

from __future__ import annotations

from logtool.records.recipes.fields import Fields
from logtool.records.recipes.patterns import groups_of
from logtool.records.recipes.recipe import MORE_COLUMNS, SPACE, Form


def form_of(fields: Fields, way: str) -> tuple[Form, tuple[str, ...]]:
    """Return how a rule cuts its lines, by one of the four ways, and the names of the pieces in order."""
    if way == "pattern":
        pattern = fields.pattern("pattern")
        assert pattern is not None
        return Form(pattern=pattern), tuple(name for name in groups_of(pattern) if name)
    if way == "fixed":
        return _fixed(fields)
    if way == "json":
        paths = fields.strings("json")
        if not paths:
            raise fields.error("json", "it names no piece")
        for path in paths.values():
            if '"' in path or not all(path.split(".")):
                raise fields.error("json", f"{path!r}: names with dots between them, none empty, no quotes")
        return Form(json={name: tuple(path.split(".")) for name, path in paths.items()}), tuple(paths)
    separator = fields.take("separator", str)
    if separator != SPACE and len(separator) != 1:
        raise fields.error("separator", f"{separator!r}: one character, or {SPACE!r} for runs of blanks")
    if separator in ('"', " ") or not (separator.isprintable() or separator == "\t"):
        raise fields.error("separator", f"{separator!r} cannot separate columns; write {SPACE!r} for blanks")
    if fields.take("header", bool, False):
        if separator == SPACE:
            raise fields.error(
                "header", "with blanks as separators the columns have to be named in `columns`"
            )
        header = fields.strings("columns")
        if not header:
            raise fields.error("columns", 'with header = true it is a table, like { time = "UTC" }')
        if len(set(header.values())) < len(header):
            raise fields.error("columns", "it gives one column two names; give it one")
        return Form(separator=separator, header=header), tuple(header)
    columns = fields.words("columns")
    more = columns[-1:] == (MORE_COLUMNS,)
    columns = columns[:-1] if more else columns
    if not any(columns):
        raise fields.error("columns", 'name the columns in order, like ["time", "snr_db", "", "text"]')
    pieces = tuple(name for name in columns if name)
    return Form(separator=separator, columns=columns, more_columns=more), pieces


def _fixed(fields: Fields) -> tuple[Form, tuple[str, ...]]:
    fixed: dict[str, tuple[int, int | None]] = {}
    for name, span in fields.take("fixed", dict).items():
        whole = isinstance(span, list) and len(span) in (1, 2) and all(type(end) is int for end in span)
        if not whole or span[0] < 1 or span[-1] < span[0]:
            raise fields.error("fixed", f"{name}: first and last character, from 1, like [1, 6]; not {span}")
        fixed[name] = (span[0], span[1] if len(span) > 1 else None)
    if not fixed:
        raise fields.error("fixed", "it names no piece")
    return Form(fixed=fixed), tuple(fixed)
