"""A Pyomo model as the scaled nonlinear programme that Ipopt solves.

minimise f(x) with low <= x <= high and row_low <= g(x) <= row_high. Scaled variables are x = x_model * factor with the
factors of the model's `scaling_factor` suffix; so are the rows. Every array here is in scaled numbers unless it says
otherwise; `Nlp.variable_values` and `Nlp.multipliers` give them back in the model's own.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import numpy as np
from pyomo.core import Block, ConcreteModel, Constraint, Objective, minimize, value

from optimiser.solve.shapes import Floats, Shape
from optimiser.solve.tape import Tape, TapeWriter

INFINITY = 1e20


class Nlp:
    """The programme with its derivatives.

    Fixed variables and mutable parameters are numbers that may change between solves (`refresh`); which variables are
    fixed may not.
    """

    def __init__(self, model: ConcreteModel) -> None:
        self.model = model
        self.variables: list[Any] = []
        self.constraints: list[Any] = []
        self._index: dict[int, int] = {}
        self._first_at: tuple[Floats, Floats] | None = None
        self.sense = 1.0
        pieces = list(self._pieces(model))
        self._collect(pieces)
        self._bounds()
        self._structure()

    def _pieces(self, model: ConcreteModel) -> Iterable[tuple[Tape, list[int]]]:
        """Each Block with constraints of its own as one tape with its rows; the objective as row -1."""
        for block in model.block_data_objects(active=True, descend_into=Block):
            rows, writer = [], TapeWriter()
            for constraint in block.component_data_objects(Constraint, active=True, descend_into=False):
                _, body, _ = constraint.to_bounded_expression()
                writer.body(body)
                rows.append(len(self.constraints))
                self.constraints.append(constraint)
            if rows:
                yield writer.tape, rows
        (self.objective,) = model.component_data_objects(Objective, active=True)
        objective = self.objective
        self.sense = 1.0 if objective.sense == minimize else -1.0
        writer = TapeWriter()
        writer.body(objective.expr if self.sense > 0 else -objective.expr)
        yield writer.tape, [-1]

    def _collect(self, pieces: list[tuple[Tape, list[int]]]) -> None:
        for tape, _ in pieces:
            for variable in tape.variables:
                if self._index.setdefault(id(variable), len(self.variables)) == len(self.variables):
                    self.variables.append(variable)
        groups: dict[Any, list[tuple[Tape, list[int]]]] = {}
        for tape, rows in pieces:
            groups.setdefault(tape.structure, []).append((tape, rows))
        objective_row = len(self.constraints)
        self.shapes = [
            Shape(
                [tape for tape, _ in group],
                np.array([[self._index[id(v)] for v in tape.variables] for tape, _ in group], dtype=np.int64),
                np.array(
                    [[r if r >= 0 else objective_row for r in rows] for _, rows in group], dtype=np.int64
                ),
            )
            for group in groups.values()
        ]

    def _bounds(self) -> None:
        factors = self.model.component("scaling_factor")
        self.factor = np.array([factors.get(v, 1.0) if factors else 1.0 for v in self.variables])
        row_factor = [factors.get(c, 1.0) if factors else 1.0 for c in self.constraints]
        self.row_factor = np.array([*row_factor, factors.get(self.objective, 1.0) if factors else 1.0])
        self.read_bounds()
        ends = [c.to_bounded_expression() for c in self.constraints]
        low = np.array([-INFINITY if a is None else value(a) for a, _, _ in ends])
        high = np.array([INFINITY if b is None else value(b) for _, _, b in ends])
        scale = self.row_factor[:-1]
        self.row_low = np.where(low > -INFINITY, low * scale, low)
        self.row_high = np.where(high < INFINITY, high * scale, high)

    def read_bounds(self) -> None:
        """Take the bounds of the variables from the model again."""
        low = np.array([-INFINITY if v.lb is None else v.lb for v in self.variables])
        high = np.array([INFINITY if v.ub is None else v.ub for v in self.variables])
        self.low = np.where(low > -INFINITY, low * self.factor, low)
        self.high = np.where(high < INFINITY, high * self.factor, high)

    def _structure(self) -> None:
        rows = np.concatenate([s.jacobian_rows for s in self.shapes])
        columns = np.concatenate([s.jacobian_columns for s in self.shapes])
        self._is_objective = rows == len(self.constraints)
        self._jacobian_scale = self.row_factor[rows] / self.factor[columns]
        self._gradient_columns = columns[self._is_objective]
        self.jacobian_rows, self.jacobian_columns = rows[~self._is_objective], columns[~self._is_objective]
        self.hessian_rows = np.concatenate([s.hessian_rows for s in self.shapes])
        self.hessian_columns = np.concatenate([s.hessian_columns for s in self.shapes])
        self._hessian_scale = 1.0 / (self.factor[self.hessian_rows] * self.factor[self.hessian_columns])

    @property
    def size(self) -> tuple[int, int]:
        """Number of variables and of constraints."""
        return len(self.variables), len(self.constraints)

    def refresh(self) -> None:
        """Take bounds, mutable parameters and fixed variables from the model again."""
        self.read_bounds()
        self._first_at = None
        for shape in self.shapes:
            shape.refresh()

    def start(self) -> Floats:
        """The model's present values, moved inside the bounds."""
        x = np.array([v.value if v.value is not None else np.nan for v in self.variables]) * self.factor
        return np.asarray(np.clip(x, self.low, self.high))

    def evaluate(self, x: Floats) -> tuple[float, Floats]:
        """Objective and constraints."""
        model_x, g = x / self.factor, np.empty(len(self.constraints) + 1)
        for shape in self.shapes:
            g[shape.rows] = shape.body(model_x)
        g *= self.row_factor
        return float(g[-1]), g[:-1]

    def _first(self, x: Floats) -> Floats:
        """All first derivatives; the last point's are kept, since solvers ask for gradient and Jacobian in turn."""
        if self._first_at is None or not np.array_equal(self._first_at[0], x):
            model_x = x / self.factor
            nonzeros = np.concatenate([shape.jacobian(model_x) for shape in self.shapes])
            self._first_at = (x.copy(), nonzeros * self._jacobian_scale)
        return self._first_at[1]

    def jacobian(self, x: Floats) -> Floats:
        """Nonzeros at (`jacobian_rows`, `jacobian_columns`)."""
        return np.asarray(self._first(x)[~self._is_objective])

    def gradient(self, x: Floats) -> Floats:
        """Gradient of the objective."""
        gradient = np.zeros(len(self.variables))
        np.add.at(gradient, self._gradient_columns, self._first(x)[self._is_objective])
        return gradient

    def hessian(self, x: Floats, multipliers: Floats, objective_factor: float) -> Floats:
        """Nonzeros of the Lagrangian's Hessian at (`hessian_rows`, `hessian_columns`); repeated positions add up."""
        model_x = x / self.factor
        weights = np.concatenate([multipliers, [objective_factor]]) * self.row_factor
        nonzeros = np.concatenate([shape.hessian(model_x, weights) for shape in self.shapes])
        return np.asarray(nonzeros * self._hessian_scale)

    def load(self, x: Floats) -> None:
        """Write a point into the model's variables."""
        for variable, number in zip(self.variables, x / self.factor, strict=True):
            variable.set_value(float(number), skip_validation=True)
