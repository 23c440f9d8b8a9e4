"""Ideals of graded-commutative rings over F_p, by Gröbner bases.  Knows exponents and coefficients, no classes.

A monomial is a tuple of exponents, a polynomial a dict from monomials to coefficients 1 … p-1.  At odd p variables of
odd degree anticommute and square to 0.  Polynomials are homogeneous; monomials of one degree are compared
lexicographically, the last variable being the greatest, so that a relation rewrites what was named last.

Strategy.  Buchberger's algorithm degree by degree: critical pairs wait in a heap, so every element is reduced when it
is found and no leading monomial ever divides an older one.  For an odd variable x in a leading monomial the pair with
x^2 is the product by x.  Source: Buchberger 1965; the case with exterior variables is common practice.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from heapq import heapify, heappop, heappush
from operator import le

from attrs import define, field, frozen

Exponents = tuple[int, ...]
Poly = dict[Exponents, int]

LIMIT = 1_000_000
"""Terms that one computation may take, where nothing else is said."""


class TooMany(Exception):
    """More terms than the limit."""

    def __init__(self, limit: int) -> None:
        super().__init__(f"more than {limit:,} terms")
        self.limit = limit


@define
class Work:
    """A count of terms."""

    limit: int = LIMIT
    left: int = field(default=LIMIT)

    def refill(self) -> None:
        """Start a new computation."""
        self.left = self.limit

    def spend(self, terms: int) -> None:
        """Count more terms.  Raises TooMany when the limit is passed."""
        self.left -= terms
        if self.left < 0:
            raise TooMany(self.limit)


@frozen
class Ring:
    """The free graded-commutative ring on variables of the given degrees; `odd` numbers those that anticommute."""

    prime: int
    degrees: tuple[int, ...]
    odd: tuple[int, ...]
    work: Work = field(factory=Work, eq=False, repr=False)

    def one(self) -> Poly:
        """The unit."""
        return {(0,) * len(self.degrees): 1}

    def variable(self, at: int, exponent: int = 1) -> Poly:
        """A variable to a power."""
        if at in self.odd and exponent > 1:
            return {}
        return {tuple([exponent if i == at else 0 for i in range(len(self.degrees))]): 1}

    def degree(self, m: Exponents) -> int:
        """The degree of a monomial."""
        return sum([d * e for d, e in zip(self.degrees, m)])

    def add(self, into: Poly, f: Mapping[Exponents, int], coefficient: int = 1) -> None:
        """Add a multiple of a polynomial to `into`."""
        p, get = self.prime, into.get
        for m, c in f.items():
            value = (get(m, 0) + coefficient * c) % p
            if value:
                into[m] = value
            else:
                into.pop(m, None)

    def times(self, f: Mapping[Exponents, int], g: Mapping[Exponents, int]) -> Poly:
        """The product, with the sign of graded commutativity."""
        self.work.spend(len(f) * len(g))
        p, odd = self.prime, self.odd
        result: Poly = {}
        get = result.get
        for m, c in f.items():
            for n, d in g.items():
                value = c * d
                if odd:
                    sign = self._sign(m, n)
                    if not sign:
                        continue
                    value *= sign
                product = tuple([a + b for a, b in zip(m, n)])
                result[product] = get(product, 0) + value
        return {m: r for m, c in result.items() if (r := c % p)}

    def _sign(self, m: Exponents, n: Exponents) -> int:
        """1 or -1, as the odd variables of m n are put in order; 0 where one occurs twice."""
        parity = passed = 0
        for at in reversed(self.odd):
            if n[at]:
                if m[at]:
                    return 0
                parity += passed
            elif m[at]:
                passed += 1
        return -1 if parity % 2 else 1

    def frobenius(self, f: Mapping[Exponents, int]) -> Poly:
        """The p-th power: additive, since odd classes square to 0 and even ones commute."""
        p = self.prime
        return {tuple([e * p for e in m]): c for m, c in f.items() if not any(m[at] for at in self.odd)}

    def power(self, f: Poly, n: int) -> Poly:
        """The n-th power, n >= 0, through the binary digits of n."""
        result = self.one()
        while n:
            if n & 1:
                result = self.times(result, f)
            n >>= 1
            if n:
                f = self.times(f, f)
        return result


def key(m: Exponents) -> Exponents:
    """Compares monomials of one degree."""
    return m[::-1]


def divides(m: Exponents, n: Exponents) -> bool:
    """Whether m divides n."""
    return all(map(le, m, n))


def _quotient(n: Exponents, m: Exponents) -> Exponents:
    return tuple([b - a for a, b in zip(m, n)])


def _lcm(m: Exponents, n: Exponents) -> Exponents:
    return tuple([max(a, b) for a, b in zip(m, n)])


class Ideal:
    """A homogeneous ideal by its reduced Gröbner basis: `rules` says what each leading monomial equals."""

    def __init__(self, ring: Ring, relations: Iterable[Poly]) -> None:
        self.ring = ring
        self.rules: dict[Exponents, Poly] = {}
        self._complete([dict(f) for f in relations if f])

    def within(self, ring: Ring) -> "Ideal":
        """The same ideal in a ring whose further variables occur in no relation."""
        other = Ideal(ring, ())
        other.rules = self.rules
        return other

    def reduce(self, f: Mapping[Exponents, int]) -> Poly:
        """The normal form of a polynomial."""
        rules, ring = self.rules, self.ring
        if not rules:
            return dict(f)
        done: Poly = {}
        waiting = dict(f)
        while waiting:
            m, c = waiting.popitem()
            lead = next((lead for lead in rules if divides(lead, m)), None)
            ring.work.spend(1 + (len(rules) >> 1))
            if lead is None:
                ring.add(done, {m: c})
            elif rules[lead]:
                rest = _quotient(m, lead)
                sign = ring.times({rest: 1}, {lead: 1})[m]
                ring.add(waiting, ring.times({rest: c * sign % ring.prime}, rules[lead]))
        return done

    def _complete(self, relations: list[Poly]) -> None:
        ring = self.ring
        number = len(relations)
        heap: list[tuple[int, int, Poly | tuple[Exponents, Exponents]]] = [
            (ring.degree(next(iter(f))), at, f) for at, f in enumerate(relations)
        ]
        heapify(heap)
        treated: set[frozenset[Exponents]] = set()
        while heap:
            _, _, entry = heappop(heap)
            if isinstance(entry, tuple):
                treated.add(frozenset(entry))
                if self._needless(entry, treated):
                    continue
                entry = self._pair(*entry)
            found = self.reduce(entry)
            if not found:
                continue
            lead = max(found, key=key)
            inverse = pow(found.pop(lead), -1, ring.prime)
            tail: Poly = {}
            ring.add(tail, found, -inverse)
            for other in self.rules:
                ring.work.spend(1)
                common = _lcm(lead, other)
                if not any(map(min, lead, other)):
                    treated.add(frozenset((lead, other)))
                    continue
                number += 1
                heappush(heap, (ring.degree(common), number, (lead, other)))
            self.rules[lead] = tail
            for at in ring.odd:
                if lead[at]:
                    number += 1
                    product = ring.times(ring.variable(at), tail)
                    heappush(heap, (ring.degree(lead) + ring.degrees[at], number, product))
        for lead in self.rules:
            self.rules[lead] = self.reduce(self.rules[lead])

    def _needless(self, pair: tuple[Exponents, Exponents], treated: set[frozenset[Exponents]]) -> bool:
        """Whether a third leading monomial divides the common multiple and its pairs are done (Buchberger 1979)."""
        left, right = pair
        common = _lcm(left, right)
        return any(
            other not in (left, right)
            and divides(other, common)
            and frozenset((left, other)) in treated
            and frozenset((right, other)) in treated
            for other in self.rules
        )

    def _pair(self, left: Exponents, right: Exponents) -> Poly:
        """What the two rules make of the common multiple of their leading monomials, one minus the other."""
        ring = self.ring
        common = _lcm(left, right)
        result: Poly = {}
        for lead, outer in ((left, 1), (right, -1)):
            rest = _quotient(common, lead)
            # no odd variable is met twice here: the common multiple holds it once
            sign = ring.times({rest: 1}, {lead: 1})[common]
            ring.add(result, ring.times({rest: 1}, self.rules[lead]), outer * sign)
        return result
