"""Where shipped cases and models lie: beside the package in a checkout, inside it in a wheel."""

from __future__ import annotations

from pathlib import Path

from optimiser.inputs.errors import InputError, InputProblem, nearest

_ENDINGS = (".yaml", ".yml")


def shipped(folder: str) -> Path:
    """The folder `cases` or `models` that comes with the program."""
    package = Path(__file__).resolve().parents[1]
    packed = package / "_shipped" / folder
    return packed if packed.is_dir() else package.parent / folder


def shipped_names(folder: str) -> list[str]:
    """Names of what lies there, without endings. `equipment` is no model: it serves all of them."""
    return sorted(p.stem for p in shipped(folder).glob("*.yaml") if p.stem != "equipment")


def find_case(name: str) -> Path:
    """A case by path, or a shipped one by name with or without its ending. Raises InputError."""
    return _find(name, "cases", None)


def find_model(name: str, relative_to: Path | None = None) -> Path:
    """A model by path from the folder of a case, or a shipped one by name. Raises InputError."""
    return _find(name, "models", relative_to)


def find(name: str, folder: str, relative_to: Path | None = None) -> Path:
    """As `find_case` and `find_model`, by the name of the folder."""
    return _find(name, folder, relative_to)


def _find(name: str, folder: str, relative_to: Path | None) -> Path:
    """An existing file, or a shipped one."""
    asked = Path(name).expanduser()
    places = [asked] if relative_to is None else [relative_to.parent / asked]
    for place in places:
        if _is_file(place) and (place.suffix in _ENDINGS or asked.parent != Path()):
            return place
    names = shipped_names(folder)
    stem = asked.stem if asked.suffix in _ENDINGS else asked.name
    if asked.parent == Path() and stem in names:
        return shipped(folder) / f"{stem}.yaml"
    kind = folder.removesuffix("s")
    wanted = f"the path of a {kind} file, or a shipped {kind}: {', '.join(names) or 'there is none'}"
    raise InputError([InputProblem(name, None, None, "", name, wanted, nearest(stem, names))])


def _is_file(path: Path) -> bool:
    try:
        return path.is_file()
    except (OSError, ValueError):  # A name too long for the system, or with a zero byte in it, is no file.
        return False
