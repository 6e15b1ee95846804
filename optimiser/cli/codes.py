"""Exit codes, the same for all commands."""

from __future__ import annotations

from typing import Any

ANSWERED = 0
FAILED = 1
WRONG_INPUT = 2

# A plant that is given too much or too little is an input to be mended, not a search that failed.
_CHECKS = {
    "ready": ANSWERED,
    "conflict": FAILED,
    "over-specified": WRONG_INPUT,
    "under-specified": WRONG_INPUT,
}


def solve_code(result: dict[str, Any]) -> int:
    """0 for a point that its audit confirms, 2 for a plant that is not fully given, else 1."""
    status = result.get("status")
    if status in ("optimal", "calculated"):
        audit = result.get("audit")
        return ANSWERED if audit and audit["passed"] else FAILED
    return check_code(str(status))


def check_code(status: str) -> int:
    """0 for a case that can be solved, 1 for one that no point can hold, 2 for one not rightly given."""
    return _CHECKS.get(status, FAILED)
