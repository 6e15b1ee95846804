"""The command `setpoise`: gathers the commands, and tells usage errors the way each caller wants them."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from typing import Annotated, Any

import typer
from typer.main import get_command

from optimiser import __version__
from optimiser.cli.check import check
from optimiser.cli.codes import FAILED, WRONG_INPUT
from optimiser.cli.doctor import doctor
from optimiser.cli.solve import solve

app = typer.Typer(
    name="setpoise",
    add_completion=False,
    no_args_is_help=True,
    # Plain help loads in half the time, and reads the same in a log.
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    context_settings={"help_option_names": ["-h", "--help"]},
)
app.command()(solve)
app.command()(check)
app.command()(doctor)


def _version(wanted: bool) -> None:
    if wanted:
        typer.echo(f"setpoise {__version__}")
        raise typer.Exit


@app.callback()
def setpoise(
    version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Say the version and end.")
    ] = False,
) -> None:
    """Operating conditions of a catalytic synthesis section that make most product per unit cost."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command.

    Args:
        arguments: what follows the program's name; by default what the process was started with.

    Returns:
        0 where the answer was found, 1 where the run ended without one, 2 where the input is wrong.
    """
    words = list(sys.argv[1:] if arguments is None else arguments)
    try:
        return get_command(app).main(args=words, prog_name="setpoise", standalone_mode=False) or 0
    except typer.TyperException as problem:
        return _usage(problem, as_json="--json" in words)
    except typer.Abort:
        return FAILED


def _usage(problem: Any, *, as_json: bool) -> int:
    """Say what is wrong with the command line; a bare `setpoise` has its help for a message."""
    from optimiser.cli.output import say
    from optimiser.report.as_json import as_json as to_json
    from optimiser.report.plain import plain
    from optimiser.report.problems import FIELDS

    message = problem.format_message()
    if as_json:
        row = dict.fromkeys(FIELDS) | {"file": "command line", "wanted": plain(message)}
        say(to_json({"status": "invalid", "errors": [row]}))
        return WRONG_INPUT
    context = getattr(problem, "ctx", None)
    asks_for_help = type(problem).__name__ == "NoArgsIsHelpError"
    usage = "" if context is None or asks_for_help else f"{context.get_usage()}\n"
    say(f"{usage}{message}\n", sys.stderr)
    return WRONG_INPUT
