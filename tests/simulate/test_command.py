"""`logtool simulate` from the shell."""

from __future__ import annotations

import json
from pathlib import Path

from logtool.simulate import default_scenario
from tests.cli.calling import call

WRONG_USAGE, UNREAD = 2, 3
SCENARIO = '[nights]\nnumber = 1\n[[receiver]]\nbad_per_thousand = 20\n[files]\nsplit = "receiver"\n'


def scenario(folder: Path, text: str = SCENARIO) -> Path:
    path = folder / "my.toml"
    path.write_text(text, encoding="utf-8")
    return path


def test_writes_logs_and_truth(tmp_path: Path) -> None:
    out = tmp_path / "new" / "logs"
    done = call("simulate", scenario(tmp_path), "-o", out, "--seed", "5")
    assert done.returncode == 0, done.stderr
    assert sorted(path.name for path in out.iterdir()) == ["hut.log", "truth.json"]
    truth = json.loads((out / "truth.json").read_text(encoding="ascii"))
    assert truth["seed"] == 5
    lines = (out / "hut.log").read_bytes().count(b"\n")
    assert f"hut.log: {lines} lines, {len(truth['bad_lines'])} of them bad" in done.stdout
    assert f"{truth['sent']} transmissions sent, {truth['receivers'][0]['heard']} heard by hut" in done.stdout
    read = json.loads(call("check", out, "--json").stdout)
    assert read["inputs"][0]["set_aside"] == len(truth["bad_lines"]) > 10
    before = (out / "hut.log").read_bytes()
    assert call("simulate", scenario(tmp_path), "-o", out, "--seed", "5").returncode == 0
    assert (out / "hut.log").read_bytes() == before


def test_prints_a_scenario() -> None:
    done = call("simulate", "--print-scenario")
    assert (done.returncode, done.stdout) == (0, default_scenario())


def test_wrong_usage(tmp_path: Path) -> None:
    path = scenario(tmp_path)
    for words, told in (
        ((), "name a scenario"),
        ((path,), "-o FOLDER"),
        ((path, "--print-scenario"), "takes no scenario"),
        ((path, "-o", tmp_path / "x", "--seed", "-1"), "--seed"),
        ((scenario(tmp_path, "[air]\nmod = 1"), "-o", tmp_path / "x"), "my.toml, line 2: `air.mod`"),
    ):
        done = call("simulate", *words)
        assert done.returncode == WRONG_USAGE
        assert told in done.stderr
        assert "Traceback" not in done.stderr
    assert not (tmp_path / "x").exists()


def test_another_log_in_the_folder_is_not_mixed_with(tmp_path: Path) -> None:
    (tmp_path / "old.log").write_text("# mine\n", encoding="utf-8")
    done = call("simulate", scenario(tmp_path), "-o", tmp_path)
    assert done.returncode == WRONG_USAGE
    assert "holds another log, old.log" in done.stderr
    assert not (tmp_path / "hut.log").exists()


def test_unread_and_unwritten(tmp_path: Path) -> None:
    missing = call("simulate", tmp_path / "no.toml", "-o", tmp_path / "x")
    assert missing.returncode == UNREAD
    assert "the scenario cannot be read" in missing.stderr
    path = scenario(tmp_path)
    blocked = call("simulate", path, "-o", path)
    assert blocked.returncode == UNREAD
    assert "name another folder" in blocked.stderr
