"""Stand-ins for the rooms that read and solve, so that the commands are tested alone and at once."""

from __future__ import annotations

import sys
from dataclasses import dataclass
from types import ModuleType, SimpleNamespace

import pytest
from result_sample import result


@dataclass(frozen=True)
class Wrong:
    file: str | None
    line: int | None
    column: int | None
    path: str | None
    read: str | None
    wanted: str
    nearest: str | None


class InputError(Exception):
    def __init__(self, errors):
        super().__init__(f"{len(errors)} errors")
        self.errors = errors


class Rooms:
    """What the stand-ins were asked, and what they shall do."""

    def __init__(self):
        self.asked = {}
        self.result = result()
        self.work = lambda: None
        self.check = {"status": "ready", "free": [], "held": [], "limits": [], "groups": [], "warnings": []}
        self.check |= {"variables": 10, "equations": 10, "freedom": 0}

    def read_case(self, name, sets=()):
        if name == "wrong":
            raise InputError([Wrong("wrong.yaml", 3, 8, "loop.pressure", "150 kW", "a pressure", None)])
        self.asked |= {"name": name, "sets": tuple(sets)}
        return SimpleNamespace(title="Ammonia at a windy coast", resolved_yaml=lambda: "setpoise: 1\n")

    def solve_case(self, case, *, progress, **options):
        self.asked |= options
        progress.stage("solving")
        progress.start(0, 2, "converged after 41 iterations")
        self.work()
        return self.result

    def check_case(self, case):
        self.work()
        return self.check


@pytest.fixture
def rooms(monkeypatch, tmp_path):
    """The stand-ins, in an empty current folder."""
    stand_ins = Rooms()
    functions = {
        "optimiser.inputs": {"read_case": stand_ins.read_case, "InputError": InputError},
        "optimiser.findings.answer": {"solve_case": stand_ins.solve_case},
        "optimiser.findings.checking": {"check_case": stand_ins.check_case},
    }
    for name, members in functions.items():
        module = ModuleType(name)
        vars(module).update(members)
        monkeypatch.setitem(sys.modules, name, module)
    monkeypatch.chdir(tmp_path)
    return stand_ins
