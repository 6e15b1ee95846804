"""Refrigeration work against Carnot's limit and the bands that designers remember."""

from __future__ import annotations

from typing import Any

import pytest

from optimiser.engineering.refrigeration import refrigeration_work


def test_worked_value() -> None:
    assert refrigeration_work(1e6, 253.15, 308.0, 0.5) == pytest.approx(433.34e3, rel=1e-5)


def test_bands_of_ammonia_machines(figures: dict[str, Any]) -> None:
    # Rule of thumb from memory: duty over work at a second-law efficiency of 0.60.
    rules = figures["refrigeration"]
    for celsius, low, high in rules["bands"]:
        assert low <= 1.0 / refrigeration_work(1.0, celsius + 273.15, rules["condensing"], 0.60) <= high


def test_colder_costs_more() -> None:
    works = [refrigeration_work(1.0, 280.0 - 5.0 * k, 308.0, 0.5) for k in range(10)]
    assert works == sorted(works)
