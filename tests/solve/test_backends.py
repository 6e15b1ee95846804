"""Both backends on problems whose answers are known, and the meaning of signs and endings."""

from __future__ import annotations

import numpy as np
import pyomo.environ as pe
import pytest

from optimiser.solve.backends import BACKENDS, solve
from optimiser.solve.doctor import examine
from optimiser.solve.ending import Stopped
from optimiser.solve.nlp import Nlp
from optimiser.solve.starts import run_attempts, spread


def _problem() -> pe.ConcreteModel:
    """Problem 71 of Hock & Schittkowski, Test Examples for Nonlinear Programming Codes (1981): 17.0140173."""
    model = pe.ConcreteModel()
    model.x = pe.Var(range(4), bounds=(1, 5), initialize={0: 1, 1: 5, 2: 5, 3: 1})
    x = model.x
    model.product = pe.Constraint(expr=x[0] * x[1] * x[2] * x[3] >= 25)
    model.sphere = pe.Constraint(expr=sum(x[k] ** 2 for k in range(4)) == 40)
    model.o = pe.Objective(expr=x[0] * x[3] * (x[0] + x[1] + x[2]) + x[2])
    return model


@pytest.mark.parametrize("backend", list(BACKENDS))
def test_published_optimum(backend: str) -> None:
    nlp = Nlp(_problem())
    ending = solve(nlp, nlp.start(), backend=backend)
    assert ending.stopped is Stopped.CONVERGED
    assert ending.objective == pytest.approx(17.0140173, abs=1e-6)
    assert np.allclose(ending.x, [1.0, 4.7429994, 3.8211503, 1.3794082], atol=1e-5)


def test_backends_agree_on_point_and_multipliers() -> None:
    nlp = Nlp(_problem())
    first, second = (solve(nlp, nlp.start(), backend=name) for name in BACKENDS)
    assert np.allclose(first.x, second.x, atol=1e-6)
    assert np.allclose(first.multipliers, second.multipliers, atol=1e-6)
    assert np.allclose(first.bound_low, second.bound_low, atol=1e-6)


@pytest.mark.parametrize("backend", list(BACKENDS))
def test_optimality_conditions_hold(backend: str) -> None:
    nlp = Nlp(_problem())
    end = solve(nlp, nlp.start(), backend=backend)
    jacobian = np.zeros((nlp.size[1], nlp.size[0]))
    np.add.at(jacobian, (nlp.jacobian_rows, nlp.jacobian_columns), nlp.jacobian(end.x))
    stationarity = nlp.gradient(end.x) + end.multipliers @ jacobian - end.bound_low + end.bound_high
    assert np.max(np.abs(stationarity)) < 1e-6
    assert np.all(end.bound_low * (end.x - nlp.low) < 1e-6)
    assert np.all(end.x >= nlp.low) and np.all(end.x <= nlp.high)


def test_multiplier_is_the_change_of_the_optimum() -> None:
    def optimum(right: float) -> tuple[float, float]:
        model = _problem()
        model.sphere.deactivate()
        model.ball = pe.Constraint(expr=sum(model.x[k] ** 2 for k in range(4)) - right == 0)
        nlp = Nlp(model)
        end = solve(nlp, nlp.start())
        row = next(k for k, c in enumerate(nlp.constraints) if c is model.ball)
        return end.objective, float(end.multipliers[row])

    slope = (optimum(40.01)[0] - optimum(39.99)[0]) / 0.02
    assert -optimum(40.0)[1] == pytest.approx(slope, rel=1e-4)


@pytest.mark.parametrize("backend", list(BACKENDS))
def test_no_feasible_point_is_not_called_optimal(backend: str) -> None:
    model = _problem()
    model.clash = pe.Constraint(expr=model.x[0] + model.x[1] >= 11)
    nlp = Nlp(model)
    assert not solve(nlp, nlp.start(), backend=backend).converged


def test_a_run_can_be_stopped_from_outside() -> None:
    nlp = Nlp(_problem())
    ending = solve(nlp, nlp.start(), backend="cyipopt", watch=lambda count, *_: count < 3)
    assert ending.stopped is Stopped.INTERRUPTED
    assert ending.x.shape == (4,)


def test_attempts_are_the_same_on_one_process_and_on_two() -> None:
    nlp = Nlp(_problem())
    points = spread(4, 4, seed=1) * 4 + 1

    def solve_one(index: int):  # type: ignore[no-untyped-def]
        return solve(nlp, points[index])

    one = run_attempts(solve_one, 4, processes=1)
    two = run_attempts(solve_one, 4, processes=2)
    assert [a.index for a in two] == [0, 1, 2, 3]
    for a, b in zip(one, two, strict=True):
        assert a.ending is not None and b.ending is not None
        assert np.array_equal(a.ending.x, b.ending.x)


def test_a_start_that_breaks_is_an_attempt_with_its_reason() -> None:
    def solve_one(index: int):  # type: ignore[no-untyped-def]
        raise ValueError(f"start {index} has no gas")

    attempts = run_attempts(solve_one, 3, processes=1)
    assert [a.reason for a in attempts] == [f"start {k} has no gas" for k in range(3)]


def test_spread_fills_the_cube_evenly() -> None:
    points = spread(64, 3, seed=5)
    counts = np.histogram(points[:, 1], bins=8, range=(0, 1))[0]
    assert counts.min() >= 4 and counts.max() <= 12


def test_doctor_solves_with_every_backend() -> None:
    assert all(row["ok"] for row in examine())
