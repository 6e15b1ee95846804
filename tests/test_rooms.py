"""No room imports from a room below it, and the audit's room never sees the equations that it audits."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parents[1] / "optimiser"
ROOMS = (
    "progress",
    "quantities",
    "inputs",
    "chemistry",
    "engineering",
    "section",
    "forward",
    "solve",
    "findings",
    "records",
    "studies",
    "report",
    "cli",
)


def _imports(path: Path) -> set[str]:
    """Rooms that a file imports, inside functions too."""
    rooms = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        names = []
        if isinstance(node, ast.ImportFrom) and node.module:
            names = (
                [node.module] if node.module != "optimiser" else [f"optimiser.{a.name}" for a in node.names]
            )
        elif isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        rooms |= {name.split(".")[1] for name in names if name.startswith("optimiser.")}
    return rooms - {"__version__"}


FILES = sorted(p for p in PACKAGE.rglob("*.py") if p.parent != PACKAGE or p.stem in ROOMS)


@pytest.mark.parametrize("path", FILES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_imports_go_upwards_only(path: Path) -> None:
    room = path.relative_to(PACKAGE).parts[0].removesuffix(".py")
    above = ROOMS[: ROOMS.index(room) + 1]
    assert _imports(path) <= set(above), f"{path.name} reaches down"


def test_forward_never_imports_section_or_a_solver() -> None:
    for path in (PACKAGE / "forward").glob("*.py"):
        assert not _imports(path) & {"section", "solve"}
        assert "pyomo" not in path.read_text(encoding="utf-8")
