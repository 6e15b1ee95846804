"""Degrees of freedom from the structure of the equations, and the group that has too many or too few.

Every equation is matched with a variable of its own (Dulmage & Mendelsohn, Can. J. Math. 10 (1958) 517). An
equation left over, with all that reaches it, is an over-specified group; a variable left over that no decision
stands for is an under-specified one.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from optimiser.solve.nlp import Nlp


@dataclass(frozen=True)
class Freedom:
    """Counts, and the groups that do not fit.

    Attributes:
        degrees: variables less equations.
        over, under: names of the equations (over) or variables (under) of each group; empty where all is well.
    """

    variables: int
    equations: int
    over: list[str]
    under: list[str]

    @property
    def degrees(self) -> int:
        """Variables less equations."""
        return self.variables - self.equations


def count_freedom(nlp: Nlp, decisions: list[Any]) -> Freedom:
    """Match equations with variables, those that are no decisions first."""
    from scipy.sparse import coo_matrix

    rows, columns = nlp.jacobian_rows, nlp.jacobian_columns
    n, m = nlp.size
    pattern = coo_matrix((np.ones(rows.size), (rows, columns)), shape=(m, n)).tocsr()
    free = {k for k, v in enumerate(nlp.variables) if any(v is d for d in decisions)}
    return Freedom(n, m, _over(nlp, pattern), _under(nlp, pattern, free))


def _over(nlp: Nlp, pattern: Any) -> list[str]:
    """Equations of the over-specified part: those reached from an equation without a variable of its own."""
    from scipy.sparse.csgraph import maximum_bipartite_matching

    owner_of_row = maximum_bipartite_matching(pattern, perm_type="column")
    row_of_column = {int(c): r for r, c in enumerate(owner_of_row) if c >= 0}
    seen = {r for r, c in enumerate(owner_of_row) if c < 0}
    waiting = list(seen)
    while waiting:
        row = waiting.pop()
        for column in pattern.indices[pattern.indptr[row] : pattern.indptr[row + 1]]:
            other = row_of_column.get(int(column))
            if other is not None and other not in seen:
                seen.add(other)
                waiting.append(other)
    return [nlp.constraints[r].name for r in sorted(seen)]


def _under(nlp: Nlp, pattern: Any, decisions: set[int]) -> list[str]:
    """Variables of the under-specified part once every decision has a value."""
    from scipy.sparse.csgraph import maximum_bipartite_matching

    kept = [k for k in range(pattern.shape[1]) if k not in decisions]
    part = pattern[:, kept].tocsc()
    owner_of_column = maximum_bipartite_matching(part.tocsr(), perm_type="row")
    column_of_row = {int(r): c for c, r in enumerate(owner_of_column) if r >= 0}
    seen = {c for c, r in enumerate(owner_of_column) if r < 0}
    waiting = list(seen)
    while waiting:
        column = waiting.pop()
        for row in part.indices[part.indptr[column] : part.indptr[column + 1]]:
            other = column_of_row.get(int(row))
            if other is not None and other not in seen:
                seen.add(other)
                waiting.append(other)
    return [nlp.variables[kept[c]].name for c in sorted(seen)]
