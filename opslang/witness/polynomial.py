"""Operations acting on polynomials: the witness that knows nothing but Cartan's formula.

The room knows the cohomology of products of the spaces K(Z/p^k, 1) and K(Z, 2), and how an operation acts on
their classes of degree 1 and 2: P x = x + x^p, beta y = x, and at p = 2 Sq x = x + x^2 in degree 1.  Everything
else is multiplied out.  It does not know Adem's relations, admissible words, excess or fundamental classes.

One factor of the product is a *slot*.  Each slot has at most one class in each degree m, called u_m here:

    order k >= 2, or k = 1 and p odd     Lambda[y] (x) F_p[x]: u_m = y^(m mod 2) x^(m div 2), beta_k y = x
    order 1, p = 2                       F_2[x]: u_m = x^m, Sq^1 x = x^2
    order 0                              F_p[x], |x| = 2: u_m = x^(m/2), m even; every Bockstein is 0

so a monomial is the tuple of its degrees, slot by slot, and a polynomial a dict from monomials to 1 … p-1.
Sources: Steenrod and Epstein 1962, ch. I and V (the action on lens spaces); Milnor 1958 (which products detect what).
"""

from __future__ import annotations

from collections.abc import Mapping
from math import comb

from attrs import frozen

from opslang.ground.grading import Word

Monomial = tuple[int, ...]
Polynomial = dict[Monomial, int]


def _collect(terms: list[tuple[Monomial, int]], p: int) -> Polynomial:
    total: Polynomial = {}
    for monomial, coefficient in terms:
        total[monomial] = (total.get(monomial, 0) + coefficient) % p
    return {monomial: coefficient for monomial, coefficient in total.items() if coefficient}


def add(f: Mapping[Monomial, int], g: Mapping[Monomial, int], p: int, scale: int = 1) -> Polynomial:
    """f + scale * g."""
    return _collect([*f.items(), *((monomial, scale * coefficient) for monomial, coefficient in g.items())], p)


@frozen
class Ring:
    """H^*(K_1 x … x K_N; F_p), the slot K_i being K(Z/p^k, 1) for orders[i] = k >= 1 and K(Z, 2) for orders[i] = 0."""

    prime: int
    orders: tuple[int, ...]

    def class_in(self, slot: int, degree: int) -> Polynomial:
        """The class u_degree of one slot, as a polynomial."""
        if degree % 2 and not self.orders[slot]:
            raise ValueError(f"K(Z, 2) has no class of odd degree {degree}")
        return {tuple(degree if i == slot else 0 for i in range(len(self.orders))): 1}

    def monomial(self, *degrees: int) -> Polynomial:
        """The product of the classes u_d of the slots, in the order of the slots."""
        f = {(0,) * len(self.orders): 1}
        for slot, degree in enumerate(degrees):
            f = self.product(f, self.class_in(slot, degree))
        return f

    def _is_polynomial(self, slot: int) -> bool:
        return self.prime == 2 and self.orders[slot] == 1

    def product(self, f: Mapping[Monomial, int], g: Mapping[Monomial, int]) -> Polynomial:
        """The cup product, with the sign (-1)^(|a||b|) for each a that passes a b."""
        terms = []
        for a, first in f.items():
            for b, second in g.items():
                if any(x % 2 and y % 2 and not self._is_polynomial(i) for i, (x, y) in enumerate(zip(a, b))):
                    continue
                # The part of b in slot i passes the parts of a in the slots after i.
                swaps = sum(b[i] * sum(a[i + 1 :]) for i in range(len(b)))
                sign = -1 if swaps % 2 else 1
                terms.append((tuple(x + y for x, y in zip(a, b)), sign * first * second))
        return _collect(terms, self.prime)

    def power(self, f: Mapping[Monomial, int], exponent: int) -> Polynomial:
        """f to a power, by repeated multiplication."""
        result: Polynomial = {(0,) * len(self.orders): 1}
        for _ in range(exponent):
            result = self.product(result, f)
        return result

    def _total(self, slot: int, m: int, limit: int) -> list[tuple[int, int]]:
        """Pairs (shift in degree, coefficient) of the total operation on u_m, shifts up to the limit."""
        # (x + x^p)^e = x^e (1 + x^(p-1))^e, and y is fixed.
        if self._is_polynomial(slot):
            exponent, step = m, 1
        else:
            exponent, step = m // 2, 2 * (self.prime - 1)
        pairs = ((step * j, comb(exponent, j) % self.prime) for j in range(min(exponent, limit // step) + 1))
        return [(shift, coefficient) for shift, coefficient in pairs if coefficient]

    def raise_by(self, shift: int, f: Mapping[Monomial, int]) -> Polynomial:
        """The part of the total operation (all Sq^i, or all P^s) that raises degrees by the shift, on f: Cartan."""
        terms: list[tuple[Monomial, int]] = []
        for monomial, start in f.items():
            partial: list[tuple[Monomial, int, int]] = [((), shift, start)]
            for slot, m in enumerate(monomial):
                partial = [
                    ((*head, m + up), left - up, coefficient * c)
                    for head, left, coefficient in partial
                    for up, c in self._total(slot, m, left)
                ]
            terms += [(head, coefficient) for head, left, coefficient in partial if left == 0]
        return _collect(terms, self.prime)

    def bockstein(self, order: int, f: Mapping[Monomial, int]) -> Polynomial:
        """The derivation that takes u_m, m odd, to u_(m+1) in the slots of this order and kills the other slots.

        This is beta_order where f is a sum of products of classes of those slots by reductions of integral classes.
        """
        terms = []
        for monomial, coefficient in f.items():
            sign = 1
            for slot, m in enumerate(monomial):
                if m % 2 and self.orders[slot] == order:
                    terms.append(((*monomial[:slot], m + 1, *monomial[slot + 1 :]), sign * coefficient))
                if m % 2:
                    sign = -sign
        return _collect(terms, self.prime)

    def act(self, word: Word, f: Mapping[Monomial, int]) -> Polynomial:
        """A word of letters on a polynomial: Sq^i (i > 0) at 2; beta (0) and P^s (s > 0) at odd p; beta_k (-k)."""
        result = dict(f)
        for token in reversed(word):
            if token <= 0:
                result = self.bockstein(-token or 1, result)
            elif self.prime == 2:
                result = self.raise_by(token, result)
            else:
                result = self.raise_by(2 * token * (self.prime - 1), result)
        return result


def act(word: Word, polynomial: Mapping[Monomial, int], p: int) -> Polynomial:
    """A word on a polynomial in slots of order 1: F_2[x_1 … x_N], or Lambda[y_1 … y_N] (x) F_p[x_1 … x_N].

    A monomial is the tuple of degrees: at p = 2 (1, 3) is x_1 x_2^3; at odd p it is y_1 y_2 x_2.
    """
    slots = len(next(iter(polynomial), ()))
    return Ring(p, (1,) * slots).act(word, polynomial)
