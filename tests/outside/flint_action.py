"""Steenrod operations on polynomials, computed with python-flint's polynomials over GF(p).

The total operation is a ring homomorphism, so it is one substitution: x -> x + t x^p, y -> y; the operation with
index i is the coefficient of t^i (Steenrod and Epstein 1962, ch. I and VI).
"""

from __future__ import annotations

from typing import Any

from flint import nmod_mpoly_ctx


class FlintPolynomials:
    """F_p[x_1 … x_n] (p = 2, |x| = 1), or Lambda[y_1 … y_n] (x) F_p[x_1 … x_n] with beta y = x."""

    def __init__(self, p: int, n: int) -> None:
        self.p, self.n = p, n
        names = [f"x{i}" for i in range(n)] + [f"y{i}" for i in range(n)] + ["t"]
        self.context = nmod_mpoly_ctx.get(names, p)
        generators = self.context.gens()
        self.x, self.y, self.t = (
            generators[:n],
            generators[n : 2 * n],
            generators[2 * n],
        )

    def power(self, i: int, f: Any) -> Any:
        """P^i f (at p = 2: Sq^i f)."""
        images = [x + self.t * x**self.p for x in self.x]
        total = f.compose(*images, *self.y, self.t, ctx=self.context)
        part = {(*m[:-1], 0): int(c) for m, c in total.to_dict().items() if m[-1] == i}
        return self.context.from_dict(part)

    sq = power

    def beta(self, f: Any) -> Any:
        """The Bockstein: y_j becomes x_j, with a sign for every y before it."""
        total: dict[tuple[int, ...], int] = {}
        for m, c in f.to_dict().items():
            sign = 1
            for j in range(self.n):
                if m[self.n + j]:
                    key = list(m)
                    key[self.n + j], key[j] = 0, key[j] + 1
                    total[tuple(key)] = (total.get(tuple(key), 0) + sign * int(c)) % self.p
                    sign = -sign
        return self.context.from_dict(total)

    def terms(self, f: Any) -> dict[tuple[int, ...], int]:
        """From the exponents (x_1 … x_n, y_1 … y_n) to coefficients 1 … p-1."""
        return {m[:-1]: int(c) % self.p for m, c in f.to_dict().items() if int(c) % self.p}
