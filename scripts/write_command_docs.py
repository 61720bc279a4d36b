"""Write `docs/commands.md` from each command's `--help` and its JSON: `python scripts/write_command_docs.py`.

The keys are those that the commands give for the sample logs; what they mean stands here.
"""

from __future__ import annotations

import json
from functools import cache
from pathlib import Path
from typing import Any

import click
from click.testing import CliRunner

from logtool.cli.main import COMMANDS, cli

ROOT = Path(__file__).parent.parent
PAGE = ROOT / "docs" / "commands.md"
HELP_WIDTH = 100
# What each command is run with for its keys; `lines` for one sender only, since it gives a row a line.
SAMPLE = str(ROOT / "sample_logs")
ARGUMENTS = {"lines": [SAMPLE, "--sender", "Q7XS"]}

HEAD = """# Commands

Written by `scripts/write_command_docs.py` from the commands themselves; a test compares. What the figures
mean in detail is in [conventions](conventions.md), how they are worked out in [methods](methods.md).

Every command but `simulate` takes files (plain, `.gz`, `.zst`), folders (all files in them, deeper ones too, that
end in `.log`, `.txt` or `.tsv`, or in these with `.gz` or `.zst`), or `-` for standard input.
"""
STATUSES = """## Exit statuses

| status | when |
|---|---|
| 0 | done; also where a filter leaves no rows, and where the output's reader had enough (a broken pipe) |
| 1 | the inputs hold no record; or `check --strict` and a line was set aside. There is output nonetheless |
| 2 | wrong usage: an option, a key, a locator or a time that cannot be used |
| 3 | a file or folder cannot be read or written, or was refused. The other inputs are read and printed |
| 130 | interrupted; no half written file is left |

Figures go to standard output, everything else to standard error.
"""
FRAME = """## JSON

`--json` gives one object with these keys. Times are RFC 3339 in UTC, missing values `null`, numbers rounded
to three decimals, degrees to four. `--csv` gives the rows alone (RFC 4180), missing values empty.
"""
FRAME_KEYS = {
    "logtool": "version of the program",
    "layout": "version of the log layout that it reads",
    "command": "the command",
    "options": "all options, defaults too",
    "inputs": "a ledger for each file that was read, see below",
    "rows": "the rows",
    "summary": "of `reach`: the keys of a row, over all",
    "findings": "of `check`: what is odd beside the lines set aside",
    "notes": "only where there are any: files refused or broken off, filters that name something unknown",
}
LEDGER_KEYS = {
    "file": "path as given or found; `-` is standard input",
    "digest": "`sha256:` of the bytes as stored",
    "bytes": "as stored, packed where the file is",
    "lines": "= blank + comments + records + repeated + set_aside",
    "blank": "lines of only spaces and TABs",
    "comments": "lines that begin with `#`",
    "records": "lines counted",
    "repeated": "lines equal to an earlier record's",
    "set_aside": "lines that break the layout",
    "reasons": "how many were set aside for which reason",
    "rules": "only with `--recipe`: how many lines each rule of it held for; with the blank ones they are all",
}
STATION = {
    "receiver": "receiver's name; `NAME@LOCATOR` where it stood at places over 10 km apart",
    "antenna": "antenna in force; null before the first setup",
    "band": "band of the dial",
}
LISTENING = {
    "listening_min": "min; time listened",
    "listening": "`recorded` by watch lines, `assumed` between near records, or `mixed`",
    "receptions": "messages decoded",
}
REACH = {
    "median_km": "km; half of the located senders are nearer",
    "p90_km": "km; nine in ten located senders are nearer; null under five",
    "farthest_km": "km; to the farthest sender heard again",
    "farthest_sender": "who that is; of several the first by name",
    "squares": "different squares (four characters) among the senders' locators",
    "senders": "different senders",
    "senders_in_30": "senders that 30 minutes of this listening would give; null under 30 minutes",
}
MIXED_SNR = "null where modes or bands mix"
MEANINGS: dict[str, dict[str, str]] = {
    "check": {
        "file": "path",
        "line": "number, from 1",
        "reason": "the first reason that holds, see [the layout](log-layout.md)",
        "shown": "the line, odd bytes as escapes, cut after 200 characters",
    },
    "check findings": {
        "what": "`before-setup`, `no-setup`, `outside-watch`, `gap` or `clock-step`",
        "from": "beginning",
        "to": "end",
        "receiver": "receiver's name",
        "size": "how much, in `unit`",
        "unit": "`receptions`, `min` or `s`",
        "why": "in words",
    },
    "reach": {
        "hour": "beginning of the hour",
        **STATION,
        **LISTENING,
        **REACH,
        "unnamed": "receptions that give no sender",
        "heard_once": "senders that were not heard again",
        "located": "senders with a distance",
        "nearest_km": "km; smallest distance whose uncertainty is at most half of it",
        "farthest_once_km": "km; to the farthest sender that was not heard again",
        "snr_median_db": f"dB in 2500 Hz; median over senders of each sender's median; {MIXED_SNR}",
        "sun_zenith_deg": "degrees; of the sun at the receiver at half past, without refraction",
    },
    "senders": {
        "receiver": STATION["receiver"],
        "band": STATION["band"],
        "sender": "call sign",
        "locator": "sender's locator",
        "borrowed": "true where no locator was given in these hours",
        "distance_km": "km; between the centres of both cells",
        "uncertainty_km": "km; the most that it may be off",
        "bearing_deg": "degrees from true north at the receiver; null where nearer than the uncertainty",
        "receptions": "messages decoded",
        "heard_again": "whether one of them was heard again",
        "first": "first reception",
        "last": "last reception",
        "nights": "nights with a reception",
        "snr_median_db": "dB in 2500 Hz; null where modes mix",
        "snr_best_db": "dB in 2500 Hz; null where modes mix",
    },
    "sectors": {
        **STATION,
        "sector_deg": "degrees; middle of the sector, which reaches 11.25 to either side",
        "receptions": "of senders with a bearing in it",
        "senders": "different senders",
        "median_km": "km; half of these senders are nearer",
        "farthest_km": REACH["farthest_km"],
    },
    "nights": {
        "night": "local mean solar date at the noon it begins on",
        **STATION,
        **LISTENING,
        **REACH,
        "from": "the noon at which it begins, to the second",
        "to": "the next noon",
        "senders_in_30": "mean over its hours of 30 minutes of listening or more",
    },
    "between": {
        "a": "one station, first in the alphabet",
        "b": "the other",
        "band": STATION["band"],
        "first": "first message",
        "last": "last message",
        "from_a": "messages of `a` to `b`",
        "from_b": "messages of `b` to `a`",
        "locator_a": "locator of `a`",
        "locator_b": "locator of `b`",
        "between_km": "km; between the centres of both cells",
    },
    "lines": {
        "file": "path",
        "line": "number, from 1; what follows are the columns of [the layout](log-layout.md)",
    },
}


def help_text(name: str) -> str:
    """Return what `logtool NAME --help` prints on a terminal of `HELP_WIDTH` columns."""
    size = {"terminal_width": HELP_WIDTH, "max_content_width": HELP_WIDTH}
    whole = click.Context(cli, info_name="logtool", **size, **cli.context_settings)
    command = cli.get_command(whole, name)
    assert command is not None
    return command.get_help(click.Context(command, info_name=name, parent=whole, **size))


@cache
def told(name: str) -> dict[str, Any]:
    """Return what a command tells of the sample logs with `--json`."""
    command = cli.get_command(click.Context(cli), name)
    assert command is not None
    result = CliRunner().invoke(command, [*ARGUMENTS.get(name, [SAMPLE]), "--json"])
    if result.exception is not None and not isinstance(result.exception, SystemExit):
        raise result.exception
    whole: dict[str, Any] = json.loads(result.stdout)
    return whole


def key_table(keys: list[str], meanings: dict[str, str]) -> str:
    """Return a Markdown table of keys with their unit and meaning."""
    lines = ["| key | unit; meaning |", "|---|---|"]
    return "\n".join(lines + [f"| `{key}` | {meanings[key]} |" for key in keys])


def page() -> str:
    """Return the whole page."""
    parts = [HEAD, STATUSES, FRAME + "\n" + key_table(list(FRAME_KEYS), FRAME_KEYS) + "\n"]
    parts.append("Each of `inputs` has:\n\n" + key_table(list(LEDGER_KEYS), LEDGER_KEYS) + "\n")
    for name in COMMANDS:
        parts.append(f"## {name}\n\n```text\n{help_text(name)}\n```\n")
        if name not in MEANINGS:
            continue
        whole = told(name)
        keys = list(whole["rows"][0])
        meanings = MEANINGS[name]
        if name == "lines":
            meanings = {key: meanings.get(key, "as in the layout") for key in keys}
        parts.append("Keys of `rows`:\n\n" + key_table(keys, meanings) + "\n")
        if "findings" in whole:
            keys = list(whole["findings"][0])
            parts.append("Keys of `findings`:\n\n" + key_table(keys, MEANINGS[f"{name} findings"]) + "\n")
        if "summary" in whole:
            parts.append(
                "`summary` has the same keys over all, with `from` and `to` (first and last reception\n"
                "counted) before them; `hour`, `sun_zenith_deg` and keys of several values are null.\n"
            )
    return "\n".join(parts)


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
