"""One case from file to defended answer: solve, audit, and say what the optimum means."""

from __future__ import annotations

import sys
import time
from dataclasses import replace
from typing import Any

from optimiser import __version__
from optimiser.findings import result
from optimiser.findings.audits import audit_point
from optimiser.findings.beds import bed_rows
from optimiser.findings.refit import factor_steps, refit
from optimiser.findings.run import Workshop, best_attempt, open_workshop, optimise
from optimiser.findings.thorough import neighbours
from optimiser.findings.units import Units
from optimiser.findings.warnings import broken_limits, gather_warnings
from optimiser.inputs.case import Case
from optimiser.inputs.paths import result_paths
from optimiser.progress import Progress
from optimiser.solve.backends import default_backend
from optimiser.solve.doctor import versions
from optimiser.solve.ending import Ending, Stopped
from optimiser.solve.starts import Attempt

GRADES = {
    "audited": "audited optimum",
    "calculated": "calculated and audited; nothing was free to choose",
    "failed audit": "converged, but the audit disagrees",
    "loose": "close to an optimum, but short of the tolerance",
    "best": "best point so far, no optimum",
    "interrupted": "best of the starts that had finished",
    "none": "no point",
}


def solve_case(
    case: Case,
    *,
    starts: int = 8,
    seed: int = 0,
    thorough: bool = False,
    progress: Progress | None = None,
    backend: str | None = None,
    processes: int | None = None,
) -> dict[str, Any]:
    """Find the optimum of a case and what it means.

    Returns:
        The result as plain data (layout: `report.layout`); `status` is optimal, calculated, conflict or failed.
    """
    progress = progress or Progress()
    clock = time.perf_counter()
    clash = empty_ranges(case)
    if clash:
        return _without_point(case, "conflict", clash, seed, starts)
    progress.stage("building the section")
    workshop = open_workshop(case)
    progress.stage("solving")
    attempts = optimise(
        workshop, starts=starts, seed=seed, backend=backend, progress=progress, processes=processes
    )
    best = best_attempt(attempts)
    answer = _without_point(case, "failed", "no start could be computed", seed, starts)
    if best is not None and best.ending is not None:
        ending = refit(workshop, best.ending)
        attempts = [replace(a, ending=ending) if a is best else a for a in attempts]
        answer |= _with_point(workshop, ending, thorough=thorough, progress=progress)
    answer["starts"] = [_start_row(workshop, attempt) for attempt in attempts]
    answer["warnings"] = answer.get("warnings", []) + _spread_warning(attempts, best)
    if factor_steps(workshop):
        answer["warnings"].append(
            "only the best start was solved again with the fitted beds at rest; the others show what came before"
        )
    if workshop.interrupted:
        answer |= {"status": "failed", "stopped": Stopped.INTERRUPTED.value, "grade": GRADES["interrupted"]}
        ended = sum(a.ending is not None and a.ending.converged for a in attempts)
        answer["warnings"].insert(0, f"the run was interrupted: {ended} of {len(attempts)} starts were finished")
    workshop.timing["total"] = time.perf_counter() - clock
    answer["timing"] = workshop.timing
    answer["provenance"] = _provenance(case, seed, starts, backend or default_backend(), workshop)
    return answer


def _with_point(workshop: Workshop, ending: Ending, *, thorough: bool, progress: Progress) -> dict[str, Any]:
    """Everything that is said of a point, with its audit."""
    case, section, nlp = workshop.case, workshop.section, workshop.nlp
    nlp.load(ending.x)
    units = Units(case)
    values = result.quantities(section)
    progress.stage("audit")
    clock = time.perf_counter()
    audit = audit_point(workshop, values, units)
    workshop.timing["audit"] = time.perf_counter() - clock
    if thorough and ending.converged:
        progress.stage("moving each decision")
        audit = neighbours(workshop, ending, audit, units, progress)
        nlp.load(ending.x)
    dimensions = result_paths(case)
    status, grade = _judge(section.frame.decisions.values(), ending, audit["passed"])
    sense = nlp.sense
    return {
        "status": status,
        "stopped": ending.stopped.value,
        "grade": GRADES[grade],
        "objective": result.objective(case, units, sense * ending.objective / nlp.row_factor[-1]),
        "decisions": result.decisions(section, units),
        "binding": result.binding_rows(section, nlp, ending, units, values) if ending.converged else [],
        "streams": result.streams(section, units),
        "beds": bed_rows(workshop, units, values),
        "costs": result.costs(section, units, values),
        "recycle_ratio": units.show("loop.recycle_ratio", "ratio", values["loop.recycle_ratio"]),
        "product": result.product(section, nlp, ending, units, values),
        "quantities": {path: units.show(path, dimensions[path], value) for path, value in values.items()},
        "audit": audit,
        "warnings": [*broken_limits(workshop, values, units), *gather_warnings(workshop, values)],
    }


def _judge(decisions: Any, ending: Ending, passed: bool) -> tuple[str, str]:
    """Status and grade: an optimum is converged and audited, nothing else is."""
    if ending.stopped is Stopped.ACCEPTABLE:
        return "failed", "loose"
    if not ending.converged:
        return ("conflict" if ending.stopped is Stopped.INFEASIBLE else "failed"), "best"
    if not passed:
        return "failed", "failed audit"
    if all(setting.held for _, setting in decisions):
        return "calculated", "calculated"
    return "optimal", "audited"


def _without_point(case: Case, status: str, stopped: str, seed: int, starts: int) -> dict[str, Any]:
    """A result that has no point to show."""
    return {
        "status": status,
        "stopped": stopped,
        "grade": GRADES["none"],
        "warnings": [],
        "starts": [],
        "timing": {},
        "provenance": _provenance(case, seed, starts, default_backend(), None),
    }


def empty_ranges(case: Case) -> str:
    """A limit that leaves nothing of a decision's range: well formed, but impossible."""
    settings = case.settings()
    for path, limit in case.limits.items():
        setting = settings.get(path)
        if setting is None:
            continue
        if limit.low is not None and limit.low > setting.high:
            return f"the limit limits.{path} asks for more than the range of {path} allows"
        if limit.high is not None and limit.high < setting.low:
            return f"the limit limits.{path} asks for less than the range of {path} allows"
    return ""


def _start_row(workshop: Workshop, attempt: Attempt) -> dict[str, Any]:
    """How one start ended."""
    ending = attempt.ending
    row: dict[str, Any] = {
        "objective": None,
        "status": "no start",
        "iterations": 0,
        "seconds": attempt.seconds,
    }
    if ending is None:
        return row | {"reason": attempt.reason}
    nlp, units = workshop.nlp, Units(workshop.case)
    value = nlp.sense * ending.objective / nlp.row_factor[-1]
    goal = result.objective(workshop.case, units, value)
    return row | {
        "objective": goal["value"],
        "status": ending.stopped.name.lower(),
        "iterations": ending.iterations,
    }


def _spread_warning(attempts: list[Attempt], best: Attempt | None) -> list[str]:
    """Say when starts ended in different optima."""
    ended = [a.ending.objective for a in attempts if a.ending is not None and a.ending.converged]
    if best is None or best.ending is None or not ended:
        return []
    top = best.ending.objective
    apart = [value for value in ended if abs(value - top) > 1e-6 * abs(top)]
    if not apart:
        return []
    worst = max(abs(value - top) / abs(top) for value in apart)
    return [
        f"{len(apart)} of {len(ended)} converged starts ended in another local optimum, up to {worst:.2%} worse; "
        "the best is shown"
    ]


def _provenance(
    case: Case, seed: int, starts: int, backend: str, workshop: Workshop | None
) -> dict[str, Any]:
    """What the numbers rest on."""
    python = ".".join(str(part) for part in sys.version_info[:3])
    return {
        "setpoise": __version__,
        "python": python,
        "packages": versions(),
        "case": {"file": case.path.name if case.path else "", "sha256": case.sha256},
        "model": {
            "file": workshop.model.path.name if workshop and workshop.model.path else case.model,
            "sha256": workshop.model.sha256 if workshop else None,
        },
        "seed": seed,
        "starts": starts,
        "backend": backend,
    }
