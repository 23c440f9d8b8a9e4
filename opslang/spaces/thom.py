"""Thom spaces of the universal bundles over BO(n), BSO(n), BSpin(n), BU(n), BSU(n), BSp(n).

H^* is 1 and U times the classes of the base: Sq^i U = w_i U (Thom 1952); at odd p the total power of U is U times
the product of the
1 + x_j^{p-1}, by the splitting principle; U^2 is the Euler class times U.
"""

from __future__ import annotations

from attrs import frozen

from opslang.ir.tree import Class
from opslang.spaces import symmetric
from opslang.spaces.characteristic import Classifying, Pontryagin
from opslang.spaces.family import ONE, ZERO, Family, NotKnown, Polynomial, Powers, Rule, collected, generator


@frozen
class Thom(Family):
    """The Thom space of the universal bundle of real rank `rank` over a base."""

    base: Classifying
    rank: int
    factor: int = 0

    @property
    def text(self) -> str:
        return f"thom({self.base.text})"

    @property
    def thom_class(self) -> Class:
        """The class U: the reduction of an integral one, but for BO(n) at 2."""
        return Class("U", None, 0, self.rank, 1 if self.base.group == "O" else 0, self.factor, self)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        found = self.base.classes(prime, to)
        return (*found, self.thom_class) if self.rank <= to else found

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if (letter, index, primes) == ("U", None, 0):
            return generator(self.thom_class)
        return self.base.named(prime, letter, index, primes)

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        return self.base.name_degree(prime, letter, index)

    def names(self, prime: int) -> str:
        return f"U, and U times {self.base.names(prime)}"

    def _euler(self, prime: int) -> Polynomial:
        base = self.base
        if isinstance(base, Pontryagin):
            return generator(base.euler_class()) if base.euler else ZERO
        return base.member(self.rank // base.step)

    def rules(self, prime: int) -> tuple[Rule, ...]:
        if prime != 2 and self.rank % 2:
            return ()  # a class of odd degree squares to 0 anyhow
        tail = tuple([(c, (*powers, (self.thom_class, 1))) for c, powers in self._euler(prime)])
        return ((((self.thom_class, 2),), tail),)

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        if prime == 2:
            k, odd = divmod(token, self.base.step)
            factor: Polynomial = ZERO if odd else self.base.member(k)
        elif not token:
            factor = ZERO
        else:
            factor = self._power(prime, token)
        return tuple([(c, (*powers, (of, 1))) for c, powers in factor])

    def _power(self, prime: int, k: int) -> Polynomial:
        """The class that P^k U is U times."""
        last = self.base.last
        if self.base.step == 2:
            return self._elementary(symmetric.powers_of_roots(prime, k, prime - 1, last), prime)
        single = [
            self._elementary(symmetric.powers_of_roots(prime, a, (prime - 1) // 2, last), prime) if a else ONE
            for a in range(k + 1)
        ]
        if self.base.letter != "q":
            return single[k]
        # over BSp(n) each quaternionic line counts twice
        terms = [(c * d, [*left, *right]) for a in range(k + 1) for c, left in single[a] for d, right in single[k - a]]
        return collected(terms, prime)

    def _elementary(self, rows: tuple[tuple[symmetric.Partition, int], ...], prime: int) -> Polynomial:
        return collected([(c * one, factors) for r, c in rows for one, factors in self.base.product(r)], prime)

    def dimensions(self, prime: int, to: int) -> list[int] | None:
        found = [1] + [0] * to
        if self.rank > to:
            return found
        below = [1] + [0] * (to - self.rank)
        for of in self.base.classes(prime, to):
            for d in range(of.degree, len(below)):
                below[d] += below[d - of.degree]
        for d, count in enumerate(below):
            found[self.rank + d] += count
        return found

    def admits(self, prime: int, powers: Powers) -> bool:
        return not powers or any(of == self.thom_class for of, _ in powers)

    def law(self, prime: int, token: int, of: Class) -> str:
        return "Thom's formula" if prime == 2 else "the splitting principle"


def thom(base: Family, prime: int, factor: int) -> Thom:
    """The Thom space over a base of the families above.  NotKnown where the bundle has no rank or no Thom class."""
    if not isinstance(base, Classifying):
        raise NotKnown("the Thom space is known here over BO(n), BSO(n), BSpin(n), BU(n), BSU(n) and BSp(n)")
    rank = base.written if isinstance(base, Pontryagin) else base.rank
    if rank is None:
        raise NotKnown("the universal bundle needs a rank here: thom(BO(n)) with a number n")
    if base.group == "O" and prime != 2:
        raise NotKnown(
            "the universal bundle over BO(n) is not oriented, so it has no Thom class at an odd prime; take BSO(n)"
        )
    return Thom(base, rank * (base.step if not isinstance(base, Pontryagin) else 1), factor)
