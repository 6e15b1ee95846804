import json
import sys
from types import ModuleType

import pytest

from optimiser.cli.main import main


def rows(ok):
    return [{"backend": "casadi", "ok": ok, "versions": {"casadi": "3.8"}, "message": "m"}]


@pytest.fixture
def examined(monkeypatch):
    """Lets a test say what the examination finds."""

    def find(ok):
        module = ModuleType("optimiser.solve.doctor")
        module.examine = lambda: rows(ok)
        monkeypatch.setitem(sys.modules, "optimiser.solve.doctor", module)

    return find


@pytest.mark.parametrize(("ok", "code"), [(True, 0), (False, 1)])
def test_page_and_exit_code(examined, capsys, ok, code):
    examined(ok)
    assert main(["doctor"]) == code
    out = capsys.readouterr().out
    assert out.startswith("setpoise ")
    assert ("cases can be solved" in out) is ok


def test_json(examined, capsys):
    examined(True)
    assert main(["doctor", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["status"] == "ready"
    assert found["backends"] == rows(True)


def test_on_this_machine_every_solver_works(capsys):
    assert main(["doctor", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert [row["backend"] for row in found["backends"] if not row["ok"]] == []
