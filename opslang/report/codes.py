"""Every diagnostic name: its title, its explanation and an example that shows it.  Retired names stay."""

from __future__ import annotations

from attrs import frozen


@frozen
class Code:
    """A diagnostic name with the words that explain it; the example is a script in which it appears."""

    title: str
    explanation: str
    example: str


CODES: dict[str, Code] = {}
