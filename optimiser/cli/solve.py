"""`setpoise solve`: from one case to its optimum, told and kept."""

from __future__ import annotations

import sys
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any, cast

import typer

from optimiser.cli.options import AsJson, CaseName, Sets

if TYPE_CHECKING:
    from optimiser.cli.saving import Saving
    from optimiser.cli.waiting import PlainWaiting
    from optimiser.records.log import RunLog


@dataclass(frozen=True)
class Request:
    """What the command line asks for; the options say what each means."""

    case: str
    json: bool
    out: Path | None
    sets: tuple[str, ...]
    starts: int
    seed: int
    thorough: bool
    quiet: bool
    save: bool


def solve(
    case: CaseName,
    as_json: AsJson = False,
    out: Annotated[
        Path | None, typer.Option("--out", metavar="DIR", help="Keep the run here instead of below runs/.")
    ] = None,
    sets: Sets = None,
    starts: Annotated[
        int, typer.Option("--starts", metavar="N", min=1, help="Points to solve from; the best counts.")
    ] = 8,
    seed: Annotated[
        int, typer.Option("--seed", metavar="N", min=0, help="Another seed draws other starts.")
    ] = 0,
    thorough: Annotated[
        bool, typer.Option("--thorough", help="Audit more: move each free decision and solve the rest again.")
    ] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Say nothing while the solve goes on.")] = False,
    no_save: Annotated[bool, typer.Option("--no-save", help="Keep nothing on disk.")] = False,
) -> None:
    """Find the settings that make most of the objective.

    Says where each decision ends, which limits bind, and what relaxing them is worth.

    Ends with 0 where an optimum was found and its audit passed, 1 without one, 2 where the input is wrong.
    """
    if out is not None and no_save:
        raise typer.BadParameter("a run that is not saved has no folder", param_hint="--out")
    chosen = tuple(sets or ())
    request = Request(case, as_json, out, chosen, starts, seed, thorough, quiet, save=not no_save)
    raise typer.Exit(run(request))


def run(request: Request) -> int:
    """Do what was asked for and return the exit code."""
    from optimiser.cli.guard import Guard
    from optimiser.cli.saving import Saving
    from optimiser.cli.waiting import waiting
    from optimiser.records.log import RunLog

    listener = waiting(quiet=request.quiet)
    log = RunLog(listener)
    saving = Saving(log)
    guard = Guard(request.json, log, saving.rescue, saving.discard)
    return guard.run(lambda: _solve(request, log, saving, listener))


def _solve(request: Request, log: RunLog, saving: Saving, listener: PlainWaiting) -> int:
    from optimiser.cli.codes import solve_code
    from optimiser.cli.output import say, spare_stdout
    from optimiser.records.log import recording

    try:
        with recording(log), spare_stdout():
            title, result = _work(request, log, saving)
    finally:
        listener.end()
    kept = saving.finish(result, title, command=sys.argv, sets=request.sets)
    say(_answer(request, result, title))
    if kept and not request.quiet:
        say(f"{kept}\n", sys.stderr)
    return solve_code(result)


def _work(request: Request, log: RunLog, saving: Saving) -> tuple[str, dict[str, Any]]:
    """Title of the case and its result."""
    from optimiser.inputs import read_case

    log.stage("reading the case")
    case = read_case(request.case, request.sets)
    if request.save:
        saving.begin(case, request.out)
    log.stage("loading the solver")
    from optimiser.findings.answer import solve_case

    result = solve_case(
        case, starts=request.starts, seed=request.seed, thorough=request.thorough, progress=log
    )
    return case.title, result


def _answer(request: Request, result: dict[str, Any], title: str) -> str:
    """What goes to standard output."""
    from optimiser.cli.output import look_of
    from optimiser.report.as_json import as_json
    from optimiser.report.layout import Result
    from optimiser.report.terminal import result_page

    if request.json:
        return as_json(result)
    return result_page(cast(Result, result), title=title, look=look_of(sys.stdout))
