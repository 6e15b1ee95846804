"""The page of `doctor`: which solvers work on this machine, and what to do about those that do not."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from optimiser.report.layout import BackendRow
from optimiser.report.look import BAD, GAP, GOOD, HEADING, QUIET, Look, render
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType

# Either of these solves a case; highs is asked only which limits clash.
OPTIMISERS = ("cyipopt", "casadi")


def can_solve(rows: Sequence[BackendRow]) -> bool:
    """Whether a solver for cases works."""
    return any(row["ok"] for row in rows if row["backend"] in OPTIMISERS)


def backends_page(rows: Sequence[BackendRow], *, machine: str, look: Look | None = None) -> str:
    """What `doctor` found, as text; by default plain text of 80 characters.

    Args:
        rows: one for each solver.
        machine: Python and the system in a few words.
        look: width and style.
    """
    from rich.text import Text

    head = Text(plain(machine), style=HEADING)
    return render([head, Text(), _table(rows), Text(), Text(_verdict(rows))], look or Look())


def _table(rows: Sequence[BackendRow]) -> RenderableType:
    from rich.padding import Padding
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(padding=(0, GAP))
    for _ in range(2):
        table.add_column(no_wrap=True)
    table.add_column(overflow="fold")
    for row in rows:
        works = Text("works", style=GOOD) if row["ok"] else Text("does not work", style=BAD)
        versions = ", ".join(f"{name} {version}" for name, version in row["versions"].items())
        table.add_row(Text(row["backend"]), works, Text(plain(row["message"])))
        table.add_row("", "", Text(plain(versions or "not installed"), style=QUIET))
    return Padding(table, (0, 0, 0, 2))


def _verdict(rows: Sequence[BackendRow]) -> str:
    broken = [row["backend"] for row in rows if not row["ok"]]
    if not broken:
        return "Everything is there: cases can be solved."
    if not can_solve(rows):
        return "No solver works, so no case can be solved. Install setpoise anew in a fresh environment."
    if "cyipopt" in broken or "casadi" in broken:
        return f"Cases can be solved; without {broken[0]} the other solver takes its place."
    return "Cases can be solved; where limits clash, setpoise cannot say which."
