"""`logtool simulate`."""

from __future__ import annotations

from pathlib import Path

import click

from logtool.errors import FileError, UsageError

_LOGS = (".log", ".txt", ".tsv")  # what a folder of logs is read for


@click.command("simulate")
@click.argument("scenario", required=False, metavar="SCENARIO")
@click.option("-o", "--out", metavar="FOLDER", help="Folder to write the logs and truth.json to.")
@click.option(
    "--seed",
    type=click.IntRange(0),
    default=1,
    show_default=True,
    metavar="N",
    help="Another seed, another log.",
)
@click.option(
    "--print-scenario", is_flag=True, help="Print a scenario of all defaults with its comments, and end."
)
def command(scenario: str | None, out: str | None, seed: int, *, print_scenario: bool) -> None:
    """A log with a known truth, from a scenario (TOML) and a seed, to prove with what is read from logs.

    Writes one log a night, or one a receiver, and the truth as truth.json: the true difference between antennas or
    receivers in dB, what was sent and heard, and every planted fault with its times and size. docs/simulate.md has
    all keys. The same scenario and seed give the same bytes.
    """
    from logtool.records.writer import whole_bytes
    from logtool.simulate import default_scenario, load_scenario, simulate
    from logtool.simulate.making import TRUTH_FILE

    if print_scenario:
        if scenario is not None:
            raise UsageError("--print-scenario takes no scenario; leave one of them out")
        click.echo(default_scenario(), nl=False)
        return
    if scenario is None:
        raise UsageError("name a scenario; --print-scenario shows one to start from")
    if out is None:
        raise UsageError("name a folder for the logs with -o FOLDER")
    made = simulate(load_scenario(scenario), seed)
    folder = _folder(Path(out), {*made.files})
    for name, whole in made.files.items():
        with whole_bytes(folder / name) as file:
            file.write(whole)
    with whole_bytes(folder / TRUTH_FILE) as file:
        file.write(made.truth_bytes())
    for ledger in made.truth["files"]:
        click.echo(f"{folder / ledger['file']}: {ledger['lines']} lines, {ledger['set_aside']} of them bad")
    heard = ", ".join(f"{one['heard']} heard by {one['receiver']}" for one in made.truth["receivers"])
    click.echo(f"{folder / TRUTH_FILE}: {made.truth['sent']} transmissions sent, {heard}")


def _folder(folder: Path, names: set[str]) -> Path:
    """Return the folder, made if there is none, where no other log lies beside the new ones."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
        others = sorted(
            path.name for path in folder.iterdir() if path.suffix in _LOGS and path.name not in names
        )
    except OSError as error:
        raise FileError(f"{folder}: cannot be written to ({error.strerror}); name another folder") from error
    if others:
        raise UsageError(
            f"{folder} holds another log, {others[0]}, which would be read with these; name a new folder"
        )
    return folder
