"""The command line: commands imported only when called, and the one place where errors become text."""

from __future__ import annotations

import os
import signal
import sys
from collections.abc import Sequence
from contextlib import suppress
from importlib import import_module
from typing import TYPE_CHECKING

import click

from fibremr import __version__

if TYPE_CHECKING:
    from fibremr.errors import Fault

# name -> module and one line for the list of commands, kept here so that the list imports nothing
COMMANDS = {
    "trace": ("fibremr.cli.trace", "How a section bends and how far it can turn."),
    "justify": ("fibremr.cli.justify", "May plastic hinges be assumed in this beam?"),
    "read": ("fibremr.cli.read", "The case as understood, value by value; analyses nothing."),
    "new": ("fibremr.cli.new", "Write a commented case to start from."),
    "profiles": ("fibremr.cli.tables", "The profiles of the shipped tables."),
    "steels": ("fibremr.cli.tables", "The steel grades of the shipped table."),
    "patterns": ("fibremr.cli.tables", "The residual-stress patterns, with source and validity."),
    "methods": ("fibremr.cli.tables", "The methods that limit rotation, with source and validity."),
}


class Lazy(click.Group):
    """A group whose commands are imported when they are called."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Names in the order of the table."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """The command of that name, imported now."""
        if cmd_name not in COMMANDS:
            return None
        command = getattr(import_module(COMMANDS[cmd_name][0]), cmd_name)
        assert isinstance(command, click.Command)
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """The list of commands, without importing them."""
        with formatter.section("Commands"):
            formatter.write_dl([(name, text) for name, (_, text) in COMMANDS.items()])

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """As click does, with the closest name when there is no such command."""
        if args and args[0] not in COMMANDS and not args[0].startswith("-"):
            from fibremr.errors import closest

            hint = closest(args[0], list(COMMANDS))
            text = f"no command {args[0]!r}; commands: {', '.join(COMMANDS)}"
            raise click.UsageError(f"{text}; {hint}" if hint else text, ctx)
        return super().resolve_command(ctx, args)


@click.group(cls=Lazy, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(__version__, prog_name="fibremr")
@click.pass_context
def root(ctx: click.Context) -> None:
    """How a steel section bends, how far it can turn, and whether a plastic hinge is justified.

    Results are an aid for qualified engineers; they replace neither the code in force nor their judgement.
    """
    if "NO_COLOR" in os.environ:
        ctx.color = False


def main() -> None:
    """Run the command line and leave with its exit status."""
    signal.signal(signal.SIGTERM, lambda *_: sys.exit(143))  # so that what was begun is cleared away
    status = run(sys.argv[1:])
    try:
        if sys.stdout is not None:
            sys.stdout.flush()
    except OSError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), 1)  # nothing more can be said
    sys.exit(status)


def run(arguments: list[str]) -> int:
    """Run with arguments; return the exit status. The one place where errors become text."""
    from fibremr.errors import Fault, FibremrError

    faults: Sequence[Fault]
    try:
        status = root.main(arguments, prog_name="fibremr", standalone_mode=False)
        if sys.stdout is not None:
            sys.stdout.flush()
        return status if isinstance(status, int) else 0
    except FibremrError as error:
        faults, status = error.faults(), error.exit_status
    except click.exceptions.Exit as error:
        return error.exit_code
    except click.exceptions.NoArgsIsHelpError as error:
        click.echo(error.format_message())
        return 0
    except click.UsageError as error:
        hint = f"`{error.ctx.command_path} --help` shows what there is" if error.ctx else ""
        faults, status = [Fault("usage", error.format_message().rstrip("."), suggestion=hint)], 2
    except click.ClickException as error:
        faults, status = [Fault("usage", error.format_message())], 2
    except (KeyboardInterrupt, click.Abort):
        click.echo("interrupted; nothing incomplete was kept", err=True)
        return 130
    except BrokenPipeError:
        return 0  # the reader of a pipe has left
    except OSError as error:
        faults, status = [Fault("output", f"cannot be written: {error.strerror or error}")], 2
    except SystemExit as error:
        # when the reader of a pipe has left, click wraps the streams and ends with 1: no error here
        left = type(sys.stdout).__name__.endswith("PacifyFlushWrapper")
        return 0 if left else error.code if isinstance(error.code, int) else 0
    with suppress(OSError):
        _report(faults, as_json="--json" in arguments)
    return status


def _report(faults: Sequence[Fault], *, as_json: bool) -> None:
    if as_json:
        import json

        record = {"errors": [fault.record() for fault in faults]}
        click.echo(json.dumps(record, ensure_ascii=False, indent=2))
    else:
        for fault in faults:
            click.echo(str(fault), err=True)
