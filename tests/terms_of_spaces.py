"""Classes of named spaces as polynomials in roots, for the tests of the laws: the witness then sees those laws.

Restriction to products of projective spaces: w_i, c_i, q_i, p_i are elementary symmetric polynomials in the roots or in
their squares (Borel 1953), the Thom class restricts to the product of the roots along the zero section.  Generators of
projective and lens spaces go to the class of one slot.  Nothing here asks the spaces for their operations.
"""

from __future__ import annotations

from itertools import combinations
from typing import Any

from opslang.ir.tree import Class
from opslang.spaces.characteristic import Classifying, Pontryagin
from opslang.spaces.projective import Lens, Projective
from opslang.spaces.thom import Thom
from opslang.witness.polynomial import Polynomial, Ring, add

ROOTS = 4


class Restriction(dict[Class, Polynomial]):
    """Where classes of named spaces go; KeyError for those that are not seen."""

    def __init__(self, ring: Ring) -> None:
        super().__init__()
        self.ring = ring

    def __missing__(self, of: Class) -> Polynomial:
        value = self[of] = self._value(of, of.ring)
        return value

    def _slots(self, order: int) -> list[int]:
        return [slot for slot, own in enumerate(self.ring.orders) if own == order][:ROOTS]

    def _elementary(self, roots: list[Polynomial], i: int) -> Polynomial:
        ring, total = self.ring, _zero()
        for chosen in combinations(roots, i):
            product: Polynomial = {(0,) * len(ring.orders): 1}
            for root in chosen:
                product = ring.product(product, root)
            total = add(total, product, ring.prime)
        return total

    def _roots(self, base: Any, rank: int | None) -> list[Polynomial]:
        """The roots x_i, or their squares where the classes are elementary symmetric in those."""
        ring = self.ring
        real = ring.prime == 2 and base.letter == "w"
        special = real and base.group == "SO"
        slots = self._slots(1 if real else 0)[: rank - 1 if special and rank else rank]
        roots = [ring.class_in(slot, 1 if real else 2) for slot in slots]
        if special:  # roots whose sum is 0
            total: Polynomial = {}
            for root in roots:
                total = add(total, root, 2)
            roots.append(total)
        return [ring.power(root, 2) for root in roots] if base.letter in "pq" else roots

    def _value(self, of: Class, space: Any) -> Polynomial:
        ring = self.ring
        if isinstance(space, Projective):
            order = 1 if space.field == "R" else 0
            return ring.class_in(self._slots(order)[0], of.degree)
        if isinstance(space, Lens):
            return ring.class_in(self._slots(space.bockstein(ring.prime, space._x(ring.prime))[0] or 1)[0], of.degree)
        if isinstance(space, Thom):
            base = space.base
            count = space.rank // (2 if isinstance(base, Pontryagin) else base.step)
            roots = self._roots(base, count)
            if isinstance(base, Pontryagin):  # the Euler class is the product of the roots themselves
                roots = [ring.class_in(slot, 2) for slot in self._slots(0)[:count]]
            return self._elementary(roots, count)
        if isinstance(space, Pontryagin) and of.letter == "e":
            count = of.degree // 2
            return self._elementary([ring.class_in(slot, 2) for slot in self._slots(0)[:count]], count)
        if isinstance(space, Classifying) and space.group in ("O", "U", "Sp", "SO"):
            rank = space.rank
            if isinstance(space, Pontryagin) and space.euler:
                rank = space.euler // 2
            return self._elementary(self._roots(space, rank), of.index or 0)
        raise KeyError(of)


def _zero() -> Polynomial:
    """0."""
    return {}


def restriction(p: int) -> tuple[Ring, Restriction]:
    """A product of spaces with roots of every kind, and where classes go."""
    ring = Ring(p, (1,) * ROOTS + (0,) * ROOTS + (2, 3))
    return ring, Restriction(ring)
