"""What a named space must say of itself.  Knows classes and polynomials in them, no engine.

A polynomial is a tuple of terms (coefficient, ((class, exponent), …)).  A family is a frozen value; its classes
carry it
in `Class.ring`, so that an engine that meets a class finds the laws that hold on it.
"""

from __future__ import annotations

from attrs import frozen

from opslang.ir.tree import Class

Powers = tuple[tuple[Class, int], ...]
Polynomial = tuple[tuple[int, Powers], ...]
Rule = tuple[Powers, Polynomial]
"""A leading monomial and what it equals."""

ZERO: Polynomial = ()
ONE: Polynomial = ((1, ()),)


class NotKnown(Exception):
    """The space has the class, but what is asked of it is not known here; the words say what would be needed."""


@frozen
class Family:
    """A named space: its classes and the action of the operations on them.  This one is a point."""

    @property
    def text(self) -> str:
        """The space as it is written."""
        return "a point"

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        """The generators of degree at most `to` of the ring, in order."""
        return ()

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        """What a name stands for; None where the space has no class of that name."""
        for of in self.classes(prime, index if index is not None else 0):
            if (of.letter, of.index, of.primes) == (letter, index, primes):
                return generator(of)
        return None

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        """The degree of a name that stands for 0."""
        return 0

    def names(self, prime: int) -> str:
        """The names of its classes, for messages."""
        return "none at this prime"

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        """A letter on a generator: Sq^token at 2; at odd p P^token, or the Bockstein for token 0.

        Asked only where instability does not settle it.  NotKnown where it is not known.
        """
        return ZERO

    def height(self, prime: int, of: Class) -> int | None:
        """The least h with g^h = 0 for a generator g of a truncated ring, where that is its only relation."""
        return None

    def rules(self, prime: int) -> tuple[Rule, ...]:
        """The relations as a Gröbner basis: leading monomials and what they equal."""
        return ()

    def bockstein(self, prime: int, of: Class) -> tuple[int | None, Polynomial]:
        """The order of the first Bockstein that is not 0 on a generator (None: all are) and its value."""
        if of.order != 1:
            return None, ZERO
        return 1, self.operation(prime, 1 if prime == 2 else 0, of)

    def law(self, prime: int, token: int, of: Class) -> str:
        """The name of the law behind `operation`, as the derivations give it."""
        return "the operations on the classes of the space"

    def relation(self, prime: int, number: int) -> str:
        """The name of a relation of `rules` (numbered from 1), as the derivations give it."""
        return "a relation of the ring"

    def dimensions(self, prime: int, to: int) -> list[int] | None:
        """The Poincaré series up to a degree, where it is not that of the (truncated) polynomial ring on `classes`."""
        return None

    def admits(self, prime: int, powers: Powers) -> bool:
        """Whether a monomial in its classes that no rule rewrites is a class of the space."""
        return True


def generator(of: Class, exponent: int = 1) -> Polynomial:
    """A class to a power, as a polynomial."""
    return ((1, ((of, exponent),)),)


def collected(terms: list[tuple[int, list[tuple[Class, int]]]], prime: int) -> Polynomial:
    """A polynomial from terms in which classes may repeat and terms may cancel.  Classes of even degree only."""
    found: dict[Powers, int] = {}
    for c, factors in terms:
        powers: dict[Class, int] = {}
        for of, exponent in factors:
            if exponent:
                powers[of] = powers.get(of, 0) + exponent
        key = tuple(sorted(powers.items(), key=lambda pair: (pair[0].degree, pair[0].letter, pair[0].index or 0)))
        found[key] = (found.get(key, 0) + c) % prime
    return tuple([(c, key) for key, c in found.items() if c])
