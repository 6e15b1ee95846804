"""The optimum of the shipped case: balances, limits, worth against differences, and better than its neighbours."""

from __future__ import annotations

import numpy as np
import pytest

from optimiser.findings.result import number
from optimiser.findings.thorough import best_gain, held_at
from optimiser.findings.worth import bindings
from optimiser.solve.backends import solve


def test_it_converged(solved) -> None:  # type: ignore[no-untyped-def]
    assert solved.ending.converged


def test_equations_and_bounds_hold(solved) -> None:  # type: ignore[no-untyped-def]
    nlp, x = solved.workshop.nlp, solved.ending.x
    _, g = nlp.evaluate(x)
    assert np.max(np.abs(g)) < 1e-7
    assert np.all(x >= nlp.low) and np.all(x <= nlp.high)


def test_kkt_conditions_hold(solved) -> None:  # type: ignore[no-untyped-def]
    nlp, end = solved.workshop.nlp, solved.ending
    pull = np.zeros(nlp.size[0])
    np.add.at(pull, nlp.jacobian_columns, nlp.jacobian(end.x) * end.multipliers[nlp.jacobian_rows])
    stationarity = nlp.gradient(end.x) + pull - end.bound_low + end.bound_high
    assert np.max(np.abs(stationarity)) < 1e-6


def _flow(solved, name: str) -> np.ndarray:  # type: ignore[no-untyped-def]
    record = solved.workshop.section.frame.streams[name]
    vapour = np.array([number(n) for n in record.vapour])
    liquid = np.array([number(n) for n in record.liquid]) if record.liquid is not None else 0.0
    return vapour + liquid


def test_elements_balance_over_the_section(solved) -> None:  # type: ignore[no-untyped-def]
    species = solved.workshop.chemistry.mixture.species
    change = _flow(solved, "makeup") - _flow(solved, "product") - _flow(solved, "purge")
    for element in {e for s in species for e in s.elements}:
        atoms = np.array([s.elements.get(element, 0.0) for s in species])
        assert abs(atoms @ change) < 1e-6 * (atoms @ _flow(solved, "makeup"))


def test_mass_balances_over_the_section(solved) -> None:  # type: ignore[no-untyped-def]
    mass = np.array(solved.workshop.chemistry.mixture.molar_mass)
    fed = mass @ _flow(solved, "makeup")
    assert abs(mass @ (_flow(solved, "product") + _flow(solved, "purge")) - fed) < 1e-6 * fed


def test_neighbours_are_no_better(solved) -> None:  # type: ignore[no-untyped-def]
    decisions = solved.workshop.section.frame.decisions
    for path in ("loop.pressure", "reactor.bed1.inlet_temperature", "loop.purge_fraction"):
        variable, setting = decisions[path]
        assert best_gain(solved.workshop, solved.ending, variable, setting) <= 1e-7, path


def _moved(solved, path: str, shift: float) -> float:  # type: ignore[no-untyped-def]
    """Optimum with a limit relaxed by `shift` scaled units, on every variable that it stands on."""
    nlp, frame = solved.workshop.nlp, solved.workshop.section.frame
    low, high = nlp.low.copy(), nlp.high.copy()
    for edge in frame.edges:
        if edge.path == path:
            k = next(i for i, v in enumerate(nlp.variables) if v is edge.variable)
            if edge.side == "low":
                nlp.low[k] -= shift
            else:
                nlp.high[k] += shift
    try:
        end = solve(nlp, np.clip(solved.ending.x, nlp.low, nlp.high))
    finally:
        nlp.low[:], nlp.high[:] = low, high
    assert end.converged
    return end.objective


def test_worth_equals_solved_differences(solved) -> None:  # type: ignore[no-untyped-def]
    """At every binding limit that is worth something; limits of three kinds at least."""
    nlp = solved.workshop.nlp
    kinds = set()
    for binding in bindings(solved.workshop.section, nlp, solved.ending):
        edge = binding.edge
        k = next(i for i, v in enumerate(nlp.variables) if v is edge.variable)
        scaled = binding.worth * nlp.row_factor[-1] / nlp.factor[k]
        if abs(scaled) < 1e-4:
            continue
        step = 1e-3
        gain = _moved(solved, edge.path, -step) - _moved(solved, edge.path, step)
        assert scaled == pytest.approx(gain / (2 * step), rel=0.01), edge.path
        kinds.add(edge.reported.split(".")[-1])
    assert len(kinds) >= 3, kinds


def test_a_decision_held_where_it_is_changes_nothing(solved) -> None:  # type: ignore[no-untyped-def]
    variable, _ = solved.workshop.section.frame.decisions["loop.pressure"]
    k = next(i for i, v in enumerate(solved.workshop.nlp.variables) if v is variable)
    again = held_at(solved.workshop, solved.ending, k, solved.ending.x[k])
    assert again.objective == pytest.approx(solved.ending.objective, rel=1e-8)
