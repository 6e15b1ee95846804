"""`--set PATH=VALUE`: one value of a case replaced before it is checked.

PATH goes by names: `reactor.bed1.volume`, `compression.low.discharge_pressure`, `limits.loop.inerts`.
A last part `.low` or `.high` moves one end of a range or of a limit and leaves the other.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Any

from optimiser.inputs.document import NAMING_KEYS, Document, Path_, Spot
from optimiser.inputs.errors import InputError, InputProblem, nearest
from optimiser.inputs.yaml_reader import plain_value

# Mappings whose paths leave out the list inside them.
_SHORTCUTS = {"compression": "stages"}
_SIGNS = {"low": ">=", "high": "<="}


def apply_sets(document: Document, sets: Sequence[str]) -> None:
    """Change the document's data, one option after the other.

    Raises:
        InputError: options that are not PATH=VALUE, or whose path leads nowhere.
    """
    problems: list[InputProblem] = []
    for option in sets:
        path, equals, value = (part.strip() for part in option.partition("="))
        if not (equals and path and value):
            wanted = "PATH=VALUE, such as `loop.pressure=150 bar`"
            problems.append(InputProblem("--set", None, None, path, option, wanted))
            continue
        try:
            _apply(document, path, _unquoted(value))
        except _Nowhere as problem:
            source = f"--set {path}"
            problems.append(
                InputProblem(source, None, None, path, problem.read, problem.wanted, problem.near)
            )
    if problems:
        raise InputError(problems)


class _Nowhere(Exception):
    """A path that leads to no value."""

    def __init__(self, read: str, wanted: str, near: str | None = None) -> None:
        super().__init__(read)
        self.read, self.wanted, self.near = read, wanted, near


def _unquoted(value: str) -> str:
    quoted = len(value) > 1 and value[0] == value[-1] and value[0] in "'\""
    return value[1:-1] if quoted else value


def _apply(document: Document, path: str, value: str) -> None:
    """Replace the value at a path of names."""
    plain, dot, side = path.rpartition(".")
    ends = dot == "." and side in _SIGNS
    if path.startswith("limits."):
        _set_limit(document, plain if ends else path, side if ends else "", value, path)
        return
    if ends and _is_value(document, plain):
        place, new = _walk(document, plain)
        before = document.text(place)
        if not before:
            raise _Nowhere(path, f"`{plain}=` with both ends, such as `1 .. 2` and their unit")
        _put(document, place, new, _moved(before, side, value), path)
        return
    place, new = _walk(document, path)
    _put(document, place, new, value, path)


def _put(document: Document, place: Path_, new: Path_, text: str, path: str) -> None:
    """Write a text at a place; `new` is the first part of the place that had to be made."""
    holder = document.data
    for part in place[:-1]:
        holder = holder[part]
    holder[place[-1]] = plain_value(text)
    document.values[place] = Spot(1, 1, text)
    document.sources[new] = f"--set {path}"


def _is_value(document: Document, path: str) -> bool:
    """Whether a path leads to a single value, or to nothing yet."""
    try:
        place, _ = _walk(document, path)
    except _Nowhere:
        return False
    holder = document.data
    for part in place[:-1]:
        holder = holder[part]
    return not isinstance(holder.get(place[-1]), dict | list)


def _walk(document: Document, path: str) -> tuple[Path_, Path_]:
    """The place that a path of names means, and the part of it that is new (all of it where nothing is)."""
    parts, new = path.split("."), 0
    place: list[str | int] = []
    holder = document.data
    if not all(parts):
        raise _Nowhere(path, "names with single dots between them")
    for depth, part in enumerate(parts):
        if isinstance(holder, dict) and part not in holder and place[-1:] and place[-1] in _SHORTCUTS:
            inner = holder.get(_SHORTCUTS[str(place[-1])])
            if isinstance(inner, list) and (_position(inner, part) is not None or depth + 1 < len(parts)):
                place.append(_SHORTCUTS[str(place[-1])])
                holder = inner
        step = _step(holder, part, path)
        place.append(step)
        if depth + 1 == len(parts):
            break
        if isinstance(holder, dict) and holder.get(part) is None:
            holder[part] = {}
            new = new or len(place)
        holder = holder[step]
    if not isinstance(holder, dict):
        raise _Nowhere(path, "the path of a single value, not of a whole step")
    return tuple(place), tuple(place[: new or len(place)])


def _step(holder: Any, part: str, path: str) -> str | int:
    """The key or the position that a part of a path means."""
    if isinstance(holder, dict):
        return part
    if not isinstance(holder, list):
        raise _Nowhere(part, "the path of a value in the case")
    position = _position(holder, part)
    if position is None:
        names = [
            str(item[key]) for item in holder if isinstance(item, dict) for key in NAMING_KEYS if key in item
        ]
        raise _Nowhere(part, f"one of {', '.join(names)}", nearest(part, names))
    return position


def _position(items: list[Any], name: str) -> int | None:
    for k, item in enumerate(items):
        if isinstance(item, dict) and any(item.get(key) == name for key in NAMING_KEYS):
            return k
    return None


def _set_limit(document: Document, path: str, side: str, value: str, asked: str) -> None:
    """A limit; its key is all of the path after its first name."""
    place: Path_ = ("limits", path.removeprefix("limits."))
    new = place if isinstance(document.data.get("limits"), dict) else place[:1]
    if new != place:
        document.data["limits"] = {}
    before = document.text(place)
    one_sided = re.match(r"<=|>=|≤|≥", before)
    bare = re.sub(r"^(?:<=|>=|≤|≥)\s*", "", value)
    if side:
        text = _moved_limit(before, side, bare)
    elif one_sided and ".." not in value and bare == value:
        text = f"{one_sided[0]} {value}"
    else:
        text = value
    _put(document, place, new, text, asked)


def _moved_limit(before: str, side: str, value: str) -> str:
    """A limit with one end moved; the other end stays."""
    if ".." in before:
        return _moved(before, side, value)
    sign = next((s for s in ("<=", ">=", "≤", "≥") if before.startswith(s)), "")
    if not sign or {"≤": "<=", "≥": ">="}.get(sign, sign) == _SIGNS[side]:
        return f"{_SIGNS[side]} {value}"
    return _moved(before.removeprefix(sign).strip(), side, value)


def _moved(before: str, side: str, value: str) -> str:
    """A range with one end moved, in its own unit or in another; a held value has equal ends."""
    low, dots, high = (part.strip() for part in before.partition(".."))
    unit = next((u for u in map(_unit, (high, low)) if u), "-")
    kept = (high if side == "low" else low) if dots else low
    moved, kept = (end if _unit(end) else f"{end} {unit}" for end in (value, kept))
    return f"{kept} .. {moved}" if side == "high" else f"{moved} .. {kept}"


def _unit(text: str) -> str:
    """What follows the number, empty where nothing does."""
    return re.sub(r"^\s*[-+]?[\d.]+(?:[eE][-+]?\d+)?\s*", "", text)
