"""One formula, three kinds of argument: floats, casadi symbols and Pyomo expressions give the same value."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import casadi as ca
import numpy as np
import pyomo.environ as pe
import pytest

from optimiser.engineering import compression, flow, heat, refrigeration, smooth, vessels
from optimiser.engineering.correlations import bare_module, gauge_bar
from optimiser.engineering.costs import CostBasis, capital_recovery, load_equipment, quoted

EQUIPMENT = load_equipment()
BASIS = CostBasis(797.9, 0.92)


def _cost(use: str) -> Callable[[Any, Any, Any], Any]:
    return lambda size, gauge, material: bare_module(EQUIPMENT.for_use(use), size, gauge, material)


FORMULAS: dict[str, tuple[Callable[..., Any], tuple[float, ...]]] = {
    "smooth_max": (lambda a, b: smooth.smooth_max(a, b, 0.1), (2.0, 2.0)),
    "smooth_min": (lambda a, b: smooth.smooth_min(a, b, 0.1), (2.0, 3.0)),
    "proportional_max": (lambda a, b: smooth.proportional_max(a, b, 1e-4), (2.0, 2.0)),
    "proportional_min": (lambda a, b: smooth.proportional_min(a, b, 1e-4), (200.0, 3.0)),
    "ergun_gradient": (flow.ergun_gradient, (5.0, 40.0, 3e-5, 6e-3, 0.4)),
    "packed_bed_reynolds": (flow.packed_bed_reynolds, (5.0, 3e-5, 6e-3, 0.4)),
    "log_mean": (heat.log_mean, (40.0, 15.0)),
    "log_mean at equal ends": (heat.log_mean, (20.0, 20.0)),
    "coefficient_at": (heat.coefficient_at, (400.0, 220e5)),
    "steam_saturation_temperature": (heat.steam_saturation_temperature, (40e5,)),
    "cooling_water_flow": (heat.cooling_water_flow, (1e7, 10.0)),
    "staged_work": (lambda t, r: compression.staged_work(t, r, 1.4, 0.8, 3), (300.0, 8.0)),
    "stage_discharge_temperature": (
        lambda t, r: compression.stage_discharge_temperature(t, r, 1.4, 0.8),
        (300.0, 3.0),
    ),
    "refrigeration_work": (refrigeration.refrigeration_work, (1e6, 250.0, 308.0, 0.5)),
    "wall_thickness": (vessels.wall_thickness, (20e6, 1.0, 120e6, 1.0, 3e-3)),
    "thick_wall": (vessels.thick_wall, (60e6, 1.0, 120e6, 1.0)),
    "shell_mass": (vessels.shell_mass, (2.0, 10.0, 0.1, 7850.0)),
    "separator_diameter": (vessels.separator_diameter, (0.5, 50.0, 600.0, 0.05)),
    "separator_volume": (vessels.separator_volume, (2.0, 3.0)),
    "gauge_bar": (gauge_bar, (2e7,)),
    "exchanger in range": (_cost("exchanger"), (300.0, 150.0, 1.0)),
    "exchanger at the end of its range": (_cost("exchanger"), (1000.0, 5.0, 1.0)),
    "water cooler far above its range": (_cost("water_cooled"), (50000.0, 150.0, 1.8)),
    "compressor below its range": (_cost("compressor"), (1e4, 0.0, 1.0)),
    "drive": (_cost("drive"), (5e6, 0.0, 1.0)),
    "vessel": (_cost("vessel"), (1e5, 0.0, 1.5)),
    "capital of an item": (lambda s, p: BASIS.item(EQUIPMENT.for_use("exchanger"), s, p), (300.0, 150.0)),
    "quoted": (lambda cost, size, base: quoted(cost, size, base, 0.6), (1e6, 3.0, 2.0)),
    "capital_recovery": (lambda interest: capital_recovery(interest, 20.0), (0.08,)),
}


@pytest.mark.parametrize("name", FORMULAS)
def test_casadi_gives_the_float(name: str) -> None:
    formula, point = FORMULAS[name]
    symbols = [ca.SX.sym(f"x{k}") for k in range(len(point))]
    value = ca.Function("f", symbols, [formula(*symbols)])(*point)
    assert float(value) == pytest.approx(formula(*point), rel=1e-13)


@pytest.mark.parametrize("name", FORMULAS)
def test_pyomo_gives_the_float(name: str) -> None:
    formula, point = FORMULAS[name]
    model = pe.ConcreteModel()
    model.x = pe.Var(range(len(point)), initialize=dict(enumerate(point)))
    value = pe.value(formula(*(model.x[k] for k in range(len(point)))))
    assert value == pytest.approx(formula(*point), rel=1e-13)


@pytest.mark.parametrize("name", FORMULAS)
def test_first_and_second_derivatives_are_finite_and_right(name: str) -> None:
    formula, point = FORMULAS[name]
    x = ca.SX.sym("x", len(point))
    hessian, gradient = ca.hessian(formula(*(x[k] for k in range(len(point)))), x)
    second, first = (np.array(v) for v in ca.Function("f", [x], [hessian, gradient])(point))
    assert np.isfinite(second).all()
    for k, at in enumerate(point):
        step = 1e-6 * max(abs(at), 1e-3)
        ends = [formula(*(p + sign * step * (j == k) for j, p in enumerate(point))) for sign in (1.0, -1.0)]
        slope = (ends[0] - ends[1]) / (2.0 * step)
        scale = abs(formula(*point)) / max(abs(at), 1e-3)
        assert first[k, 0] == pytest.approx(slope, rel=1e-5, abs=1e-8 * scale)


def test_a_symbolic_wall_stays_thin() -> None:
    pressure = ca.SX.sym("p")
    wall = ca.Function("f", [pressure], [vessels.wall_thickness(pressure, 1.0, 120e6)])
    assert float(wall(60e6)) == pytest.approx(vessels.thin_wall(60e6, 1.0, 120e6))


def test_log_mean_of_equal_ends_has_the_slope_of_the_arithmetic_mean() -> None:
    ends = ca.SX.sym("d", 2)
    slope = ca.Function("f", [ends], [ca.jacobian(heat.log_mean(ends[0], ends[1]), ends)])
    assert np.array(slope([20.0, 20.0])) == pytest.approx(np.array([[0.5, 0.5]]), rel=1e-12)
