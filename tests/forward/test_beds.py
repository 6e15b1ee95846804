"""Beds of the forward calculation against a bed written apart from it (`stiff_bed`: sources there)."""

from __future__ import annotations

import numpy as np
import pytest
from forward.stiff_bed import StiffBed, hard_cap

from optimiser.findings.result import number
from optimiser.section.collocation import point_positions

BEDS = ("bed1", "bed2", "bed3")


def inlet_of(solved, name):
    """Flows, temperature, pressure and sizes of a bed of the optimum."""
    record = solved.workshop.section.frame.streams[f"reactor.{name}.in"]
    flows = np.array([number(n) for n in record.vapour])
    sizes = (solved.values[f"reactor.{name}.volume"], solved.values[f"reactor.{name}.diameter"])
    return flows, number(record.temperature), number(record.pressure), sizes


def step_of(solved, name):
    return next(s for s in solved.workshop.case.reactor if s.name == name)


@pytest.mark.parametrize("name", BEDS)
def test_bed_agrees_with_an_independent_stiff_integration(solved, name):
    flows, temperature, pressure, sizes = inlet_of(solved, name)
    step, places = step_of(solved, name), point_positions(4)
    ours = solved.workshop.forward.integrator.integrate(step, flows, temperature, pressure, sizes, places)
    theirs = StiffBed(solved.workshop.forward.mixture.names).integrate(
        flows, temperature, pressure, *sizes, step.activity.si, places
    )
    assert abs(ours.temperature - theirs.temperature).max() < 0.01
    assert ours.flows == pytest.approx(theirs.outlet, rel=1e-5)
    # Of the fall in pressure, not of the pressure, which a wrong friction factor would hardly move.
    assert pressure - ours.pressure == pytest.approx(pressure - theirs.pressure, rel=1e-4)


def test_rounded_caps_of_the_effectiveness_factor_hardly_matter(solved):
    """The corners are rounded for the optimiser's sake; the published factor has sharp ones."""
    flows, temperature, pressure, sizes = inlet_of(solved, "bed1")
    step = step_of(solved, "bed1")
    ours = solved.workshop.forward.integrator.integrate(step, flows, temperature, pressure, sizes)
    sharp = StiffBed(solved.workshop.forward.mixture.names, cap=hard_cap)
    theirs = sharp.integrate(flows, temperature, pressure, *sizes, step.activity.si)
    assert abs(ours.temperature[-1] - theirs.temperature[-1]) < 0.1


def test_enthalpy_stays_that_of_the_inlet(solved):
    """The temperature is a state of its own in our integrator, so the balance is a check and no identity."""
    flows, temperature, pressure, sizes = inlet_of(solved, "bed1")
    profile = solved.workshop.forward.integrator.integrate(step_of(solved, "bed1"), flows, temperature, pressure, sizes)
    mixture = solved.workshop.forward.mixture
    before = mixture.gas(temperature, pressure, flows.tolist()).enthalpy
    after = mixture.gas(profile.temperature[-1], profile.pressure[-1], profile.flows.tolist()).enthalpy
    heat = profile.extents[-1, 0] * solved.workshop.chemistry.reactions[0].enthalpy(700.0)
    assert abs(after - before) < 1e-5 * abs(heat)


def test_a_bed_of_twice_the_catalyst_gets_closer_to_equilibrium_but_never_past_it(solved):
    from optimiser.chemistry.equilibrium import approach_fraction

    flows, temperature, pressure, (volume, diameter) = inlet_of(solved, "bed1")
    chemistry, reached = solved.workshop.chemistry, []
    for size in (0.5, 1.0, 2.0, 20.0):
        sizes = (size * volume, diameter * np.sqrt(size))  # the same length, so the same pressure drop or less
        bed = solved.workshop.forward.integrator.integrate(step_of(solved, "bed1"), flows, temperature, pressure, sizes)
        state = (float(bed.temperature[-1]), float(bed.pressure[-1]))
        reached.append(approach_fraction(chemistry, flows.tolist(), bed.extents[-1].tolist(), *state)[0])
    assert reached == sorted(reached)
    assert 0.2 < reached[0] < 0.95
    assert 0.999 < reached[-1] < 1.0 + 1e-6


def test_a_bed_that_uses_up_its_pressure_is_refused(solved):
    from optimiser.forward.streams import StateProblem

    flows, temperature, pressure, (volume, _) = inlet_of(solved, "bed1")
    with pytest.raises(StateProblem, match="bed1"):
        solved.workshop.forward.integrator.integrate(
            step_of(solved, "bed1"), flows, temperature, pressure, (volume, 0.3)
        )
