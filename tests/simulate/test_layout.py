"""What is written holds by the layout: the project's reader takes every good line, and sets aside the planted ones."""

from __future__ import annotations

from collections import Counter
from pathlib import Path

import pytest

from logtool import open_logs
from logtool.records.layout import COLUMN_NAMES
from logtool.simulate.receptions import _DAMAGES
from tests.simulate.scenes import COLUMNS, EVERYTHING, made, put

SPLITS = {"night": 3, "receiver": 2, "one": 1}


@pytest.mark.parametrize("split", SPLITS)
def test_ledger_is_the_planted_one(split: str, tmp_path: Path) -> None:
    simulated = made(f'{EVERYTHING}[files]\nsplit = "{split}"\n')
    assert len(simulated.files) == SPLITS[split]
    with open_logs(put(simulated, tmp_path)) as logs:
        logs.tally()
        read = [one.as_dict() for one in logs.inputs]
        aside = [(Path(name).name, line, reason) for name, line, reason, _ in logs.set_aside()]
    keys = ("lines", "blank", "comments", "records", "repeated", "set_aside")
    told = simulated.truth["files"]
    assert [{key: one[key] for key in keys} for one in read] == [
        {key: one[key] for key in keys} for one in told
    ]
    assert [Path(str(one["file"])).name for one in read] == [one["file"] for one in told]
    planted = simulated.truth["bad_lines"]
    assert sorted(aside) == sorted((one["file"], one["line"], one["reason"]) for one in planted)
    assert len(planted) > 50
    assert sum(one["repeated"] for one in told) > 10  # the clock went back by an hour


def test_every_damage_is_met() -> None:
    simulated = made("[[receiver]]\nbad_per_thousand = 500\n")
    reasons = Counter(one["reason"] for one in simulated.truth["bad_lines"])
    assert set(reasons) == {reason for reason, _, _ in _DAMAGES}
    shares = [n / len(simulated.truth["bad_lines"]) for n in reasons.values()]
    assert max(shares) < 2 / len(_DAMAGES)


def test_default_scenario_has_nothing_odd(tmp_path: Path) -> None:
    with open_logs(put(made(""), tmp_path)) as logs:
        logs.tally()
        assert sum(one.set_aside + one.repeated for one in logs.inputs) == 0
        assert logs.notes == []


def test_columns_are_the_layouts() -> None:
    assert COLUMNS == COLUMN_NAMES
    for whole in made("").files.values():
        head = whole.decode().splitlines()[:2]
        assert head == ["# logtool layout 1", "# " + "\t".join(COLUMN_NAMES)]


def test_false_decodes_stand_where_the_truth_says() -> None:
    simulated = made(EVERYTHING)
    lines = {
        name: whole.decode("utf-8", "surrogateescape").split("\n") for name, whole in simulated.files.items()
    }
    planted = simulated.truth["false_decodes"]
    assert len(planted) > 100
    senders = {one["sender"] for one in simulated.truth["senders"]}
    calls = [one["sender"] for one in planted]
    assert len(set(calls)) == len(calls)
    assert not senders & set(calls)
    assert all(call.startswith("Q") for call in senders | set(calls))
    for one in planted:
        fields = dict(zip(COLUMNS, lines[one["file"]][one["line"] - 1].split("\t"), strict=True))
        assert (fields["sender"], fields["receiver"]) == (one["sender"], one["receiver"])
        assert float(fields["more"].removeprefix("sure=")) <= 0.5
        assert int(fields["snr_db"]) in range(-24, -20)
    for name in ("hut", "shed"):
        told = next(one for one in simulated.truth["receivers"] if one["receiver"] == name)
        assert told["false_decodes"] == sum(one["receiver"] == name for one in planted)
    right = [line for whole in lines.values() for line in whole if "\theard\t" in line and "sure=" in line]
    low = [line for line in right if float(line.split("sure=")[1].split(";")[0]) < 0.5]
    assert len(low) <= len(planted) + len(simulated.truth["bad_lines"])
