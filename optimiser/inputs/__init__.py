"""Room 2: YAML files to frozen objects, all errors of a file in one go."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from optimiser.inputs.errors import InputError, InputProblem

if TYPE_CHECKING:
    from optimiser.inputs.reading import read_case

__all__ = ["InputError", "InputProblem", "read_case"]


def __getattr__(name: str) -> Any:
    """Reading pulls in units and checks; it is loaded when first asked for."""
    if name == "read_case":
        from optimiser.inputs.reading import read_case

        return read_case
    raise AttributeError(name)
