"""What the laws of named spaces share: classes that carry their space, and polynomials in them as elements.

Knows `Class.ring` and what a family says of itself; no formula.
"""

from __future__ import annotations

from opslang.ir.term import UNIT, Apply, Class, Element, Factor, Monomial, add, cup, of_factor, of_monomial
from opslang.laws.law import Equation, Remark, bockstein, head, only
from opslang.spaces.characteristic import Classifying, Pontryagin
from opslang.spaces.family import Family, NotKnown, Polynomial, Powers
from opslang.spaces.projective import Lens, Projective


def product_of(p: int, powers: Powers, coefficient: int = 1) -> Element:
    """A product of powers of classes, in the order given, as an element."""
    return cup(of_monomial(p, UNIT, coefficient), *(of_factor(p, of, exponent) for of, exponent in powers))


def element_of(p: int, terms: Polynomial) -> Element:
    """A polynomial in the classes of a space as an element."""
    return add(p, *((c, product_of(p, powers)) for c, powers in terms))


def letter_on_class(factor: Factor, p: int) -> tuple[int, Class] | None:
    """(token, class) for Sq^i, P^i or the Bockstein (token 0; at 2 it is Sq^1) on a class that carries its space."""
    if not isinstance(factor, Apply) or factor.key not in (head(p), bockstein(p)[0]):
        return None
    of = only(factor.argument)
    if not isinstance(of, Class) or of.ring is None or (factor.key == "beta" and factor.index != 1):
        return None
    return (0 if factor.key == "beta" else factor.index), of


def is_open(p: int, token: int, of: Class) -> bool:
    """Whether a letter on a class is settled neither by instability nor by coefficients that lift."""
    if token == (1 if p == 2 else 0) and of.order != 1:
        return False
    return 0 < token < of.degree if p == 2 else 0 <= 2 * token < of.degree


def known(p: int, token: int, of: Class) -> Polynomial | None:
    """What the space says of a letter on a class of it; None where it does not know."""
    try:
        return of.ring.operation(p, token, of)  # type: ignore[no-any-return]
    except NotKnown:
        return None


def applied(p: int, token: int, of: Class) -> Apply:
    """The letter of a token applied to a class."""
    key, index = bockstein(p) if token == 0 else (head(p), token)
    return Apply(key, index, Monomial(((of, 1),)))


def single_generator(of: Factor, p: int) -> bool:
    """Whether a class generates a ring on which operations are binomials: projective spaces, and lens spaces."""
    if not isinstance(of, Class):
        return False
    if isinstance(of.ring, Projective):
        return of.ring.field != "R" or p == 2
    return isinstance(of.ring, Lens) and (of.degree == 2 or (p == 2 and of.order == 1))


def degree_step(x: Monomial, p: int) -> int:
    """A number that divides all degrees in which the space of a product of classes has any; 1 where none is known."""
    rings = {of.ring if isinstance(of, Class) else None for of, _ in x.blocks}
    ring = rings.pop() if len(rings) == 1 else None
    if isinstance(ring, Classifying) and not (isinstance(ring, Pontryagin) and ring.euler):
        return ring.step
    if isinstance(ring, Projective):
        of = x.blocks[0][0]
        assert isinstance(of, Class)
        return of.degree
    return 1


def joined(before: str, equations: list[Equation], after: str = "", most: int = 4) -> tuple[Remark, ...]:
    """A remark that lists some equations; none where there are none."""
    if not equations:
        return ()
    pieces: list[str | Equation | Monomial] = [before]
    for equation in equations[:most]:
        pieces += [", ", equation] if len(pieces) > 1 else [equation]
    return ((*pieces, (", …" if len(equations) > most else "") + after),)


__all__ = [
    "Family",
    "applied",
    "degree_step",
    "element_of",
    "is_open",
    "joined",
    "known",
    "letter_on_class",
    "product_of",
    "single_generator",
]
