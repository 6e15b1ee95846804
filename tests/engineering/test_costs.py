"""Escalation, quoted prices, capital recovery and the capital of a case."""

from __future__ import annotations

from typing import Any

import pytest

from optimiser.engineering.costs import (
    CostBasis,
    bare_module,
    capital_recovery,
    escalated,
    load_equipment,
    quoted,
)


def test_capital_recovery(figures: dict[str, Any]) -> None:
    # Closed form; standard interest tables agree.
    for interest, life, share in figures["capital_recovery"]["cases"]:
        assert capital_recovery(interest, life) == pytest.approx(share, abs=1e-10)


def test_capital_recovery_pays_back() -> None:
    # A debt of 1 at 8 % that is reduced by the same payment each year is gone after 15 years.
    debt, payment = 1.0, capital_recovery(0.08, 15)
    for _ in range(15):
        debt = debt * 1.08 - payment
    assert debt == pytest.approx(0.0, abs=1e-12)


def test_worked_values() -> None:
    assert escalated(100.0, 797.9, 397.0) == pytest.approx(200.982, abs=1e-3)
    assert quoted(1e6, 2.0, 1.0, 0.6) == pytest.approx(1515716.57, abs=0.01)


def test_capital_of_an_item_is_the_product_of_its_factors() -> None:
    vessel = load_equipment().for_use("vessel")
    basis = CostBasis(index=797.9, exchange_rate=0.92, fees_factor=1.2, location_factor=1.1)
    plain = bare_module(vessel, 5e4, material=1.5)
    expected = plain * 797.9 / 532.9 * 0.92 * 1.2 * 1.1
    assert basis.item(vessel, 5e4, material=1.5) == pytest.approx(expected, rel=1e-12)


def test_a_quote_is_moved_by_size_and_year_alone() -> None:
    basis = CostBasis(index=800.0, exchange_rate=0.5, fees_factor=2.0, location_factor=3.0)
    assert basis.quote(1e6, 2.0, 2.0, 0.6, 800.0) == pytest.approx(1e6)
    assert basis.quote(1e6, 4.0, 2.0, 1.0, 400.0) == pytest.approx(4e6)
