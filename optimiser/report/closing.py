"""The end of the page: what the audit says, warnings, and what the result is not for."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from optimiser.report.layout import Audit, AuditLine, Hashed, Result, WorstLine
from optimiser.report.look import ALERT, BAD, GOOD, HEADING, QUIET, Look, bulleted, heading
from optimiser.report.numbers import number, unit_name
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType

CAUTION = (
    "For screening and design studies. Not for relief, materials, safe limits or construction: "
    "local codes and licensed engineers decide."
)


def audit(result: Result, look: Look) -> list[RenderableType]:
    """One line where all agrees; each line that failed where not."""
    from rich.text import Text

    found = result.get("audit")
    if not found:
        return []
    words, style = ("passed", GOOD) if found["passed"] else ("failed", BAD)
    text = Text.assemble("\n", ("Audit", HEADING), "   ", (words, style), (_worst(found), QUIET))
    failed = [line for line in found.get("lines", []) if not line["passed"]]
    return [text, bulleted([_line(line) for line in failed], look)] if failed else [text]


def _worst(found: Audit) -> str:
    if not found["passed"]:
        return ": computed apart from the optimiser's equations, the section comes out differently"
    text = ": the section computed apart from the optimiser's equations agrees"
    return f"{text}; least in {_difference(found['worst'])}" if found["worst"] else text


def _difference(line: WorstLine | AuditLine) -> str:
    spans = f"{number(line['difference'], 2)} of {number(line['allowed'], 2)} {unit_name(line.get('unit'))}"
    return f"{plain(line['what'])}, {spans}".rstrip()


def _line(line: AuditLine) -> str:
    values = f"{number(line['model'], 6)} by the optimiser, {number(line['audit'], 6)} by the audit"
    return f"{_difference(line)} allowed: {values}"


def warnings(texts: Sequence[str], look: Look) -> list[RenderableType]:
    """What the reader should know before the numbers are used."""
    if not texts:
        return []
    return [heading("Warnings"), bulleted([plain(text) for text in texts], look, ALERT)]


def caution(result: Result) -> list[RenderableType]:
    """What the result is not for, and what it was made from."""
    from rich.text import Text

    return [Text("\n" + CAUTION, style=QUIET), *_origin(result)]


def _origin(result: Result) -> list[RenderableType]:
    """What to ask for when the same numbers are wanted again."""
    from rich.text import Text

    made = result.get("provenance")
    if not made:
        return []
    version = f"setpoise {plain(made['setpoise'])}, {plain(made['backend'])}, seed {made['seed']}"
    return [Text("; ".join([version, *_hashed(made["case"])]), style=QUIET)]


def _hashed(made: Hashed) -> list[str]:
    return [f"{plain(made['file'])} (sha256 {made['sha256'][:12]})"] if made["sha256"] else []
