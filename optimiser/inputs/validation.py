"""A document checked against its declared fields: every problem at its place, in words that say what to write."""

from __future__ import annotations

from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from optimiser.inputs.errors import InputProblem
from optimiser.inputs.yaml_reader import Document, Path_
from optimiser.quantities import nearest_name

Checked = TypeVar("Checked", bound=BaseModel)


def validated(
    kind: type[Checked], document: Document, context: dict[str, Any]
) -> tuple[Checked | None, list[InputProblem]]:
    """The object and no problems, or None and all of them."""
    if not isinstance(document.data, dict):
        return None, [document.problem((), "sections such as feed: and loop:", read="no mapping")]
    try:
        return kind.model_validate(document.data, context=context), []
    except ValidationError as problem:
        return None, [_problem(kind, document, error) for error in problem.errors()]


def _problem(kind: type[BaseModel], document: Document, error: Any) -> InputProblem:
    path = _in_file(document.data, error["loc"])
    name = str(error["loc"][-1]) if error["loc"] else ""
    code = error["type"]
    if code == "case":
        told = error["ctx"]
        return document.problem(path, told["wanted"], read=told["read"], nearest=told.get("nearest") or None)
    if code == "extra_forbidden":
        known = _known(kind, error["loc"])
        wanted = f"one of {', '.join(known)}" if known else "a known key"
        return document.problem(path, wanted, read=name, nearest=nearest_name(name, known), key=True)
    if code == "missing":
        return document.problem(path, f"the key {name} with its value", read="")
    if code == "literal_error":
        choices = [c.strip().strip("'") for c in error["ctx"]["expected"].replace(" or ", ", ").split(",")]
        read = str(error["input"])
        near = nearest_name(read, choices)
        return document.problem(path, f"one of {', '.join(choices)}", read=read, nearest=near)
    shown = error["input"] if isinstance(error["input"], str | int | float) else type(error["input"]).__name__
    return document.problem(path, _wanted(code, error), read=str(shown))


def _wanted(code: str, error: Any) -> str:
    words = {
        "dict_type": "a mapping of keys and values",
        "model_type": "a mapping of keys and values",
        "model_attributes_type": "a mapping of keys and values",
        "tuple_type": "a list",
        "string_type": "text",
        "int_type": "a whole number",
        "int_parsing": "a whole number",
        "float_type": "a number",
        "float_parsing": "a number",
        "string_pattern_mismatch": "a name of letters, digits, - and _ that begins with a letter",
    }
    return words.get(code, f"a value that fits ({error['msg'].lower()})")


def _in_file(data: Any, loc: tuple[str | int, ...]) -> Path_:
    """The path of an error in the file: tags that only the checker knows are left out."""
    path: list[str | int] = []
    for part in loc:
        if isinstance(data, dict) and part in data:
            data = data[part]
        elif isinstance(data, list) and isinstance(part, int) and part < len(data):
            data = data[part]
        elif part != loc[-1] or part in ("bed", "cool", "[key]"):
            continue
        path.append(part)
    return tuple(path)


def _known(kind: type[BaseModel], loc: tuple[str | int, ...]) -> list[str]:
    """Keys of the mapping in which an unknown key stands."""
    models = [kind]
    for part in loc[:-1]:
        inner = [m for model in models for m in _models_of(model, part)]
        models = inner or models
    names: dict[str, None] = {}
    for model in models:
        for name, info in model.model_fields.items():
            if not info.exclude:
                names[name] = None
    return list(names)


def _models_of(model: type[BaseModel], part: str | int) -> list[type[BaseModel]]:
    if isinstance(part, int) or part not in model.model_fields:
        tagged = [model] if str(part) in model.model_fields else []
        return tagged
    return _inside(model.model_fields[str(part)].annotation)


def _inside(annotation: Any) -> list[type[BaseModel]]:
    """Models anywhere in an annotation."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return [annotation]
    return [m for part in getattr(annotation, "__args__", ()) for m in _inside(part)]
