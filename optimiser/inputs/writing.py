"""A case back to text, every default visible, as users write it; reading the text gives an equal case."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator, Mapping
from typing import Any

from pydantic import BaseModel

from optimiser.inputs.steps import CoolStep
from optimiser.inputs.yaml_reader import plain_value
from optimiser.quantities import Limit, Quantity, Setting

# Fields of a cooler that mean something for one sink only.
_OF_SINK = {
    "steam_pressure": "steam",
    "water_inlet": "boiler_feed_water",
    "water_outlet": "boiler_feed_water",
}
# What may stand in YAML without quotes, whatever comes before and after it.
_PLAIN = re.compile(r"[A-Za-z0-9<.+-][A-Za-z0-9 .,_/%*^()<=+-]*")
_NAME = re.compile(r"[A-Za-z][A-Za-z0-9_.-]*")
_UNPRINTABLE = re.compile("[\x7f-\x9f\u2028\u2029\ufeff\ufffe\uffff\ue000]")


def as_written(section: BaseModel) -> dict[str, Any]:
    """Nested data with quantities as texts; what is not stated and has no default is left out."""
    written: dict[str, Any] = {}
    for name, field in type(section).model_fields.items():
        value = getattr(section, name)
        if field.exclude or value is None or _meaningless(section, name):
            continue
        written[name] = _value(value)
    return written


def _meaningless(section: BaseModel, name: str) -> bool:
    return isinstance(section, CoolStep) and _OF_SINK.get(name, section.sink) != section.sink


def _value(value: Any) -> Any:
    if isinstance(value, Quantity | Setting | Limit):
        return plain_value(value.text)
    if isinstance(value, BaseModel):
        return as_written(value)
    if isinstance(value, Mapping):
        return {key: _value(inner) for key, inner in value.items()}
    return [_value(inner) for inner in value] if isinstance(value, tuple) else value


def as_yaml(data: Mapping[str, Any]) -> str:
    """Nested data as YAML."""
    return "\n".join([*_lines(data, ""), ""])


def _lines(data: Mapping[str, Any], indent: str) -> Iterator[str]:
    for key, value in data.items():
        name = f"{indent}{key if _NAME.fullmatch(key) and plain_value(key) == key else _quoted(key)}:"
        if isinstance(value, Mapping) and value:
            yield name
            yield from _lines(value, indent + "  ")
        elif isinstance(value, list) and value:
            yield name
            for item in value:
                first, *rest = _lines(item, indent + "    ")
                yield f"{indent}  - {first.strip()}"
                yield from rest
        else:
            yield f"{name} {_scalar(value)}"


def _scalar(value: Any) -> str:
    if isinstance(value, Mapping):
        return "{}"
    if isinstance(value, str):
        plain = _PLAIN.fullmatch(value) and value == value.strip() and plain_value(value) == value
        return (
            value if plain and not value.startswith(("- ", "---", "...")) and value != "-" else _quoted(value)
        )
    if isinstance(value, bool):
        return "true" if value else "false"
    return repr(value)


def _quoted(text: str) -> str:
    """In double quotes, with what YAML does not print as escapes."""
    return _UNPRINTABLE.sub(lambda match: f"\\u{ord(match[0]):04x}", json.dumps(text, ensure_ascii=False))
