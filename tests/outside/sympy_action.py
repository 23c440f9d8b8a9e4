"""Steenrod operations on polynomials, computed with sympy's sparse polynomials over GF(p).

The total operation is a ring homomorphism, so it is one substitution: x -> x + t x^p, y -> y; the operation with
index i is the coefficient of t^i (Steenrod and Epstein 1962, ch. I and VI).  The type of a coefficient depends on
sympy's ground types, so every coefficient is read with `int` and reduced before use.
"""

from __future__ import annotations

from typing import Any

from sympy import GF
from sympy.polys.rings import ring


class SympyPolynomials:
    """F_p[x_1 … x_n] (p = 2, |x| = 1), or Lambda[y_1 … y_n] (x) F_p[x_1 … x_n] with beta y = x."""

    def __init__(self, p: int, n: int) -> None:
        self.p, self.n = p, n
        names = [f"x{i}" for i in range(n)] + [f"y{i}" for i in range(n)] + ["t"]
        self.ring, *generators = ring(names, GF(p))
        self.x, self.y, self.t = (
            generators[:n],
            generators[n : 2 * n],
            generators[2 * n],
        )

    def power(self, i: int, f: Any) -> Any:
        """P^i f (at p = 2: Sq^i f)."""
        total = f.compose([(x, x + self.t * x**self.p) for x in self.x])
        return self.ring.from_dict({(*m[:-1], 0): c for m, c in total.terms() if m[-1] == i})

    sq = power

    def beta(self, f: Any) -> Any:
        """The Bockstein: sum of x_j d/dy_j, with a sign for every y before y_j."""
        total = self.ring.zero
        for m, c in f.terms():
            sign = 1
            for j in range(self.n):
                if m[self.n + j]:
                    total += sign * self.x[j] * self.ring.from_dict({m: c}).diff(self.y[j])
                    sign = -sign
        return total

    def terms(self, f: Any) -> dict[tuple[int, ...], int]:
        """From the exponents (x_1 … x_n, y_1 … y_n) to coefficients 1 … p-1."""
        return {tuple(m[:-1]): int(c) % self.p for m, c in f.terms() if int(c) % self.p}
