"""Times and memory as ratios within one run, so that they mean the same on every machine.

Run with `pytest -n 0 tests/benchmarks` on a machine that does nothing else.
"""

from __future__ import annotations

import os
import resource
import subprocess
import sys
import time

import pytest

IMPORTS = "import pyomo.environ, casadi, cyipopt"
CALL = "import sys; from optimiser.cli.main import main; sys.argv[0] = 'setpoise'; main()"
COMMAND = ["-c", CALL, "solve", "ammonia-loop", "--no-save", "--quiet"]


def _seconds(arguments: list[str], times: int) -> float:
    """Least wall time of a few runs of a fresh interpreter."""
    found = []
    for _ in range(times):
        begin = time.perf_counter()
        ended = subprocess.run([sys.executable, *arguments], check=True, capture_output=True, text=True)
        found.append(time.perf_counter() - begin)
        assert arguments is not COMMAND or "audited optimum" in ended.stdout
    return min(found)


def test_whole_command_against_the_imports_alone(benchmark) -> None:
    """Cold, with its default starts and the audit: at most 2.5 times what importing the solver stack takes."""
    imports = _seconds(["-c", IMPORTS], 5)
    benchmark.pedantic(_seconds, args=(COMMAND, 1), rounds=5, iterations=1)
    ratio = benchmark.stats.stats.min / imports
    benchmark.extra_info.update(imports_seconds=imports, ratio=ratio)
    print(f"\nwhole command {benchmark.stats.stats.min:.2f} s, imports {imports:.2f} s, ratio {ratio:.2f}")
    assert ratio <= 2.5


def test_memory_of_the_whole_command() -> None:
    """Peak resident memory of the command and its processes below 500 MB each."""
    subprocess.run([sys.executable, *COMMAND], check=True, stdout=subprocess.DEVNULL)
    peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024.0
    print(f"\npeak memory {peak:.0f} MB")
    assert peak < 500.0


@pytest.fixture(scope="module")
def workshop():
    """The shipped case, built."""
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    from optimiser.findings.run import open_workshop
    from optimiser.inputs import read_case

    return open_workshop(read_case("ammonia-loop"))


def test_our_path_against_casadi_alone(benchmark, workshop) -> None:
    """Derivatives and solve at most 0.8 times casadi's own Ipopt on the same equations, iterations 1.8 times."""
    import casadi as ca

    from optimiser.findings.setpoints import starting_setpoints
    from optimiser.solve.backends import OPTIONS, solve, whole_problem
    from optimiser.solve.nlp import Nlp

    start = workshop.start(starting_setpoints(workshop.case, 1, 0)[0])

    def ours() -> tuple[float, float]:
        begin = time.perf_counter()
        nlp = Nlp(workshop.section.model)
        built = time.perf_counter()
        assert solve(nlp, start, backend="cyipopt").converged
        return built - begin, time.perf_counter() - built

    def theirs() -> tuple[float, float]:
        begin = time.perf_counter()
        settings = {"ipopt": OPTIONS, "print_time": False}
        solver = ca.nlpsol("solver", "ipopt", whole_problem(workshop.nlp), settings)
        built = time.perf_counter()
        nlp = workshop.nlp
        solver(x0=start, lbx=nlp.low, ubx=nlp.high, lbg=nlp.row_low, ubg=nlp.row_high)
        assert solver.stats()["success"]
        return built - begin, time.perf_counter() - built

    mine = min((ours() for _ in range(3)), key=sum)
    other = min((theirs() for _ in range(3)), key=sum)
    benchmark.pedantic(ours, rounds=1, iterations=1)
    whole, iterations = sum(mine) / sum(other), mine[1] / other[1]
    benchmark.extra_info.update(whole=whole, iterations=iterations)
    print(f"\nderivatives and solve {whole:.2f}, iterations alone {iterations:.2f} of casadi's own")
    assert whole <= 0.8
    assert iterations <= 1.8


@pytest.mark.slow
def test_against_a_stepwise_optimiser(workshop) -> None:
    """Report how much longer scipy's SLSQP takes on the forward calculation with the same decisions."""
    import numpy as np
    from scipy.optimize import minimize

    from optimiser.findings.run import best_attempt, optimise
    from optimiser.findings.setpoints import starting_setpoints
    from optimiser.forward.stream import ForwardFailure

    begin = time.perf_counter()
    best = best_attempt(optimise(workshop, starts=1, processes=1))
    assert best is not None and best.ending is not None
    ours = time.perf_counter() - begin
    settings = workshop.case.settings()
    free = [path for path, setting in settings.items() if not setting.held]
    point = starting_setpoints(workshop.case, 1, 0)[0]
    low, span = (np.array([f(settings[p]) for p in free]) for f in (lambda s: s.low, lambda s: s.high - s.low))
    limits = dict(workshop.case.limits)
    calls = 0
    begin = time.perf_counter()

    def walk(u):
        nonlocal calls
        calls += 1
        try:
            values = dict(point) | dict(zip(free, low + u * span, strict=True))
            quantities = workshop.forward.converge(values, tolerance=1e-7, iterations=60, bed_tolerance=1e-8).quantities
        except ForwardFailure:
            return 0.0, [-1.0]
        made = quantities["product.rate"] * workshop.case.economics.hours_per_year.si
        room = [
            sign * (end - quantities[p]) / abs(end)
            for p, limit in limits.items()
            for end, sign in ((limit.high, 1.0), (limit.low, -1.0))
            if end is not None and p in quantities
        ]
        return made / quantities["costs.total"], room

    u0 = np.array([(point[p] - a) / b for p, a, b in zip(free, low, span, strict=True)])
    penalty = lambda u: -walk(u)[0] + 10.0 * sum(min(r, 0.0) ** 2 for r in walk(u)[1])  # noqa: E731
    found = minimize(penalty, u0, method="SLSQP", bounds=[(0.0, 1.0)] * len(free), options={"maxiter": 8})
    theirs = time.perf_counter() - begin
    print(
        f"\nSLSQP: {-found.fun:.4f} after {theirs:.0f} s and {calls} passes; here {-best.ending.objective:.4f} "
        f"in {ours:.2f} s: {theirs / ours:.0f} times"
    )
    assert theirs > ours
