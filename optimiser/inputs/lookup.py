"""Where shipped cases and models lie: beside the package in a checkout, inside it in a wheel."""

from __future__ import annotations

from pathlib import Path

from optimiser.inputs.errors import InputError, InputProblem
from optimiser.quantities import nearest_name


def shipped(folder: str) -> Path:
    """The folder "cases" or "models" that comes with the program."""
    package = Path(__file__).resolve().parents[1]
    beside = package.parent / folder
    return beside if beside.is_dir() and (package.parent / "pyproject.toml").exists() else package / "_shipped" / folder


def find(name: str, folder: str, relative_to: Path | None = None) -> Path:
    """A file by path, or a shipped one by name with or without its ending.

    Raises:
        InputError: there is neither; names the nearest shipped one.
    """
    asked = Path(name)
    tried = [asked] if relative_to is None else [relative_to.parent / asked, asked]
    for candidate in tried:
        if candidate.suffix in (".yaml", ".yml") and candidate.is_file():
            return candidate
    names = sorted(p.stem for p in shipped(folder).glob("*.yaml"))
    stem = asked.name.removesuffix(".yaml")
    if asked.parent == Path() and stem in names:
        return shipped(folder) / f"{stem}.yaml"
    kind = folder.removesuffix("s")
    wanted = f"the path of a {kind} file, or one of {', '.join(names)}"
    raise InputError([InputProblem(name, None, None, "", f"" , wanted, nearest_name(stem, names))])
