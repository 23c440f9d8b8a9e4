"""A named factor whose classes carry primes, because an earlier factor of the product has classes of the same names.

As with fundamental classes: on BO(2) x BO(2) the second factor has w_1' and w_2'.  Knows no particular space.
"""

from __future__ import annotations

from attrs import evolve, frozen

from opslang.ir.tree import Class
from opslang.spaces.family import Family, NotKnown, Polynomial, Powers, Rule

LOW = 64
"""Names of classes up to this degree are compared."""


@frozen
class Primed(Family):
    """A family with so many primes put to every name."""

    inner: Family
    primes: int

    @property
    def factor(self) -> int:
        """The number of the factor of the product."""
        return getattr(self.inner, "factor", 0)

    @property
    def text(self) -> str:
        return self.inner.text

    def _out(self, of: Class) -> Class:
        return evolve(of, primes=of.primes + self.primes, ring=self)

    def _in(self, prime: int, of: Class) -> Class:
        """The class of the inner family behind one of ours."""
        for own in self.inner.classes(prime, of.degree):
            if (own.letter, own.index, own.primes + self.primes) == (of.letter, of.index, of.primes):
                return own
        raise NotKnown(f"{self.text} has no class behind {of.letter}")

    def _powers(self, powers: Powers) -> Powers:
        return tuple([(self._out(of), exponent) for of, exponent in powers])

    def _all(self, terms: Polynomial) -> Polynomial:
        return tuple([(c, self._powers(powers)) for c, powers in terms])

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        return tuple([self._out(of) for of in self.inner.classes(prime, to)])

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if primes < self.primes:
            return None
        found = self.inner.named(prime, letter, index, primes - self.primes)
        return None if found is None else self._all(found)

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        return self.inner.name_degree(prime, letter, index)

    def names(self, prime: int) -> str:
        shown = self.inner.names(prime)
        if shown == Family.names(self, prime):
            return shown
        if " " not in shown.replace(", ", ""):
            return ", ".join(name + "'" * self.primes for name in shown.split(", "))
        return f"{shown}, each with {'a prime' if self.primes == 1 else f'{self.primes} primes'}"

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        return self._all(self.inner.operation(prime, token, self._in(prime, of)))

    def height(self, prime: int, of: Class) -> int | None:
        return self.inner.height(prime, self._in(prime, of))

    def rules(self, prime: int) -> tuple[Rule, ...]:
        return tuple([(self._powers(lead), self._all(tail)) for lead, tail in self.inner.rules(prime)])

    def bockstein(self, prime: int, of: Class) -> tuple[int | None, Polynomial]:
        order, value = self.inner.bockstein(prime, self._in(prime, of))
        return order, self._all(value)

    def law(self, prime: int, token: int, of: Class) -> str:
        return self.inner.law(prime, token, self._in(prime, of))

    def dimensions(self, prime: int, to: int) -> list[int] | None:
        return self.inner.dimensions(prime, to)

    def admits(self, prime: int, powers: Powers) -> bool:
        return self.inner.admits(prime, tuple([(self._in(prime, of), exponent) for of, exponent in powers]))


def told_apart(families: list[Family], family: Family, prime: int) -> Family:
    """The family, with primes where earlier ones have classes of its names."""
    ours = _names(family, prime)
    before = sum(
        [bool(ours & _names(other.inner if isinstance(other, Primed) else other, prime)) for other in families]
    )
    return Primed(family, before) if before else family


def _names(family: Family, prime: int) -> set[tuple[str, int | None]]:
    try:
        return {(of.letter, of.index) for of in family.classes(prime, LOW)}
    except NotKnown:
        return set()
