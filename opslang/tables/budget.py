"""How much work one statement may take.  Knows a number and when it is used up."""

from __future__ import annotations

DEFAULT_LIMIT = 1_000_000
"""Terms that one statement may work with, unless a flag says otherwise: one to two seconds, and at most some 300 MB."""


class TooLarge(Exception):
    """The statement needs more terms than its limit allows.  Carries the limit."""

    def __init__(self, limit: int) -> None:
        super().__init__(f"more than {limit:,} terms")
        self.limit = limit


class Budget:
    """A count of terms, filled anew for each statement."""

    __slots__ = ("left", "limit")

    def __init__(self, limit: int = DEFAULT_LIMIT) -> None:
        self.limit = limit
        self.left = limit

    def refill(self) -> None:
        """Start a new statement."""
        self.left = self.limit

    def spend(self, terms: int) -> None:
        """Count `terms` more terms; raise TooLarge when the limit is passed."""
        self.left -= terms
        if self.left < 0:
            raise TooLarge(self.limit)
