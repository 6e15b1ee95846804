"""Whether the optimum beats its neighbours: each free decision moved both ways with all the others solved again."""

from __future__ import annotations

from typing import Any

import numpy as np

from optimiser.findings.run import Workshop
from optimiser.findings.units import Units
from optimiser.progress import Progress
from optimiser.solve.backends import solve
from optimiser.solve.ending import Ending

STEP = 0.01
"""How far a decision is moved, as a part of its range."""
TOLERANCE = 1e-6
"""A neighbour may be better by this part of the objective: the solver's own tolerance, no more."""


def neighbours(
    workshop: Workshop, ending: Ending, audit: dict[str, Any], units: Units, progress: Progress
) -> dict[str, Any]:
    """The audit with one line more for each free decision."""
    lines = list(audit["lines"])
    for path, (variable, setting) in workshop.section.frame.decisions.items():
        if setting.held:
            continue
        progress.line(path)
        gain = best_gain(workshop, ending, variable, setting)
        lines.append(
            {
                "what": f"moving {path} either way, the rest solved again",
                "model": 0.0,
                "audit": gain,
                "difference": gain,
                "allowed": TOLERANCE,
                "unit": "-",
                "passed": gain <= TOLERANCE,
            }
        )
    return audit | {"lines": lines, "passed": all(line["passed"] for line in lines)}


def best_gain(workshop: Workshop, ending: Ending, variable: Any, setting: Any) -> float:
    """Largest relative gain of the objective when a decision is held a step away on either side; <= 0 at an optimum."""
    nlp = workshop.nlp
    k = next(i for i, v in enumerate(nlp.variables) if v is variable)
    step = STEP * (setting.high - setting.low) * nlp.factor[k]
    gains = [-np.inf]
    for target in (ending.x[k] - step, ending.x[k] + step):
        if not nlp.low[k] <= target <= nlp.high[k]:
            continue
        moved = held_at(workshop, ending, k, target)
        if moved.converged:
            gains.append((ending.objective - moved.objective) / abs(ending.objective))
    top = max(gains)
    return float(top) if np.isfinite(top) else 0.0


def held_at(workshop: Workshop, ending: Ending, k: int, target: float) -> Ending:
    """The optimum with one scaled variable held, from the present one."""
    nlp = workshop.nlp
    low, high = nlp.low[k], nlp.high[k]
    nlp.low[k] = nlp.high[k] = target
    try:
        start = ending.x.copy()
        start[k] = target
        return solve(nlp, start)
    finally:
        nlp.low[k], nlp.high[k] = low, high
