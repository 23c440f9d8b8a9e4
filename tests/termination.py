"""An order on terms in which every law goes down, so that rewriting ends whatever the order of trial.

A recursive path order: heads are compared first (higher Bocksteins and the letters that laws open above squares, powers
and the Bockstein, those above products); letters of one rank by their arguments and then by their index.  It is
well-founded and compatible with products and application (Dershowitz 1982, "Orderings for term-rewriting systems").
"""

from __future__ import annotations

from typing import Any

from opslang.ir.term import Apply, Class, Factor, Monomial


def _rank(key: str, index: Any) -> tuple[int, int]:
    """The rank of a letter: conjugates, Q_k, total operations, beta_k (k >= 2), then the Steenrod letters."""
    if key == "chi":
        return 5, sum(_weight(letter) for letter in index)
    if key == "Q":
        return 4, index
    if key == "total":
        return 3, 0
    if key == "beta" and index > 1:
        return 2, index
    return 1, 0


def _weight(letter: tuple[str, Any]) -> int:
    """Such that opening a conjugate goes down: longer words weigh more than their letters one by one."""
    key, index = letter
    if key == "chi":
        return 3 + 2 * sum(_weight(inner) for inner in index)
    return 1 + (index if key in ("Sq", "P") else 1)


def _letter(factor: Apply) -> float:
    return float("inf") if factor.key == "beta" else factor.index if isinstance(factor.index, int) else 0


def greater(a: Factor, b: Factor) -> bool:
    """Whether the first factor is strictly above the second."""
    if not isinstance(a, Apply):
        return False
    if below(b, a.argument):
        return True
    if isinstance(b, Class):
        # classes are constants below every letter
        return True
    rank_a, rank_b = _rank(a.key, a.index), _rank(b.key, b.index)
    if rank_a != rank_b:
        return rank_a > rank_b and above(a, b.argument)
    if a.argument == b.argument:
        return _letter(a) > _letter(b)
    return greater_product(a.argument, b.argument) and above(a, b.argument)


def below(b: Factor, product: Monomial) -> bool:
    """Whether a factor is at most some factor of a product."""
    return any(f == b or greater(f, b) for f, _ in product.blocks)


def above(a: Factor, product: Monomial) -> bool:
    """Whether a factor is above every factor of a product."""
    return all(greater(a, f) for f, _ in product.blocks)


def greater_product(a: Monomial, b: Monomial) -> bool:
    """The multiset extension: what b has over a lies below something that a has over b."""
    left, right = dict(a.blocks), dict(b.blocks)
    more = [f for f, e in a.blocks if e > right.get(f, 0)]
    return bool(more) and all(any(greater(f, g) for f in more) for g, e in b.blocks if e > left.get(g, 0))
