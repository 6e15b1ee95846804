"""Foreign text made harmless for a terminal: what a user wrote may hold control characters, meant or not."""

from __future__ import annotations

import unicodedata

# Controls, format marks (among them those that turn the reading direction), lone surrogates, private and
# unassigned characters, and the two separators that some terminals take for a line end.
UNSAFE = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})


def plain(text: object) -> str:
    """The text on one line; characters that could move the cursor or hide others become escapes."""
    return "".join(_shown(character) for character in str(text)).strip()


def _shown(character: str) -> str:
    if character in "\t\n\r":
        return " "
    if unicodedata.category(character) not in UNSAFE:
        return character
    return character.encode("unicode_escape").decode("ascii")
