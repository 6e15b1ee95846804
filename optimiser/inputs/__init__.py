"""YAML files to frozen objects, all errors of a file in one go."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from optimiser.inputs.errors import InputError, InputProblem

if TYPE_CHECKING:
    from optimiser.inputs.case import Case
    from optimiser.inputs.reading import parse_case, read_case
    from optimiser.inputs.schema import describe_schema

__all__ = ["Case", "InputError", "InputProblem", "describe_schema", "parse_case", "read_case"]

_HOMES = {"Case": "case", "read_case": "reading", "parse_case": "reading", "describe_schema": "schema"}


def __getattr__(name: str) -> Any:
    """Units and checks take time to load, so they are loaded when first asked for."""
    if name not in _HOMES:
        raise AttributeError(name)
    from importlib import import_module

    return getattr(import_module(f"optimiser.inputs.{_HOMES[name]}"), name)
