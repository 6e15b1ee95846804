"""Data of a file that remember where every value stands."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from optimiser.inputs.errors import InputProblem

Path_ = tuple[str | int, ...]

# Keys whose value names an item of a list.
NAMING_KEYS = ("bed", "cool", "stage")


@dataclass(frozen=True)
class Spot:
    """Line and column counted from 1, and the text of a value (empty for lists, mappings and keys)."""

    line: int
    column: int
    text: str = ""


@dataclass
class Document:
    """A file's data: dict, list, str, int, float, bool, None.

    Attributes:
        file: the path as the user gave it.
        data: the whole tree.
        path: of the file; None for a text without one.
        sha256: of the file's bytes.
        values, keys: place of each value, and of the key that it stands under, by path.
        sources: paths whose values come from elsewhere (an option of the command line), with its words.
    """

    file: str
    data: Any
    path: Path | None = None
    sha256: str = ""
    values: dict[Path_, Spot] = field(default_factory=dict)
    keys: dict[Path_, Spot] = field(default_factory=dict)
    sources: dict[Path_, str] = field(default_factory=dict)

    def location(self, path: Path_) -> tuple[int, int]:
        """Line and column of a value; of what would hold it, where it is missing."""
        for length in range(len(path), -1, -1):
            spot = self.values.get(path[:length])
            if spot is not None:
                return spot.line, spot.column
        return 1, 1

    def text(self, path: Path_) -> str:
        """What was written at a path; empty for lists, mappings and what is missing."""
        spot = self.values.get(path)
        return spot.text if spot is not None else ""

    def problem(
        self, path: Path_, read: str | None, wanted: str, nearest: str | None = None, *, key: bool = False
    ) -> InputProblem:
        """A problem at a path.

        Args:
            read: what was found; None for the text at the path.
            key: whether the key is at fault, rather than its value.
        """
        found = self.text(path) if read is None else read
        for length in range(len(path), 0, -1):
            source = self.sources.get(path[:length])
            if source is not None:
                return InputProblem(source, None, None, self.dotted(path), found, wanted, nearest)
        spot = self.keys.get(path) if key else None
        line, column = (spot.line, spot.column) if spot is not None else self.location(path)
        return InputProblem(self.file, line, column, self.dotted(path), found, wanted, nearest)

    def dotted(self, path: Path_) -> str:
        """The path as users write it: items go by their names, stages without the name of their list."""
        parts: list[str] = []
        holder = self.data
        for part in path:
            inside = isinstance(holder, list) and isinstance(part, int) and 0 <= part < len(holder)
            known = isinstance(holder, dict) and part in holder
            holder = holder[part] if inside or known else None
            name = _name_of(holder) if inside else None
            if name is not None and parts[-1] == "stages":
                parts.pop()
            parts.append(str(part) if name is None else name)
        return ".".join(parts)


def _name_of(item: Any) -> str | None:
    """Name of an item of a list: the value of its first key, where the list's items are named so."""
    if not isinstance(item, dict):
        return None
    name = next((item[key] for key in NAMING_KEYS if key in item), None)
    return name if isinstance(name, str) else None
