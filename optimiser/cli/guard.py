"""Between a command and its user: errors in the input told with their place, all others in one line."""

from __future__ import annotations

import sys
import tempfile
import traceback
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from optimiser.cli.codes import FAILED, WRONG_INPUT
from optimiser.cli.output import say
from optimiser.records.folders import OutputProblem
from optimiser.records.log import RunLog
from optimiser.report.as_json import as_json
from optimiser.report.plain import plain
from optimiser.report.problems import Problem, problem_rows, problems_text


@dataclass(frozen=True)
class OptionProblem:
    """Something wrong with an option of the command line."""

    path: str
    read: str
    wanted: str
    file: str | None = "command line"
    line: int | None = None
    column: int | None = None
    nearest: str | None = None


@dataclass(frozen=True)
class Guard:
    """What a command needs to end well whatever happens.

    Attributes:
        json: whether the caller reads JSON.
        log: what has been said so far.
        rescue: keeps the log on disk after an unexpected error and returns its path.
        discard: clears away what was begun for a run that did not take place.
    """

    json: bool
    log: RunLog
    rescue: Callable[[], Path]
    discard: Callable[[], None] = lambda: None

    def run(self, work: Callable[[], int]) -> int:
        """Do the work and return its exit code, or the code of what went wrong."""
        try:
            return work()
        except KeyboardInterrupt:
            self.discard()
            return self._fail("interrupted before a point was found")
        except Exception as problem:  # This is the last place where an error can be told in words.
            wrong = _wrong_input(problem)
            return self._tell(wrong) if wrong is not None else self._unexpected(problem)

    def _tell(self, problems: Sequence[Problem]) -> int:
        self.discard()
        if self.json:
            say(as_json({"status": "invalid", "errors": problem_rows(problems)}))
        else:
            say(problems_text(problems), sys.stderr)
        return WRONG_INPUT

    def _unexpected(self, problem: Exception) -> int:
        self.log.note("".join(traceback.format_exception(problem)))
        what = f"{type(problem).__name__}: {plain(problem)}"[:300]
        return self._fail(f"an unexpected error ended the run ({what})", log=shown(self.rescue()))

    def _fail(self, stopped: str, **more: str) -> int:
        if self.json:
            say(as_json({"status": "failed", "stopped": stopped, **more}))
        else:
            where = "".join(f"; the {name} is in {place}" for name, place in more.items())
            say(f"setpoise: {stopped}{where}\n", sys.stderr)
        return FAILED


def _wrong_input(problem: Exception) -> Sequence[Problem] | None:
    """The errors in what the user wrote, None if it is none of those."""
    if isinstance(problem, OutputProblem):
        return [OptionProblem("--out", str(problem.path), problem.wanted)]
    # An input error can only come from this room once it is loaded; loading it here could fail a second time.
    inputs: Any = sys.modules.get("optimiser.inputs")
    if inputs is not None and isinstance(problem, inputs.InputError):
        return list(problem.errors)
    return None


def keep_log(log: RunLog) -> Path:
    """Write the log among the system's temporary files, where a run has no folder of its own."""
    path = Path(tempfile.mkdtemp(prefix="setpoise-")) / "run.log"
    path.write_text(log.text, encoding="utf-8")
    return path


def shown(path: Path) -> str:
    """The path as short as it can be said from the current folder."""
    try:
        return str(path.absolute().relative_to(Path.cwd()))
    except (ValueError, OSError):
        return str(path)
