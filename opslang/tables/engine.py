"""The fast normaliser: a typed tree in, a canonical element out.  The one way in for every front.

Strategy.  Exponents and letters are packed into slots; the width comes from a bound on the degree, so that the ordinary
case has ten bits.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import Any

from opslang.ground.grading import degree as word_degree
from opslang.ir import tree as ir
from opslang.ir.order import word_key
from opslang.ir.tree import ClassElement, OperationElement
from opslang.tables.budget import DEFAULT_LIMIT, Budget
from opslang.tables.evaluation import Evaluation
from opslang.tables.powers import Powers
from opslang.tables.ring2 import Ring2
from opslang.tables.ring_odd import RingOdd
from opslang.tables.squares import Squares

_SLOTS = 96
"""A ring with more generators than this is made anew for the next statement: long ints are slow."""

Algebra = Squares | Powers
Ring = Ring2 | RingOdd


def _width(top: int) -> int:
    """Bits of a slot for degrees up to `top`."""
    return 10 if top < 1000 else 20 if top < 1_000_000 else top.bit_length() + 2


class Engine:
    """The normaliser at one prime, with what it remembers from statement to statement."""

    def __init__(self, prime: int, limit: int = DEFAULT_LIMIT) -> None:
        self.prime = prime
        self.budget = Budget(limit)
        self.modulo = False
        """Whether the last element is defined only modulo the images of lower Bocksteins."""
        self.modulo_order = 1
        """The highest order of a Bockstein met whose value is so defined."""
        self._rings: dict[int, Ring] = {}

    def start(self) -> None:
        """Begin a statement: a full budget, and rings that are not too wide."""
        self.budget.refill()
        self.modulo = False
        self.modulo_order = 1
        for width, ring in list(self._rings.items()):
            if len(ring.slots.word) > _SLOTS:
                del self._rings[width]

    def ring(self, top: int) -> Ring:
        """The ring whose slots hold degrees up to `top`."""
        width = _width(top)
        found = self._rings.get(width)
        if found is None:
            found = Ring2(width, self.budget) if self.prime == 2 else RingOdd(self.prime, width, self.budget)
            self._rings[width] = found
        return found

    # --- the two sorts --------------------------------------------------------------------------

    def normal_class(self, tree: ir.Cls) -> ClassElement:
        """The canonical form of a class.  Raises TooLarge, Undefined."""
        ring = self.ring(tree.top)
        return ClassElement(self.prime, ring.decode(Evaluation(self, ring).cls(tree)))

    def normal_classes(self, trees: Sequence[ir.Cls]) -> tuple[list[ClassElement], list[ClassElement]]:
        """The canonical forms of several classes, and the differences of each with the next.  Raises TooLarge,
        Undefined."""
        ring: Any = self.ring(max([tree.top for tree in trees]))
        walk = Evaluation(self, ring)
        values = [walk.cls(tree) for tree in trees]
        differences = []
        for left, right in pairwise(values):
            difference = ring.zero()
            if left != right:
                ring.add(difference, left)
                ring.add(difference, right, -1)
            differences.append(ClassElement(self.prime, ring.decode(difference)))
        return [ClassElement(self.prime, ring.decode(value)) for value in values], differences

    def normal_operation(self, tree: ir.Op, top: int) -> OperationElement:
        """The canonical form of an operation all of whose parts have degree at most `top`.  Raises TooLarge."""
        ring = self.ring(top)
        element = Evaluation(self, ring).operation(tree)
        unpack, p = ring.algebra.unpack, self.prime
        pairs = [(unpack(x), 1) for x in element] if p == 2 else [(unpack(x), c) for x, c in element.items()]
        pairs.sort(key=lambda pair: (word_degree(pair[0], p), word_key(pair[0], p)))
        return OperationElement(p, tuple(pairs))
