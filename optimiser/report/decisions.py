"""Decisions of a result: where each ended in its range, and what was held."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from optimiser.report.layout import Decision, Result
from optimiser.report.look import ALERT, GAP, QUIET, Look, heading
from optimiser.report.numbers import aligned, number, unit_name, written
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType
    from rich.text import Text

MARGIN = 2
# The line on which a decision sits is this long [characters]; where less is left it is dropped.
SHORTEST_RAIL, LONGEST_RAIL = 5, 21
PLACES = {"inside": "inside", "low": "low end", "high": "high end"}


def decisions(result: Result, look: Look) -> list[RenderableType]:
    """Free decisions as a table, held ones as a list after it."""
    everything = result.get("decisions") or {}
    free = {path: d for path, d in everything.items() if d["at"] != "held"}
    held = {path: d for path, d in everything.items() if d["at"] == "held"}
    blocks: list[RenderableType] = []
    if free:
        blocks += [heading("Decisions", "where each ended between the ends of its range"), _free(free, look)]
    if held:
        blocks += [heading("Held"), _held(held)]
    return blocks


def _free(free: Mapping[str, Decision], look: Look) -> RenderableType:
    from rich.padding import Padding
    from rich.table import Table
    from rich.text import Text

    rows = list(free.values())
    values = aligned([(number(d["value"]), unit_name(d["unit"])) for d in rows])
    places = [PLACES[d["at"]] for d in rows]
    taken = MARGIN + max(map(len, values)) + max(map(len, places)) + 3 * GAP
    grouped = max(map(len, free)) + taken + _shortest(rows) > look.width
    labels = [_label(path, grouped) for path in free]
    ranges = _ranges(rows, look, look.width - taken - max(label.cell_len for label in labels))
    table = Table.grid(padding=(0, GAP))
    table.add_column(overflow="fold")
    for _ in range(3):
        table.add_column(no_wrap=True)
    for row, path in enumerate(free):
        if grouped and path.split(".")[0] not in {p.split(".")[0] for p in list(free)[:row]}:
            table.add_row(Text(plain(path.split(".")[0]), style=QUIET))
        place = Text(places[row], style=QUIET if rows[row]["at"] == "inside" else ALERT)
        table.add_row(labels[row], Text(values[row], style="bold"), ranges[row], place)
    return Padding(table, (0, 0, 0, MARGIN))


def _label(path: str, grouped: bool) -> Text:
    """The whole path, or below the name of its group what follows that name."""
    from rich.text import Text

    if not grouped:
        return _path(path)
    return Text("  ") + _path(path.partition(".")[2])


def _shortest(rows: list[Decision]) -> int:
    """Characters that the ranges take with the shortest line between their ends."""
    widest = [max(len(written(d[end])) for d in rows) for end in ("low", "high")]
    return sum(widest) + SHORTEST_RAIL + 2


def _path(path: str) -> Text:
    """The path with its own name brighter than the way to it."""
    from rich.text import Text

    way, dot, name = plain(path).rpartition(".")
    return Text.assemble((way + dot, QUIET), name)


def _ranges(rows: list[Decision], look: Look, room: int) -> list[Text]:
    """Low end, line with the place of the decision, high end; the line takes what room the numbers leave."""
    from rich.text import Text

    lows = [written(d["low"]) for d in rows]
    highs = [written(d["high"]) for d in rows]
    left, right = max(map(len, lows)), max(map(len, highs))
    length = min(room - left - right - 2, LONGEST_RAIL)
    texts = []
    for low, high, decision in zip(lows, highs, rows, strict=True):
        rail = _rail(decision, look, length) if length >= SHORTEST_RAIL else ".."
        texts.append(Text.assemble((f"{low:>{left}} ", QUIET), rail, (f" {high:<{right}}", QUIET)))
    return texts


def _rail(decision: Decision, look: Look, length: int) -> Text:
    from rich.text import Text

    at = _place(decision, length)
    style = "" if decision["at"] == "inside" else ALERT
    return Text.assemble((look.rail * at, QUIET), (look.knob, style), (look.rail * (length - 1 - at), QUIET))


def _place(decision: Decision, length: int) -> int:
    """Position of the decision on a line of that length; only one that sits at an end touches it."""
    low, high = decision["low"], decision["high"]
    if decision["at"] == "low" or low is None or high is None or high <= low:
        return 0
    if decision["at"] == "high":
        return length - 1
    part = (decision["value"] - low) / (high - low)
    return min(max(round(part * (length - 1)), 1), length - 2)


def _held(held: Mapping[str, Decision]) -> RenderableType:
    """Held values in running lines; none is torn apart at a line end."""
    from rich.columns import Columns
    from rich.padding import Padding
    from rich.text import Text

    texts = [
        Text.assemble(_path(path), f" {written(d['value'])} {unit_name(d['unit'])}".rstrip())
        for path, d in held.items()
    ]
    return Padding(Columns(texts, padding=(0, GAP)), (0, 0, 0, MARGIN))
