import os
import stat
from datetime import UTC, datetime
from pathlib import Path

import pytest

from optimiser.records.folders import OutputProblem, open_named, open_run

WHEN = datetime(2026, 3, 1, 14, 25, 30, tzinfo=UTC)
NAME = "20260301T142530Z-coast"


def names(folder: Path) -> set[str]:
    return {path.name for path in folder.iterdir()}


def test_a_run_appears_whole_or_not_at_all(tmp_path):
    base = tmp_path / "runs"
    folder = open_run("Coast", base, now=WHEN)
    folder.write("case.yaml", "title: Größe\n")
    assert not (base / NAME).exists()
    folder.write("result.json", "{}\n")
    assert folder.publish() == base / NAME
    assert names(base) == {NAME}
    assert names(base / NAME) == {"case.yaml", "result.json"}
    assert (base / NAME / "case.yaml").read_bytes() == "title: Größe\n".encode()


def test_runs_of_one_second_get_numbers(tmp_path):
    folders = [open_run("Coast", tmp_path, now=WHEN) for _ in range(3)]
    for folder in folders:
        folder.write("result.json", "{}")
    assert [folder.publish().name for folder in folders] == [NAME, f"{NAME}-2", f"{NAME}-3"]


def test_an_empty_folder_of_that_name_is_not_taken_over(tmp_path):
    (tmp_path / NAME).mkdir()
    folder = open_run("Coast", tmp_path, now=WHEN)
    assert folder.publish().name == f"{NAME}-2"


def test_a_run_has_the_rights_that_the_users_files_have(tmp_path):
    plain = tmp_path / "plain"
    plain.mkdir()
    run = open_run("Coast", tmp_path, now=WHEN).publish()
    assert stat.S_IMODE(run.stat().st_mode) == stat.S_IMODE(plain.stat().st_mode)


def test_where_the_base_cannot_be_written_the_run_is_kept_elsewhere(tmp_path, monkeypatch):
    base = tmp_path / "runs"
    base.write_text("a file where a folder is wanted")
    spare = tmp_path / "spare"
    spare.mkdir()
    monkeypatch.setattr("tempfile.tempdir", str(spare))
    folder = open_run("Coast", base, now=WHEN)
    folder.write("result.json", "{}")
    place = folder.publish()
    assert spare in place.parents
    assert folder.note.startswith(f"{base} cannot be written (")
    assert (place / "result.json").exists()


def test_a_failed_run_is_named_so(tmp_path):
    folder = open_run("Coast", tmp_path, now=WHEN)
    assert folder.publish("-failed").name == f"{NAME}-failed"


def test_a_discarded_run_leaves_nothing(tmp_path):
    folder = open_run("Coast", tmp_path, now=WHEN)
    folder.write("case.yaml", "")
    folder.discard()
    assert names(tmp_path) == set()


@pytest.mark.parametrize("exists", [True, False])
def test_a_named_folder_may_be_new_or_empty(tmp_path, exists):
    out = tmp_path / "deep" / "out"
    if exists:
        out.mkdir(parents=True)
    folder = open_named(out)
    folder.write("result.json", "{}")
    folder.write("case.yaml", "")
    assert folder.publish() == out
    assert names(out) == {"result.json", "case.yaml"}
    assert names(out.parent) == {"out"}


def test_the_current_folder_may_be_named(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    folder = open_named(Path())
    folder.write("result.json", "{}")
    assert folder.publish() == tmp_path
    assert names(tmp_path) == {"result.json"}
    assert Path.cwd() == tmp_path


def test_a_folder_with_something_in_it_is_refused_and_left_alone(tmp_path):
    (tmp_path / "mine.txt").write_text("x")
    with pytest.raises(OutputProblem, match="an empty folder, or the name of one"):
        open_named(tmp_path)
    assert names(tmp_path) == {"mine.txt"}


def test_a_file_is_refused(tmp_path):
    out = tmp_path / "out"
    out.write_text("x")
    with pytest.raises(OutputProblem, match="this is a file"):
        open_named(out)


def test_a_place_below_a_file_is_refused(tmp_path):
    (tmp_path / "file").write_text("x")
    with pytest.raises(OutputProblem, match="a place that can be written"):
        open_named(tmp_path / "file" / "out")


@pytest.mark.skipif(os.name == "nt", reason="links need rights on Windows")
def test_a_link_that_leads_nowhere_is_refused(tmp_path):
    link = tmp_path / "out"
    link.symlink_to(tmp_path / "gone")
    with pytest.raises(OutputProblem):
        open_named(link)


def test_a_name_taken_meanwhile_gets_a_number(tmp_path):
    folder = open_named(tmp_path / "out")
    folder.write("result.json", "{}")
    (tmp_path / "out").mkdir()
    assert folder.publish() == tmp_path / "out-2"
