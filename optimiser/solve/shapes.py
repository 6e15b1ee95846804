"""Derivative functions, one per shape of piece, evaluated for all copies of that shape in one call.

A shape's copies differ in their variables (an index map into x) and in their numbers (a matrix of parameters). Numbers
equal in all copies are baked in, so that casadi can simplify with them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import casadi as ca
import numpy as np
from numpy.typing import NDArray

from optimiser.solve.tape import Tape, symbols

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]


class _Call:
    """A casadi function mapped over copies, with preallocated buffers: no copy is made in a call."""

    def __init__(self, function: ca.Function, copies: int) -> None:
        mapped = function if copies == 1 else function.map(copies)
        self._buffer, self._evaluate = mapped.buffer()
        self.inputs = [np.zeros((copies, mapped.size1_in(k))) for k in range(mapped.n_in())]
        self.output = np.zeros((copies, function.nnz_out(0)))
        for k, array in enumerate(self.inputs):
            self._buffer.set_arg(k, memoryview(array.data))
        self._buffer.set_res(0, memoryview(self.output.data))

    def __call__(self) -> Floats:
        self._evaluate()
        return self.output


@dataclass
class Shape:
    """All copies of one shape of piece.

    Attributes:
        columns: variables of each copy, shape (copies, variables of the shape), indices into x.
        rows: constraints of each copy, shape (copies, outputs of the shape).
        jacobian_rows, jacobian_columns: positions of the Jacobian's nonzeros, flattened copy by copy.
        hessian_rows, hessian_columns: the same for the lower triangle of the Hessian.
    """

    tapes: list[Tape]
    columns: Indices
    rows: Indices

    def __post_init__(self) -> None:
        tape, copies = self.tapes[0], len(self.tapes)
        values = np.array([t.number_values() for t in self.tapes], dtype=float).reshape(copies, -1)
        fixed = [
            bool(np.all(values[:, k] == values[0, k])) and isinstance(tape.numbers[k], float | int)
            for k in range(values.shape[1])
        ]
        self._varying = [k for k, same in enumerate(fixed) if not same]
        x = ca.SX.sym("x", len(tape.variables))
        p = ca.SX.sym("p", len(self._varying))
        slots = {k: p[i] for i, k in enumerate(self._varying)}
        xs = ca.vertsplit(x)
        numbers = [slots.get(k, values[0, k]) for k in range(values.shape[1])]
        body = ca.vertcat(*symbols(tape, xs, numbers))
        self.function = ca.Function("body", [x, p], [body])
        self._build_derivatives(x, p, body, copies)
        self.refresh()

    def _build_derivatives(self, x: Any, p: Any, body: Any, copies: int) -> None:
        weights = ca.SX.sym("weights", body.numel())
        jacobian = ca.jacobian(body, x)
        lagrangian = ca.mtimes(weights.T, body)
        hessian = ca.tril(ca.hessian(lagrangian, x)[0])
        nonzeros = ca.Function("jacobian", [x, p], [ca.vertcat(*jacobian.nonzeros())])
        curvature = ca.Function("hessian", [x, p, weights], [ca.vertcat(*hessian.nonzeros())])
        self._body, self._jacobian = _Call(self.function, copies), _Call(nonzeros, copies)
        self._hessian = _Call(curvature, copies) if hessian.nnz() else None
        row, column = (np.array(part, dtype=np.int64) for part in jacobian.sparsity().get_triplet())
        self.jacobian_rows = self.rows[:, row].ravel()
        self.jacobian_columns = self.columns[:, column].ravel()
        row, column = (np.array(part, dtype=np.int64) for part in hessian.sparsity().get_triplet())
        first, second = self.columns[:, row].ravel(), self.columns[:, column].ravel()
        self.hessian_rows, self.hessian_columns = np.maximum(first, second), np.minimum(first, second)

    def refresh(self) -> None:
        """Read the numbers again after a mutable parameter or a fixed variable has changed."""
        values = np.array([t.number_values() for t in self.tapes], dtype=float).reshape(len(self.tapes), -1)
        self.parameters = values[:, self._varying]
        for call in (self._body, self._jacobian, self._hessian):
            if call is not None:
                call.inputs[1][:] = self.parameters

    def body(self, x: Floats) -> Floats:
        """Values of the constraints, shape (copies, outputs)."""
        np.take(x, self.columns, out=self._body.inputs[0])
        return self._body()

    def jacobian(self, x: Floats) -> Floats:
        """Nonzeros of the Jacobian in the order of `jacobian_rows`."""
        np.take(x, self.columns, out=self._jacobian.inputs[0])
        return self._jacobian().ravel()

    def hessian(self, x: Floats, weights: Floats) -> Floats:
        """Nonzeros of the lower triangle of the Hessian of weights @ constraints."""
        if self._hessian is None:
            return np.zeros(0)
        np.take(x, self.columns, out=self._hessian.inputs[0])
        np.take(weights, self.rows, out=self._hessian.inputs[2])
        return self._hessian().ravel()
