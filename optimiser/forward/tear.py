"""Closing the loop: from one pass to the recycle that would bring itself back.

Inerts settle slowly when each pass simply hands its recycle to the next: at a purge of 1 % a hundred passes
change little. So each pass is read as a conversion of the limiting reactant and a share of each species that
leaves as liquid; with these held, the balances of the loop are linear and are solved at once. What is left,
that conversion and shares move with composition, is closed by Anderson's mixing in the logarithms of the
flows [1].

Sources:
    [1] Walker, H. F., Ni, P., Anderson acceleration for fixed-point iterations, SIAM Journal on Numerical
        Analysis 49 (2011) 1715-1735.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from optimiser.chemistry.reactions import Chemistry
from optimiser.forward.stream import Floats

LARGEST_STEP = 1.0
"""No flow changes by more than this factor of e in one pass."""


@dataclass(frozen=True)
class Split:
    """How a pass treats what enters the converter.

    Attributes:
        conversion: extent of each reaction over the flow of its limiting reactant.
        liquid: share of each species after the reactor that leaves as liquid.
        purge: share of the separator's vapour that is purged.
    """

    conversion: Floats
    liquid: Floats
    purge: float


class LoopBalance:
    """Linear balances of the loop for a make-up of one composition."""

    def __init__(self, chemistry: Chemistry, makeup: Floats) -> None:
        self.nu = np.array([reaction.nu for reaction in chemistry.reactions])
        self.makeup = makeup
        self.keys = [self._limiting(row) for row in self.nu]

    def _limiting(self, nu: Floats) -> int:
        """The reactant that would run out first; counted by it, no other flow can turn negative."""
        reactants = [k for k in np.flatnonzero(nu < 0) if self.makeup[k] > 0]
        if not reactants:
            return int(np.argmax(self.makeup))
        return int(min(reactants, key=lambda k: self.makeup[k] / -nu[k]))

    def read(self, feed: Floats, extents: Floats, leaving: Floats, liquid: Floats, purge: float) -> Split:
        """The split of a pass from its flows, mol/s."""
        conversion = np.array([x / feed[k] for x, k in zip(extents, self.keys, strict=True)])
        share = np.where(leaving > 0, liquid / np.where(leaving > 0, leaving, 1.0), 0.0)
        return Split(conversion, share, min(max(purge, 1e-5), 0.99))

    def solve(self, split: Split) -> tuple[Floats, Floats]:
        """Recycle and liquid that close the loop with the split held, mol/s."""
        count = len(self.makeup)
        reactor = np.eye(count)
        for row, key, x in zip(self.nu, self.keys, split.conversion, strict=True):
            reactor[:, key] += row * x
        back = ((1.0 - split.purge) * (1.0 - split.liquid))[:, None] * reactor
        feed = np.linalg.solve(np.eye(count) - back, self.makeup)
        return feed - self.makeup, split.liquid * (reactor @ feed)


@dataclass
class Mixing:
    """Anderson's mixing of a fixed-point iteration x <- g(x)."""

    memory: int = 4
    _points: list[Floats] = field(default_factory=list)
    _steps: list[Floats] = field(default_factory=list)

    def next(self, x: Floats, g: Floats) -> Floats:
        """Where to go from x, whose image is g."""
        step = g - x
        self._points, self._steps = [*self._points, x][-self.memory :], [*self._steps, step][-self.memory :]
        if len(self._steps) > 1:
            changes = np.array([step - s for s in self._steps[:-1]]).T
            moves = np.array([x - p for p in self._points[:-1]]).T
            weights = np.linalg.lstsq(changes, step, rcond=1e-8)[0]
            mixed = g - (moves + changes) @ weights
        else:
            mixed = g
        return np.asarray(x + np.clip(mixed - x, -LARGEST_STEP, LARGEST_STEP))


def first_split(chemistry: Chemistry, purge: float) -> Split:
    """A loop as one finds them: a fifth converted in a pass, most of the product condensed."""
    names, products = chemistry.mixture.names, set(chemistry.products)
    liquid = np.array([0.75 if name in products else 0.004 for name in names])
    return Split(np.full(len(chemistry.reactions), _first_conversion(chemistry)), liquid, purge)


def _first_conversion(chemistry: Chemistry) -> float:
    """Extent for each mole of the limiting reactant that takes a fifth of the reactant used up fastest."""
    largest = max(abs(nu) for reaction in chemistry.reactions for nu in _reactants(reaction.nu))
    return 0.2 / largest


def _reactants(nu: Sequence[float]) -> list[float]:
    return [x for x in nu if x < 0] or [1.0]
