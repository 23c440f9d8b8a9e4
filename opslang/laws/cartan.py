"""Operations on products: Cartan for any number of factors at once, p-th powers, and derivations.

A product is given by its *parts*: pairs (monomial y, exponent n).  For squares and powers n is a power of p, since the
total operation on y^n is then the n-th power of that on y; for derivations n is any exponent.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from opslang.ground.arith import digits
from opslang.ir.term import (
    TERM_LIMIT,
    UNIT,
    Apply,
    Factor,
    Monomial,
    TooMany,
    add,
    cup,
    degree_of_monomial,
    is_stable,
    of_monomial,
    parity_of,
    parity_of_monomial,
    power,
    zero,
)
from opslang.laws.law import Bindings, Equation, Law, head, require, single, word
from opslang.laws.ring import degree_step, single_generator

Parts = tuple[tuple[Monomial, int], ...]


def whole(parts: Parts, p: int) -> Monomial:
    """The product of the parts, which must be in canonical order already."""
    product = cup(of_monomial(p, UNIT), *(power(of_monomial(p, y), n) for y, n in parts))
    require(len(product.terms) == 1 and product.terms[0][1] == 1, "the parts are not in order")
    monomial = product.terms[0][0]
    known = not any(is_stable(y) for y, _ in parts) and degree_of_monomial(monomial, p) is not None
    require(known, "not a product of classes of known degree")
    return monomial


def _is_power_of(n: int, p: int) -> bool:
    while n > 1 and n % p == 0:
        n //= p
    return n == 1


def _bounds(parts: Parts, p: int) -> list[int]:
    """The top index on each part, by instability."""
    degrees = [degree_of_monomial(y, p) or 0 for y, _ in parts]
    return degrees if p == 2 else [degree // 2 for degree in degrees]


def _refuse_many(k: int, costs: list[int], bounds: list[int]) -> None:
    """Count the ways to share k out without listing them."""
    if k > 200 * TERM_LIMIT:
        raise TooMany("a Cartan formula that shares out a very large index")
    ways = {k: 1}
    for cost, bound in zip(costs, bounds):
        fresh: dict[int, int] = {}
        if len(ways) * (bound + 1) > 50 * TERM_LIMIT:
            raise TooMany("a Cartan formula with too many terms")
        for left, count in ways.items():
            for i in range(min(bound, left // cost) + 1):
                fresh[left - i * cost] = fresh.get(left - i * cost, 0) + count
        ways = fresh
    if ways.get(0, 0) > TERM_LIMIT:
        raise TooMany(f"a Cartan formula with {ways[0]:,} terms")


def _shares(k: int, costs: list[int], bounds: list[int]) -> Iterator[tuple[int, ...]]:
    """All (k_1, k_2, …) with sum cost_i k_i = k and k_i within bounds."""
    room = [0]
    for cost, bound in zip(reversed(costs), reversed(bounds)):
        room.append(room[-1] + cost * bound)
    room.reverse()
    partial: list[tuple[tuple[int, ...], int]] = [((), k)]
    for at, (cost, bound) in enumerate(zip(costs, bounds)):
        partial = [
            ((*ks, i), left - i * cost)
            for ks, left in partial
            for i in range(min(bound, left // cost) + 1)
            if left - i * cost <= room[at + 1]
        ]
    return (ks for ks, left in partial if left == 0)


# --- squares and powers ---------------------------------------------------------------------------


def _cartan(p: int, k: int, parts: Parts) -> Equation:
    require(k > 0 and len(parts) > 1 and all(_is_power_of(n, p) for _, n in parts), "not a product of p-powers")
    require(all(n == 1 or not (p > 2 and parity_of_monomial(y)) for y, n in parts), "a power of an odd class is 0")
    lhs = Apply(head(p), k, whole(parts, p))
    steps = [degree_step(y, p) if p == 2 else 1 for y, _ in parts]
    costs = [n * step for (_, n), step in zip(parts, steps)]
    bounds = [bound // step for bound, step in zip(_bounds(parts, p), steps)]
    _refuse_many(k, costs, bounds)
    terms = []
    for ks in _shares(k, costs, bounds):
        factors = [power(of_monomial(p, word(((head(p), i * s),), y)), n) for i, s, (y, n) in zip(ks, steps, parts)]
        terms.append((1, cup(*factors)))
    return Equation(lhs, 1, add(p, *terms))


def _split(x: Monomial, p: int) -> Parts:
    """The parts of a product: each exponent written in base p; powers for which there is a binomial stay whole."""
    parts: list[tuple[Monomial, int]] = []
    for factor, exponent in x.blocks:
        if single_generator(factor, p):
            parts.append((Monomial(((factor, exponent),)), 1))
            continue
        for place, digit in enumerate(digits(exponent, p)):
            parts += [(single(factor), p**place)] * digit
    return tuple(parts)


def _match_product(factor: Factor, p: int) -> Parts | None:
    if not (isinstance(factor, Apply) and factor.key == head(p)):
        return None
    x = factor.argument
    if is_stable(x) or degree_of_monomial(x, p) is None:
        return None
    if p > 2 and any(n > 1 and parity_of_monomial(single(f)) for f, n in x.blocks):
        return None
    return _split(x, p)


def _match_cartan(factor: Factor, exponent: int, p: int) -> Bindings | None:
    parts = _match_product(factor, p)
    if parts is None or len(parts) < 2 or _root(factor, p)[1] > 1:
        return None
    assert isinstance(factor, Apply)
    return {"p": p, "k": factor.index, "parts": parts}


CARTAN = Law(
    name="cartan",
    title="the Cartan formula",
    formula=(
        r"\mathrm{Sq}^{k}(x_1 \cdots x_n) = \sum_{k_1 + \dots + k_n = k}"
        r" \mathrm{Sq}^{k_1}x_1 \cdots \mathrm{Sq}^{k_n}x_n, \quad \mathcal{P}^{k} \text{ likewise}"
    ),
    condition=(
        "terms that vanish by instability or for want of classes of the degree are left out;"
        " x_i = y^{p^m} gives (Sq^j y)^{p^m} with k_i = p^m j"
    ),
    source="Cartan 1950; Steenrod and Epstein 1962, chapters I and VI",
    examples=("Sq^1(x y) = (Sq^1 x) y + x (Sq^1 y)", "Sq^2(x y) = (Sq^2 x) y + (Sq^1 x) (Sq^1 y) + x (Sq^2 y)"),
    setting=("let x in H^2", "let y in H^3"),
    instance=_cartan,
    match=_match_cartan,
)


def _root(factor: Factor, p: int) -> tuple[Monomial, int]:
    """The argument of a letter as y^n with n the greatest possible power of p."""
    assert isinstance(factor, Apply)
    blocks, n = factor.argument.blocks, 1
    while blocks and all(exponent % (n * p) == 0 for _, exponent in blocks):
        n *= p
    return Monomial(tuple((f, exponent // n) for f, exponent in blocks)), n


def _frobenius(p: int, k: int, y: Monomial, n: int) -> Equation:
    require(k > 0 and n > 1 and _is_power_of(n, p), "not a p-th power")
    require(p == 2 or not parity_of_monomial(y), "a power of an odd class is 0")
    lhs = Apply(head(p), k, whole(((y, n),), p))
    return Equation(lhs, 1, zero(p) if k % n else power(of_monomial(p, word(((head(p), k // n),), y)), n))


def _match_frobenius(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if not _match_product(factor, p):
        return None
    assert isinstance(factor, Apply)
    y, n = _root(factor, p)
    if n == 1 or (p > 2 and parity_of_monomial(y)):
        return None
    return {"p": p, "k": factor.index, "y": y, "n": n}


def _frobenius_vanishes(p: int, k: int, y: Monomial, n: int) -> bool:
    return k % n != 0


FROBENIUS = Law(
    name="frobenius",
    title="operations on p-th powers",
    formula=(
        r"\mathrm{Sq}^{2k}(y^{2}) = (\mathrm{Sq}^{k}y)^{2}, \quad \mathcal{P}^{pk}(y^{p}) = (\mathcal{P}^{k}y)^{p},"
        r" \quad 0 \text{ for other indices}"
    ),
    condition="y^n with n a power of p; p odd: |y| even",
    source="Cartan 1950; Steenrod and Epstein 1962, chapters I and VI (from the Cartan formula)",
    examples=("Sq^2(x^2) = (Sq^1 x)^2", "Sq^3(x^2) = 0"),
    setting=("let x in H^2",),
    instance=_frobenius,
    match=_match_frobenius,
    vanishes=_frobenius_vanishes,
)


# --- derivations ----------------------------------------------------------------------------------


def leibniz(p: int, key: str, index: Any, parts: Parts) -> Equation:
    """D(y_1^{n_1} … ) = sum ± n_i y_1^{n_1} … y_i^{n_i - 1} D(y_i) … for a derivation D of odd degree."""
    require(len(parts) > 1 or (len(parts) == 1 and parts[0][1] > 1), "not a product")
    lhs = Apply(key, index, whole(parts, p))
    terms, sign = [], 1
    for at, (y, n) in enumerate(parts):
        odd = parity_of_monomial(y)
        # D(y^2) = Dy y - y Dy = 0 for y of odd degree at an odd prime.
        times = n % 2 if p > 2 and odd else n
        pieces = [power(of_monomial(p, z), m) for z, m in parts[:at]]
        pieces += [power(of_monomial(p, y), n - 1), of_monomial(p, word(((key, index),), y))]
        pieces += [power(of_monomial(p, z), m) for z, m in parts[at + 1 :]]
        terms.append((sign * times, cup(*pieces)))
        sign = -sign if odd and n % 2 else sign
    return Equation(lhs, 1, add(p, *terms))


def blocks_of(x: Monomial) -> Parts:
    """The parts of a product for a derivation: its blocks."""
    return tuple((single(factor), exponent) for factor, exponent in x.blocks)


def is_product(x: Monomial, p: int) -> bool:
    """Whether a monomial is a product or a power, of classes of known degree."""
    size = sum(exponent for _, exponent in x.blocks)
    return size > 1 and not is_stable(x) and degree_of_monomial(x, p) is not None


def _beta(p: int, parts: Parts) -> Equation:
    require(p > 2, "at 2 the Bockstein is Sq^1")
    return leibniz(p, "beta", 1, parts)


def _match_beta(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if (
        p > 2
        and isinstance(factor, Apply)
        and (factor.key, factor.index) == ("beta", 1)
        and is_product(factor.argument, p)
    ):
        return {"p": p, "parts": blocks_of(factor.argument)}
    return None


LEIBNIZ = Law(
    name="bockstein-of-a-product",
    title="the Bockstein is a derivation",
    formula=r"\beta(xy) = \beta x \cdot y + (-1)^{|x|} x \cdot \beta y, \quad \beta(x^{n}) = n x^{n-1} \beta x",
    condition="p odd",
    source="Steenrod and Epstein 1962, chapter VI",
    examples=("beta(x y) = (beta x) y - x (beta y)", "beta(y^2) = 2 y (beta y)"),
    setting=("prime 3", "let x in H^3", "let y in H^2"),
    instance=_beta,
    match=_match_beta,
)


def _beta_power(p: int, y: Monomial) -> Equation:
    require(p > 2 and not parity_of_monomial(y), "not a p-th power of an even class")
    return Equation(Apply("beta", 1, whole(((y, p),), p)), 1, zero(p))


def _match_beta_power(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if not _match_beta(factor, exponent, p):
        return None
    assert isinstance(factor, Apply)
    blocks = factor.argument.blocks
    y = Monomial(tuple((f, n // p) for f, n in blocks))
    even = not any(parity_of(f) for f, _ in blocks)
    return {"p": p, "y": y} if even and all(n % p == 0 for _, n in blocks) else None


BETA_POWER = Law(
    name="bockstein-of-a-power",
    title="the Bockstein of a p-th power",
    formula=r"\beta(y^{p}) = p y^{p-1}\beta y = 0",
    condition="p odd, |y| even",
    source="Steenrod and Epstein 1962, chapter VI (from the derivation rule)",
    examples=("beta(y^3) = 0",),
    setting=("prime 3", "let y in H^2"),
    instance=_beta_power,
    match=_match_beta_power,
    kills=True,
)
