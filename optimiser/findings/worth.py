"""Binding limits and what relaxing each is worth, from the multipliers of the optimum."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from optimiser.section.build import SectionModel
from optimiser.section.frame import Edge
from optimiser.solve.ending import Ending
from optimiser.solve.nlp import Nlp

# A limit binds when the scaled distance of its variable from it is below this and its multiplier is above.
TOUCHING = 1e-5
PULLING = 1e-7


@dataclass(frozen=True)
class Binding:
    """A limit that holds the optimum back.

    Attributes:
        edge: the limit as the user set it.
        worth: improvement of the objective for each SI unit by which the limit is relaxed, >= 0 but for round-off.
    """

    edge: Edge
    worth: float


def bindings(section: SectionModel, nlp: Nlp, ending: Ending) -> list[Binding]:
    """All binding limits.

    A limit that stands on several variables (each point of a bed) is one binding, worth the sum over them.
    """
    index = {id(v): k for k, v in enumerate(nlp.variables)}
    worths: dict[str, tuple[Edge, float]] = {}
    for edge in section.frame.edges:
        k = index.get(id(edge.variable))
        if k is None or not _rules(edge):
            continue
        bound, multiplier = (
            (nlp.low[k], ending.bound_low[k]) if edge.side == "low" else (nlp.high[k], ending.bound_high[k])
        )
        if abs(ending.x[k] - bound) > TOUCHING * max(1.0, abs(bound)) or multiplier < PULLING:
            continue
        worth = float(multiplier * nlp.factor[k] / nlp.row_factor[-1])
        before = worths[edge.path][1] if edge.path in worths else 0.0
        worths[edge.path] = (edge, before + worth)
    return [Binding(edge, worth) for edge, worth in worths.values()]


def _rules(edge: Edge) -> bool:
    """Whether this edge, and not a tighter one on the same side, is the variable's bound."""
    bound = edge.variable.lb if edge.side == "low" else edge.variable.ub
    return bound is not None and bool(np.isclose(bound, edge.value, rtol=1e-12, atol=0.0))


def marginal(section: SectionModel, nlp: Nlp, ending: Ending, path: str) -> float | None:
    """Change of the minimised objective for each SI unit by which a held quantity is raised; None if it is not held.

    At the optimum d(objective)/d(value) is minus the multiplier of "quantity minus value equals zero".
    """
    constraint: Any = section.frame.holds.get(path)
    if constraint is None:
        return None
    row = next(k for k, c in enumerate(nlp.constraints) if c is constraint)
    return float(-ending.multipliers[row] * nlp.row_factor[row] / nlp.row_factor[-1])
