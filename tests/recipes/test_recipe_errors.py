"""What is wrong with a recipe: each message names the file, the line, the key and what to do."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from logtool.errors import FileError
from logtool.records.recipes.loading import load_recipe, recipe_of
from logtool.records.recipes.recipe import RecipeError

GOOD = """recipe = 1
about = "x"

[constants]
receiver = "hut"
dial_hz = 7041500

[[line]]
kind = "note"
name = "remark"
pattern = "note (?P<time>.*)"

[[line]]
kind = "heard"
separator = ","
columns = ["time", "sender", "text"]
"""
ABOUT, COLUMNS = 'about = "x"', 'columns = ["time", "sender", "text"]'
SEPARATED = f'separator = ","\n{COLUMNS}'


def told(old: str, new: str) -> str:
    """Return the message about the good recipe with a part changed, or with something added at its end."""
    assert not old or old in GOOD
    with pytest.raises(RecipeError) as error:
        recipe_of(GOOD.replace(old, new, 1) if old else GOOD + new, "r.toml")
    return str(error.value)


def test_the_good_recipe_is_good() -> None:
    assert [rule.name for rule in recipe_of(GOOD, "r.toml").rules] == ["remark", "heard"]


@pytest.mark.parametrize(
    ("old", "new", "line", "key", "says"),
    [
        ("recipe = 1", "recipe = 2", 1, "recipe", "write recipe = 1"),
        ("recipe = 1", "recipe = true", 1, "recipe", "True is not a whole number"),
        (ABOUT, "abuot = 'x'", 2, "abuot", "there is no such key; did you mean `about`?"),
        (ABOUT, "about = 5", 2, "about", "5 is not a text"),
        (ABOUT, "encoding = 'utf9'", 2, "encoding", "there is no encoding 'utf9'; common are utf-8"),
        (ABOUT, "encoding = 'rot13'", 2, "encoding", "there is no encoding 'rot13'"),
        (ABOUT, "zone = 'Mars'", 2, "zone", "'Mars' is no time zone; write its IANA name"),
        (ABOUT, "zone = 'Europe'", 2, "zone", "'Europe' is no time zone"),
        (ABOUT, "zone = '../UTC'", 2, "zone", "is no time zone"),
        (ABOUT, "slot_s = 0", 2, "slot_s", "0 cannot be used; give 0.1 to 3600"),
        (ABOUT, "slot_s = nan", 2, "slot_s", "nan cannot be used"),
        (ABOUT, "slot_s = '15'", 2, "slot_s", "'15' is not a"),
        (ABOUT, "time_step_s = 4000", 2, "time_step_s", "4000 cannot be used; give 1 to 3600"),
        (ABOUT, "time_marks = 'end'", 2, "time_marks", "needs slot_s"),
        (ABOUT, "time_marks = 'mid'", 2, "time_marks", "'mid' is none of start, end"),
        (ABOUT, "decimal = ';'", 2, "decimal", "';' is none of"),
        (ABOUT, "empty = '-'", 2, "empty", "'-' is not a list"),
        (ABOUT, "empty = [5]", 2, "empty", "it is a list of texts, each in quotes"),
        (ABOUT, "skip = ['a', '(']", 2, "skip", "'(' is no pattern: missing )"),
        (ABOUT, "keep = ['Own']", 2, "keep", "'Own' is no name for `more`"),
        (ABOUT, "keep = ['snr_db']", 2, "keep", "'snr_db' is no name for `more`"),
        (ABOUT, "keep = ['rule']", 2, "keep", "'rule' is no name for `more`"),
        (ABOUT, "values = 5", 2, "values", "5 is not a table"),
        ("dial_hz = 7", "dail_hz = 7", 6, "constants.dail_hz", "is no known name; did you mean dial_hz"),
        ("dial_hz = 7041500", "dial_khz = 'x'", 6, "constants.dial_khz", "'x' is no number that can be used"),
        ("dial_hz = 7041500", "dial_khz = inf", 6, "constants.dial_khz", "'inf' is no number that can be used"),
        ("dial_hz = 7041500", "dial_mhz = nan", 6, "constants.dial_mhz", "'nan' is no number that can be used"),
        ('"hut"', "'hut'\npower_w = 0", 6, "constants.power_w", "'0' is no number that can be used"),
        ('"hut"', '"h\\tut"', 5, "constants.receiver", "has a character that no value can hold"),
        ('"hut"', "true", 5, "constants.receiver", "True is not a text"),
        ('"hut"', "'hut'\nlocator = 'JN58'", 6, "constants.locator", "receiver's own locator is called `place`"),
        ('"hut"', "'hut'\ntext = 'x'", 6, "constants.text", "it belongs to a line"),
        ('receiver = "hut"', "", 4, "constants", "no receiver for lines 'remark': add receiver ="),
        ("dial_hz = 7041500", "", 4, "constants", "no dial for lines 'heard': add dial_hz ="),
        ('"note"', '"noted"', 9, "line.kind", "'noted' is none of heard, setup, watch"),
        ('kind = "note"\n', "", 8, "line", "it needs the key `kind`"),
        ('"remark"', '"My Rule"', 10, "line.name", "a rule's name has small letters"),
        ('"remark"', '"header"', 10, "line.name", "not header"),
        ('"remark"', '"no-rule"', 10, "line.name", "not header, no-rule"),
        ('"remark"', '"heard"', 14, "line.kind", "there are two rules called 'heard'; give this one a name"),
        ("note (?P", "note ((?P", 11, "line.pattern", "is no pattern: missing ): note (("),
        ("note (?P", "note(?= )(?P", 11, "line.pattern", "RE2 syntax: no look-around, no back-references"),
        ("(?P<time>.*)", "(?P<time>.*)\\\\1", 11, "line.pattern", "invalid escape sequence"),
        ("(?P<time>.*)", "(?P<t>.*)", 11, "line.pattern", "'t' is no known name; did you mean"),
        ("(?P<time>.*)", "", 11, "line.pattern", "a line of the kind `note` needs a piece `time`"),
        (SEPARATED, "", 14, "line.kind", "it needs one of pattern, separator, fixed, json; it has none"),
        (COLUMNS, "json = { time = 't' }", 14, "line.kind", "it has separator and json"),
        ('separator = ","', "separator = ', '", 15, "line.separator", "', ': one character, or 'space'"),
        ('separator = ","', "separator = ' '", 15, "line.separator", "cannot separate columns; write 'space'"),
        ('separator = ","', 'separator = "\\r"', 15, "line.separator", "cannot separate columns"),
        ('separator = ","', "separator = ','\nseperator = ';'", 16, "line.seperator", "did you mean `separator`?"),
        (COLUMNS, "columns = 'time'", 16, "line.columns", "'time' is not a list"),
        (COLUMNS, "columns = ['', '...']", 16, "line.columns", "name the columns in order"),
        (COLUMNS, "columns = ['time', 'snr']", 16, "line.columns", "'snr' is no known name; did you mean snr_db?"),
        (COLUMNS, "columns = ['time', 'Sender']", 16, "line.columns", "small letters, digits and _"),
        (COLUMNS, "columns = ['time', 'text', 'text']", 16, "line.columns", "'text' stands twice"),
        (COLUMNS, "columns = ['sender']", 16, "line.columns", "needs a piece `time`"),
        (COLUMNS, "columns = ['time', 'date']", 16, "line.columns", "say how it is written, like date_form ="),
        (COLUMNS, "header = true\ncolumns = ['time']", 17, "line.columns", "is not a table"),
        (COLUMNS, "header = true\ncolumns = {}", 17, "line.columns", "with header = true it is a table, like"),
        (COLUMNS, "header = true\ncolumns = { time = 'x', text = 'x' }", 17, "line.columns", "one column two names"),
        (SEPARATED, "separator = 'space'\nheader = true", 16, "line.header", "columns have to be named"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%Q'", 17, "line.time_form", "%Q is no directive; there are %Y"),
        (COLUMNS, f"{COLUMNS}\ntime_form = 'H:M'", 17, "line.time_form", "it names no part of a time"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%H%'", 17, "line.time_form", "a % at its end"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%I:%M'", 17, "line.time_form", "%I, the hour of twelve, and %p"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%M:%S'", 17, "line.time_form", "it has minutes or seconds and no hour"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%Y %H'", 17, "line.time_form", "a part of a date and no day"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%d %H'", 17, "line.time_form", "it has a day and no month"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%j %H'", 17, "line.time_form", "needs a year"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%H:%M%z'", 17, "line.time_form", "needs a date with its year"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%H %H'", 17, "line.time_form", "%H stands twice"),
        (COLUMNS, f"{COLUMNS}\ntime_form = '%Y-%m-%d'", 17, "line.time_form", "it has no hour"),
        (COLUMNS, f"{COLUMNS}\ndate_form = '%d.%m.'", 17, "line.date_form", "one without a year goes into time_form"),
        (COLUMNS, f"{COLUMNS}\ndate_form = '%Y-%m-%d %z'", 17, "line.date_form", "%z"),
        (COLUMNS, f"{COLUMNS}\ndate_form = '%H'", 17, "line.date_form", "a date needs its day and year"),
        (COLUMNS, f"{COLUMNS}\nwhere = {{ mode = 'x' }}", 17, "line.where", "no piece of this line; it has time"),
        (COLUMNS, f"{COLUMNS}\nwhere = {{ text = '(' }}", 17, "line.where", "'(' is no pattern"),
        (COLUMNS, f"{COLUMNS}\nwhere = {{ text = 5 }}", 17, "line.where", "a table of texts, each in quotes"),
        (COLUMNS, f"{COLUMNS}\ncarry = ['mode']", 17, "line.carry", "'mode' is no piece of this line; it has time"),
        (COLUMNS, f"{COLUMNS}\ncarry = ['time']", 17, "line.carry", "a time holds for its own line only"),
        (COLUMNS, f"{COLUMNS}\nconstants = {{ mod = 'x' }}", 17, "line.constants.mod", "did you mean mode?"),
        (COLUMNS, f"{COLUMNS}\n[line.constants]\nmod = 'x'", 17, "line.constants.mod", "did you mean mode?"),
        (SEPARATED, "fixed = { time = [0, 5] }", 15, "line.fixed", "time: first and last character, from 1"),
        (SEPARATED, "fixed = { time = [5, 4] }", 15, "line.fixed", "not [5, 4]"),
        (SEPARATED, "fixed = {}", 15, "line.fixed", "it names no piece"),
        (SEPARATED, "json = { time = 'a..b' }", 15, "line.json", "'a..b': names with dots between them"),
        (SEPARATED, "json = {}", 15, "line.json", "it names no piece"),
        ("", "[mesage]\n", 17, "mesage", "there is no such key; there are about"),
        ("", "[message]\npattern = []\n", 18, "message.pattern", "did you mean `patterns`?"),
        ("", "[message]\npatterns = ['x {locator}']\n", 18, "message.patterns", "has no {sender}"),
        ("", "[message]\npatterns = ['{sender} {sender}']\n", 18, "message.patterns", "names a part twice"),
        ("", "[message]\npatterns = ['{sendr}']\n", 18, "message.patterns", "is no part of a message; there are:"),
        ("", "[name]\npatern = 'x'\n", 18, "name.patern", "did you mean `pattern`?"),
        ("", "[name]\npattern = 'x'\n", 18, "name.pattern", "needs a pattern with a named group"),
        ("", "[name]\npattern = '('\n", 18, "name.pattern", "is no pattern"),
        ("", "[name]\npattern = '(?P<time>x)'\n", 18, "name.pattern", "it belongs to a line"),
        ("", "[name]\npattern = '(?P<date>x)'\n", 17, "name", "needs date_form"),
        ("", "[name]\npattern = '(?P<date>x)'\ndate_form = '%Q'\n", 19, "name.date_form", "%Q is no directive"),
        ("", "[values.mode]\nx = 'y'\n", 17, "values.mode", "no line has a piece 'mode'"),
        ("", "[values.text]\nx = 5\n", 17, "values.text", "it is a table of texts"),
        ("", "[values.text]\nx = \"a\\nb\"\n", 17, "values.text", "has a character that no value can hold"),
        ("", "[[line]]\nkind = 'carry'\npattern = 'x'\n", 19, "line.pattern", "needs a piece that has a name"),
        ("", "[[line]]\nkind = 'watch'\npattern = '(?P<time>.*)'\n", 4, "constants", "lines 'watch' need on_s"),
        ("", "[[line]]\nkind = 'noise'\npattern = '(?P<time>.*)'\n", 4, "constants", "need a piece `dbfs`"),
        ("", "[[line]]\nkind = 'setup'\npattern = '(?P<time>.*)'\n", 4, "constants", "need a place and an antenna"),
    ],
)  # fmt: skip
def test_each_error_names_its_line_and_key(old: str, new: str, line: int, key: str, says: str) -> None:
    message = told(old, new)
    assert message.startswith(f"r.toml, line {line}: `{key}`: ")
    assert says in message


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "r.toml: it needs the key `recipe`"),
        ("recipe = 1\n", "r.toml: it has no [[line]], so no line could be read"),
        (
            GOOD.replace('"note"', "note"),
            "r.toml: it is no TOML (Invalid value (at line 9, column 8)); is it the recipe?",
        ),
        ("# logtool layout 1\n2026-03-01T18:00:00Z\theard\n", "(at line 2, column 14)); is it the recipe?"),
        ("recipe = 1\n[[line]]\nkind = 'skip'\npattern = 'x'\n", "no [[line]] makes a record"),
    ],
)
def test_texts_that_are_no_recipes(text: str, says: str) -> None:
    with pytest.raises(RecipeError, match=re.escape(says)):
        recipe_of(text, "r.toml")


def test_files_that_are_no_recipes(tmp_path: Path) -> None:
    with pytest.raises(FileError, match=r"the recipe cannot be read .*; check the path"):
        load_recipe(tmp_path / "none.toml")
    with pytest.raises(FileError, match="the recipe cannot be read"):
        load_recipe(tmp_path)
    (tmp_path / "big").write_bytes(b"#" * (1 << 20) + b"\n")
    with pytest.raises(FileError, match="it is over 1024 KiB, so it is no recipe; did you name the log"):
        load_recipe(tmp_path / "big")


def test_a_recipe_with_a_mark_and_other_endings(tmp_path: Path) -> None:
    (tmp_path / "r.toml").write_bytes(b"\xef\xbb\xbf" + GOOD.replace("\n", "\r\n").encode())
    assert len(load_recipe(tmp_path / "r.toml").rules) == 2
