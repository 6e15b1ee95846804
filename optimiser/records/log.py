"""The log of a run: all that is said on the way, with the time at which it was said."""

from __future__ import annotations

import logging
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TextIO

from optimiser.progress import Progress


class RunLog(Progress):
    """Listener that keeps what it hears and passes it on.

    Lines go to a file at once, so that a run which is killed leaves its log; all are kept in memory too.
    """

    def __init__(self, onward: Progress | None = None) -> None:
        self._onward = onward or Progress()
        self._began = time.perf_counter()
        self._file: TextIO | None = None
        self.lines: list[str] = []

    def open(self, path: Path) -> None:
        """Write to this file from now on, beginning with what has been said so far; raises OSError."""
        self._file = path.open("w", encoding="utf-8", newline="\n")
        self._file.writelines(f"{line}\n" for line in self.lines)
        self._file.flush()

    def close(self) -> None:
        """End the file; what is said afterwards is kept in memory only."""
        if self._file is not None:
            self._file.close()
            self._file = None

    def note(self, text: str) -> None:
        """Keep a text of one or several lines without passing it on."""
        seconds = time.perf_counter() - self._began
        new = [f"{seconds:9.3f} s  {line}" for line in text.splitlines()]
        self.lines += new
        if self._file is not None:
            self._file.writelines(f"{line}\n" for line in new)
            self._file.flush()

    @property
    def text(self) -> str:
        """All lines so far."""
        return "".join(f"{line}\n" for line in self.lines)

    def stage(self, text: str) -> None:
        """Keep the stage and pass it on."""
        self.note(f"stage: {text}")
        self._onward.stage(text)

    def start(self, index: int, total: int, text: str) -> None:
        """Keep how the start ended and pass it on."""
        self.note(f"start {index + 1} of {total}: {text}")
        self._onward.start(index, total, text)

    def line(self, text: str) -> None:
        """Keep the remark and pass it on."""
        self.note(text)
        self._onward.line(text)


class _Handler(logging.Handler):
    """Writes records of Python's logging to a run's log."""

    def __init__(self, log: RunLog) -> None:
        super().__init__(logging.INFO)
        self._log = log

    def emit(self, record: logging.LogRecord) -> None:
        try:
            self._log.note(f"{record.name} {record.levelname.lower()}: {record.getMessage()}")
        except Exception:  # A record that cannot be written must not end the run that it tells of.
            self.handleError(record)


@contextmanager
def recording(log: RunLog) -> Iterator[None]:
    """While this lasts, logging records and Python warnings of all libraries go to the log."""
    root = logging.getLogger()
    handler = _Handler(log)
    root.addHandler(handler)
    logging.captureWarnings(True)
    try:
        yield
    finally:
        logging.captureWarnings(False)
        root.removeHandler(handler)
