"""Smooth stand-ins for the larger and the smaller of two values, with their errors.

The additive pair takes any sign and errs by at most delta/2. The proportional pair takes positive values only
and errs in proportion to them; with a bound fixed, the smaller one passes through zero and is concave, which
is what makes the cost of parallel units rise strictly (see `costs`).
"""

from __future__ import annotations

from typing import Any

from optimiser.chemistry.maths import sqrt


def smooth_max(a: Any, b: Any, delta: float) -> Any:
    """Larger of two values, smooth where they meet: (a + b + sqrt((a - b)^2 + delta^2))/2.

    Never below the larger value, above it by at most delta/2 (at a = b) and by about delta^2/(4 |a - b|)
    elsewhere.
    Worked value: smooth_max(3, 3, 0.2) = 3.1.

    Args:
        a: any unit.
        b: the unit of a.
        delta: width of the rounding, the unit of a, above 0.
    """
    gap = a - b
    return 0.5 * (a + b + sqrt(gap * gap + delta * delta))


def smooth_min(a: Any, b: Any, delta: float) -> Any:
    """Smaller of two values, smooth where they meet: (a + b - sqrt((a - b)^2 + delta^2))/2.

    Never above the smaller value, below it by at most delta/2. Arguments as for `smooth_max`.
    Worked value: smooth_min(3, 3, 0.2) = 2.9.
    """
    gap = a - b
    return 0.5 * (a + b - sqrt(gap * gap + delta * delta))


def proportional_max(a: Any, b: Any, epsilon: float) -> Any:
    """Larger of two positive values: the larger root u of u^2 - (a + b) u + (1 - epsilon) a b = 0.

    Never below the larger value, above it by at most the share sqrt(epsilon) (at a = b). In a, with b fixed,
    it rises everywhere with a slope of at least epsilon. Worked value: proportional_max(4, 4, 1e-4) = 4.04.

    Args:
        a: any unit, above 0.
        b: the unit of a, above 0.
        epsilon: square of the relative rounding, between 0 and 1.
    """
    gap = a - b
    return 0.5 * (a + b + sqrt(gap * gap + 4.0 * epsilon * a * b))


def proportional_min(a: Any, b: Any, epsilon: float) -> Any:
    """Smaller of two positive values: the smaller root u of u^2 - (a + b) u + (1 - epsilon) a b = 0.

    Never above the smaller value, below it by at most the share sqrt(epsilon) (at a = b). In a, with b fixed,
    it is concave and zero at zero, so u/a falls everywhere. Written with the larger root as divisor, because
    the difference would lose all digits where a is far above b. Worked value: proportional_min(4, 4, 1e-4) =
    3.96.

    Arguments as for `proportional_max`.
    """
    return (1.0 - epsilon) * a * b / proportional_max(a, b, epsilon)
