"""The Thom class of a declared bundle.  Knows what Sq^k U or P^k U is U times, as given to it.

Sq^k U = w_k U (Thom 1952); at odd p, P^k U is U times the class of the bundle that the splitting principle gives; U^2
= e U.
"""

from __future__ import annotations

from attrs import evolve, frozen

from opslang.ir.tree import Class
from opslang.spaces.family import Family, NotKnown, Polynomial, Rule, generator


@frozen
class BundleThom(Family):
    """The factor that a Thom space has beside its base: U, of the degree of the bundle's real rank.

    `values[k]` is what Sq^k U or P^k U is U times (None: not known); `euler` what U is U^2 divided by (None: not
    known).
    """

    name: str
    prime: int
    rank: int
    oriented: bool
    values: tuple[Polynomial | None, ...]
    euler: Polynomial | None
    factor: int = 0

    @property
    def text(self) -> str:
        return f"thom({self.name})"

    @property
    def thom_class(self) -> Class:
        """The class U; the reduction of an integral one where the bundle is oriented."""
        return Class("U", None, 0, self.rank, 0 if self.oriented else 1, self.factor, self)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        return (self.thom_class,) if self.rank <= to else ()

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        return generator(self.thom_class) if (letter, index, primes) == ("U", None, 0) else None

    def names(self, prime: int) -> str:
        return "U, and U times the classes of the base"

    def rules(self, prime: int) -> tuple[Rule, ...]:
        if self.euler is None or (prime != 2 and self.rank % 2):
            return ()
        return ((((self.thom_class, 2),), self._times(self.euler)),)

    def _times(self, factor: Polynomial) -> Polynomial:
        return tuple([(c, (*powers, (self.thom_class, 1))) for c, powers in factor])

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        if prime != 2 and not token:
            return ()
        value = self.values[token] if token < len(self.values) else ()
        if value is None:
            raise NotKnown(f"P^{token} U of {self.text} needs more partitions than are gone through here")
        return self._times(value)

    def law(self, prime: int, token: int, of: Class) -> str:
        return "Thom's formula" if prime == 2 else "the splitting principle"


@frozen
class ThomFactor:
    """The factor of a `SpaceValue` that turns the product of those before it into a Thom space over it."""

    thom: BundleThom

    @property
    def stands_first(self) -> bool:
        """It may stand first in a product only."""
        return True

    def family(self, prime: int, factor: int) -> Family:
        """What it says of itself at a prime.  NotKnown at a prime other than that of the bundle's classes."""
        if prime != self.thom.prime:
            here = f"{self.thom.name} was declared at the prime {self.thom.prime}, and the prime is {prime}"
            raise NotKnown(f"{here}: declare it again")
        return evolve(self.thom, factor=factor)
