"""The walk from Pyomo to casadi against Pyomo's own NL writer read by casadi, and against closed forms."""

from __future__ import annotations

from pathlib import Path

import casadi as ca
import numpy as np
import pyomo.environ as pe
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from optimiser.solve.nlp import Nlp
from optimiser.solve.tape import TapeWriter, symbols


def _model() -> pe.ConcreteModel:
    """Every kind of expression that sections use, in repeated and in single blocks."""
    model = pe.ConcreteModel()
    model.x = pe.Var(range(4), bounds=(0.5, 5.0), initialize={0: 1.1, 1: 2.0, 2: 3.0, 3: 1.7})
    model.p = pe.Param(mutable=True, initialize=1.3)
    model.held = pe.Var(initialize=0.7)
    model.held.fix()
    shared = model.x[0] * pe.exp(-model.x[1]) + pe.log(model.x[2]) / model.x[3]
    model.named = pe.Expression(expr=shared + model.p * model.x[0] ** 2)
    model.cells = pe.Block(range(3))
    for k in range(3):
        model.cells[k].c = pe.Constraint(
            expr=(k + 1.5) * model.x[k] * pe.sqrt(model.x[k + 1]) - model.held == 0
        )
    model.c = pe.Constraint(expr=model.named * shared - model.x[2] ** 0.5 / 3 + model.x[3] ** 3 <= 4.0)
    model.d = pe.Constraint(expr=(-1.0, sum(model.x[k] for k in range(4)) - 2 * model.x[1], 9.0))
    model.o = pe.Objective(expr=model.x[0] ** 1.5 * model.x[1] - model.named, sense=pe.maximize)
    return model


def _oracle(model: pe.ConcreteModel, path: str) -> tuple[ca.NlpBuilder, list[str], list[str]]:
    from pyomo.repn.plugins.nl_writer import NLWriter

    with Path(path).open("w") as stream:
        info = NLWriter().write(
            model, stream, symbolic_solver_labels=False, linear_presolve=False, scale_model=False
        )
    builder = ca.NlpBuilder()
    builder.import_nl(path, {"verbose": False})
    return builder, [v.name for v in info.variables], [c.name for c in info.constraints]


def test_values_and_derivatives_equal_those_of_the_nl_file(tmp_path) -> None:
    model = _model()
    nlp = Nlp(model)
    builder, names, rows = _oracle(model, str(tmp_path / "model.nl"))
    x = ca.vertcat(*builder.x)
    body, goal = ca.vertcat(*builder.g), builder.f
    weights = ca.MX.sym("w", body.numel())
    hessian = ca.hessian(goal + ca.dot(weights, body), x)[0]
    oracle = ca.Function(
        "oracle", [x, weights], [goal, body, ca.jacobian(body, x), ca.gradient(goal, x), hessian]
    )
    order = [names.index(v.name) for v in nlp.variables]
    row_order = [rows.index(c.name) for c in nlp.constraints]
    point = nlp.start()
    there = np.zeros(len(names))
    there[order] = point
    multipliers = np.linspace(-1.0, 2.0, len(rows))
    placed = np.zeros(len(rows))
    placed[row_order] = multipliers
    f, g, jacobian, gradient, hessian = (np.array(part) for part in oracle(there, placed))
    value, constraints = nlp.evaluate(point)
    # The importer negates a maximised objective, as Nlp does.
    assert value == pytest.approx(float(f.item()), rel=1e-13)
    offset = constraints - g.ravel()[row_order]
    assert np.allclose(offset - np.round(offset, 12), 0.0, atol=1e-12)
    ours = np.zeros((len(rows), len(names)))
    np.add.at(ours, (nlp.jacobian_rows, nlp.jacobian_columns), nlp.jacobian(point))
    assert np.allclose(ours, jacobian[np.ix_(row_order, order)], atol=1e-12)
    assert np.allclose(nlp.gradient(point), gradient.ravel()[order], atol=1e-12)
    lower = np.zeros((len(names), len(names)))
    np.add.at(lower, (nlp.hessian_rows, nlp.hessian_columns), nlp.hessian(point, multipliers, 1.0))
    full = lower + np.tril(lower, -1).T
    assert np.allclose(full, hessian[np.ix_(order, order)], atol=1e-11)


def test_copies_of_a_block_share_one_shape() -> None:
    shapes = Nlp(_model()).shapes
    assert sorted(len(shape.tapes) for shape in shapes)[-1] == 3


def test_numbers_may_change_between_solves() -> None:
    model = _model()
    nlp = Nlp(model)
    before = nlp.evaluate(nlp.start())[0]
    model.p = 2.0
    nlp.refresh()
    assert nlp.evaluate(nlp.start())[0] == pytest.approx(before + 0.7 * 1.1**2, rel=1e-12)


def test_scaling_factors_scale_variables_and_rows() -> None:
    model = _model()
    model.scaling_factor = pe.Suffix()
    plain = Nlp(_model())
    model.scaling_factor[model.x[1]] = 0.1
    model.scaling_factor[model.c] = 5.0
    scaled = Nlp(model)
    assert scaled.start()[1] == pytest.approx(plain.start()[1] * 0.1)
    ratio = scaled.evaluate(scaled.start())[1] / plain.evaluate(plain.start())[1]
    assert ratio == pytest.approx([5.0 if c.name == "c" else 1.0 for c in scaled.constraints])


def test_unknown_expressions_are_named() -> None:
    model = pe.ConcreteModel()
    model.x = pe.Var(initialize=1.0)
    with pytest.raises(TypeError, match="no derivative rule for"):
        TapeWriter().body(pe.Expr_if(model.x >= 0, model.x, -model.x))


@settings(max_examples=50, deadline=None)
@given(st.lists(st.floats(0.1, 4.0), min_size=2, max_size=2))
def test_a_written_expression_has_the_value_that_pyomo_gives(point: list[float]) -> None:
    model = pe.ConcreteModel()
    model.x, model.y = pe.Var(initialize=point[0]), pe.Var(initialize=point[1])
    body = pe.tanh(model.x) / (1 + model.y**2) - 3 * model.x**-1.5 + pe.atan(model.y) * pe.cos(model.x)
    writer = TapeWriter()
    writer.body(body)
    x = ca.SX.sym("x", len(writer.tape.variables))
    made = symbols(writer.tape, ca.vertsplit(x), writer.tape.number_values())
    values = [v.value for v in writer.tape.variables]
    assert float(ca.Function("f", [x], made)(values)) == pytest.approx(pe.value(body), rel=1e-13)
