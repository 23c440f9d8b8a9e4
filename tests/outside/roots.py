"""Characteristic classes as symmetric polynomials, with python-flint's polynomials over GF(p).

By the splitting principle (Borel 1953; Borel and Serre 1953) a relation between characteristic classes of BO(n), BU(n),
BSp(n), BSO(n) holds when it holds in the roots x_1 … x_n, where operations are one substitution: x -> x + t x^p; at 2
the roots have degree 1 for Stiefel-Whitney classes, and degree 2 for Chern classes (Sq x = x + x^2 either way).
"""

from __future__ import annotations

from itertools import combinations
from math import prod
from typing import Any

from flint import nmod_mpoly_ctx


class Roots:
    """F_p[x_1 … x_n, t]; classes are elementary symmetric polynomials in the roots, or in their squares."""

    def __init__(self, p: int, n: int) -> None:
        self.p, self.n = p, n
        self.context = nmod_mpoly_ctx.get([f"x{i}" for i in range(n)] + ["t"], p)
        *self.x, self.t = self.context.gens()
        self._known: dict[tuple[bool, int], Any] = {}

    def constant(self, c: int) -> Any:
        """A scalar."""
        return self.context.from_dict({(0,) * (self.n + 1): c})

    def elementary(self, i: int, squares: bool = False) -> Any:
        """e_i of the roots, or of their squares."""
        if (squares, i) not in self._known:
            xs = [x**2 for x in self.x] if squares else self.x
            total = self.constant(0)
            for chosen in combinations(xs, i):
                total += prod(chosen, start=self.constant(1))
            self._known[squares, i] = total
        return self._known[squares, i]

    def class_(self, name: str) -> Any:
        """w_i, c_i in the roots; p_i, q_i in their squares; e and U are the product of all roots."""
        letter, _, index = name.partition("_")
        if letter in ("w", "c"):
            return self.elementary(int(index))
        if letter in ("p", "q"):
            return self.elementary(int(index), True)
        assert letter in ("e", "U"), name
        return self.elementary(self.n)

    def value(self, terms: Any) -> Any:
        """The value of a canonical element, given as its terms in the Python interface."""
        total = self.constant(0)
        for term in terms:
            product = self.constant(term.coefficient)
            for factor in term.factors:
                assert not factor.word
                product *= self.class_(factor.name) ** factor.power
            total += product
        return total

    def operation(self, i: int, f: Any) -> Any:
        """Sq^i (roots of degree 1), Sq^{2i} (of degree 2) or P^i."""
        total = f.compose(*[x + self.t * x**self.p for x in self.x], self.t, ctx=self.context)
        return self.context.from_dict({(*m[:-1], 0): int(c) for m, c in total.to_dict().items() if m[-1] == i})
