"""A case back to YAML, every default visible, as a user would write it."""

from __future__ import annotations

from typing import Any

from pydantic import BaseModel

from optimiser.quantities import Limit, Quantity, Setting


def write_case(case: Any) -> str:
    """YAML text that reads back to an equal case."""
    from io import StringIO

    from ruamel.yaml import YAML

    yaml = YAML(typ="safe", pure=True)
    yaml.default_flow_style, yaml.width = False, 120
    yaml.sort_base_mapping_type_on_output = False  # type: ignore[assignment]
    stream = StringIO()
    yaml.dump(as_written(case), stream)
    return stream.getvalue()


def as_written(case: Any) -> dict[str, Any]:
    """Nested data of a case with each quantity as text."""
    data: dict[str, Any] = _value(case)
    return data


def _value(value: Any) -> Any:
    """Text of quantities, data of everything else; what is absent stays out."""
    if isinstance(value, Quantity | Setting | Limit):
        return value.text
    if isinstance(value, BaseModel):
        fields = type(value).model_fields
        items = {name: getattr(value, name) for name, info in fields.items() if not info.exclude}
        return {name: _value(item) for name, item in items.items() if item is not None}
    if isinstance(value, dict):
        return {key: _value(item) for key, item in value.items()}
    return [_value(item) for item in value] if isinstance(value, tuple) else value
