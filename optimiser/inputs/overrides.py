"""`--set PATH=VALUE`: one value of a case replaced before it is checked.

PATH goes by names: `reactor.bed1.volume`, `compression.low.discharge_pressure`, `limits.reactor.bed1.hottest`. A last part
`.low` or `.high` moves one end of a range or of a limit.
"""

from __future__ import annotations

import re
from typing import Any

from optimiser.inputs.errors import InputError, InputProblem
from optimiser.inputs.yaml_reader import Document
from optimiser.quantities import nearest_name

_SET = "--set"
_NAME_KEYS = ("bed", "cool", "stage")
# Lists whose items are reached by their name, and mappings that paths leave out.
_SHORTCUTS = {"compression": "stages"}


def apply_sets(document: Document, sets: list[str]) -> None:
    """Change the document's data; problems with a value that was set are told of the option.

    Raises:
        InputError: an option that is not PATH=VALUE, or a path that leads nowhere.
    """
    problems: list[InputProblem] = []
    for text in sets:
        path, equals, value = text.partition("=")
        if not equals or not path.strip() or not value.strip():
            problems.append(_problem(path, f"{text!r} is not PATH=VALUE", "such as loop.pressure=150 bar"))
            continue
        found = _assign(document.data, path.strip(), _typed(value.strip()))
        if isinstance(found, InputProblem):
            problems.append(found)
        else:
            document.sources[found] = f"{_SET} {text}"
    if problems:
        raise InputError(problems)


def _problem(path: str, read: str, wanted: str, near: str | None = None) -> InputProblem:
    return InputProblem(_SET, None, None, path, read, wanted, near)


def _typed(value: str) -> Any:
    """A value as YAML would have read it; quotes around it are taken off."""
    if len(value) > 1 and value[0] == value[-1] and value[0] in "'\"":
        return value[1:-1]
    if value in ("true", "false"):
        return value == "true"
    if value in ("null", "~"):
        return None
    if re.fullmatch(r"[-+]?\d{1,17}", value):
        return int(value)
    if re.fullmatch(r"[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?", value):
        return float(value)
    return value


def _assign(data: Any, path: str, value: Any) -> tuple[str | int, ...] | InputProblem:
    """Replace one value; the path taken as keys and positions."""
    side = path.rsplit(".", 1)[-1] if path.endswith((".low", ".high")) else None
    plain = path.removesuffix(f".{side}") if side else path
    if path.startswith("limits."):
        return _assign_limit(data, plain.removeprefix("limits."), side, value)
    taken, holder = _walk(data, plain.split("."))
    if isinstance(taken, InputProblem):
        return taken
    key = taken[-1]
    if side is not None:
        end = _moved_end(str(holder.get(key, "")), side, str(value))
        if end is None:
            return _problem(path, f"{plain} is not a range", f"{plain}= with a range such as 1 .. 2 and its unit")
        value = end
    holder[key] = value
    return taken


def _walk(data: Any, parts: list[str]) -> tuple[tuple[str | int, ...] | InputProblem, Any]:
    """Keys and positions that the parts of a path stand for, and the mapping that holds the last."""
    taken: list[str | int] = []
    holder = data
    for depth, part in enumerate(parts):
        last = depth == len(parts) - 1
        if isinstance(holder, dict) and part not in holder and taken[-1:] and taken[-1] in _SHORTCUTS:
            inner = holder.get(_SHORTCUTS[str(taken[-1])])
            if isinstance(inner, list) and _position(inner, part) is not None:
                taken.append(_SHORTCUTS[str(taken[-1])])
                holder = inner
        if isinstance(holder, list):
            position = _position(holder, part)
            if position is None:
                return _nowhere(parts, part, _names(holder)), None
            taken.append(position)
            holder = holder[position]
            continue
        if not isinstance(holder, dict) or (part not in holder and not last):
            known = list(holder) if isinstance(holder, dict) else []
            return _nowhere(parts, part, known), None
        taken.append(part)
        if last:
            return tuple(taken), holder
        holder = holder[part] if holder[part] is not None else {}
    return _problem(".".join(parts), "this is a whole section", "the path of a value in it"), None


def _position(items: list[Any], name: str) -> int | None:
    for k, item in enumerate(items):
        if isinstance(item, dict) and any(item.get(key) == name for key in _NAME_KEYS):
            return k
    return None


def _names(items: list[Any]) -> list[str]:
    return [str(item[key]) for item in items if isinstance(item, dict) for key in _NAME_KEYS if key in item]


def _nowhere(parts: list[str], part: str, known: list[str]) -> InputProblem:
    wanted = f"one of {', '.join(known)}" if known else "the path of a value in the case"
    return _problem(".".join(parts), f"there is no {part}", wanted, nearest_name(part, known))


def _assign_limit(data: Any, key: str, side: str | None, value: Any) -> tuple[str | int, ...]:
    limits = data.setdefault("limits", {})
    if not isinstance(limits, dict):
        limits = data["limits"] = {}
    text, before = str(value), str(limits.get(key, ""))
    if side is not None:
        bare = re.sub(r"^\s*(<=|>=)\s*", "", text)
        moved = _moved_end(before, side, bare)
        text = moved if moved is not None else f"{'<=' if side == 'high' else '>='} {bare}"
    elif re.match(r"\s*[-+.\d]", text) and ".." not in text and before[:2] in ("<=", ">="):
        text = f"{before[:2]} {text}"
    limits[key] = text
    return ("limits", key)


def _moved_end(text: str, side: str, value: str) -> str | None:
    """A range with one end replaced; None where there is no range."""
    low, dots, high = text.partition("..")
    if not dots:
        return None
    unit = re.sub(r"^\s*[-+.\deE]+\s*", "", high).strip()
    low = low.strip() if re.search(r"[^-+.\deE\s]", low) else f"{low.strip()} {unit}"
    return f"{value} .. {high.strip()}" if side == "low" else f"{low} .. {value}"
