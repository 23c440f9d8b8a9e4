"""The total operation: on a class of known degree it is a finite sum, by instability."""

from __future__ import annotations

from opslang.ir.term import (
    TERM_LIMIT,
    Apply,
    Factor,
    Monomial,
    TooMany,
    add,
    degree_of_monomial,
    is_stable,
    of_monomial,
)
from opslang.laws.law import Bindings, Equation, Law, head, require, word


def _total(p: int, x: Monomial) -> Equation:
    degree = degree_of_monomial(x, p)
    require(degree is not None and not is_stable(x), "no class of known degree")
    assert degree is not None
    top = degree if p == 2 else degree // 2
    if top > TERM_LIMIT:
        raise TooMany(f"a total operation with {top + 1:,} terms")
    terms = [(1, of_monomial(p, word(((head(p), i),), x))) for i in range(top + 1)]
    return Equation(Apply("total", 0, x), 1, add(p, *terms))


def _match_total(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if isinstance(factor, Apply) and factor.key == "total" and degree_of_monomial(factor.argument, p) is not None:
        return {"p": p, "x": factor.argument}
    return None


TOTAL = Law(
    name="total",
    title="the total operation",
    formula=(
        r"\mathrm{Sq}(x) = \sum_{i=0}^{|x|} \mathrm{Sq}^{i}x, \quad"
        r" \mathcal{P}(x) = \sum_{2i \leq |x|} \mathcal{P}^{i}x"
    ),
    condition="x of known degree",
    source="Steenrod and Epstein 1962, chapters I and VI",
    examples=("Sq x = x + Sq^1 x + x^2",),
    setting=("let x in H^2",),
    instance=_total,
    match=_match_total,
)
