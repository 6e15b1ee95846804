"""Beds and streams of a result as tables."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

from optimiser.report.layout import Amount, Result, StreamState
from optimiser.report.look import Look, heading
from optimiser.report.numbers import column, mole_percent, number, unit_name
from optimiser.report.plain import plain
from optimiser.report.tables import Column, keyed

if TYPE_CHECKING:
    from rich.console import RenderableType

# Heads of the columns that every bed has; others follow under their own name.
BED_HEADS = {
    "inlet_temperature": "in",
    "outlet_temperature": "out",
    "hottest": "hottest",
    "inlet_product": "product in",
    "outlet_product": "product out",
    "approach_fraction": "approach",
    "approach_temperature": "approach",
    "volume": "volume",
    "length": "length",
    "diameter": "diameter",
    "pressure_drop": "drop",
}


def beds(result: Result, look: Look) -> list[RenderableType]:
    """What enters and leaves each bed, and how far it stays from equilibrium."""
    rows = result.get("beds") or {}
    if not rows:
        return []
    present = {key for row in rows.values() for key in row}
    order = [key for key in BED_HEADS if key in present]
    order += sorted(present - BED_HEADS.keys())
    columns = [_amounts(_bed_head(key), [row.get(key) for row in rows.values()]) for key in order]
    return [heading("Beds"), *keyed([plain(name) for name in rows], columns, look)]


def _bed_head(key: str) -> str:
    return BED_HEADS.get(key, plain(key.replace("_", " ")))


def streams(result: Result, look: Look) -> list[RenderableType]:
    """State and composition of each stream."""
    rows = result.get("streams") or {}
    if not rows:
        return []
    states = list(rows.values())
    columns = [
        _amounts("temperature", [state["temperature"] for state in states]),
        _amounts("pressure", [state["pressure"] for state in states]),
        _amounts("flow", [state["flow"] for state in states]),
        Column("vapour", "", [number(state["vapour_fraction"], 3) for state in states]),
        *_composition(rows),
    ]
    return [heading("Streams"), *keyed([plain(name.replace("_", " ")) for name in rows], columns, look)]


def _composition(rows: Mapping[str, StreamState]) -> list[Column]:
    species = list(dict.fromkeys(name for row in rows.values() for name in row["composition"]))
    return [
        Column(plain(name), "mol%", [mole_percent(row["composition"].get(name)) for row in rows.values()])
        for name in species
    ]


def _amounts(head: str, cells: Sequence[Amount | None]) -> Column:
    """A column whose unit stands in its head; where units differ each cell carries its own."""
    units = {unit_name(cell["unit"]) for cell in cells if cell}
    common = units.pop() if len(units) == 1 else ""
    if units:
        return Column(head, "", [f"{number(c['value'])} {unit_name(c['unit'])}" if c else "-" for c in cells])
    return Column(head, plain(common), column([c["value"] if c else None for c in cells]))
