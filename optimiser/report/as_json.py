"""Results as JSON text that any reader accepts."""

from __future__ import annotations

import json
import math
from typing import Any


def as_json(data: dict[str, Any]) -> str:
    """The data as indented ASCII JSON with a line end.

    A number that JSON cannot hold becomes null and is named in `warnings`, so that one bad figure never costs
    the whole result.
    """
    lost: list[str] = []
    clean = _clean(data, "", lost)
    if lost:
        names = ", ".join(lost)
        clean["warnings"] = [*(clean.get("warnings") or []), f"No finite number came out for {names}."]
    return json.dumps(clean, indent=2, allow_nan=False) + "\n"


def _clean(value: Any, path: str, lost: list[str]) -> Any:
    if isinstance(value, dict):
        return {str(key): _clean(item, f"{path}.{key}".lstrip("."), lost) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [_clean(item, f"{path}[{k}]", lost) for k, item in enumerate(value)]
    if isinstance(value, float) and not math.isfinite(value):
        lost.append(path)
        return None
    return value
