import io

import pytest

from optimiser.cli.waiting import REWRITE, LiveWaiting, PlainWaiting, waiting


@pytest.fixture
def stream():
    return io.TextIOWrapper(io.BytesIO(), encoding="utf-8", newline="")


def shown(stream):
    stream.flush()
    return stream.buffer.getvalue().decode()


def test_plain_lines_tell_stages_and_starts(stream):
    listener = PlainWaiting(stream)
    listener.stage("solving")
    listener.start(2, 8, "converged")
    listener.end()
    assert shown(stream) == "   0.0 s  solving\n   0.0 s  start 3 of 8: converged\n"


def test_a_terminal_has_one_line_that_goes_when_the_work_ends(stream, monkeypatch):
    monkeypatch.setenv("COLUMNS", "40")
    listener = LiveWaiting(stream)
    listener.stage("solving")
    listener.start(5, 8, "converged after 41 iterations, which is long to say")
    listener.end()
    first, second, third = shown(stream).split(REWRITE)[1:]
    assert first == "0.0 s  solving"
    assert second.startswith("0.0 s  1 of 8 starts ended; converged")
    assert len(second) < 40
    assert third == ""
    assert "\n" not in shown(stream)


def test_progress_cannot_steer_the_terminal(stream):
    PlainWaiting(stream).line("\x1b[2J")
    assert shown(stream) == "   0.0 s  \\x1b[2J\n"


def test_quiet_says_nothing(capsys):
    listener = waiting(quiet=True)
    listener.stage("solving")
    listener.start(0, 1, "x")
    listener.end()
    assert capsys.readouterr().err == ""


def test_without_a_terminal_lines_are_plain(capsys):
    assert type(waiting(quiet=False)) is PlainWaiting
