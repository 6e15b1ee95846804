"""Several starts spread over the decisions, solved on all cores, best first.

Each start is independent of the others, so the result is the same on one process and on several.
"""

from __future__ import annotations

import multiprocessing
import os
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from optimiser.solve.ending import Ending
from optimiser.solve.shapes import Floats


@dataclass(frozen=True)
class Attempt:
    """One start and how it ended; `ending` is None where no start could be computed, `reason` then says why."""

    index: int
    ending: Ending | None
    seconds: float
    reason: str = ""


def spread(count: int, dimension: int, seed: int) -> Floats:
    """Points spread evenly over the unit cube, shape (count, dimension).

    Kronecker sequence with the powers of the generalised golden ratio (Roberts 2018): low discrepancy in any
    dimension, and shifted by the seed.
    """
    ratio = 2.0
    for _ in range(60):
        ratio = (1.0 + ratio) ** (1.0 / (dimension + 1))
    steps = ratio ** -np.arange(1.0, dimension + 1)
    shift = np.random.default_rng(seed).random(dimension)
    return np.asarray((shift + np.outer(np.arange(1, count + 1), steps)) % 1.0)


def run_attempts(
    solve_one: Callable[[int], Ending],
    count: int,
    *,
    processes: int | None = None,
    done: Callable[[Attempt], None] | None = None,
    stopped: Callable[[], bool] = lambda: False,
) -> list[Attempt]:
    """Solve all starts.

    Args:
        solve_one: solves the start of an index; called in this process and, where the system can fork, in one more
            for each further core.
        done: told of each finished attempt.
        stopped: whether the rest is no longer wanted; what other processes have not finished is then given up.
    """
    workers = processes or _workers(count)
    groups = [range(k, count, workers) for k in range(workers)]
    if workers == 1:
        return _run_group(solve_one, groups[0], done)
    context = multiprocessing.get_context("fork")
    children = []
    for group in groups[1:]:
        receiver, sender = context.Pipe(duplex=False)
        child = context.Process(target=_child, args=(solve_one, group, sender), daemon=True)
        child.start()
        sender.close()
        children.append((child, receiver))
    attempts = _run_group(solve_one, groups[0], done)
    for (child, receiver), group in zip(children, groups[1:], strict=True):
        if stopped():
            child.terminate()
        attempts += _collect(receiver, group, done)
        child.join()
    return sorted(attempts, key=lambda attempt: attempt.index)


def _workers(count: int) -> int:
    if "fork" not in multiprocessing.get_all_start_methods() or sys.platform == "darwin":
        return 1
    cores = len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else (os.cpu_count() or 1)
    return max(1, min(cores, count))


def _run_group(
    solve_one: Callable[[int], Ending], group: Sequence[int], done: Callable[[Attempt], None] | None
) -> list[Attempt]:
    attempts = []
    for index in group:
        attempts.append(_attempt(solve_one, index))
        if done is not None:
            done(attempts[-1])
    return attempts


def _attempt(solve_one: Callable[[int], Ending], index: int) -> Attempt:
    begin = time.perf_counter()
    try:
        ending, reason = solve_one(index), ""
    except (ArithmeticError, ValueError, RuntimeError) as problem:
        ending, reason = None, str(problem)
    return Attempt(index, ending, time.perf_counter() - begin, reason)


def _child(solve_one: Callable[[int], Ending], group: Sequence[int], sender: object) -> None:
    for index in group:
        sender.send(_attempt(solve_one, index))  # type: ignore[attr-defined]
    sender.close()  # type: ignore[attr-defined]


def _collect(receiver: object, group: Sequence[int], done: Callable[[Attempt], None] | None) -> list[Attempt]:
    """What a child sent; a start whose process died is an attempt without an ending."""
    attempts: list[Attempt] = []
    for index in group:
        try:
            attempt = receiver.recv()  # type: ignore[attr-defined]
        except EOFError:
            attempt = Attempt(index, None, 0.0, "the process of this start ended early")
        attempts.append(attempt)
        if done is not None:
            done(attempt)
    return attempts
