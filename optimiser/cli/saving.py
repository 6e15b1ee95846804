"""What `solve` leaves on disk: the case as read, result, page and log, and what all was made from."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any, cast

from optimiser.cli.guard import keep_log, shown
from optimiser.records.folders import RunFolder, open_named, open_run, reason
from optimiser.records.log import RunLog
from optimiser.records.provenance import provenance_text
from optimiser.report.as_json import as_json
from optimiser.report.layout import Result
from optimiser.report.terminal import result_page

if TYPE_CHECKING:
    from optimiser.inputs import Case

LOG = "run.log"


class Saving:
    """The folder of one run, from before the solve until after it; does nothing where the user wants none."""

    def __init__(self, log: RunLog) -> None:
        self._log = log
        self._folder: RunFolder | None = None

    def begin(self, case: Case, out: Path | None) -> None:
        """Open the folder before any work is done, so that a place that cannot be used is known at once."""
        folder = open_run(case.title) if out is None else open_named(out)
        self._folder = folder
        folder.write("case.yaml", case.resolved_yaml())
        self._log.open(folder.place(LOG))

    def finish(
        self, result: dict[str, Any], title: str, *, command: Sequence[str], sets: Sequence[str]
    ) -> str:
        """Write the result and move the folder to its place.

        Returns:
            A line for the user that says where the run is or why there is none; empty if none was wanted.
        """
        folder = self._folder
        if folder is None:
            return ""
        try:
            # The result first: should its page fail, the numbers are on disk.
            folder.write("result.json", as_json(result))
            folder.write("report.txt", result_page(cast(Result, result), title=title))
            made = result.get("provenance") or {}
            folder.write("provenance.json", provenance_text(made, folder, command=command, sets=sets))
            self._log.close()
            return " ".join(filter(None, [folder.note, f"Saved in {shown(folder.publish())}"]))
        except OSError as problem:
            where = shown(folder.staging)
            return f"The run could not be saved ({reason(problem)}); what there is lies in {where}"
        finally:
            self._log.close()

    def rescue(self) -> Path:
        """Keep the log of a run that an unexpected error ended and return its path."""
        self._log.close()
        if self._folder is None:
            return keep_log(self._log)
        try:
            return self._folder.publish("-failed") / LOG
        except OSError:
            return self._folder.staging / LOG

    def discard(self) -> None:
        """Leave no trace of a run whose input turned out to be wrong."""
        self._log.close()
        if self._folder is not None:
            self._folder.discard()
