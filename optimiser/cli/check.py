"""`setpoise check`: whether a case can be solved as it stands, without solving it."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from typing import TYPE_CHECKING, cast

import typer

from optimiser.cli.options import AsJson, CaseName, Sets

if TYPE_CHECKING:
    from optimiser.records.log import RunLog


def check(
    case: CaseName,
    as_json: AsJson = False,
    sets: Sets = None,
) -> None:
    """Read a case without solving it.

    Checks units, ranges and limits, and counts what is free.

    Ends with 0 where the case can be solved, 1 where no point can hold all of it, 2 where the input is wrong.
    """
    raise typer.Exit(run(case, as_json=as_json, sets=sets or ()))


def run(case: str, *, as_json: bool, sets: Sequence[str]) -> int:
    """Check the case and return the exit code."""
    from optimiser.cli.guard import Guard, keep_log
    from optimiser.records.log import RunLog

    log = RunLog()
    guard = Guard(as_json, log, lambda: keep_log(log))
    return guard.run(lambda: _check(case, log, as_json=as_json, sets=sets))


def _check(name: str, log: RunLog, *, as_json: bool, sets: Sequence[str]) -> int:
    from optimiser.cli.codes import check_code
    from optimiser.cli.output import look_of, say, spare_stdout
    from optimiser.inputs import read_case
    from optimiser.records.log import recording
    from optimiser.report.as_json import as_json as to_json
    from optimiser.report.checks import check_page
    from optimiser.report.layout import CheckResult

    with recording(log), spare_stdout():
        case = read_case(name, sets)
        from optimiser.findings.checking import check_case

        found = check_case(case)
    page = check_page(cast(CheckResult, found), title=case.title, look=look_of(sys.stdout))
    say(to_json(found) if as_json else page)
    return check_code(found["status"])
