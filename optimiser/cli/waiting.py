"""Progress on standard error: one line that is rewritten on a terminal, plain lines elsewhere."""

from __future__ import annotations

import shutil
import sys
import time
from typing import TextIO

from optimiser.cli.output import is_terminal, say
from optimiser.progress import Progress
from optimiser.report.plain import plain

# Goes to the start of the line and clears it.
REWRITE = "\r\x1b[K"


class PlainWaiting(Progress):
    """A line for each stage and start, with the seconds since the beginning."""

    def __init__(self, stream: TextIO) -> None:
        self._stream = stream
        self._began = time.perf_counter()

    def stage(self, text: str) -> None:
        """Say what is done now."""
        self.line(text)

    def start(self, index: int, total: int, text: str) -> None:
        """Say how a start ended."""
        self.line(f"start {index + 1} of {total}: {text}")

    def line(self, text: str) -> None:
        """Say a remark."""
        say(f"{time.perf_counter() - self._began:6.1f} s  {plain(text)}\n", self._stream)

    def end(self) -> None:
        """Nothing is left on the screen that would have to go."""


class LiveWaiting(PlainWaiting):
    """One line on a terminal, rewritten as the work goes on and gone when it ends."""

    def __init__(self, stream: TextIO) -> None:
        super().__init__(stream)
        self._ended = 0

    def start(self, index: int, total: int, text: str) -> None:
        """Starts end in any order, so the line counts them."""
        self._ended += 1
        self.line(f"{self._ended} of {total} starts ended; {text}")

    def line(self, text: str) -> None:
        """Show this in place of what was shown."""
        seconds = f"{time.perf_counter() - self._began:.1f} s"
        room = shutil.get_terminal_size().columns - len(seconds) - 3
        say(f"{REWRITE}{seconds}  {plain(text)[:room]}", self._stream)

    def end(self) -> None:
        """Leave an empty line for what comes."""
        say(REWRITE, self._stream)


class NoWaiting(PlainWaiting):
    """Says nothing."""

    def line(self, text: str) -> None:
        """Say nothing."""


def waiting(*, quiet: bool) -> PlainWaiting:
    """The listener that suits standard error."""
    if quiet:
        return NoWaiting(sys.stderr)
    return LiveWaiting(sys.stderr) if is_terminal(sys.stderr) else PlainWaiting(sys.stderr)
