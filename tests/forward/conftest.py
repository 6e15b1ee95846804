"""The shipped ammonia case, prepared once for each test process, and its loop closed to round-off."""

from __future__ import annotations

import pytest
from forward.plant import Plant, chemistry_of, closed, middle, prepared

from optimiser.chemistry.reactions import Chemistry
from optimiser.forward.properties import Properties


@pytest.fixture(scope="session")
def chemistry() -> Chemistry:
    return chemistry_of()


@pytest.fixture(scope="session")
def properties(chemistry) -> Properties:
    return Properties(chemistry.mixture)


@pytest.fixture(scope="session")
def plant() -> Plant:
    section = prepared()
    setpoints = middle(section.case)
    return Plant(section, setpoints, closed(section, setpoints))
