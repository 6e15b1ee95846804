"""Costs put together by hand from the quantities beside them, and quotes in place of correlations."""

from __future__ import annotations

import pytest
from forward.plant import prepared

from optimiser.engineering.costs import CostBasis, load_equipment
from optimiser.engineering.vessels import shell_mass, wall_thickness

YEAR = 8000.0 * 3600.0


def test_operating_costs_are_flows_times_prices(plant) -> None:
    q, prices = plant.walk.quantities, plant.section.case.prices
    power = q["compression.power"] + q["loop.circulator_power"] + q["condensation.chiller.power"]
    assert q["costs.electricity"] == pytest.approx(power * prices.electricity.si * YEAR, rel=1e-9)
    assert q["costs.feed"] == pytest.approx(q["feed.flow"] * 2e-3 * YEAR, rel=1e-9)
    assert q["costs.steam_credit"] == pytest.approx(q["reactor.boiler.duty"] * 0.012 / 3.6e6 * YEAR, rel=1e-9)
    assert q["costs.fuel_credit"] == pytest.approx(q["purge.heating_value"] * 0.018 / 3.6e6 * YEAR, rel=1e-9)
    assert q["costs.catalyst"] == pytest.approx(q["reactor.catalyst_volume"] * 2800.0 * 14.0 / 10.0, rel=1e-9)
    assert q["costs.fixed"] == pytest.approx(4e6)


def test_cooling_water_takes_every_duty_that_water_takes(plant) -> None:
    q = plant.walk.quantities
    heat = sum(q[f"compression.{s}.intercooler_duty"] for s in ("low", "middle", "high"))
    heat += q["condensation.water_cooler.duty"] + q["condensation.chiller.duty"]
    heat += 0.95 * q["condensation.chiller.power"]  # What the refrigerant's condenser gives off on top.
    assert q["costs.cooling_water"] == pytest.approx(heat / (4.18e6 * 10.0) * 0.03 * YEAR, rel=1e-9)


def test_capital_becomes_annual_cost(plant) -> None:
    q = plant.walk.quantities
    growth = 1.08**20
    assert q["costs.capital_recovery"] == pytest.approx(q["capital.total"] * 0.08 * growth / (growth - 1.0), rel=1e-9)
    assert q["costs.maintenance"] == pytest.approx(0.03 * q["capital.total"], rel=1e-9)
    kinds = ("compressors", "circulator", "exchangers", "converter", "separator", "refrigeration")
    assert q["capital.total"] == pytest.approx(sum(q[f"capital.{k}"] for k in kinds))


def test_the_total_is_costs_less_credits(plant) -> None:
    q = plant.walk.quantities
    costs = {p: v for p, v in q.items() if p.startswith("costs.") and p != "costs.total"}
    total = sum(-v if p.endswith("_credit") else v for p, v in costs.items())
    assert q["costs.total"] == pytest.approx(total, rel=1e-12)
    assert q["product.cost"] == pytest.approx(total / (q["product.rate"] * YEAR), rel=1e-12)


def test_the_converter_is_bought_by_the_mass_of_its_shells(plant) -> None:
    q, equipment = plant.walk.quantities, load_equipment()
    basis = CostBasis(equipment.cost_index(2023), 0.92, 1.18, 1.0)
    wall = wall_thickness(1.1 * q["loop.pressure"] - 101325.0, 1.1, 120e6, 1.0, 3e-3)
    cost = 0.0
    for k in (1, 2, 3):
        mass = shell_mass(2.2, 1.25 * q[f"reactor.bed{k}.length"], wall, 7850.0)
        cost += basis.item(equipment.for_use("vessel"), mass, None, 1.5)
    assert q["capital.converter"] == pytest.approx(cost, rel=1e-9)


def test_carbon_is_paid_for_what_burns_and_for_power(plant) -> None:
    section = prepared("prices.carbon=80 EUR/t", "prices.electricity_carbon=0.2 kg/kWh")
    walk = section.walk(plant.setpoints, plant.walk.makeup, plant.walk.recycle)
    q, methane = walk.quantities, walk.streams["purge"].vapour[4]
    power = q["compression.power"] + q["loop.circulator_power"] + q["condensation.chiller.power"]
    emitted = methane * 0.0440095 + power * 0.2 / 3.6e6
    assert q["costs.carbon"] == pytest.approx(emitted * 0.08 * YEAR, rel=1e-6)
    assert q["costs.total"] == pytest.approx(plant.walk.quantities["costs.total"] + q["costs.carbon"], rel=1e-9)
