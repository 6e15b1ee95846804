"""YAML files as plain data that remember where every value stands.

Read as a stream of events: no object is ever made from a tag, nothing is executed, and what could grow beyond
the file (anchors, aliases) is refused. Of YAML 1.2 all else is understood. A value may begin with `>=`, which
YAML itself would take for the sign of a folded text.
"""

from __future__ import annotations

import hashlib
import math
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from optimiser.inputs.document import Document, Path_, Spot
from optimiser.inputs.errors import InputError, InputProblem

__all__ = ["Document", "Path_", "parse_document", "plain_value", "read_document"]

LARGEST = 2_000_000
DEEPEST = 20
# Stands for `>` while YAML is parsed, so that no column moves. It belongs to Unicode's private area.
_GREATER = "\ue000"
_LEADING_GREATER = re.compile(r"(?m)^([^\n#]*?:[ \t]+|[ \t]*- +)>(?==)")

_NULL = re.compile(r"(?:null|Null|NULL|~|)")
_TRUE = re.compile(r"true|True|TRUE")
_FALSE = re.compile(r"false|False|FALSE")
_INTEGER = re.compile(r"[-+]?[0-9]{1,18}")
_FLOAT = re.compile(r"[-+]?(?:\.[0-9]+|[0-9]+(?:\.[0-9]*)?)(?:[eE][-+]?[0-9]+)?")


def read_document(path: str | Path, name: str | None = None) -> Document:
    """Read a file.

    Args:
        name: what errors call it; by default its path.

    Raises:
        InputError: the file cannot be read or is no YAML that is understood; all that can be told together.
    """
    file = str(path) if name is None else name
    raw = _bytes(Path(path), file)
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as problem:
        line = raw.count(b"\n", 0, problem.start) + 1
        column = problem.start - raw.rfind(b"\n", 0, problem.start)
        wanted = "a text file in UTF-8"
        raise InputError(
            [InputProblem(file, line, column, "", repr(raw[problem.start : problem.end]), wanted)]
        ) from None
    document = parse_document(text, file)
    document.path = Path(path)
    document.sha256 = hashlib.sha256(raw).hexdigest()
    return document


def _bytes(path: Path, file: str) -> bytes:
    """Content of a file of reasonable size."""
    wanted = ""
    try:
        if path.is_dir():
            wanted = "a file, not a folder"
        elif path.stat().st_size > LARGEST:
            wanted = f"a file of at most {LARGEST // 1_000_000} MB"
        else:
            return path.read_bytes()
    except OSError as problem:
        wanted = f"a file that can be read ({problem.strerror or problem})"
    raise InputError([InputProblem(file, None, None, "", path.name, wanted)])


def parse_document(text: str, file: str) -> Document:
    """As `read_document`, from a text."""
    from ruamel.yaml import YAML
    from ruamel.yaml.error import MarkedYAMLError, YAMLError

    marked = "" if _GREATER in text else _GREATER
    if marked:
        text = _LEADING_GREATER.sub(rf"\1{marked}", text)
    reader = _Reader(file, marked)
    try:
        reader.read(YAML(typ="safe", pure=True).parse(text))
    except MarkedYAMLError as problem:
        reader.problems.append(_malformed(problem, file, text))
    except _TooDeep:
        pass  # It has been told; what lies deeper would take long to read and could not be used.
    except YAMLError as problem:
        reader.problems.append(
            InputProblem(file, None, None, "", "", f"readable YAML ({_first_line(problem)})")
        )
    if reader.problems:
        raise InputError(reader.problems)
    return reader.document


def _malformed(problem: Any, file: str, text: str) -> InputProblem:
    """YAML's own complaint with its place and the line at fault."""
    mark = problem.problem_mark or problem.context_mark
    lines = text.splitlines()
    read = lines[mark.line].strip() if mark.line < len(lines) else ""
    wanted = f"readable YAML ({_first_line(problem.problem or problem.context)})"
    if re.search(r"(?::|-)\s+>\s*[^\s|]", read):
        wanted = "a value that begins with > in quotes, such as '>= 10 K'"
    elif "\t" in read or "'\\t'" in wanted:
        wanted = "spaces, not tabs, at the beginning of a line"
    elif re.search(r"(?::|-)\s+[%@`]", read):
        wanted = "a value that begins with this sign in quotes"
    return InputProblem(file, mark.line + 1, mark.column + 1, "", read.replace(_GREATER, ">"), wanted)


def _first_line(problem: Any) -> str:
    return str(problem).strip().partition("\n")[0]


class _TooDeep(Exception):
    """Too many levels within one another."""


class _Reader:
    """Builds a document from YAML's events and collects what is not allowed.

    Args:
        marked: the sign that stands for `>` in the text, empty for none.
    """

    def __init__(self, file: str, marked: str) -> None:
        self.document = Document(file, None)
        self._marked = marked
        self.problems: list[InputProblem] = []
        self._events: Iterator[Any] = iter(())

    def read(self, events: Iterator[Any]) -> None:
        """All events of a file."""
        from ruamel.yaml.events import DocumentStartEvent, StreamEndEvent, StreamStartEvent

        self._events, documents = events, 0
        for event in events:
            if isinstance(event, StreamStartEvent | StreamEndEvent):
                continue
            if isinstance(event, DocumentStartEvent):
                documents += 1
                if documents > 1:
                    self._fault(event, (), "---", "one YAML document in the file")
                    return
                self.document.data = self._value(next(events), ())

    def _fault(self, event: Any, path: Path_, read: str, wanted: str) -> None:
        mark = event.start_mark
        name = self.document.dotted(path)
        self.problems.append(
            InputProblem(self.document.file, mark.line + 1, mark.column + 1, name, read, wanted)
        )

    def _value(self, event: Any, path: Path_) -> Any:
        """The value that begins with an event."""
        from ruamel.yaml.events import AliasEvent, MappingStartEvent, ScalarEvent, SequenceStartEvent

        if isinstance(event, AliasEvent):
            self._fault(event, path, f"*{event.anchor}", "the value itself; aliases are not understood")
            return None
        self._plainness(event, path)
        text = self._restored(event.value) if isinstance(event, ScalarEvent) else ""
        spot = Spot(event.start_mark.line + 1, event.start_mark.column + 1, text)
        # YAML finds a missing value only where the next one begins; its key is the better place.
        missing = text == "" and isinstance(event, ScalarEvent) and event.style is None
        self.document.values[path] = self.document.keys.get(path, spot) if missing else spot
        if len(path) > DEEPEST:
            self._fault(event, path[:DEEPEST], "", f"at most {DEEPEST} levels within one another")
            raise _TooDeep
        if isinstance(event, MappingStartEvent):
            return self._mapping(path)
        if isinstance(event, SequenceStartEvent):
            return self._sequence(path)
        return text if event.style is not None else plain_value(text)

    def _restored(self, text: str) -> str:
        return text.replace(self._marked, ">") if self._marked else text

    def _plainness(self, event: Any, path: Path_) -> None:
        if event.anchor is not None:
            self._fault(
                event, path, f"&{event.anchor}", "a value without an anchor; anchors are not understood"
            )
        tag = getattr(event, "tag", None)
        if tag is not None:
            self._fault(event, path, str(tag), "a value without a tag; tags are not understood")

    def _mapping(self, path: Path_) -> dict[str, Any]:
        from ruamel.yaml.events import MappingEndEvent, ScalarEvent

        result: dict[str, Any] = {}
        while not isinstance(event := next(self._events), MappingEndEvent):
            if not isinstance(event, ScalarEvent):
                self._fault(event, path, "", "a name before the colon")
                self._skip(event)
                self._skip(next(self._events))
                continue
            self._plainness(event, path)
            self._entry(event, path, result)
        return result

    def _entry(self, event: Any, path: Path_, result: dict[str, Any]) -> None:
        """One key with its value; a second value under one key is told and left out."""
        name = self._restored(event.value)
        inner = (*path, name)
        if name in result:
            first = self.document.keys[inner].line
            self._fault(event, inner, name, f"each key once; it stands in line {first} too")
            self._skip(next(self._events))
            return
        self.document.keys[inner] = Spot(event.start_mark.line + 1, event.start_mark.column + 1)
        result[name] = self._value(next(self._events), inner)

    def _sequence(self, path: Path_) -> list[Any]:
        from ruamel.yaml.events import SequenceEndEvent

        result: list[Any] = []
        while not isinstance(event := next(self._events), SequenceEndEvent):
            result.append(self._value(event, (*path, len(result))))
        return result

    def _skip(self, event: Any) -> None:
        """Pass over what begins with an event."""
        from ruamel.yaml.events import CollectionEndEvent, CollectionStartEvent

        depth = int(isinstance(event, CollectionStartEvent))
        while depth:
            event = next(self._events)
            depth += isinstance(event, CollectionStartEvent) - isinstance(event, CollectionEndEvent)


def plain_value(text: str) -> Any:
    """What a text without quotes means, by YAML 1.2's core types: None, bool, int, float, else text."""
    if _NULL.fullmatch(text):
        return None
    if _TRUE.fullmatch(text) or _FALSE.fullmatch(text):
        return bool(_TRUE.fullmatch(text))
    if _INTEGER.fullmatch(text):
        return int(text)
    return _number(text) if _FLOAT.fullmatch(text) else text


def _number(text: str) -> float | str:
    """A number; text where it is too large to be one, so that it is refused where a number is wanted."""
    value = float(text)
    return value if math.isfinite(value) else text
