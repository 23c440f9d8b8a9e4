"""Milnor's primitives Q_k: commutators of squares or powers, derivations on products, of square 0."""

from __future__ import annotations

from opslang.ir.term import Apply, Class, Factor, Monomial, TooMany, add, of_factor, of_monomial, zero
from opslang.laws.cartan import Parts, blocks_of, is_product, leibniz
from opslang.laws.law import Bindings, Equation, Law, bockstein, head, only, require, single, word


def _acts(factor: Factor) -> tuple[int, Monomial] | None:
    return (factor.index, factor.argument) if isinstance(factor, Apply) and factor.key == "Q" else None


def _zeroth(p: int, x: Monomial) -> Equation:
    return Equation(Apply("Q", 0, x), 1, of_monomial(p, word((bockstein(p),), x)))


def _match_zeroth(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor)
    return {"p": p, "x": acts[1]} if acts and acts[0] == 0 else None


Q_ZERO = Law(
    name="milnor-zero",
    title="the first primitive is the Bockstein",
    formula=r"Q_{0} = \beta",
    condition="every prime; at 2 the Bockstein is Sq^1",
    source="Milnor 1958",
    examples=("Q_0 = Sq^1",),
    instance=_zeroth,
    match=_match_zeroth,
)


def _commutator(p: int, k: int, x: Monomial) -> Equation:
    require(k > 0, "Q_0 is the Bockstein")
    if k > 40:
        raise TooMany(f"a chain of {k:,} commutators")
    power = (head(p), p ** (k - 1) if p > 2 else 2**k)
    lower = ("Q", k - 1)
    forth, back = word((power, lower), x), word((lower, power), x)
    return Equation(Apply("Q", k, x), 1, add(p, (1, of_monomial(p, forth)), (-1, of_monomial(p, back))))


def _match_commutator(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor)
    return {"p": p, "k": acts[0], "x": acts[1]} if acts and acts[0] > 0 else None


Q_COMMUTATOR = Law(
    name="milnor-commutator",
    title="Milnor's primitives are commutators",
    formula=r"Q_{k} = [\mathcal{P}^{p^{k-1}}, Q_{k-1}], \quad p = 2: Q_{k} = [\mathrm{Sq}^{2^{k}}, Q_{k-1}]",
    condition="k > 0",
    source="Milnor 1958",
    examples=("Q_1 = Sq^3 + Sq^2 Sq^1",),
    instance=_commutator,
    match=_match_commutator,
)


def _product(p: int, k: int, parts: Parts) -> Equation:
    require(k >= 0, "there is no such primitive")
    return leibniz(p, "Q", k, parts)


def _match_product(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor)
    return {"p": p, "k": acts[0], "parts": blocks_of(acts[1])} if acts and is_product(acts[1], p) else None


Q_PRODUCT = Law(
    name="milnor-of-a-product",
    title="Milnor's primitives are derivations",
    formula=r"Q_{k}(xy) = Q_{k}x \cdot y + (-1)^{|x|} x \cdot Q_{k}y",
    condition="any classes x, y",
    source="Milnor 1958",
    examples=("Q_1(x y) = (Q_1 x) y + x (Q_1 y)",),
    setting=("let x, y in H^2",),
    instance=_product,
    match=_match_product,
)


def _squared(p: int, k: int, x: Monomial) -> Equation:
    require(k >= 0, "there is no such primitive")
    return Equation(Apply("Q", k, single(Apply("Q", k, x))), 1, zero(p))


def _match_squared(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor)
    below = only(acts[1]) if acts else None
    inner = _acts(below) if below else None
    return {"p": p, "k": acts[0], "x": inner[1]} if acts and inner and acts[0] == inner[0] else None


Q_SQUARED = Law(
    name="milnor-squared",
    title="Milnor's primitives have square 0",
    formula=r"Q_{k}Q_{k} = 0",
    condition="every k",
    source="Milnor 1958",
    examples=("Q_1 Q_1 = 0",),
    instance=_squared,
    match=_match_squared,
    kills=True,
)


def _degree_one(p: int, k: int, x: Class) -> Equation:
    require(p == 2 and x.degree == 1 and x.order == 1, "not a mod 2 class of degree 1")
    return Equation(Apply("Q", k, single(x)), 1, of_factor(2, x, 2 ** (k + 1)))


def _match_degree_one(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _acts(factor)
    below = only(acts[1]) if acts else None
    if acts and p == 2 and isinstance(below, Class) and below.degree == 1 and below.order == 1:
        return {"p": p, "k": acts[0], "x": below}
    return None


Q_DEGREE_ONE = Law(
    name="milnor-degree-one",
    title="Milnor's primitives on a class of degree 1",
    formula=r"Q_{k}x = x^{2^{k+1}}",
    condition="p = 2, |x| = 1",
    source="Milnor 1958",
    examples=("Q_2 x = x^8",),
    setting=("let x in H^1",),
    instance=_degree_one,
    match=_match_degree_one,
)
