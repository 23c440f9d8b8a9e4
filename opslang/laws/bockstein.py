"""Bocksteins and coefficients: what vanishes on integral and Z/p^k classes, and the Bocksteins of higher order.

beta_k is defined on what lifts to coefficients Z/p^k; in general it is known modulo the images of lower Bocksteins
only, and the equations here hold modulo those.  So that the value does not depend on the route, beta_k is computed from
generators: the laws of higher order apply to words on one class, to powers of such words and to products of those.
"""

from __future__ import annotations

from opslang.ir.term import (
    STABLE,
    Apply,
    Class,
    Factor,
    Monomial,
    add,
    cup,
    degree_of,
    degree_of_monomial,
    is_stable,
    of_monomial,
    parity_of,
    parity_of_monomial,
    power,
    word_on_class,
    zero,
)
from opslang.laws.cartan import Parts, is_product, leibniz, whole
from opslang.laws.law import Bindings, Equation, Law, bockstein, is_bockstein, only, require, single, word


def lifts_to_integers(factor: Factor, p: int) -> bool:
    """Whether a factor is visibly the reduction of an integral class: it is declared so, or a Bockstein."""
    if isinstance(factor, Class):
        return factor.order == 0
    plain = word_on_class(factor, p)
    if plain is None or plain[1] == STABLE:
        return False
    # Sq^{2i+1} = Sq^1 Sq^{2i}.
    return factor.key == "beta" or (p == 2 and factor.key == "Sq" and factor.index % 2 == 1)


def _root_exponent(factor: Factor, exponent: int, k: int, p: int) -> int | None:
    """The least power q of p with beta_k defined on factor^q and q dividing the exponent; None where there is none."""
    order = factor.order if isinstance(factor, Class) else 1
    if isinstance(factor, Class) and factor.ring is not None:
        first, _ = factor.ring.bockstein(p, factor)
        if first is None:
            return 1
        order = first
    if lifts_to_integers(factor, p) or order >= k:
        return 1
    if word_on_class(factor, p) is None or (p > 2 and parity_of(factor)):
        return None
    # The square of a class of odd degree at 2 is Sq^{2i+1} of it, so it lifts to the integers.
    odd = p == 2 and (degree_of_monomial(single(factor), p) or 0) % 2 == 1
    q = p if odd else p ** (k - order)
    return q if exponent % q == 0 else None


def split(x: Monomial, k: int, p: int) -> Parts | None:
    """A product as parts (y, n) with beta_k defined on each y; None where that is not visible."""
    parts = []
    for factor, exponent in x.blocks:
        q = _root_exponent(factor, exponent, k, p)
        if q is None:
            return None
        parts.append((Monomial(((factor, q),)), exponent // q))
    return tuple(parts)


# --- what vanishes --------------------------------------------------------------------------------


def _integral(p: int, x: Monomial) -> Equation:
    factor = only(x)
    good = isinstance(factor, Class) and factor.order != 1 and not is_stable(x)
    require(
        good or (isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1),
        "its Bockstein need not vanish",
    )
    key, index = bockstein(p)
    return Equation(Apply(key, index, x), 1, zero(p))


def _match_integral(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if not is_bockstein(factor, p):
        return None
    assert isinstance(factor, Apply)
    below = only(factor.argument)
    if (isinstance(below, Class) and below.order != 1) or (
        isinstance(below, Apply) and below.key == "beta" and below.index > 1
    ):
        return {"p": p, "x": factor.argument}
    return None


INTEGRAL = Law(
    name="integral",
    title="the Bockstein of a class that lifts",
    formula=r"\beta x = 0 \text{ (at 2: } \mathrm{Sq}^{1}x = 0)",
    condition="x the reduction of an integral class or of a Z/p^k class, k >= 2",
    source="Serre 1953; Cartan 1954; the Bockstein sequence",
    examples=("Sq^1 x = 0", "Sq^2 Sq^2 x = 0"),
    setting=("let x in H^4(X; Z)",),
    instance=_integral,
    match=_match_integral,
    kills=True,
)


def _below(p: int, k: int, x: Class) -> Equation:
    require(k > 1 and (x.order == 0 or x.order > k), "beta_k of it need not vanish")
    return Equation(Apply("beta", k, single(x)), 1, zero(p))


def _match_below(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1:
        below = only(factor.argument)
        if isinstance(below, Class) and (below.order == 0 or below.order > factor.index):
            return {"p": p, "k": factor.index, "x": below}
    return None


BELOW_ORDER = Law(
    name="below-the-order",
    title="a Bockstein below the order of the class",
    formula=r"\beta_{k}x = 0",
    condition="k >= 2, x the reduction of an integral class or of a Z/p^j class with j > k",
    source="the Bockstein sequence; May 1970",
    examples=("beta_2 x = 0",),
    setting=("let x in H^4(X; Z/8)",),
    instance=_below,
    match=_match_below,
    kills=True,
)


def _of_bockstein(p: int, k: int, x: Monomial) -> Equation:
    factor = only(x)
    require(k > 1 and isinstance(factor, Apply) and lifts_to_integers(factor, p), "not visibly a Bockstein")
    return Equation(Apply("beta", k, x), 1, zero(p))


def _match_of_bockstein(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1:
        below = only(factor.argument)
        if isinstance(below, Apply) and lifts_to_integers(below, p):
            return {"p": p, "k": factor.index, "x": factor.argument}
    return None


OF_BOCKSTEIN = Law(
    name="bockstein-of-a-bockstein",
    title="a Bockstein lifts to an integral class",
    formula=r"\beta_{k}\beta_{j}x = 0",
    condition="k >= 2; at 2 also on Sq^{2i+1} x = Sq^1 Sq^{2i} x",
    source="the Bockstein sequence; May 1970",
    examples=("beta_2 beta_2 x = 0",),
    setting=("let x in H^4(X; Z/4)",),
    instance=_of_bockstein,
    match=_match_of_bockstein,
    kills=True,
)


def _odd_class_squared(p: int, k: int, y: Monomial) -> Equation:
    factor = only(y)
    odd = p == 2 and factor is not None and word_on_class(factor, p) and (degree_of(factor, p) or 0) % 2 == 1
    require(bool(odd) and k > 1, "not the square of an odd class")
    return Equation(Apply("beta", k, whole(((y, 2),), p)), 1, zero(p))


def _match_odd_class_squared(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if p == 2 and isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1:
        blocks = factor.argument.blocks
        odd = len(blocks) == 1 and (degree_of(blocks[0][0], p) or 0) % 2 == 1
        if odd and blocks[0][1] == 2 and word_on_class(blocks[0][0], p):
            return {"p": p, "k": factor.index, "y": single(blocks[0][0])}
    return None


ODD_CLASS_SQUARED = Law(
    name="bockstein-of-an-odd-square",
    title="the square of a class of odd degree is a Bockstein",
    formula=r"\beta_{k}(y^{2}) = \beta_{k}\mathrm{Sq}^{1}\mathrm{Sq}^{|y|-1}y = 0",
    condition="p = 2, |y| odd, k >= 2",
    source="Steenrod and Epstein 1962, chapter I, with the Bockstein sequence",
    examples=("beta_2(y^2) = 0",),
    setting=("let y in H^3",),
    instance=_odd_class_squared,
    match=_match_odd_class_squared,
    kills=True,
)


# --- products and powers --------------------------------------------------------------------------


def _higher_leibniz(p: int, k: int, parts: Parts) -> Equation:
    require(k > 1 and all(split(y, k, p) is not None for y, _ in parts), "beta_k is not visibly defined on the parts")
    return leibniz(p, "beta", k, parts)


def _match_higher_leibniz(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1 and is_product(factor.argument, p):
        parts = split(factor.argument, factor.index, p)
        if parts and (len(parts) > 1 or parts[0][1] > 1):
            return {"p": p, "k": factor.index, "parts": parts}
    return None


HIGHER_LEIBNIZ = Law(
    name="higher-bockstein-of-a-product",
    title="a higher Bockstein is a derivation where it is defined",
    formula=r"\beta_{k}(xy) = \beta_{k}x \cdot y + (-1)^{|x|} x \cdot \beta_{k}y",
    condition="k >= 2, beta_k defined on each factor",
    source="May 1970",
    examples=("beta_2(x y) = (beta_2 x) y + x (beta_2 y)",),
    setting=("let x, y in H^4(X; Z/4)",),
    instance=_higher_leibniz,
    match=_match_higher_leibniz,
)


def _of_power(p: int, k: int, x: Monomial) -> Equation:
    even = len(x.blocks) == 1 and (degree_of_monomial(x, p) or 1) % 2 == 0
    require(k > 1 and even, "not the p-th power of an even class")
    require(k == 2 or split(x, k - 1, p) is not None, f"beta_{k - 1} is not visibly defined on the root")
    letter = bockstein(p) if k == 2 else ("beta", k - 1)
    below = word((letter,), x)
    rhs = cup(power(of_monomial(p, x), p - 1), of_monomial(p, below))
    if p == 2 and k == 2:
        extra = word((("Sq", degree_of_monomial(x, p)),), below)
        rhs = add(p, (1, rhs), (1, of_monomial(p, extra)))
    return Equation(Apply("beta", k, whole(((x, p),), p)), 1, rhs)


def _match_of_power(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if not (isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1):
        return None
    blocks, k = factor.argument.blocks, factor.index
    x = Monomial(tuple((f, n // p) for f, n in blocks))
    if len(blocks) != 1 or any(n % p for _, n in blocks) or is_stable(x) or (degree_of_monomial(x, p) or 1) % 2:
        return None
    if (p > 2 and parity_of_monomial(x)) or (k > 2 and split(x, k - 1, p) is None):
        return None
    return {"p": p, "k": k, "x": x}


OF_POWER = Law(
    name="higher-bockstein-of-a-power",
    title="the higher Bockstein of a p-th power",
    formula=(
        r"\beta_{r+1}(x^{p}) = x^{p-1}\beta_{r}x, \quad"
        r" p = 2, r = 1: \beta_{2}(x^{2}) = x\,\mathrm{Sq}^{1}x + \mathrm{Sq}^{|x|}\mathrm{Sq}^{1}x"
    ),
    condition="|x| even, beta_r x defined; modulo the images of beta_1, …, beta_r",
    source="May 1970, proposition 6.8",
    examples=("beta_2(x^2) = x (Sq^1 x) + Sq^4 Sq^1 x",),
    setting=("let x in H^4",),
    instance=_of_power,
    match=_match_of_power,
    unseen="test_higher_bockstein_of_a_power_modulo_lower_ones",
)
