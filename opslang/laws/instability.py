"""What happens on classes of low degree, on the unit, and to squares that vanish.  Knows degrees, not words."""

from __future__ import annotations

from opslang.ir.term import (
    UNIT,
    Apply,
    Class,
    Factor,
    Monomial,
    degree_of_monomial,
    is_stable,
    letter_degree,
    of_monomial,
    parity_of,
    power,
    zero,
)
from opslang.laws.law import Bindings, Equation, Law, head, only, require, single


def _top(x: Monomial, p: int) -> int | None:
    """Twice the index i at which Sq^i or P^i of x is its p-th power; None where unknown or stable."""
    degree = None if is_stable(x) else degree_of_monomial(x, p)
    return None if degree is None else (2 * degree if p == 2 else degree)


def _acts(factor: Factor, p: int) -> tuple[int, Monomial, int] | None:
    """(i, x, doubled bound) for Sq^i x or P^i x on a class of known degree."""
    if isinstance(factor, Apply) and factor.key == head(p):
        top = _top(factor.argument, p)
        if top is not None:
            return factor.index, factor.argument, top
    return None


def _vanish(p: int, i: int, x: Monomial) -> Equation:
    top = _top(x, p)
    require(i > 0 and top is not None and 2 * i > top, "the index does not exceed the degree")
    return Equation(Apply(head(p), i, x), 1, zero(p))


def _match_vanish(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor, p)
    return {"p": p, "i": acts[0], "x": acts[1]} if acts and 2 * acts[0] > acts[2] else None


VANISH = Law(
    name="instability",
    title="instability",
    formula=r"\mathrm{Sq}^{i}x = 0 \text{ for } i > |x|, \quad \mathcal{P}^{i}x = 0 \text{ for } 2i > |x|",
    condition="p = 2: i > |x|; p odd: 2i > |x|",
    source="Steenrod and Epstein 1962, chapters I and VI",
    examples=("Sq^5 iota_3 = 0", "Sq^4 Sq^1 iota_2 = 0"),
    instance=_vanish,
    match=_match_vanish,
    kills=True,
)


def _excess(p: int, i: int, x: Monomial) -> Equation:
    top = _top(x, p)
    require(p > 2 and i > 0 and top is not None and 2 * i >= top, "the excess does not exceed the degree")
    return Equation(Apply("beta", 1, single(Apply("P", i, x))), 1, zero(p))


def _match_excess(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if p == 2 or not (isinstance(factor, Apply) and (factor.key, factor.index) == ("beta", 1)):
        return None
    below = only(factor.argument)
    acts = _acts(below, p) if below else None
    return {"p": p, "i": acts[0], "x": acts[1]} if acts and 2 * acts[0] >= acts[2] else None


EXCESS = Law(
    name="excess",
    title="excess above the degree",
    formula=r"\beta\mathcal{P}^{i}x = 0 \text{ for } 2i \geq |x|",
    condition="p odd, 2i >= |x|",
    source="Cartan 1954; May 1970, theorem 10.3",
    examples=("beta P^1 iota_2 = 0",),
    setting=("prime 3",),
    instance=_excess,
    match=_match_excess,
    kills=True,
)


def _top_power(p: int, i: int, x: Monomial) -> Equation:
    top = _top(x, p)
    require(i > 0 and top is not None and 2 * i == top, "the index is not the top one")
    return Equation(Apply(head(p), i, x), 1, power(of_monomial(p, x), p))


def _match_top(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor, p)
    return {"p": p, "i": acts[0], "x": acts[1]} if acts and 2 * acts[0] == acts[2] else None


def _top_words(p: int, i: int, x: Monomial) -> str:
    return "the top square is the cup square" if p == 2 else "the top operation is the p-th power"


TOP_POWER = Law(
    name="top-power",
    title="the top operation is the p-th power",
    formula=r"\mathrm{Sq}^{|x|}x = x^{2}, \quad \mathcal{P}^{|x|/2}x = x^{p}",
    condition="p = 2: i = |x|; p odd: 2i = |x|",
    source="Steenrod and Epstein 1962, chapters I and VI",
    examples=("Sq^3 iota_3 = iota_3^2",),
    instance=_top_power,
    match=_match_top,
    words=_top_words,
)


def _unit(p: int, key: str, index: object) -> Equation:
    require(key in ("beta", "Q", "chi") and (letter_degree((key, index), p) or 0) > 0, "the letter may fix the unit")
    return Equation(Apply(key, index, UNIT), 1, zero(p))


def _match_unit(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if isinstance(factor, Apply) and factor.argument == UNIT and factor.key in ("beta", "Q", "chi"):
        return {"p": p, "key": factor.key, "index": factor.index}
    return None


ON_UNIT = Law(
    name="unit",
    title="operations of positive degree kill the unit",
    formula=r"\theta(1) = 0 \text{ for } |\theta| > 0",
    condition="an operation of positive degree; for Sq^i and P^i this is instability",
    source="Steenrod and Epstein 1962, chapters I and VI",
    examples=("Q_1(x^0) = 0",),
    setting=("let x in H^2",),
    instance=_unit,
    match=_match_unit,
    kills=True,
)


def _exterior(p: int, x: Class) -> Equation:
    require(p == 2 and x.degree == 1 and x.order != 1, "its square need not vanish")
    return Equation(x, 2, zero(2))


def _match_exterior(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if p == 2 and exponent > 1 and isinstance(factor, Class) and factor.degree == 1 and factor.order != 1:
        return {"p": p, "x": factor}
    return None


EXTERIOR = Law(
    name="square-of-degree-1",
    title="the square of a class of degree 1 is its Bockstein",
    formula=r"x^{2} = \mathrm{Sq}^{1}x = 0 \text{ for } |x| = 1",
    condition="p = 2, |x| = 1, x the reduction of an integral or Z/2^k class, k >= 2",
    source="Steenrod and Epstein 1962, chapter I (top square) with the Bockstein sequence",
    examples=("x^2 = 0",),
    setting=("let x in H^1(X; Z)",),
    instance=_exterior,
    match=_match_exterior,
    kills=True,
)


def _odd_square(p: int, x: Monomial) -> Equation:
    factor = only(x)
    require(p > 2 and factor is not None and parity_of(factor) == 1, "its degree is not odd, or p = 2")
    assert factor is not None
    return Equation(factor, 2, zero(p))


def _match_odd_square(factor: Factor, exponent: int, p: int) -> Bindings | None:
    return {"p": p, "x": single(factor)} if p > 2 and exponent > 1 and parity_of(factor) else None


ODD_SQUARE = Law(
    name="odd-square",
    title="graded commutativity",
    formula=r"x^{2} = (-1)^{|x||x|} x^{2} = 0 \text{ for } |x| \text{ odd}",
    condition="p odd, |x| odd",
    source="Steenrod and Epstein 1962, chapter VI",
    examples=("iota_3^2 = 0",),
    setting=("prime 3",),
    instance=_odd_square,
    match=_match_odd_square,
    kills=True,
)
