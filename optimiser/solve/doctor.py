"""Whether this machine can solve: a tiny problem through each backend, and the versions of what it rests on."""

from __future__ import annotations

import importlib.metadata
from typing import Any

PACKAGES = ("pyomo", "casadi", "cyipopt-wheels", "highspy", "numpy", "scipy", "pydantic")


def versions() -> dict[str, str]:
    """Installed version of each package that a result may depend on; missing ones are left out."""
    found = {}
    for name in PACKAGES:
        try:
            found[name] = importlib.metadata.version(name)
        except importlib.metadata.PackageNotFoundError:
            continue
    return found


def examine() -> list[dict[str, Any]]:
    """One row for each backend: {backend, ok, versions, message}."""
    return [_try("cyipopt", ("cyipopt-wheels", "pyomo")), _try("casadi", ("casadi", "pyomo")), _try_highs()]


def _row(backend: str, ok: bool, names: tuple[str, ...], message: str) -> dict[str, Any]:
    known = versions()
    return {
        "backend": backend,
        "ok": ok,
        "versions": {n: known[n] for n in names if n in known},
        "message": message,
    }


def _try(backend: str, names: tuple[str, ...]) -> dict[str, Any]:
    """Smallest x + y on the circle of radius 5 in the positive quadrant's box [1, 5]: 1 + sqrt(24)."""
    try:
        from pyomo.core import ConcreteModel, Constraint, Objective, Var

        from optimiser.solve.backends import solve
        from optimiser.solve.nlp import Nlp

        model = ConcreteModel()
        model.x, model.y = Var(bounds=(1, 5), initialize=2.0), Var(bounds=(1, 5), initialize=4.0)
        model.circle = Constraint(expr=model.x**2 + model.y**2 == 25)
        model.objective = Objective(expr=model.x + model.y)
        nlp = Nlp(model)
        ending = solve(nlp, nlp.start(), backend=backend)
    except Exception as problem:  # A broken installation may raise anything; saying what is the purpose here.
        return _row(backend, False, names, f"{type(problem).__name__}: {problem}")
    right = ending.converged and abs(ending.objective - (1 + 24**0.5)) < 1e-6
    message = f"solved a test problem in {ending.iterations} iterations" if right else ending.stopped.value
    return _row(backend, right, names, message)


def _try_highs() -> dict[str, Any]:
    try:
        import highspy

        model = highspy.Highs()
        model.setOptionValue("output_flag", False)
        x, y = model.addVariable(lb=1.0, ub=5.0), model.addVariable(lb=1.0, ub=5.0)
        model.addConstr(x + y >= 4.5)
        model.minimize(x + 2.0 * y)
        value = model.getObjectiveValue()
    except Exception as problem:  # As above.
        return _row("highs", False, ("highspy",), f"{type(problem).__name__}: {problem}")
    return _row("highs", abs(value - 5.5) < 1e-9, ("highspy",), "solved a test problem")
