"""Whether a class lies in the images of lower Bocksteins, in the ring of the classes it is made from.  Linear
algebra mod p."""

from __future__ import annotations

from typing import Any

from opslang.ir.order import monomial_degree
from opslang.ir.tree import Class, ClassElement, Monomial
from opslang.spaces.space import Localised
from opslang.tables.bockstein import Undefined, higher
from opslang.tables.engine import Engine
from opslang.tables.generators import basis

_MOST_ORDER = 8


def within(engine: Engine, element: ClassElement, classes: tuple[Class, ...], top: int) -> bool | None:
    """Whether a homogeneous element lies in the span of the images of the Bocksteins below the orders met.

    True where it does; False where it is not even in what the first Bockstein and all visible higher ones span and only
    the first can occur; None where that is not settled.  Raises TooLarge.
    """
    p = engine.prime
    degrees = {monomial_degree(monomial, p) for monomial, _ in element.terms}
    if len(degrees) != 1:
        return None
    degree = degrees.pop()
    ring: Any = engine.ring(max(top, degree))
    below = [encode(engine, ring, monomial) for monomial in basis(p, _ring_of(classes), degree - 1, engine.budget)]
    target = encode_element(engine, ring, element)
    rows = [ring.letter(1 if p == 2 else 0, f) for f in below]
    span = Span(p)
    for row in rows:
        span.put(_vector(row, p))
    if span.holds(_vector(target, p)):
        return True
    if engine.modulo_order <= 2:
        return False
    settled = True
    for order in range(2, min(engine.modulo_order, _MOST_ORDER)):
        settled = settled and order == 2 and _all_defined(engine, ring, below, classes, degree)
        for f in below:
            try:
                value, _ = higher(ring, order, f)
            except Undefined:
                continue
            span.put(_vector(value, p))
    if span.holds(_vector(target, p)):
        return True
    return False if settled else None


def _all_defined(engine: Engine, ring: Any, below: list[Any], classes: tuple[Class, ...], degree: int) -> bool:
    """Whether beta_2 is seen to be defined on every element, one degree lower, on which the first Bockstein is 0.

    It is on the monomials that lift and on the Bocksteins of what lies one degree lower still, where beta_2 is 0.
    """
    p = engine.prime
    token = 1 if p == 2 else 0
    images = Span(p)
    for f in below:
        images.put(_vector(ring.letter(token, f), p))
    seen = Span(p)
    for monomial in basis(p, _ring_of(classes), degree - 2, engine.budget) if degree >= 2 else []:
        seen.put(_vector(ring.letter(token, encode(engine, ring, monomial)), p))
    for f in below:
        try:
            higher(ring, 2, f)
        except Undefined:
            continue
        seen.put(_vector(f, p))
    return len(below) - images.rank == seen.rank


def _ring_of(classes: tuple[Class, ...]) -> Localised:
    """The ring that some classes live in: that of the named spaces of some, free on the others."""
    free = tuple([of for of in classes if of.ring is None])
    families = tuple(dict.fromkeys([of.ring for of in classes if of.ring is not None]))
    return Localised(free, frozenset(), families)


def encode(engine: Engine, ring: Any, monomial: Monomial) -> Any:
    """A canonical monomial as an element of the ring."""
    value = ring.unit()
    for generator, exponent in monomial:
        word = generator.word
        bockstein = -word[-1] if word and word[-1] < 0 else 0
        f = ring.generator(generator.of, bockstein)
        for token in reversed(word[:-1] if bockstein else word):
            f = ring.letter(token, f)
        value = ring.multiply(value, ring.power(f, exponent))
    return value


def encode_element(engine: Engine, ring: Any, element: ClassElement) -> Any:
    """A canonical element as an element of the ring."""
    result = ring.zero()
    for monomial, c in element.terms:
        ring.add(result, encode(engine, ring, monomial), c)
    return result


def _vector(f: Any, p: int) -> dict[int, int]:
    return dict.fromkeys(f, 1) if p == 2 else dict(f)


class Span:
    """A subspace over F_p, kept in echelon form."""

    def __init__(self, prime: int) -> None:
        self.prime = prime
        self._rows: dict[int, dict[int, int]] = {}

    def _reduce(self, vector: dict[int, int]) -> dict[int, int]:
        p = self.prime
        while True:
            pivot = next((x for x in vector if x in self._rows), None)
            if pivot is None:
                return vector
            c = vector[pivot]
            for x, e in self._rows[pivot].items():
                value = (vector.get(x, 0) - c * e) % p
                if value:
                    vector[x] = value
                else:
                    vector.pop(x, None)

    def put(self, vector: dict[int, int]) -> None:
        """Add a vector to the span."""
        vector = self._reduce(dict(vector))
        if not vector:
            return
        pivot, c = next(iter(vector.items()))
        inverse = pow(c, -1, self.prime)
        self._rows[pivot] = {x: e * inverse % self.prime for x, e in vector.items()}

    @property
    def rank(self) -> int:
        """The dimension."""
        return len(self._rows)

    def holds(self, vector: dict[int, int]) -> bool:
        """Whether the vector lies in the span."""
        return not self._reduce(dict(vector))
