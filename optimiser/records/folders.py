"""Run folders: written beside their place and moved there whole, so that nobody meets half of one."""

from __future__ import annotations

import os
import secrets
import shutil
import tempfile
from collections.abc import Iterator
from dataclasses import dataclass, field
from datetime import UTC, datetime
from itertools import count
from pathlib import Path

from optimiser.records.names import run_name

# Where a folder cannot be moved whole this file is moved last: where it stands, all others do.
LAST = "result.json"


class OutputProblem(Exception):
    """The folder that the user named for the run cannot be used.

    Attributes:
        path: the folder as the user wrote it.
        wanted: what to name instead.
    """

    def __init__(self, path: Path, wanted: str) -> None:
        super().__init__(f"{path}: {wanted}")
        self.path = path
        self.wanted = wanted


@dataclass
class RunFolder:
    """A run under way.

    Attributes:
        staging: where its files are written.
        target: where they go when the run has ended.
        note: what the user should know about that place, empty if it is the usual one.
        inside: whether the target exists already, empty but for the staged files.
        files: names of the files so far.
    """

    staging: Path
    target: Path
    note: str = ""
    inside: bool = False
    files: list[str] = field(default_factory=list)

    def place(self, name: str) -> Path:
        """Present path of one file of the run, for those who write it themselves."""
        if name not in self.files:
            self.files.append(name)
        return self.staging / name

    def write(self, name: str, text: str) -> None:
        """Write one file of the run in UTF-8; raises OSError where the disk refuses."""
        self.place(name).write_text(text, encoding="utf-8", newline="\n")

    def publish(self, suffix: str = "") -> Path:
        """Move the run to its place and return it; on OSError the staged files stay where they are.

        Args:
            suffix: added to the name, such as `-failed`. Where a name is taken a number follows it.
        """
        if self.inside and not suffix:
            return self._fill()
        target = self.target.with_name(self.target.name + suffix)
        return next(place for place in _numbered(target) if self._moved(place))

    def discard(self) -> None:
        """Leave no trace of a run that never began."""
        shutil.rmtree(self.staging, ignore_errors=True)

    def _moved(self, place: Path) -> bool:
        """Whether the run could be moved to this place; False if another run took it first."""
        if os.path.lexists(place):
            return False
        try:
            self.staging.rename(place)
        except FileExistsError:
            return False
        except OSError:
            # A folder that another run filled between the question and the answer is reported in many ways.
            if os.path.lexists(place):
                return False
            raise
        return True

    def _fill(self) -> Path:
        """Move the files one by one into a folder that exists already."""
        for name in sorted(self.files, key=lambda name: name == LAST):
            (self.staging / name).replace(self.target / name)
        self.staging.rmdir()
        return self.target


def _numbered(target: Path) -> Iterator[Path]:
    yield target
    for number in count(2):
        yield target.with_name(f"{target.name}-{number}")


def open_run(title: str, base: Path = Path("runs"), *, now: datetime | None = None) -> RunFolder:
    """Folder of a new run below `base`, or where that cannot be written among the system's temporary files.

    Args:
        title: title of the case.
        base: folder that holds all runs.
        now: time of the run; by default the present.
    """
    name = run_name(title, now or datetime.now(UTC))
    try:
        base.mkdir(parents=True, exist_ok=True)
        return RunFolder(_staging(base, name), base / name)
    except OSError as problem:
        elsewhere = Path(tempfile.mkdtemp(prefix="setpoise-"))
        note = f"{base} cannot be written ({reason(problem)}), so this run is kept elsewhere."
        return RunFolder(_staging(elsewhere, name), elsewhere / name, note)


def open_named(out: Path) -> RunFolder:
    """Folder of a new run where the user wants it; raises OutputProblem where that cannot be."""
    target = out.absolute()
    if os.path.lexists(target) and not target.is_dir():
        raise OutputProblem(out, "the name of a folder; this is a file")
    try:
        inside = target.is_dir()
        if inside and any(target.iterdir()):
            raise OutputProblem(out, "an empty folder, or the name of one that does not exist yet")
        parent = target if inside else target.parent
        parent.mkdir(parents=True, exist_ok=True)
        return RunFolder(_staging(parent, target.name), target, inside=inside)
    except OSError as problem:
        raise OutputProblem(out, f"a place that can be written ({reason(problem)})") from problem


def _staging(parent: Path, name: str) -> Path:
    """A new folder of no fixed name, with the rights that the user's files have by default."""
    path = parent / f".{name}-{secrets.token_hex(4)}.partial"
    path.mkdir()
    return path


def reason(problem: OSError) -> str:
    """Why the system refused, in its own words."""
    return (problem.strerror or str(problem)).lower()
