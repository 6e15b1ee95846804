"""How a solve ended: why the solver stopped, and the point it stopped at."""

from __future__ import annotations

import enum
from dataclasses import dataclass

from optimiser.solve.shapes import Floats


class Stopped(enum.Enum):
    """Why the solver stopped, in the words that a user reads."""

    CONVERGED = "the solver met its tolerance"
    ACCEPTABLE = "the solver met only its looser, acceptable tolerance"
    INFEASIBLE = "the solver found no point that holds all equations and limits near here"
    ITERATIONS = "the solver reached its largest number of iterations"
    TIME = "the solver reached its time limit"
    SMALL_STEP = "the solver's steps became too small to go on"
    RESTORATION = "the solver could not restore feasibility"
    NOT_A_NUMBER = "an equation gave no number at the point tried"
    INTERRUPTED = "the run was interrupted"
    OTHER = "the solver stopped for another reason"


# Ipopt's return codes (ApplicationReturnStatus), the same for both backends.
_CODES = {
    0: Stopped.CONVERGED,
    1: Stopped.ACCEPTABLE,
    2: Stopped.INFEASIBLE,
    3: Stopped.SMALL_STEP,
    5: Stopped.INTERRUPTED,
    6: Stopped.CONVERGED,
    -1: Stopped.ITERATIONS,
    -2: Stopped.RESTORATION,
    -3: Stopped.SMALL_STEP,
    -4: Stopped.TIME,
    -13: Stopped.NOT_A_NUMBER,
}


def stopped_from_code(code: int) -> Stopped:
    """Meaning of an Ipopt return code."""
    return _CODES.get(code, Stopped.OTHER)


@dataclass(frozen=True)
class Ending:
    """The last point of a solve, in scaled numbers.

    Multipliers follow L = f + multipliers @ g + (bound_high - bound_low) @ x with bound_low, bound_high >= 0.
    """

    stopped: Stopped
    x: Floats
    objective: float
    multipliers: Floats
    bound_low: Floats
    bound_high: Floats
    iterations: int
    violation: float

    @property
    def converged(self) -> bool:
        """Whether the solver met its full tolerance."""
        return self.stopped is Stopped.CONVERGED
