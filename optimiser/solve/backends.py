"""Ipopt behind one call, by cyipopt or by casadi's own copy.

Both get the same equations and options. cyipopt is the first choice; casadi's serves where cyipopt has no wheel and as
a check on the first.
"""

from __future__ import annotations

import contextlib
import sys
from collections.abc import Callable, Iterator
from typing import Any

import numpy as np

from optimiser.solve.ending import Ending, stopped_from_code
from optimiser.solve.nlp import Nlp
from optimiser.solve.shapes import Floats

OPTIONS: dict[str, Any] = {
    "tol": 1e-8,
    "constr_viol_tol": 1e-8,
    "acceptable_iter": 0,  # An acceptable end is never an optimum here, so Ipopt must not stop at one.
    "bound_relax_factor": 0.0,  # The default lets bounds be passed by a hair.
    "max_iter": 300,
    # Measured on synthesis loops: the adaptive strategy halves the iterations of the monotone one, a small barrier (a
    # start from a forward calculation is nearly feasible) and a start well inside the bounds halve them again.
    "mu_strategy": "adaptive",
    "mu_max": 1e-2,
    "bound_push": 0.1,
    "bound_frac": 0.1,
    "nlp_scaling_method": "none",  # The model is scaled by its own nominal values.
    "sb": "yes",
    "print_level": 0,
}
WARM = {
    "warm_start_init_point": "yes",
    "mu_strategy": "adaptive",
    "warm_start_bound_push": 1e-9,
    "warm_start_bound_frac": 1e-9,
    "warm_start_slack_bound_push": 1e-9,
    "warm_start_slack_bound_frac": 1e-9,
    "warm_start_mult_bound_push": 1e-9,
}
Watch = Callable[[int, float, float], bool]


@contextlib.contextmanager
def _without_scipy() -> Iterator[None]:
    """Hide scipy while cyipopt is imported: it wants scipy only for a function that is not used here."""
    if "scipy" in sys.modules:
        yield
        return
    sys.modules["scipy"] = None  # type: ignore[assignment]
    try:
        yield
    finally:
        del sys.modules["scipy"]


def import_cyipopt() -> Any:
    """The cyipopt module.

    Raises:
        ImportError: when there is no wheel for this machine.
    """
    with _without_scipy():
        import cyipopt
    return cyipopt


class _Callbacks:
    """What cyipopt asks for. The best point seen is kept, for runs that are interrupted."""

    def __init__(self, nlp: Nlp, watch: Watch | None) -> None:
        self.nlp, self.watch = nlp, watch
        self.iterations, self.violation = 0, float("inf")
        self._x: Floats | None = None
        self._values: tuple[float, Floats] = (0.0, np.zeros(0))

    def _evaluate(self, x: Floats) -> tuple[float, Floats]:
        if self._x is None or not np.array_equal(x, self._x):
            self._x, self._values = x.copy(), self.nlp.evaluate(x)
        return self._values

    def objective(self, x: Floats) -> float:
        return self._evaluate(x)[0]

    def constraints(self, x: Floats) -> Floats:
        return self._evaluate(x)[1]

    def gradient(self, x: Floats) -> Floats:
        return self.nlp.gradient(x)

    def jacobian(self, x: Floats) -> Floats:
        return self.nlp.jacobian(x)

    def jacobianstructure(self) -> tuple[Any, Any]:
        return self.nlp.jacobian_rows, self.nlp.jacobian_columns

    def hessian(self, x: Floats, multipliers: Floats, objective_factor: float) -> Floats:
        return self.nlp.hessian(x, multipliers, objective_factor)

    def hessianstructure(self) -> tuple[Any, Any]:
        return self.nlp.hessian_rows, self.nlp.hessian_columns

    def intermediate(self, mode: int, count: int, objective: float, violation: float, *_: float) -> bool:
        self.iterations, self.violation = count, violation
        return self.watch(count, objective, violation) if self.watch else True


def solve_cyipopt(
    nlp: Nlp, x0: Floats, options: dict[str, Any], watch: Watch | None = None, duals: Ending | None = None
) -> Ending:
    """Solve through cyipopt."""
    module = import_cyipopt()
    callbacks = _Callbacks(nlp, watch)
    n, m = nlp.size
    problem = module.Problem(n, m, callbacks, nlp.low, nlp.high, nlp.row_low, nlp.row_high)
    for name, setting in options.items():
        problem.add_option(name, setting)
    start = {"lagrange": duals.multipliers, "zl": duals.bound_low, "zu": duals.bound_high} if duals else {}
    x, info = problem.solve(x0, **start)
    return Ending(
        stopped_from_code(int(info["status"])),
        np.array(x),
        float(info["obj_val"]),
        np.array(info["mult_g"]),
        np.array(info["mult_x_L"]),
        np.array(info["mult_x_U"]),
        callbacks.iterations,
        callbacks.violation,
    )


def whole_problem(nlp: Nlp) -> dict[str, Any]:
    """The programme as one casadi problem {x, f, g}, for casadi's own Ipopt."""
    import casadi as ca

    x = ca.SX.sym("x", nlp.size[0])
    scaled = x / nlp.factor
    rows: list[Any] = [None] * (nlp.size[1] + 1)
    for shape in nlp.shapes:
        for copy in range(len(shape.tapes)):
            body = shape.function(scaled[shape.columns[copy].tolist()], shape.parameters[copy])
            for k, row in enumerate(shape.rows[copy]):
                rows[row] = body[k] * nlp.row_factor[row]
    return {"x": x, "f": rows[-1], "g": ca.vertcat(*rows[:-1])}


def solve_casadi(
    nlp: Nlp, x0: Floats, options: dict[str, Any], watch: Watch | None = None, duals: Ending | None = None
) -> Ending:
    """Solve through the Ipopt inside casadi. `watch` is not called: this backend tells nothing on the way."""
    import casadi as ca

    settings = {"ipopt": options, "print_time": False, "error_on_fail": False}
    solver = ca.nlpsol("solver", "ipopt", whole_problem(nlp), settings)
    start = {"lam_g0": duals.multipliers, "lam_x0": duals.bound_high - duals.bound_low} if duals else {}
    end = solver(x0=x0, lbx=nlp.low, ubx=nlp.high, lbg=nlp.row_low, ubg=nlp.row_high, **start)
    stats = solver.stats()
    bounds = np.array(end["lam_x"]).ravel()
    violations = stats["iterations"]["inf_pr"] if "iterations" in stats else [float("inf")]
    return Ending(
        stopped_from_code(_casadi_code(stats["return_status"])),
        np.array(end["x"]).ravel(),
        float(end["f"]),
        np.array(end["lam_g"]).ravel(),
        np.maximum(-bounds, 0.0),
        np.maximum(bounds, 0.0),
        int(stats["iter_count"]),
        float(violations[-1]),
    )


def _casadi_code(status: str) -> int:
    """Ipopt's return code behind the name that casadi reports."""
    names = {
        "Solve_Succeeded": 0,
        "Solved_To_Acceptable_Level": 1,
        "Infeasible_Problem_Detected": 2,
        "Search_Direction_Becomes_Too_Small": 3,
        "User_Requested_Stop": 5,
        "Feasible_Point_Found": 6,
        "Maximum_Iterations_Exceeded": -1,
        "Restoration_Failed": -2,
        "Error_In_Step_Computation": -3,
        "Maximum_CpuTime_Exceeded": -4,
        "Invalid_Number_Detected": -13,
    }
    return names.get(status, -199)


BACKENDS = {"cyipopt": solve_cyipopt, "casadi": solve_casadi}


def default_backend() -> str:
    """`cyipopt` where it imports, else `casadi`."""
    try:
        import_cyipopt()
    except ImportError:
        return "casadi"
    return "cyipopt"


def solve(
    nlp: Nlp,
    x0: Floats,
    *,
    backend: str | None = None,
    options: dict[str, Any] | None = None,
    watch: Watch | None = None,
    warm: Ending | None = None,
) -> Ending:
    """Solve `nlp` from `x0` (scaled). With `warm`, start from that ending's multipliers too."""
    settings = OPTIONS | (WARM if warm else {}) | (options or {})
    return BACKENDS[backend or default_backend()](nlp, x0, settings, watch, warm)
