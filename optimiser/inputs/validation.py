"""A document checked against its declared fields: every problem at its place, with what to write."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, TypeVar, get_args

from pydantic import BaseModel, ValidationError

from optimiser.inputs.document import Document, Path_
from optimiser.inputs.errors import InputProblem, nearest
from optimiser.inputs.fields import Kind

Checked = TypeVar("Checked", bound=BaseModel)

# What pydantic calls a value of the wrong type, and what should stand there.
_WANTED = {
    "dict_type": "a mapping of keys and values",
    "model_type": "a mapping of keys and values",
    "model_attributes_type": "a mapping of keys and values",
    "tuple_type": "a list",
    "list_type": "a list",
    "too_short": "at least one item",
    "string_type": "text (in quotes if it looks like something else)",
    "int_type": "a whole number",
    "int_parsing": "a whole number",
    "int_from_float": "a whole number",
    "float_type": "a number",
    "float_parsing": "a number",
    "string_pattern_mismatch": "a name of letters, digits, - and _ that begins with a letter",
}


def validated(
    kind: type[Checked], document: Document, context: Mapping[str, Any]
) -> tuple[Checked | None, list[InputProblem]]:
    """The object and no problems, or None and all of them."""
    if not isinstance(document.data, dict):
        wanted = f"keys and values, such as `{next(iter(kind.model_fields))}:`"
        return None, [document.problem((), None, wanted)]
    # Fields that the reader itself sets are no keys of the file.
    own = [name for name, field in kind.model_fields.items() if field.exclude and name in document.data]
    problems = [_unknown(kind, document, (name,)) for name in own]
    data = {name: value for name, value in document.data.items() if name not in own}
    try:
        made = kind.model_validate(data, context=dict(context))
    except ValidationError as problem:
        found = [_problem(kind, document, dict(error)) for error in problem.errors()]
        return None, problems + found
    return (None if problems else made), problems


def _problem(kind: type[BaseModel], document: Document, error: Mapping[str, Any]) -> InputProblem:
    path, code, context = _in_file(error["loc"]), error["type"], error.get("ctx", {})
    if code == "input":
        read = document.text(path) or context["read"]
        return document.problem(path, read, context["wanted"], context["nearest"])
    if code == "extra_forbidden":
        return _unknown(kind, document, path)
    if code == "missing":
        return document.problem(path, "", _missing(kind, path))
    if code.startswith("union_tag"):
        return _no_step(document, path, error["input"])
    if code == "literal_error":
        return _choice(document, path, error)
    wanted = _WANTED.get(code, error["msg"].removeprefix("Input should be ").lower())
    return document.problem(
        path, _found(document, path, error["input"]), wanted, key=error["loc"][-1] == "[key]"
    )


def _found(document: Document, path: Path_, value: Any) -> str:
    """What stands at a path, in words where it is no scalar."""
    text = document.text(path)
    names = {dict: "a mapping", list: "a list", type(None): "nothing"}
    return text or names.get(type(value), str(value))


def _unknown(kind: type[BaseModel], document: Document, path: Path_) -> InputProblem:
    known = [name for model in _models_at(kind, path[:-1], document) for name in model]
    wanted = f"one of the keys {', '.join(known)}"
    return document.problem(path, str(path[-1]), wanted, nearest(str(path[-1]), known), key=True)


def _missing(kind: type[BaseModel], path: Path_) -> str:
    """What a missing key would say, with an example of its value where it has a dimension."""
    field = _field_at(kind, path)
    if field is None:
        return f"`{path[-1]}:`"
    meaning = f" ({field.description})" if field.description else ""
    kinds = [part for part in kinds_of(field) if isinstance(part, Kind)]
    sample = f", {kinds[0].sample('EUR')}" if kinds and "price" not in kinds[0].dimension[0] else ""
    return f"`{path[-1]}:`{meaning}{sample}"


def _no_step(document: Document, path: Path_, value: Any) -> InputProblem:
    wanted = "a step, `- bed: NAME` or `- cool: NAME`"
    keys = list(value) if isinstance(value, dict) else []
    near = next((near for key in keys if (near := nearest(str(key), ("bed", "cool")))), None)
    if near is None and keys:
        return document.problem((*path, keys[0]), str(keys[0]), wanted, key=True)
    return document.problem(path, _found(document, path, value) if not keys else str(keys[0]), wanted, near)


def _choice(document: Document, path: Path_, error: Mapping[str, Any]) -> InputProblem:
    choices = [c.strip().strip("'") for c in error["ctx"]["expected"].replace(" or ", ", ").split(",")]
    read, key = _found(document, path, error["input"]), error["loc"][-1] == "[key]"
    wanted = f"one of {', '.join(choices)}" if len(choices) > 1 else choices[0]
    read = str(path[-1]) if key else read
    return document.problem(path, read, wanted, nearest(read, choices), key=key)


def _in_file(loc: tuple[str | int, ...]) -> Path_:
    """The path of an error in the file, without what only pydantic knows: `[key]`, and the kind of a step."""
    step = loc[:1] == ("reactor",)
    return tuple(part for k, part in enumerate(loc) if part != "[key]" and not (step and k == 2))


def kinds_of(field: Any) -> list[Any]:
    """What the annotation of a field carries, also inside an optional."""
    found = list(field.metadata)
    for part in get_args(field.annotation):
        found += list(getattr(part, "__metadata__", ()))
    return found


def models_in(annotation: Any) -> list[type[BaseModel]]:
    """Models anywhere in an annotation."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return [annotation]
    return [model for part in get_args(annotation) for model in models_in(part)]


def _models_at(kind: type[BaseModel], path: Path_, document: Document) -> list[list[str]]:
    """Keys of the models that may stand at a path."""
    models: list[type[BaseModel]] = [kind]
    data = document.data
    for part in path:
        inside = [f.annotation for m in models for name, f in m.model_fields.items() if name == part]
        if inside:
            models = [model for annotation in inside for model in models_in(annotation)]
        data = _inner(data, part)
        # A step of the reactor is of the kind that its first key names.
        named = [m for m in models if isinstance(data, dict) and next(iter(m.model_fields)) in data]
        models = named or models
    return [[n for n, f in model.model_fields.items() if not f.exclude] for model in models]


def _inner(data: Any, part: str | int) -> Any:
    if isinstance(data, dict):
        return data.get(str(part))
    return data[part] if isinstance(data, list) and isinstance(part, int) and part < len(data) else None


def _field_at(kind: type[BaseModel], path: Path_) -> Any:
    """The declared field at a path, None if the path leads through names that users give."""
    models: list[type[BaseModel]] = [kind]
    found = None
    for part in path:
        inside = [f for m in models for name, f in m.model_fields.items() if name == part]
        found = inside[0] if inside else None
        models = [model for f in inside for model in models_in(f.annotation)] or models
    return found
