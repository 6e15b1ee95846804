"""exp, log and sqrt that read the same for floats, arrays, casadi symbols and Pyomo expressions.

A formula written with these is written once. Nothing heavy is imported until an argument of that kind arrives.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

R = 8.31446261815324
"""Gas constant, J/mol/K (CODATA 2018, exact)."""


def _library(x: Any) -> Any:
    if x.__class__ is float:
        return math
    kind = type(x).__module__.partition(".")[0]
    if kind == "pyomo":
        from pyomo.core import expr

        return expr
    if kind == "casadi":
        import casadi

        return casadi
    return np


def exp(x: Any) -> Any:
    """E to the power x."""
    return _library(x).exp(x)


def log(x: Any) -> Any:
    """Natural logarithm."""
    return _library(x).log(x)


def sqrt(x: Any) -> Any:
    """Square root."""
    return _library(x).sqrt(x)


def power(x: Any, a: float) -> Any:
    """X to the constant power a, by products and roots where these say the same."""
    if a == 0:
        return 1.0
    if a == 1:
        return x
    if a == 2:
        return x * x
    if a == 0.5:
        return sqrt(x)
    if a < 0:
        return 1.0 / power(x, -a)
    if a == int(a):
        return x ** int(a)
    if (2 * a) == int(2 * a):
        return power(x, a - 0.5) * sqrt(x)
    return x**a
