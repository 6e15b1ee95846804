"""The solves of one case: what they share, their starts, and the best of them."""

from __future__ import annotations

import gc
import signal
import threading
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import Any

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.costs import Equipment, load_equipment
from optimiser.findings.setpoints import starting_setpoints
from optimiser.forward.walk import Section
from optimiser.inputs.case import BedStep, Case
from optimiser.inputs.model import Model, read_model
from optimiser.progress import Progress
from optimiser.section.build import SectionModel, build_section
from optimiser.section.collocation import point_positions
from optimiser.solve.backends import default_backend, solve
from optimiser.solve.ending import Ending
from optimiser.solve.initial import Completion
from optimiser.solve.load import load_walk
from optimiser.solve.nlp import Nlp
from optimiser.solve.starts import Attempt, run_attempts

# Extra starts that need more iterations than this are not worth the wait; the first start may take as many as it likes.
EXTRA_ITERATIONS = 55


@dataclass
class Workshop:
    """Everything that the solves of one case share: models, derivatives, forward calculation."""

    case: Case
    model: Model
    chemistry: Chemistry
    equipment: Equipment
    section: SectionModel
    nlp: Nlp
    completion: Completion
    forward: Section
    timing: dict[str, float] = field(default_factory=dict)
    interrupted: bool = False

    def start(self, setpoints: dict[str, float]) -> Any:
        """Scaled start from a walk through the section at these setpoints."""
        walk = self.forward.start(setpoints, positions=self.positions())
        load_walk(self.section, walk)
        return self.completion.complete(self.nlp.start())

    def positions(self) -> dict[str, list[float]]:
        """Where each bed is asked for: at the points of its collocation, or at its outlet alone."""
        beds = [step for step in self.case.reactor if isinstance(step, BedStep)]
        return {b.name: point_positions(b.elements) if b.rate == "kinetic" else [1.0] for b in beds}

    def watch(self, *_: float) -> bool:
        """Whether the solver should go on."""
        return not self.interrupted


def open_workshop(case: Case) -> Workshop:
    """Read the model, build the section and its derivatives."""
    # A model is a hundred thousand small objects that all live; collecting garbage among them finds nothing.
    collecting = gc.isenabled()
    gc.disable()
    try:
        return _built(case)
    finally:
        if collecting:
            gc.enable()


def _built(case: Case) -> Workshop:
    timing, clock = {}, time.perf_counter()
    model = read_model(case.model, relative_to=case.path)
    chemistry = Chemistry.build(model, case.equation_of_state, species=_present(case, model))
    equipment = load_equipment()
    section = build_section(case, chemistry, equipment)
    timing["build"] = time.perf_counter() - clock
    clock = time.perf_counter()
    nlp = Nlp(section.model)
    completion = Completion(nlp, section.frame.definitions)
    timing["derivatives"] = time.perf_counter() - clock
    forward = Section(case, chemistry, equipment)
    return Workshop(case, model, chemistry, equipment, section, nlp, completion, forward, timing)


def _present(case: Case, model: Model) -> list[str]:
    """Species that the feed brings or a reaction makes, in the model's order; absent ones would have no logarithm."""
    fed = {name for stream in case.feed.streams.values() for name, y in stream.composition.items() if y > 0}
    made = {name for numbers in model.reactions.values() for name in numbers}
    return [name for name in model.species if name in fed | made]


@contextmanager
def _interruptible(workshop: Workshop) -> Iterator[None]:
    """Ctrl-C ends the solves at their next iteration; what they have is kept. A second one ends the program."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return

    def handler(*_: Any) -> None:
        if workshop.interrupted:
            raise KeyboardInterrupt
        workshop.interrupted = True

    before = signal.signal(signal.SIGINT, handler)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)


def optimise(
    workshop: Workshop,
    *,
    starts: int = 8,
    seed: int = 0,
    backend: str | None = None,
    progress: Progress | None = None,
    processes: int | None = None,
) -> list[Attempt]:
    """Solve from several starts; all attempts, by index."""
    points = starting_setpoints(workshop.case, starts, seed)
    prepare_factors(workshop, points[0])
    chosen = backend or default_backend()

    def solve_one(index: int) -> Ending:
        if workshop.interrupted:
            raise RuntimeError("the run was interrupted before this start")
        x0 = workshop.start(points[index])
        options = {"max_iter": EXTRA_ITERATIONS} if index and not patient else {}
        return solve(workshop.nlp, x0, backend=chosen, options=options, watch=workshop.watch)

    def done(attempt: Attempt) -> None:
        if progress is not None:
            progress.start(attempt.index, starts, _told(attempt))

    patient = False
    with _interruptible(workshop):
        clock = time.perf_counter()
        attempts = _attempts(workshop, solve_one, len(points), done, processes)
        if not workshop.interrupted and not any(a.ending is not None and a.ending.converged for a in attempts):
            patient = True  # A hard case: none may be cut short now.
            attempts = _attempts(workshop, solve_one, len(points), done, processes)
        workshop.timing["starts"] = time.perf_counter() - clock
    return attempts


def _attempts(
    workshop: Workshop,
    solve_one: Callable[[int], Ending],
    count: int,
    done: Callable[[Attempt], None],
    processes: int | None,
) -> list[Attempt]:
    """All starts once; what is left when the run is interrupted is given up."""
    return run_attempts(solve_one, count, done=done, processes=processes, stopped=lambda: workshop.interrupted)


def prepare_factors(workshop: Workshop, setpoints: dict[str, float]) -> None:
    """Fit the beds that are told by a Damkohler number at the first start, for all of them."""
    from optimiser.findings.refit import factor_steps, fit_factors

    if factor_steps(workshop):
        workshop.nlp.load(workshop.start(setpoints))
        fit_factors(workshop)


def _told(attempt: Attempt) -> str:
    if attempt.ending is None:
        return f"no start: {attempt.reason}"
    return f"{attempt.ending.stopped.value} after {attempt.ending.iterations} iterations"


def best_attempt(attempts: list[Attempt]) -> Attempt | None:
    """The converged attempt with the best objective, else the one closest to feasible; None without any point."""
    ended = [a for a in attempts if a.ending is not None]
    if not ended:
        return None

    def rank(attempt: Attempt) -> tuple[bool, float]:
        ending = attempt.ending
        assert ending is not None
        return (not ending.converged, ending.objective if ending.converged else ending.violation)

    return min(ended, key=rank)
