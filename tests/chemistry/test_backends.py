"""Every formula gives the same number for a float, an array, a casadi symbol and a Pyomo expression.

No figure from outside: the float is the measure. Sums are taken in the same order everywhere, so 1e-12 of the largest
term is asked for.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import cache
from typing import Any

import casadi
import numpy as np
import pyomo.environ as pyo
import pytest

from optimiser.chemistry.effectiveness import dyson_simon
from optimiser.chemistry.mixture import Phase
from optimiser.chemistry.reactions import Chemistry
from optimiser.inputs.model import read_model

Formula = Callable[..., Any]
GAS = (3.0, 1.0, 0.6, 0.15, 0.25)
LIQUID = (0.02, 0.008, 1.0, 0.003, 0.006)
# Temperature K, pressure Pa, flows in the model's order of species, root, and which equation is asked.
STATES = {
    "gas": (723.0, 180e5, GAS, 1.07, False),
    "cold gas": (300.0, 90e5, GAS, 0.93, False),
    "liquid": (265.0, 150e5, LIQUID, 0.18, True),
}


@cache
def _chemistry(kind: str) -> Chemistry:
    return Chemistry.build(read_model("ammonia"), kind)


def _phase(kind: str, liquid: bool, t: Any, p: Any, z: Any, n: Sequence[Any]) -> Phase:
    return _chemistry(kind).mixture.phase(t, p, list(n), z, liquid=liquid)


def _of_phase(name: str, position: int | None = None) -> Callable[[str, bool], Formula]:
    """A property of a phase, as a function of temperature, pressure, root and flows."""

    def made(kind: str, liquid: bool) -> Formula:
        def formula(t: Any, p: Any, z: Any, *n: Any) -> Any:
            value = getattr(_phase(kind, liquid, t, p, z, n), name)
            return value if position is None else value[position]

        return formula

    return made


def _ln_k(kind: str, liquid: bool) -> Formula:
    return lambda t, p, z, *n: _chemistry(kind).reactions[0].ln_k(t)


def _heat(kind: str, liquid: bool) -> Formula:
    return lambda t, p, z, *n: _chemistry(kind).reactions[0].enthalpy(t)


def _rate(kind: str, liquid: bool) -> Formula:
    return lambda t, p, z, *n: _chemistry(kind).rates(_phase(kind, liquid, t, p, z, n), t, p, 0.8)[0]


def _factor(kind: str, liquid: bool) -> Formula:
    return lambda t, p, z, *n: dyson_simon(t, p, 0.5 * n[2] / (n[1] + 0.5 * n[2]))


FORMULAS: dict[str, Callable[[str, bool], Formula]] = {
    "enthalpy": _of_phase("enthalpy"),
    "entropy_fixed": _of_phase("entropy_fixed"),
    "entropy": _of_phase("entropy"),
    "residual": _of_phase("residual"),
    "volume": _of_phase("volume"),
    "density": _of_phase("density"),
    "ln_phi of H2": _of_phase("ln_phi", 0),
    "ln_phi of NH3": _of_phase("ln_phi", 2),
    "ln_fugacity of NH3": _of_phase("ln_fugacity", 2),
    "fugacity of NH3": _of_phase("fugacity", 2),
    "ln_k": _ln_k,
    "heat of reaction": _heat,
    "rate": _rate,
    "effectiveness": _factor,
}


def _by_array(formula: Formula, values: Sequence[float]) -> list[float]:
    """Two copies of the state in one array."""
    out = np.asarray(formula(*(np.array([v, v]) for v in values)), dtype=float)
    return np.broadcast_to(out, (2,)).tolist()


def _by_casadi(formula: Formula, values: Sequence[float], kind: Any) -> float:
    symbols = [kind.sym(f"x{k}") for k in range(len(values))]
    return float(casadi.Function("f", symbols, [formula(*symbols)])(*values))


def _by_pyomo(formula: Formula, values: Sequence[float]) -> float:
    model = pyo.ConcreteModel()
    model.x = pyo.Var(range(len(values)), initialize=dict(enumerate(values)))
    return float(pyo.value(formula(*(model.x[k] for k in range(len(values))))))


@pytest.mark.parametrize("kind", ["srk", "pr", "ideal"])
@pytest.mark.parametrize("state", list(STATES))
@pytest.mark.parametrize("name", list(FORMULAS))
def test_one_formula_one_number(name: str, state: str, kind: str) -> None:
    temperature, pressure, flows, root, liquid = STATES[state]
    values = (temperature, pressure, root, *flows)
    formula = FORMULAS[name](kind, liquid)
    plain = float(formula(*values))
    assert np.isfinite(plain)
    same = pytest.approx(plain, rel=1e-12, abs=_round_off(name, plain))
    assert _by_array(formula, values) == [same, same]
    assert _by_casadi(formula, values, casadi.SX) == same
    assert _by_casadi(formula, values, casadi.MX) == same
    assert _by_pyomo(formula, values) == same


def _round_off(name: str, plain: float) -> float:
    """1e-12 of the largest term of a sum that may cancel."""
    largest = {"enthalpy": 1e5, "residual": 1.0, "heat of reaction": 1e5, "rate": abs(plain) + 1.0}
    return 1e-12 * largest.get(name, 0.1)


def test_an_array_is_worked_out_state_by_state() -> None:
    """Different temperatures in one array, on both sides of 1000 K where the polynomials change."""
    temperatures = np.array([400.0, 999.0, 1001.0, 1400.0])
    reaction = _chemistry("srk").reactions[0]
    assert reaction.ln_k(temperatures) == pytest.approx(
        [float(reaction.ln_k(float(t))) for t in temperatures], rel=1e-13
    )
    upper = reaction.ln_k(np.array([1000.0 + 1e-9]))
    assert upper == pytest.approx(float(reaction.ln_k(1000.0)), abs=1e-4)


def test_symbols_keep_to_the_range_below_1000_k() -> None:
    """An expression cannot choose; at 1001 K the lower range is still within 1e-5 of the upper one."""
    reaction = _chemistry("srk").reactions[0]
    symbolic = _by_casadi(lambda t: reaction.ln_k(t), [1001.0], casadi.SX)
    assert symbolic != float(reaction.ln_k(1001.0))
    assert symbolic == pytest.approx(float(reaction.ln_k(1001.0)), rel=1e-5)
