import logging
import re
import warnings

import pytest

from optimiser.progress import Progress
from optimiser.records.log import RunLog, recording


class Listener(Progress):
    def __init__(self):
        self.heard = []

    def stage(self, text):
        self.heard.append(("stage", text))

    def start(self, index, total, text):
        self.heard.append(("start", index, total, text))

    def line(self, text):
        self.heard.append(("line", text))


def said(log):
    return re.sub(r"^ *\d+\.\d{3} s  ", "", log.text, flags=re.M)


def test_what_is_heard_is_kept_and_passed_on():
    listener = Listener()
    log = RunLog(listener)
    log.stage("solving")
    log.start(2, 8, "converged")
    log.line("a remark")
    assert said(log) == "stage: solving\nstart 3 of 8: converged\na remark\n"
    assert listener.heard == [("stage", "solving"), ("start", 2, 8, "converged"), ("line", "a remark")]


def test_the_file_has_what_was_said_before_it_was_opened_and_at_once_what_comes(tmp_path):
    log = RunLog()
    log.stage("reading")
    log.open(tmp_path / "run.log")
    log.stage("solving")
    assert (tmp_path / "run.log").read_text(encoding="utf-8") == log.text
    log.close()
    log.note("two\nlines")
    assert "lines" not in (tmp_path / "run.log").read_text(encoding="utf-8")
    assert said(log).endswith("two\nlines\n")


@pytest.mark.filterwarnings("default")
def test_records_and_warnings_of_libraries_go_to_the_log(capsys):
    log = RunLog()
    with recording(log):
        logging.getLogger("library").warning("odd: %s", 3)
        warnings.warn("old use", DeprecationWarning, stacklevel=1)
    logging.getLogger("library").info("after")
    assert "library warning: odd: 3\n" in said(log)
    assert "DeprecationWarning: old use" in said(log)
    assert "after" not in said(log)
    assert capsys.readouterr().err == ""
