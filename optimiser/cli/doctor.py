"""`setpoise doctor`: whether this machine can solve, and what is missing if not."""

from __future__ import annotations

import platform
import sys
from typing import TYPE_CHECKING, Any, cast

import typer

from optimiser import __version__
from optimiser.cli.options import AsJson

if TYPE_CHECKING:
    from optimiser.records.log import RunLog


def doctor(as_json: AsJson = False) -> None:
    """Say whether this machine can solve cases.

    Solves a tiny problem with each solver, and says versions and what is missing.

    Ends with 0 where cases can be solved, else 1.
    """
    raise typer.Exit(run(as_json=as_json))


def run(*, as_json: bool) -> int:
    """Examine the machine and return the exit code."""
    from optimiser.cli.guard import Guard, keep_log
    from optimiser.records.log import RunLog

    log = RunLog()
    return Guard(as_json, log, lambda: keep_log(log)).run(lambda: _doctor(log, as_json=as_json))


def _doctor(log: RunLog, *, as_json: bool) -> int:
    from optimiser.cli.codes import ANSWERED, FAILED
    from optimiser.cli.output import look_of, say, spare_stdout
    from optimiser.records.log import recording
    from optimiser.report.as_json import as_json as to_json
    from optimiser.report.backends import backends_page, can_solve
    from optimiser.report.layout import BackendRow

    with recording(log), spare_stdout():
        from optimiser.solve.doctor import examine

        rows = cast(list[BackendRow], examine())
    able = can_solve(rows)
    found: dict[str, Any] = {"status": "ready" if able else "failed", **_machine(), "backends": rows}
    page = backends_page(rows, machine=", ".join(_machine().values()), look=look_of(sys.stdout))
    say(to_json(found) if as_json else page)
    return ANSWERED if able else FAILED


def _machine() -> dict[str, str]:
    """Versions of what surrounds the solvers."""
    return {
        "setpoise": f"setpoise {__version__}",
        "python": f"Python {platform.python_version()}",
        "system": f"{platform.system()} {platform.machine()}",
    }
