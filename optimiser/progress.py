"""What a long calculation tells whoever waits for it: an object passed in, silent unless someone listens."""

from __future__ import annotations


class Progress:
    """Listener that hears nothing: the default, and the base of those that show or record.

    A calculation calls these methods and never prints; what becomes of the words is the listener's business.
    """

    def stage(self, text: str) -> None:
        """A new stage begins; `text` names it in a few words, such as "audit"."""

    def start(self, index: int, total: int, text: str) -> None:
        """One of several starts has ended.

        Args:
            index: number of the start, counted from 0 [-].
            total: how many starts there are [-].
            text: how it ended, in a few words.
        """

    def line(self, text: str) -> None:
        """A remark that belongs to the stage under way."""
