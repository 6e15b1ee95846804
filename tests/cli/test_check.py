import json
from pathlib import Path

import pytest

from optimiser.cli.main import main


@pytest.mark.parametrize(
    ("status", "code"), [("ready", 0), ("conflict", 1), ("over-specified", 2), ("under-specified", 2)]
)
def test_exit_codes_and_page(rooms, capsys, status, code):
    rooms.check |= {"status": status}
    assert main(["check", "coast", "--set", "a=1"]) == code
    out, err = capsys.readouterr()
    assert out.splitlines()[0].endswith(status)
    assert err == ""
    assert rooms.asked["sets"] == ("a=1",)
    assert not Path("runs").exists()


def test_json(rooms, capsys):
    assert main(["check", "coast", "--json"]) == 0
    assert json.loads(capsys.readouterr().out) == rooms.check


def test_wrong_input(rooms, capsys):
    assert main(["check", "wrong"]) == 2
    assert "wrong.yaml:3:8" in capsys.readouterr().err


def test_an_unexpected_error_is_one_line(rooms, capsys, monkeypatch, tmp_path):
    def fail():
        raise RuntimeError("two\nlines")

    monkeypatch.setattr("tempfile.tempdir", str(tmp_path))
    rooms.work = fail
    assert main(["check", "coast"]) == 1
    err = capsys.readouterr().err
    assert "an unexpected error ended the run (RuntimeError: two lines); the log is in " in err
    assert err.count("\n") == 1
