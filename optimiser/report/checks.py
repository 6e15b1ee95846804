"""The page of `check`: what may move, what is held, what is limited, and whether that adds up."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

from optimiser.report.closing import warnings
from optimiser.report.layout import CheckResult, Range
from optimiser.report.look import ALERT, GAP, GOOD, QUIET, Look, banner, bulleted, heading, render
from optimiser.report.numbers import unit_name, written
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType

MEANINGS = {
    "ready": "The case is well formed; nothing was solved.",
    "over-specified": "More is held than the plant leaves open: free one of the settings named below.",
    "under-specified": "Too little is given to calculate the plant: give what is named below.",
    "conflict": "The case is well formed, but no point can hold all of it.",
}


def check_page(found: CheckResult, *, title: str, look: Look | None = None) -> str:
    """What `check` found, as text for a terminal or a file; by default plain text of 80 characters."""
    place = look or Look()
    blocks = [
        *_verdict(found, title),
        *_listed("Free", [(r["path"], _span(r)) for r in found["free"]]),
        *_listed("Held", [(h["path"], _with_unit(written(h["value"]), h["unit"])) for h in found["held"]]),
        *_listed("Limits", [(r["path"], _span(r)) for r in found["limits"]]),
        *warnings(found["warnings"], place),
    ]
    if found["groups"]:
        blocks += [heading("Does not add up"), bulleted([plain(g) for g in found["groups"]], place, ALERT)]
    return render(blocks, place)


def _verdict(found: CheckResult, title: str) -> Iterable[RenderableType]:
    from rich.text import Text

    head = banner(title, found["status"], GOOD if found["status"] == "ready" else ALERT)
    counted = f"{found['variables']:,} variables, {found['equations']:,} equations"
    free = f"  {counted}: {_settings(found['freedom'])} free."
    return [head, Text(), Text(f"  {MEANINGS[found['status']]}"), Text(free, style=QUIET)]


def _settings(count: int) -> str:
    return {0: "nothing is", 1: "one setting is"}.get(count, f"{count} settings are")


def _listed(title: str, rows: Sequence[tuple[str, str]]) -> list[RenderableType]:
    """Paths with what the case says of each."""
    from rich.padding import Padding
    from rich.table import Table
    from rich.text import Text

    if not rows:
        return []
    table = Table.grid(padding=(0, GAP))
    table.add_column(overflow="fold")
    table.add_column(no_wrap=True)
    for path, text in rows:
        table.add_row(Text(plain(path)), Text(text))
    return [heading(title), Padding(table, (0, 0, 0, 2))]


def _span(row: Range) -> str:
    """The range as a case file would write it."""
    low, high, unit = row["low"], row["high"], row["unit"]
    if low is not None and high is not None:
        return _with_unit(f"{written(low)} .. {written(high)}", unit)
    if low is not None:
        return _with_unit(f">= {written(low)}", unit)
    return _with_unit(f"<= {written(high)}", unit)


def _with_unit(text: str, unit: str) -> str:
    return f"{text} {unit_name(unit)}".rstrip()
