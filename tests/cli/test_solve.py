import json
import os
from pathlib import Path

import pytest
from result_sample import FAILED, RESULT

from optimiser.cli.main import main


def only_run() -> Path:
    (run,) = Path("runs").iterdir()
    return run


def test_the_page_goes_to_standard_output_and_progress_to_standard_error(rooms, capsys):
    assert main(["solve", "coast"]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("Ammonia at a windy coast")
    assert "\x1b" not in out + err
    words = [line.split("s  ", 1)[-1] for line in err.splitlines()]
    assert words[:-1] == [
        "reading the case",
        "loading the solver",
        "solving",
        "start 1 of 2: converged after 41 iterations",
    ]
    assert words[-1] == f"Saved in {only_run()}"


def test_json_is_all_there_is_on_standard_output(rooms, capsys):
    rooms.work = lambda: print("a library chatters")
    assert main(["solve", "coast", "--json"]) == 0
    out, err = capsys.readouterr()
    assert json.loads(out) == RESULT
    assert "a library chatters" in err


def test_libraries_that_write_past_python_are_kept_apart(rooms, capfd):
    def chatter():
        os.write(1, b"from below\n")

    rooms.work = chatter
    assert main(["solve", "coast", "--json"]) == 0
    out, err = capfd.readouterr()
    assert json.loads(out) == RESULT
    assert "from below" in err


def test_the_run_is_kept_with_all_its_parts(rooms, capsys):
    assert main(["solve", "coast", "--set", "loop.pressure=150 bar"]) == 0
    run = only_run()
    assert run.name.endswith("Z-ammonia-at-a-windy-coast")
    assert {path.name for path in run.iterdir()} == {
        "case.yaml",
        "result.json",
        "report.txt",
        "run.log",
        "provenance.json",
    }
    assert (run / "case.yaml").read_text(encoding="utf-8") == "setpoise: 1\n"
    assert json.loads((run / "result.json").read_text(encoding="utf-8")) == RESULT
    assert (run / "report.txt").read_text(encoding="utf-8") == capsys.readouterr().out
    assert "stage: solving" in (run / "run.log").read_text(encoding="utf-8")
    made = json.loads((run / "provenance.json").read_text(encoding="utf-8"))
    assert made["sets"] == ["loop.pressure=150 bar"]
    assert set(made["files"]) == {"case.yaml", "result.json", "report.txt"}


def test_options_reach_the_solve(rooms, capsys):
    words = ["--set", "a.b=1", "--set", "c=2", "--starts", "3", "--seed", "7", "--thorough"]
    assert main(["solve", "coast", *words, "--quiet", "--no-save"]) == 0
    assert rooms.asked == {
        "name": "coast",
        "sets": ("a.b=1", "c=2"),
        "starts": 3,
        "seed": 7,
        "thorough": True,
    }
    assert capsys.readouterr().err == ""
    assert not Path("runs").exists()


def test_out_names_another_place(rooms, capsys):
    assert main(["solve", "coast", "--out", "here/now"]) == 0
    assert (Path("here/now") / "result.json").exists()
    assert not Path("runs").exists()
    assert f"Saved in {Path('here/now')}" in capsys.readouterr().err


def test_a_place_with_something_in_it_is_refused_before_the_solve(rooms, capsys):
    Path("mine").mkdir()
    Path("mine/notes.txt").write_text("x")
    assert main(["solve", "coast", "--out", "mine", "--json"]) == 2
    (row,) = json.loads(capsys.readouterr().out)["errors"]
    assert row["path"] == "--out"
    assert row["read"] == "mine"
    assert row["wanted"] == "an empty folder, or the name of one that does not exist yet"
    assert "seed" not in rooms.asked
    assert [path.name for path in Path("mine").iterdir()] == ["notes.txt"]


def test_out_and_no_save_exclude_each_other(rooms, capsys):
    assert main(["solve", "coast", "--out", "x", "--no-save"]) == 2
    assert "a run that is not saved has no folder" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("changes", "code"),
    [
        ({}, 0),
        ({"status": "calculated"}, 0),
        ({"audit": {"passed": False, "worst": None, "lines": []}}, 1),
        ({"audit": None}, 1),
        ({"status": "failed"}, 1),
        ({"status": "conflict"}, 1),
        ({"status": "over-specified"}, 2),
    ],
)
def test_exit_codes(rooms, capsys, changes, code):
    rooms.result |= changes
    assert main(["solve", "coast", "--quiet", "--no-save"]) == code


def test_a_run_without_a_point_is_told_and_kept(rooms, capsys):
    rooms.result = FAILED
    assert main(["solve", "coast"]) == 1
    assert "The solver reached its largest number of iterations." in capsys.readouterr().out
    assert json.loads((only_run() / "result.json").read_text(encoding="utf-8")) == FAILED


def test_wrong_input_is_located_and_leaves_nothing_behind(rooms, capsys):
    assert main(["solve", "wrong"]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert "wrong.yaml:3:8  loop.pressure\n  read    150 kW\n  wanted  a pressure\n" in err
    assert "Traceback" not in err
    assert not Path("runs").exists()


def test_wrong_input_as_json(rooms, capsys):
    assert main(["solve", "wrong", "--json"]) == 2
    assert json.loads(capsys.readouterr().out) == {
        "status": "invalid",
        "errors": [
            {
                "file": "wrong.yaml",
                "line": 3,
                "column": 8,
                "path": "loop.pressure",
                "read": "150 kW",
                "wanted": "a pressure",
                "nearest": None,
            }
        ],
    }


def test_wrong_input_found_late_leaves_nothing_behind(rooms, capsys):
    rooms.work = lambda: rooms.read_case("wrong")
    assert main(["solve", "coast"]) == 2
    assert list(Path("runs").iterdir()) == []


def test_an_unexpected_error_is_one_line_and_its_log_is_kept(rooms, capsys):
    def fail():
        raise ZeroDivisionError("in the middle\x1b[2J")

    rooms.work = fail
    assert main(["solve", "coast", "--quiet"]) == 1
    out, err = capsys.readouterr()
    run = only_run()
    assert out == ""
    assert err == (
        "setpoise: an unexpected error ended the run (ZeroDivisionError: in the middle\\x1b[2J); "
        f"the log is in {run / 'run.log'}\n"
    )
    assert run.name.endswith("-failed")
    log = (run / "run.log").read_text(encoding="utf-8")
    assert "Traceback" in log
    assert "stage: solving" in log


def test_an_unexpected_error_without_a_folder_keeps_its_log_too(rooms, capsys, monkeypatch, tmp_path):
    def fail():
        raise ZeroDivisionError

    monkeypatch.setattr("tempfile.tempdir", str(tmp_path))
    rooms.work = fail
    assert main(["solve", "coast", "--no-save", "--json"]) == 1
    told = json.loads(capsys.readouterr().out)
    assert told["status"] == "failed"
    assert "ZeroDivisionError" in Path(told["log"]).read_text(encoding="utf-8")


def test_a_page_that_fails_does_not_cost_the_result(rooms, capsys):
    rooms.result["decisions"] = {"loop.pressure": {}}
    assert main(["solve", "coast"]) == 1
    assert "an unexpected error ended the run (KeyError: 'at')" in capsys.readouterr().err
    assert json.loads((only_run() / "result.json").read_text(encoding="utf-8")) == rooms.result


def test_an_interruption_that_left_no_point_is_said(rooms, capsys):
    def interrupt():
        raise KeyboardInterrupt

    rooms.work = interrupt
    assert main(["solve", "coast", "--quiet"]) == 1
    assert capsys.readouterr().err == "setpoise: interrupted before a point was found\n"
    assert list(Path("runs").iterdir()) == []


def test_where_runs_cannot_be_written_the_run_is_kept_elsewhere_and_said(rooms, capsys, monkeypatch):
    Path("runs").write_text("a file where a folder is wanted")
    Path("spare").mkdir()
    monkeypatch.setattr("tempfile.tempdir", str(Path("spare").absolute()))
    assert main(["solve", "coast"]) == 0
    assert "runs cannot be written (" in capsys.readouterr().err
    assert len(list(Path("spare").glob("*/*/result.json"))) == 1


def test_a_disk_that_fills_up_does_not_cost_the_answer(rooms, capsys, monkeypatch):
    from optimiser.records.folders import RunFolder

    write = RunFolder.write

    def full(self, name, text):
        if name == "result.json":
            raise OSError(28, "No space left on device")
        write(self, name, text)

    monkeypatch.setattr(RunFolder, "write", full)
    assert main(["solve", "coast"]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("Ammonia at a windy coast")
    assert "The run could not be saved (no space left on device); what there is lies in " in err
