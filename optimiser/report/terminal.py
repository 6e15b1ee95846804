"""The page that `solve` ends with: the answer first, then what led to it, then how far to trust it."""

from __future__ import annotations

from optimiser.report.answer import answer
from optimiser.report.closing import audit, caution, warnings
from optimiser.report.decisions import decisions
from optimiser.report.layout import Result
from optimiser.report.limits import binding
from optimiser.report.look import Look, render
from optimiser.report.money import costs
from optimiser.report.plant import beds, streams


def result_page(result: Result, *, title: str, look: Look | None = None) -> str:
    """Everything that a reader of one result needs, as text for a terminal or a file.

    Args:
        result: what `solve` found; parts that it lacks are left out of the page.
        title: title of the case.
        look: width and style; by default plain text of 80 characters.
    """
    place = look or Look()
    blocks = [
        *answer(result, title),
        *decisions(result, place),
        *binding(result),
        *beds(result, place),
        *streams(result, place),
        *costs(result, place),
        *audit(result, place),
        *warnings(result.get("warnings") or [], place),
        *caution(result),
    ]
    return render(blocks, place)
