"""Spaces as values: products of Eilenberg-MacLane spaces, and what their cohomology is made from at a prime."""

from __future__ import annotations

from attrs import frozen

from opslang.ground.arith import p_part
from opslang.ir.tree import Class


@frozen
class Factor:
    """K(Z, degree) (order 0) or K(Z/order, degree)."""

    order: int
    degree: int


@frozen
class SpaceValue:
    """A product of Eilenberg-MacLane spaces of cyclic groups, in the order written, and the text that names it."""

    factors: tuple[Factor, ...]
    text: str


@frozen
class Localised:
    """The classes of a space at a prime, and those names of fundamental classes that are 0 there: (degree, primes)."""

    classes: tuple[Class, ...]
    vanishing: frozenset[tuple[int, int]]


def class_order(order: int, prime: int) -> int | None:
    """The `Class.order` of coefficients Z (order 0) or Z/order at a prime; None where the group is 0 there."""
    if order == 0:
        return 0
    return p_part(order, prime) or None


def localise(space: SpaceValue, prime: int) -> Localised:
    """The fundamental classes of a space at a prime, numbered among equal degrees by the factors as written."""
    classes = []
    vanishing = set()
    seen: dict[int, int] = {}
    for number, factor in enumerate(space.factors):
        primes = seen.get(factor.degree, 0)
        seen[factor.degree] = primes + 1
        order = class_order(factor.order, prime)
        if order is None:
            vanishing.add((factor.degree, primes))
        else:
            at = number if len(space.factors) > 1 else 0
            classes.append(Class("iota", factor.degree, primes, factor.degree, order, at))
    return Localised(tuple(classes), frozenset(vanishing))
