"""What the names of a script stand for at one point of it.  Knows declarations, no expressions."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING

from attrs import define, field

from opslang.ir.tree import Class
from opslang.meaning.value import Value
from opslang.spaces.family import NotKnown
from opslang.spaces.space import Localised, SpaceValue, localise

if TYPE_CHECKING:
    from opslang.meaning.bundles import Bundle
    from opslang.meaning.maps import MapValue

Key = tuple[str, int | None, int]
"""Letter, index and number of primes of a name."""


def spelled(key: Key) -> str:
    """A name as it is typed."""
    letter, index, primes = key
    return letter + ("" if index is None else f"_{index}") + "'" * primes


@lru_cache(maxsize=1 << 10)
def universal(degree: int) -> Class:
    """The fundamental class of K(Z/p, n), under its common name."""
    return Class("iota", degree, 0, degree)


@define
class Scope:
    """The prime, the current space and the names declared so far.

    `names` holds a class, or an abbreviation's value; `maps` and `bundles` have names of their own.
    """

    prime: int = 2
    space: SpaceValue | None = None
    spaces: dict[str, SpaceValue] = field(factory=dict)
    names: dict[Key, Value] = field(factory=dict)
    maps: dict[str, "MapValue"] = field(factory=dict)
    bundles: dict[str, "Bundle"] = field(factory=dict)
    lost: bool = False
    """Whether the last `on` could not be read, so that nobody knows what the current space is."""
    _localised: tuple[SpaceValue, int, Localised] | None = None

    def localised(self) -> Localised | None:
        """The classes of the current space at the current prime."""
        if self.space is None:
            return None
        if self._localised is None or self._localised[:2] != (self.space, self.prime):
            self._localised = (self.space, self.prime, localise(self.space, self.prime))
        return self._localised[2]

    def class_of_space(self, key: Key) -> bool:
        """Whether the current space has a class of that name, fundamental classes aside."""
        here = self.localised()
        if here is None or not here.families:
            return False
        try:
            return bool(here.named(self.prime, *key))
        except NotKnown:
            return False

    def fundamental(self, degree: int, primes: int) -> Class | None:
        """The fundamental class of that degree and number of primes; None where it is 0 at the prime.

        Raises KeyError where the current space has none.  With no space chosen it is that of K(Z/p, n).
        """
        here = self.localised()
        if here is None:
            if primes or degree < 1:
                raise KeyError((degree, primes))
            return universal(degree)
        for of in here.classes:
            if of.degree == degree and of.primes == primes:
                return of
        if (degree, primes) in here.vanishing:
            return None
        raise KeyError((degree, primes))

    def set_prime(self, prime: int) -> bool:
        """Change the prime; classes, abbreviations, maps and bundles go.  Returns whether any were dropped."""
        if prime == self.prime:
            return False
        self.prime = prime
        dropped = bool(self.names or self.maps or self.bundles)
        self.names.clear()
        self.maps.clear()
        self.bundles.clear()
        return dropped

    def like(self, key: Key) -> str | None:
        """A declared name that a mistyped one may stand for."""
        from difflib import get_close_matches

        known = {spelled(name): name for name in self.names}
        close = get_close_matches(spelled(key), known, 1, 0.5)
        return close[0] if close else None
