"""Collocation of the beds at the optimum against a stiff integration written apart from it (sources: `stiff_bed`).

The bounds are those that the project sets itself: 0.05 K and 0.005 mol-% of product at the outlet, 1 K inside.
"""

from __future__ import annotations

import numpy as np
import pytest
from conftest import solve_for_test
from forward.stiff_bed import StiffBed

from optimiser.findings.result import number
from optimiser.section.collocation import POINTS, RADAU_DERIVATIVE, RADAU_POINTS, element_edges, point_positions

BEDS = ("bed1", "bed2", "bed3")
OUTLET_KELVIN, OUTLET_SHARE, INSIDE_KELVIN = 0.05, 0.005e-2, 1.0


def errors(solved, name):
    """Outlet error in K and mole fraction of ammonia, and the largest error of any point, K."""
    section, case = solved.workshop.section, solved.workshop.case
    bed = next(b for b in section.reactor.beds if b.name == name)
    step = next(s for s in case.reactor if s.name == name)
    names = section.frame.mixture.names
    flows = np.array([number(n) for n in bed.inlet.flows])
    state = (number(bed.inlet.temperature), number(bed.inlet.pressure), number(bed.volume), number(bed.diameter))
    track = StiffBed(names).integrate(flows, *state, step.activity.si, point_positions(step.elements))
    found = np.array([number(p.temperature) for p in bed.points])
    k, outlet = names.index("NH3"), np.array([number(n) for n in bed.outlet.flows])
    share = outlet[k] / outlet.sum() - track.outlet[k] / track.outlet.sum()
    return abs(found[-1] - track.temperature[-1]), abs(share), np.abs(found - track.temperature).max()


@pytest.mark.parametrize("name", BEDS)
def test_points_of_each_bed_lie_on_the_integrated_profile(solved, name):
    outlet, share, inside = errors(solved, name)
    assert outlet < OUTLET_KELVIN
    assert share < OUTLET_SHARE
    assert inside < INSIDE_KELVIN


def test_three_elements_would_not_do(solved):
    """So the check above can fail: a steep first bed misses both bounds at its outlet with three elements."""
    three = solve_for_test("reactor.bed1.elements=3", starts=1)
    fine, coarse = errors(solved, "bed1"), errors(three, "bed1")
    assert coarse[0] > OUTLET_KELVIN > 3.0 * fine[0]
    assert coarse[1] > OUTLET_SHARE > 3.0 * fine[1]
    assert coarse[2] > 3.0 * fine[2]


def test_radau_formula_is_exact_for_cubics_and_has_its_order():
    """Three Radau points: slopes exact to degree 3, quadrature to degree 4 (Hairer & Wanner, Solving ODEs II, IV.5)."""
    nodes = np.array([0.0, *RADAU_POINTS])
    slopes = np.array(RADAU_DERIVATIVE)
    for degree in range(4):
        wanted = degree * np.array(RADAU_POINTS) ** max(degree - 1, 0)
        assert slopes @ nodes**degree == pytest.approx(wanted, abs=1e-12)
    assert slopes @ nodes**4 != pytest.approx(4 * np.array(RADAU_POINTS) ** 3, abs=1e-3)
    # Printed tableau: b = (16 - sqrt 6)/36, (16 + sqrt 6)/36, 1/9, which are the last row of the inverse.
    weights = np.linalg.inv(slopes[:, 1:])[-1]
    assert weights == pytest.approx([(16 - 6**0.5) / 36, (16 + 6**0.5) / 36, 1 / 9], abs=1e-12)


@pytest.mark.parametrize("elements", [1, 3, 9])
def test_positions_rise_to_the_outlet(elements):
    places, edges = point_positions(elements), element_edges(elements)
    assert len(places) == POINTS * elements
    assert places == sorted(places)
    assert places[-1] == pytest.approx(1.0, abs=1e-15)
    assert [places[POINTS * k + 2] for k in range(elements)] == pytest.approx(edges[1:])
