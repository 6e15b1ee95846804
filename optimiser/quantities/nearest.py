"""The valid name that comes closest to one that is not valid."""

from __future__ import annotations

from collections.abc import Iterable


def nearest_name(name: str, names: Iterable[str], *, least: float = 0.6) -> str | None:
    """The closest of the names, None if none is alike; capitals make no difference.

    Args:
        least: how alike a name must be, 0 to 1 (share of matching characters).
    """
    from difflib import get_close_matches

    lower = {candidate.lower(): candidate for candidate in names}
    found = get_close_matches(name.lower(), lower, n=1, cutoff=least)
    return lower[found[0]] if found else None
