"""Names of run folders: when, and which case."""

from __future__ import annotations

import re
import unicodedata
from datetime import datetime

# A longer title is cut here [characters], so that paths stay short enough for every file system.
LONGEST_SLUG = 40


def run_name(title: str, when: datetime) -> str:
    """Name such as `20260301T142530Z-ammonia-at-the-coast`.

    Args:
        title: title of the case, in any script; what is left of it without one is `case`.
        when: time of the run in UTC.
    """
    return f"{when:%Y%m%dT%H%M%SZ}-{slug(title)}"


def slug(title: str) -> str:
    """The title in lower case, letters and digits only, joined by hyphens."""
    latin = unicodedata.normalize("NFKD", title).encode("ascii", "ignore").decode("ascii").lower()
    words = "-".join(re.findall(r"[a-z0-9]+", latin))
    return words[:LONGEST_SLUG].strip("-") or "case"
