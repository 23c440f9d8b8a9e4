"""Presented rings: named spaces whose ring and operations the user gives.  Knows checked presentations only.

Normal forms are those of a Gröbner basis of the relations.
"""

from __future__ import annotations

from attrs import field, frozen

from opslang.ir.tree import Class
from opslang.spaces.family import Family, NotKnown, Polynomial, Powers, Rule
from opslang.spaces.groebner import Exponents, Poly, TooMany
from opslang.spaces.presentation import Action, Presentation, Unknown


@frozen
class Presented(Family):
    """A ring by generators, relations and operations, as a factor of a product."""

    presentation: Presentation
    action: Action = field(eq=False, repr=False)
    factor: int = 0

    @property
    def text(self) -> str:
        return self.presentation.name

    def _of(self, at: int) -> Class:
        of = self.presentation.generators[at]
        return Class(of.letter, of.index, of.primes, of.degree, 1, self.factor, self)

    def _powers(self, m: Exponents) -> Powers:
        return tuple([(self._of(at), e) for at, e in enumerate(m) if e])

    def _polynomial(self, f: Poly) -> Polynomial:
        return tuple([(c, self._powers(m)) for m, c in f.items()])

    def _number(self, of: Class) -> int:
        return next(at for at in range(len(self.presentation.generators)) if self._of(at) == of)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        return tuple([self._of(at) for at, of in enumerate(self.presentation.generators) if of.degree <= to])

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        for at, of in enumerate(self.presentation.generators):
            if (of.letter, of.index, of.primes) == (letter, index, primes):
                return self._polynomial(self.action.normal(at))
        return None

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        degrees = [of.degree for of in self.presentation.generators if (of.letter, of.index) == (letter, index)]
        return degrees[0] if degrees else 0

    def names(self, prime: int) -> str:
        return ", ".join(of.text for of in self.presentation.generators)

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        action = self.action
        action.work.refill()
        try:
            return self._polynomial(action.value(self._number(of), token))
        except Unknown as unknown:
            at, needed = unknown.key
            what = f"{self.presentation.operation(token)} {self.presentation.generators[self._number(of)].text}"
            lacking = f"{self.presentation.operation(needed)} {self.presentation.generators[at].text}"
            why = "" if what == lacking else f" needs {lacking}, which"
            raise NotKnown(
                f"{what}{why} was not given for {self.text}, and nothing that was given determines it"
            ) from unknown
        except TooMany as reason:
            raise NotKnown(f"working it out in {self.text} takes {reason}") from reason

    def rules(self, prime: int) -> tuple[Rule, ...]:
        return tuple([(self._powers(lead), self._polynomial(tail)) for lead, tail in self.action.ideal.rules.items()])

    def height(self, prime: int, of: Class) -> int | None:
        at = self._number(of)
        for lead, tail in self.action.ideal.rules.items():
            if not tail and sum(lead) == lead[at]:
                return lead[at]
        return None

    def relation(self, prime: int, number: int) -> str:
        return f"a relation of {self.text}"

    def law(self, prime: int, token: int, of: Class) -> str:
        return self.action.origin(self._number(of), token)

    def dimensions(self, prime: int, to: int) -> list[int] | None:
        self.action.work.refill()
        try:
            return self.action.dimensions(to)
        except TooMany as reason:
            raise NotKnown(f"the dimensions of {self.text} take {reason}") from reason


@frozen
class PresentedFactor:
    """A presented ring as a factor of a space."""

    presentation: Presentation
    action: Action = field(eq=False, repr=False)

    def family(self, prime: int, factor: int) -> Family:
        """The ring at a prime.  NotKnown at other primes than its own."""
        own = self.presentation.prime
        if own != prime:
            raise NotKnown(f"{self.presentation.name} is presented over F_{own}, and the prime is {prime}")
        return Presented(self.presentation, self.action, factor)
