"""A loop closed tightly by repeated passes: what goes in comes out, and inerts build up as the purge falls.

Balances are taken over the whole section from streams, powers and duties of the pass; formation enthalpies make the
heat of reaction part of them.
"""

from __future__ import annotations

import numpy as np
import pytest

from optimiser.findings.setpoints import starting_setpoints
from optimiser.forward.closing import converge
from optimiser.inputs.case import CoolStep


@pytest.fixture(scope="module")
def setpoints(solved):
    """The first start of the shipped case: a point in the middle, not the optimum."""
    return starting_setpoints(solved.workshop.case, 1, 0)[0]


@pytest.fixture(scope="module")
def closed(solved, setpoints):
    """Flows alone are closed here: the mixing point still has the temperature that starts begin with."""
    return converge(solved.workshop.forward, setpoints, closure=1e-10, rounds=300, tolerance=1e-9)


@pytest.fixture(scope="module")
def walk(solved, setpoints, closed):
    """One more pass, from the recycle as it came back."""
    kept = {path: closed.quantities[path] for path in {"loop.purge_fraction", *setpoints}}
    makeup = {name: closed.quantities[f"feed.streams.{name}.flow"] for name in solved.workshop.case.feed.streams}
    return solved.workshop.forward.walk(kept, makeup, closed.recycle)


def feeds(solved, walk):
    return [walk.streams[f"feed.{name}"] for name in solved.workshop.case.feed.streams]


def test_recycle_comes_back_as_it_went_in(walk):
    assert walk.recycle.vapour == pytest.approx(walk.given.vapour, rel=1e-7)


def test_elements_and_mass_close(solved, walk):
    species = solved.workshop.forward.mixture.species
    fed = sum(s.flows for s in feeds(solved, walk))
    left = walk.streams["product"].flows + walk.streams["purge"].flows
    for element in ("H", "N", "C", "Ar"):
        atoms = np.array([s.elements.get(element, 0.0) for s in species])
        assert atoms @ left == pytest.approx(atoms @ fed, rel=1e-6)
        assert atoms @ fed > 0
    mass = np.array([s.molar_mass for s in species])
    assert mass @ left == pytest.approx(mass @ fed, rel=1e-6)


def test_energy_closes(solved, walk):
    """Feed and shaft work against product, purge and every duty given away, over the heat of reaction."""
    case, mixture, q = solved.workshop.case, solved.workshop.forward.mixture, walk.quantities
    shaft = (q["compression.power"] + q["loop.circulator_power"]) * case.compression.driver_efficiency.si
    taken = sum(q[f"compression.{s.name}.intercooler_duty"] for s in case.compression.stages)
    coolers = [s for s in case.reactor if isinstance(s, CoolStep) and s.sink != "feed"]
    taken += sum(q[f"reactor.{s.name}.duty"] for s in coolers)
    taken += q["condensation.water_cooler.duty"] + q["condensation.chiller.duty"]
    fed = sum(s.enthalpy(mixture) for s in feeds(solved, walk))
    left = walk.streams["product"].enthalpy(mixture) + walk.streams["purge"].enthalpy(mixture)
    heat = walk.streams["product"].liquid[mixture.names.index("NH3")] * 53e3  # J/mol at 700 K, from memory
    assert abs(fed + shaft - taken - left) < 1e-6 * heat
    assert 0.3 * heat < taken < 2.0 * heat


def test_exchangers_that_heat_the_feed_take_what_it_needs(solved, walk):
    mixture = solved.workshop.forward.mixture
    coolers = [s for s in solved.workshop.case.reactor if isinstance(s, CoolStep) and s.sink == "feed"]
    given = sum(walk.quantities[f"reactor.{s.name}.duty"] for s in coolers)
    needed = walk.streams["reactor.bed1.in"].enthalpy(mixture) - walk.streams["converter_feed"].enthalpy(mixture)
    assert given == pytest.approx(needed, rel=1e-6)


def test_product_rate_is_the_one_wanted(solved, setpoints, walk):
    assert walk.quantities["product.rate"] == pytest.approx(setpoints["feed.product_rate"], rel=1e-6)


def test_inerts_build_up_as_the_purge_falls(solved, setpoints):
    shares, yields = [], []
    for purge in (0.08, 0.04, 0.02):
        walk = converge(solved.workshop.forward, setpoints | {"loop.purge_fraction": purge}, closure=1e-6, rounds=100)
        shares.append(walk.quantities["loop.inerts"])
        yields.append(walk.quantities["product.yield"])
        # What comes in of argon leaves with purge and product.
        k = solved.workshop.forward.mixture.names.index("Ar")
        left = walk.streams["purge"].flows[k] + walk.streams["product"].flows[k]
        assert left == pytest.approx(sum(s.flows[k] for s in feeds(solved, walk)), rel=1e-4)
    assert shares == sorted(shares) and shares[-1] > 1.5 * shares[0]
    assert yields == sorted(yields)


def test_one_more_pass_changes_nothing_but_the_temperature_of_the_mixing_point(closed, walk):
    """The short round of the closing and the whole pass have the same fixed point."""
    assert closed.recycle.vapour == pytest.approx(walk.recycle.vapour, rel=1e-6)
    assert walk.recycle.temperature == pytest.approx(walk.given.temperature, abs=1e-6)
    for path in ("product.rate", "loop.inerts", "loop.circulator_power", "condensation.chiller.power"):
        assert closed.quantities[path] == pytest.approx(walk.quantities[path], rel=1e-6)
