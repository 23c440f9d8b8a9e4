"""Spaces as values: products of Eilenberg-MacLane spaces and of named ones, and what their cohomology is made from
at a prime."""

from __future__ import annotations

from typing import TYPE_CHECKING, Union

from attrs import frozen

from opslang.ground.arith import p_part
from opslang.ir.tree import Class
from opslang.spaces.family import Family, NotKnown, Polynomial

if TYPE_CHECKING:
    from opslang.spaces.bundle_thom import BundleThom, ThomFactor
    from opslang.spaces.presented import PresentedFactor


@frozen
class Factor:
    """K(Z, degree) (order 0) or K(Z/order, degree); K(Z_(p), degree) has order 0 and local p."""

    order: int
    degree: int
    local: int = 0


@frozen
class NamedFactor:
    """A named space: its word, its number (None: no end, or stable), the letters given to its classes, and the base
    of a Thom space."""

    word: str
    number: int | None = None
    letters: tuple[str, ...] = ()
    base: "NamedFactor | None" = None

    def family(self, prime: int, factor: int) -> Family:
        """What the space says of itself at a prime.  NotKnown where it is outside what is known."""
        from opslang.spaces.families import family  # most work is with Eilenberg-MacLane spaces and needs none

        return family(self, prime, factor)


WORDS = ("BO", "BSO", "BSpin", "BU", "BSU", "BSp", "RP", "CP", "HP", "lens", "thom")
"""The words that named spaces begin with."""

AnyFactor = Union[Factor, NamedFactor, "ThomFactor", "PresentedFactor"]


@frozen
class SpaceValue:
    """A product of spaces, in the order written, and the text that names it."""

    factors: tuple[AnyFactor, ...]
    text: str


@frozen
class Localised:
    """A space at a prime: its fundamental classes, those names of fundamental classes that are 0 there (degree,
    primes), its named factors."""

    classes: tuple[Class, ...]
    vanishing: frozenset[tuple[int, int]]
    families: tuple[Family, ...] = ()

    @property
    def thom(self) -> BundleThom | None:
        """The Thom class over the base, where the space is the Thom space of a declared bundle."""
        if not self.families:
            return None
        from opslang.spaces.bundle_thom import BundleThom

        return next((family for family in self.families if isinstance(family, BundleThom)), None)

    def around(self, family: BundleThom) -> tuple["Localised", "Localised"]:
        """The factors before and behind one: the base of a Thom space, and what that is multiplied by."""
        at = family.factor

        def part(before: bool) -> "Localised":
            classes = tuple([of for of in self.classes if (of.factor < at) == before])
            others = [f for f in self.families if f != family and (getattr(f, "factor", 0) < at) == before]
            return Localised(classes, frozenset(), tuple(others))

        return part(True), part(False)

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> list[Polynomial]:
        """What a name stands for in each named factor that has it."""
        from opslang.spaces.reductions import further

        found = [
            further(family, prime, letter, index, primes) if value is None else value
            for family in self.families
            for value in [family.named(prime, letter, index, primes)]
        ]
        return [value for value in found if value is not None]

    def name_degree(self, prime: int, letter: str, index: int | None, primes: int) -> int:
        """The degree of a name of a named factor that stands for 0."""
        from opslang.spaces.reductions import further, further_degree

        for family in self.families:
            if family.named(prime, letter, index, primes) is not None:
                return family.name_degree(prime, letter, index)
            if further(family, prime, letter, index, primes) is not None:
                return further_degree(family, letter, index)
        return 0


def class_order(order: int, prime: int, local: int = 0) -> int | None:
    """The `Class.order` of coefficients Z (order 0; Z_(local) where that is no 0) or Z/order at a prime; None where
    the group is 0 there."""
    if order == 0:
        return 0 if local in (0, prime) else None
    return p_part(order, prime) or None


def localise(space: SpaceValue, prime: int) -> Localised:
    """A space at a prime; fundamental classes are numbered among equal degrees by the factors as written.  NotKnown."""
    classes = []
    vanishing = set()
    families: list[Family] = []
    seen: dict[int, int] = {}
    for number, factor in enumerate(space.factors):
        at = number if len(space.factors) > 1 else 0
        if not isinstance(factor, Factor):
            from opslang.spaces.primed import told_apart

            families.append(told_apart(families, factor.family(prime, at), prime))
            continue
        primes = seen.get(factor.degree, 0)
        seen[factor.degree] = primes + 1
        order = class_order(factor.order, prime, factor.local)
        if order is None:
            vanishing.add((factor.degree, primes))
        else:
            classes.append(Class("iota", factor.degree, primes, factor.degree, order, at))
    return Localised(tuple(classes), frozenset(vanishing), tuple(families))


__all__ = [
    "WORDS",
    "AnyFactor",
    "Factor",
    "Localised",
    "NamedFactor",
    "NotKnown",
    "SpaceValue",
    "class_order",
    "localise",
]
