"""The command `logtool`: its subcommands, imported only when called, and how it ends."""

from __future__ import annotations

import os
import sys
from importlib import import_module

import click

from logtool import __version__
from logtool.errors import LogtoolError

# Each command's module in this room and the line that `--help` shows for it.
COMMANDS = {
    "check": "What became of each line, and what is odd in the logs.",
    "reach": "How far it hears, hour by hour.",
    "senders": "Who was heard, from where, how often and how strong.",
    "sectors": "What was heard from each of sixteen directions.",
    "nights": "Nights side by side, from solar noon to solar noon.",
    "between": "Conversations between two other stations.",
    "lines": "The lines behind a figure.",
    "map": "One offline map as an HTML file.",
    "simulate": "A log with a known truth, from a scenario and a seed.",
    "convert": "Records as the layout, or in open formats for other programs.",
}
EXIT_INTERRUPTED = 130
EXIT_FAILED = 3


class _InterruptedError(Exception):
    """Ctrl-C during a command."""


class _PipeClosedError(Exception):
    """Whoever read the output has had enough."""


class _Commands(click.Group):
    """A group that imports a command when it is called and lists all without importing any."""

    def invoke(self, ctx: click.Context) -> object:
        """Run a command, its interrupts and broken pipes kept from click, which would end them its way."""
        try:
            status = super().invoke(ctx)
            sys.stdout.flush()
        except KeyboardInterrupt as error:
            raise _InterruptedError from error
        except BrokenPipeError as error:
            raise _PipeClosedError from error
        except Exception as error:
            if _is_interrupt(error):
                raise _InterruptedError from error
            raise
        return status

    def list_commands(self, ctx: click.Context) -> list[str]:
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"logtool.cli.{cmd_name}").command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))


def _is_interrupt(error: Exception) -> bool:
    """Return whether an error is how the engine tells of Ctrl-C during a query."""
    return type(error).__name__ == "InterruptException" or str(error).startswith("Query interrupted")


@click.group(cls=_Commands, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__, prog_name="logtool")
def cli() -> None:
    """Turn the text logs of an unattended HF receiver into figures that can be defended.

    Every command but simulate takes files (plain, .gz, .zst), folders, or - for standard input.
    """


def main() -> None:
    """Run the command line and exit with the status that the docs state; no traceback is shown."""
    sys.stdout = sys.stdout or open(os.devnull, "w")  # noqa: SIM115 - closed by the caller: nothing is to be shown
    sys.stderr = sys.stderr or open(os.devnull, "w")  # noqa: SIM115
    try:
        status = cli.main(prog_name="logtool", standalone_mode=False)
    except click.ClickException as error:
        error.show()
        status = error.exit_code
    except (click.Abort, KeyboardInterrupt, _InterruptedError):
        click.echo("logtool: interrupted; nothing half written is left", err=True)
        status = EXIT_INTERRUPTED
    except (BrokenPipeError, _PipeClosedError):
        # Nothing may complain either when what is left is flushed at the end.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        status = 0
    except LogtoolError as error:
        click.echo(f"logtool: {error}", err=True)
        status = error.exit_status
    except Exception as error:
        if os.environ.get("LOGTOOL_DEBUG"):
            raise
        click.echo(f"logtool: {_in_plain_words(error)}", err=True)
        status = EXIT_FAILED
    sys.exit(status if isinstance(status, int) else 0)


def _in_plain_words(error: Exception) -> str:
    text = str(error).splitlines()[0] if str(error) else type(error).__name__
    kind = type(error).__name__
    if kind == "OutOfMemoryException" or isinstance(error, MemoryError):
        return f"not enough memory or temporary space ({text}); give fewer logs at a time, or set TMPDIR"
    if isinstance(error, OSError):
        return f"{text}; check the disk and the rights"
    return f"this should not have happened: {kind}: {text}; LOGTOOL_DEBUG=1 shows where, please report it"
