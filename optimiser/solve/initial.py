"""Completing a start: variables that an equation gives are computed from it before the first iteration."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from optimiser.solve.nlp import Nlp
from optimiser.solve.shapes import Floats

SWEEPS = 25


class Completion:
    """Newton sweeps, each variable by the one equation that is told to give it.

    Most of these equations read "variable minus expression", so a sweep solves them exactly; the roots of the equation
    of state and temperatures behind an enthalpy take a few.
    """

    def __init__(self, nlp: Nlp, pairs: Sequence[tuple[Any, Any]]) -> None:
        columns = {id(v): k for k, v in enumerate(nlp.variables)}
        rows = {id(c): k for k, c in enumerate(nlp.constraints)}
        known = [(columns[id(v)], rows[id(c)]) for v, c in pairs if id(v) in columns and id(c) in rows]
        positions = {
            (r, c): k for k, (r, c) in enumerate(zip(nlp.jacobian_rows, nlp.jacobian_columns, strict=True))
        }
        known = [(c, r) for c, r in known if (r, c) in positions]
        self._nlp = nlp
        self._columns = np.array([c for c, _ in known], dtype=int)
        self._rows = np.array([r for _, r in known], dtype=int)
        self._slopes = np.array([positions[r, c] for c, r in known], dtype=int)

    def complete(self, x: Floats) -> Floats:
        """The start with every given variable computed, scaled."""
        nlp, x = self._nlp, x.copy()
        low, high = nlp.low[self._columns], nlp.high[self._columns]
        for _ in range(SWEEPS):
            _, residuals = nlp.evaluate(x)
            slopes = nlp.jacobian(x)[self._slopes]
            step = residuals[self._rows] / np.where(np.abs(slopes) > 1e-12, slopes, np.inf)
            step = np.where(np.isfinite(step), step, 0.0)
            x[self._columns] = np.clip(x[self._columns] - step, low, high)
            if np.max(np.abs(step), initial=0.0) < 1e-9:
                break
        return x
