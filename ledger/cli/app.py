"""The command `wingledger`: which word runs what, and how every run ends."""

from __future__ import annotations

import difflib
import importlib
import os
import sys
from collections.abc import Callable, Sequence
from pathlib import Path

import click

from ledger import __version__
from ledger.cli.say import print_findings, print_words
from ledger.errors import FindingsError, LedgerError

OpenScreens = Callable[[Path], None]

EXIT_REFUSED = 1
EXIT_WRONG_USE = 2
EXIT_OWN_ERROR = 70
EXIT_INTERRUPTED = 130

COMMANDS: dict[str, str] = {
    "open": "ledger.cli.screens",
    "demo": "ledger.cli.demo",
    "loft": "ledger.cli.loft",
    "start": "ledger.cli.plans",
    "adopt": "ledger.cli.plans",
    "enter": "ledger.cli.enter",
    "withdraw": "ledger.cli.undo",
    "correct": "ledger.cli.undo",
    "weights": "ledger.cli.weights",
    "fuel": "ledger.cli.fuel",
    "trace": "ledger.cli.trace",
    "compare": "ledger.cli.compare",
    "check": "ledger.cli.check",
    "backup": "ledger.cli.backup",
    "restore": "ledger.cli.backup",
    "rescue": "ledger.cli.backup",
}


class Words(click.Group):
    """The group of all commands. Each is imported only when it is asked for."""

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002
        """In the order of the work."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:  # noqa: ARG002
        """The command of that word."""
        module = COMMANDS.get(cmd_name)
        if module is None:
            return None
        command: click.Command = getattr(importlib.import_module(module), f"{cmd_name}_command")
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """The command asked for; a word nearly right is answered with the right one."""
        if args and args[0] not in COMMANDS and not args[0].startswith("-"):
            near = difflib.get_close_matches(args[0], COMMANDS, n=1)
            hint = f"; did you mean {near[0]}?" if near else "; wingledger --help lists them"
            ctx.fail(f"no command {args[0]!r}{hint}")
        return super().resolve_command(ctx, args)


@click.group(
    cls=Words,
    name="wingledger",
    invoke_without_command=True,
    context_settings={"help_option_names": ["-h", "--help"]},
)
@click.version_option(__version__, prog_name="wingledger")
@click.pass_context
def wingledger(ctx: click.Context) -> None:
    """Weight and fuel volume of a composite wing, traced through its build.

    With no command, opens the screens on the book in this folder.
    """
    if ctx.invoked_subcommand is None:
        from ledger.cli.screens import open_here

        open_here(ctx.obj)


def run_command(args: Sequence[str], open_screens: OpenScreens) -> int:
    """Run one command and give its exit code. No traceback leaves here unless WINGLEDGER_DEBUG is set."""
    _never_fail_to_print()
    try:
        code = wingledger.main(
            args=list(args), prog_name="wingledger", standalone_mode=False, obj=open_screens
        )
    except click.ClickException as error:
        return _end_of_wrong_use(error)
    except click.Abort:
        print_words(["stopped before the end"])
        return EXIT_INTERRUPTED
    except FindingsError as error:
        print_findings(error.findings)
        return error.exit_code
    except LedgerError as error:
        print_words(str(error).splitlines())
        return EXIT_REFUSED
    except BrokenPipeError:
        return _end_of_closed_pipe()
    except OSError as error:
        if os.environ.get("WINGLEDGER_DEBUG"):
            raise
        print_words([_os_trouble(error)])
        return EXIT_REFUSED
    except Exception as error:
        if os.environ.get("WINGLEDGER_DEBUG"):
            raise
        print_words([_own_trouble(error)])
        return EXIT_OWN_ERROR
    return code if isinstance(code, int) else 0


def _end_of_wrong_use(error: click.ClickException) -> int:
    context = error.ctx if isinstance(error, click.UsageError) else None
    if context is not None:
        print_words(context.get_usage().splitlines())
    print_words([error.format_message()])
    return EXIT_WRONG_USE


def _os_trouble(error: OSError) -> str:
    place = f"{error.filename}: " if error.filename else ""
    return f"{place}{error.strerror or error}; look whether the path is right and can be read and written"


def _own_trouble(error: Exception) -> str:
    words = " ".join(f"{type(error).__name__}: {error}".split())
    return (
        f"wingledger met an error of its own ({words}); please report it with the command you gave"
        " (WINGLEDGER_DEBUG=1 shows where)"
    )


def _never_fail_to_print() -> None:
    # A terminal that cannot show a letter of a part's title must not end the command half-way.
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="backslashreplace")


def _end_of_closed_pipe() -> int:
    # The interpreter flushes standard output once more on the way out and would complain.
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    return EXIT_REFUSED
