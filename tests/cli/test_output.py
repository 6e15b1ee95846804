import io
import os
import subprocess
import sys
from pathlib import Path

import pytest

import optimiser
from optimiser.cli.output import look_of, say


class Terminal(io.TextIOWrapper):
    def isatty(self):
        return True


def terminal(encoding="utf-8"):
    return Terminal(io.BytesIO(), encoding=encoding)


def in_python(code, **options):
    """The outcome of a Python process that can import the package."""
    home = Path(optimiser.__file__).parents[1]
    return subprocess.run([sys.executable, "-c", code], cwd=home, capture_output=True, check=False, **options)


def test_a_file_gets_plain_text(monkeypatch):
    look = look_of(io.TextIOWrapper(io.BytesIO(), encoding="utf-8"))
    assert (look.width, look.colour, look.drawn) == (80, False, False)


def test_a_terminal_gets_what_it_can_show(monkeypatch):
    monkeypatch.setenv("COLUMNS", "93")
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.setenv("WT_SESSION", "x")
    monkeypatch.delenv("NO_COLOR", raising=False)
    look = look_of(terminal())
    assert (look.width, look.colour, look.drawn) == (93, True, True)
    assert not look_of(terminal("latin-1")).drawn
    monkeypatch.setenv("NO_COLOR", "1")
    assert not look_of(terminal()).colour
    monkeypatch.setenv("TERM", "dumb")
    assert look_of(terminal()) == look_of(io.TextIOWrapper(io.BytesIO()))


def test_what_an_encoding_lacks_is_replaced():
    stream = io.TextIOWrapper(io.BytesIO(), encoding="ascii")
    say("Größe\n", stream)
    assert stream.buffer.getvalue() == b"Gr??e\n"


@pytest.mark.skipif(os.name == "nt", reason="C's library has another name on Windows")
def test_what_c_keeps_in_its_buffers_stays_out_of_standard_output():
    done = in_python(
        "import ctypes\n"
        "from optimiser.cli.output import say, spare_stdout\n"
        "with spare_stdout():\n"
        "    ctypes.CDLL(None).puts(b'from C')\n"
        "say('answer\\n')\n"
    )
    assert (done.stdout, done.stderr) == (b"answer\n", b"from C\n")


@pytest.mark.skipif(os.name == "nt", reason="pipes end differently on Windows")
def test_a_reader_who_leaves_early_is_no_error():
    reader, writer = os.pipe()
    os.close(reader)
    home = Path(optimiser.__file__).parents[1]
    code = "from optimiser.cli.output import say\nsay('x' * 100000)\nsay('more')"
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=home, stdout=writer, stderr=subprocess.PIPE, check=False
    )
    os.close(writer)
    assert (done.returncode, done.stderr) == (0, b"")
