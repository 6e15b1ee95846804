"""Standard output and error: what they can show, and keeping the one clean for the answer."""

from __future__ import annotations

import os
import shutil
import sys
from collections.abc import Iterator
from contextlib import contextmanager, redirect_stdout, suppress
from typing import TextIO

from optimiser.report.look import Look

# Width of a page that goes to a file or another program [characters].
PIPED = 80


def look_of(stream: TextIO) -> Look:
    """What this stream can show; plain text where it is not a terminal."""
    drawn = (stream.encoding or "").lower().replace("-", "").startswith("utf")
    if not is_terminal(stream):
        return Look(width=PIPED)
    coloured = "NO_COLOR" not in os.environ and (sys.platform != "win32" or "WT_SESSION" in os.environ)
    return Look(width=shutil.get_terminal_size((PIPED, 24)).columns, colour=coloured, drawn=drawn)


def is_terminal(stream: TextIO) -> bool:
    """Whether somebody reads along and the line can be rewritten."""
    return stream.isatty() and os.environ.get("TERM", "") != "dumb"


def say(text: str, stream: TextIO | None = None) -> None:
    """Write to standard output or the stream given, whatever its encoding; its reader may have left."""
    place = stream or sys.stdout
    encoding = place.encoding or "utf-8"
    try:
        place.write(text.encode(encoding, "replace").decode(encoding))
        place.flush()
    except BrokenPipeError:
        # Python flushes once more at its end, which must find somewhere to go.
        os.dup2(os.open(os.devnull, os.O_WRONLY), place.fileno())


@contextmanager
def spare_stdout() -> Iterator[None]:
    """While this lasts all that is printed goes to standard error, by libraries written in C too."""
    sys.stdout.flush()
    try:
        kept = os.dup(1)
        os.dup2(2, 1)
    except OSError:
        # One of the two is closed; then there is nothing to keep apart.
        yield
        return
    try:
        with redirect_stdout(sys.stderr):
            yield
    finally:
        _flush_c()
        os.dup2(kept, 1)
        os.close(kept)


def _flush_c() -> None:
    """Empty the buffers of C's own streams, which would else be written to the restored standard output."""
    import ctypes

    with suppress(OSError, AttributeError, TypeError):
        ctypes.CDLL(None).fflush(None)
