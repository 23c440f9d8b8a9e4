"""A derivation: where it starts and the instances of laws that were used.  Data only."""

from __future__ import annotations

from attrs import frozen

from opslang.ir.term import Element, Path
from opslang.laws.law import Bindings


@frozen
class Step:
    """One use of a law: its name, its bindings, the place, and the whole element after it."""

    law: str
    bindings: Bindings
    path: Path
    after: Element


@frozen
class Derivation:
    """A start and the steps from it; `operation` says which sort it is.

    `stopped` is empty where no law applies to the result any more, else it says why the steps end there.
    """

    start: Element
    steps: tuple[Step, ...]
    operation: bool = False
    stopped: str = ""

    @property
    def finished(self) -> bool:
        """Whether the last element is normal."""
        return not self.stopped

    @property
    def result(self) -> Element:
        """The element after the last step."""
        return self.steps[-1].after if self.steps else self.start
