"""Closing the loop: from one pass to the recycle that would bring itself back.

Inerts settle slowly when each pass simply hands its recycle to the next: at a purge of 1 % a hundred passes
change little. So each pass is read as a conversion of the limiting reactant, a saturation of the separator's
vapour with product, and a share of every other species that leaves dissolved; with these held, the balances
of the loop are linear and are solved at once. What is left, that the three move with composition, is closed
by Anderson's mixing in the logarithms of the flows [1].

Sources:
    [1] Walker, H. F., Ni, P., Anderson acceleration for fixed-point iterations, SIAM Journal on Numerical
        Analysis 49 (2011) 1715-1735.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from optimiser.chemistry.reactions import Chemistry
from optimiser.forward.flash import Phases
from optimiser.forward.stream import Floats

LEAST_PURGE, MOST_PURGE = 1e-5, 0.99
FIRST_SATURATION = 0.05
FURTHEST = 1.0
"""Largest logarithm by which a vapour is taken to be short of saturation."""
LARGEST_STEP = 1.0
"""No flow changes by more than this factor of e in one pass."""


@dataclass(frozen=True)
class Split:
    """How a pass treats what enters the converter.

    Attributes:
        conversion: extent of each reaction over the flow of its limiting reactant.
        dissolved: share of each species after the reactor that leaves as liquid; of products it is not used.
        saturation: of each species, its flow over that of all but the products in the separator's vapour; of
            products alone.
        purge: share of the separator's vapour that is purged.
    """

    conversion: Floats
    dissolved: Floats
    saturation: Floats
    purge: float


class LoopBalance:
    """Linear balances of the loop for a make-up of one composition."""

    def __init__(self, chemistry: Chemistry, makeup: Floats) -> None:
        self.nu = np.array([reaction.nu for reaction in chemistry.reactions])
        self.makeup = makeup
        self.products = np.array([name in chemistry.products for name in chemistry.mixture.names])
        self.keys = [self._limiting(row) for row in self.nu]

    def _limiting(self, nu: Floats) -> int:
        """The reactant that would run out first; counted by it, no other flow can turn negative."""
        reactants = [k for k in np.flatnonzero(nu < 0) if self.makeup[k] > 0]
        if not reactants:
            return int(np.argmax(self.makeup))
        return int(min(reactants, key=lambda k: self.makeup[k] / -nu[k]))

    def read(self, feed: Floats, extents: Floats, separator: Phases, purge: float) -> Split:
        """The split of a pass.

        Args:
            feed: of the converter, mol/s.
            extents: of all beds together, mol/s.
            separator: its phases; where there is no liquid, its vapour is short of saturation by `stability`.
            purge: share of the vapour.
        """
        conversion = np.array([x / feed[k] for x, k in zip(extents, self.keys, strict=True)])
        leaving = separator.vapour + separator.liquid
        dissolved = np.where(leaving > 0, separator.liquid / np.where(leaving > 0, leaving, 1.0), 0.0)
        short = float(np.exp(min(separator.stability, FURTHEST)))
        saturation = short * separator.vapour / float(separator.vapour[~self.products].sum())
        return Split(conversion, dissolved, saturation, min(max(purge, LEAST_PURGE), MOST_PURGE))

    def solve(self, split: Split) -> tuple[Floats, Floats]:
        """Recycle and liquid that close the loop with the split held, mol/s; liquid may be negative."""
        count = len(self.makeup)
        reactor = np.eye(count)
        for row, key, x in zip(self.nu, self.keys, split.conversion, strict=True):
            reactor[:, key] += row * x
        vapour = np.diag(np.where(self.products, 0.0, 1.0 - split.dissolved))
        vapour[self.products] = split.saturation[self.products, None] * vapour.sum(axis=0)
        back = (1.0 - split.purge) * vapour @ reactor
        feed = np.linalg.solve(np.eye(count) - back, self.makeup)
        leaving = reactor @ feed
        return back @ feed, leaving - vapour @ leaving

    def solve_at_ratio(self, split: Split, ratio: float) -> tuple[Floats, Floats]:
        """As `solve`, with the purge at which the recycle is `ratio` times the make-up."""
        wanted = ratio * float(self.makeup.sum())
        low, high = np.log(LEAST_PURGE), np.log(MOST_PURGE)
        for _ in range(50):
            middle = 0.5 * (low + high)
            recycle, liquid = self.solve(replace(split, purge=float(np.exp(middle))))
            low, high = (middle, high) if float(recycle.sum()) > wanted else (low, middle)
        return recycle, liquid


@dataclass
class Mixing:
    """Anderson's mixing of a fixed-point iteration x <- g(x)."""

    memory: int = 4
    _points: list[Floats] = field(default_factory=list)
    _steps: list[Floats] = field(default_factory=list)

    def next(self, x: Floats, g: Floats) -> Floats:
        """Where to go from x, whose image is g."""
        step = g - x
        if self._steps and np.max(np.abs(step)) > np.max(np.abs(self._steps[-1])):
            # What was learnt has led astray: begin again from here.
            self._points, self._steps = [], []
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
    """A loop as one finds them: a fifth converted in a pass, little product in the recycle."""
    names, products = chemistry.mixture.names, set(chemistry.products)
    saturation = np.array([FIRST_SATURATION if name in products else 0.0 for name in names])
    dissolved = np.full(len(names), 0.004)
    conversion = np.full(len(chemistry.reactions), _first_conversion(chemistry))
    return Split(conversion, dissolved, saturation, purge)


def _first_conversion(chemistry: Chemistry) -> float:
    """Extent for each mole of the limiting reactant that takes a fifth of the reactant used up fastest."""
    largest = max(abs(nu) for reaction in chemistry.reactions for nu in _reactants(reaction.nu))
    return 0.2 / largest


def _reactants(nu: Sequence[float]) -> list[float]:
    return [x for x in nu if x < 0] or [1.0]
