"""Radau collocation with three points an element, and edges graded towards the inlet of a bed."""

from __future__ import annotations

import functools
from itertools import pairwise

import numpy as np

POINTS = 3
RADAU_POINTS = ((4 - 6**0.5) / 10, (4 + 6**0.5) / 10, 1.0)


def element_edges(elements: int) -> list[float]:
    """Edges of the elements as parts of the bed's volume.

    They lie at (i/n)^2: a steep bed is steepest at its inlet, and even elements err there by up to 1 K.
    """
    return [(i / elements) ** 2 for i in range(elements + 1)]


def point_positions(elements: int) -> list[float]:
    """Where the collocation points of a bed lie, as parts of its volume; length 3 * elements, the last is 1."""
    edges = element_edges(elements)
    return [
        low + (high - low) * t for low, high in pairwise(edges) for t in RADAU_POINTS
    ]


@functools.cache
def _derivatives() -> tuple[tuple[float, ...], ...]:
    """Slope at each collocation point of the polynomial through the element's start and its points."""
    nodes = np.array([0.0, *RADAU_POINTS])
    rows = []
    for t in RADAU_POINTS:
        row = []
        for j in range(4):
            others = np.delete(nodes, j)
            basis = np.poly1d(np.poly(others)) / np.prod(nodes[j] - others)
            row.append(float(basis.deriv()(t)))
        rows.append(tuple(row))
    return tuple(rows)


RADAU_DERIVATIVE = _derivatives()
