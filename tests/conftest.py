"""The shipped ammonia case, solved once for each test process."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pytest
from hypothesis import settings

CASE = "ammonia-loop"

# A busy machine is no failure of what is tested.
settings.register_profile("calm", deadline=None)
settings.load_profile("calm")


@dataclass
class Solved:
    """A workshop with its best ending loaded, and the result as users get it."""

    workshop: Any
    ending: Any
    values: dict[str, float]


def solve_for_test(*sets: str, starts: int = 2, name: str = CASE) -> Solved:
    """Solve a shipped case with changes; the best ending is loaded into the model."""
    from optimiser.findings import result
    from optimiser.findings.run import best_attempt, open_workshop, optimise
    from optimiser.inputs import read_case

    workshop = open_workshop(read_case(name, list(sets)))
    best = best_attempt(optimise(workshop, starts=starts, processes=1))
    assert best is not None and best.ending is not None
    workshop.nlp.load(best.ending.x)
    return Solved(workshop, best.ending, result.quantities(workshop.section))


@pytest.fixture(scope="session")
def solved() -> Solved:
    """The shipped case at its optimum."""
    return solve_for_test(starts=4)
