"""How letters compose: the Adem relations at 2 and at odd primes, and beta^2 = 0.  Coefficients come from `adem`."""

from __future__ import annotations

from opslang.ground.arith import binomial_mod
from opslang.ir.term import TERM_LIMIT, Apply, Factor, Monomial, TooMany, collect, zero
from opslang.laws import adem
from opslang.laws.law import Bindings, Binomial, Equation, Law, only, require, single, word

_SHOWN = 8
"""Binomials of a row that are shown one by one, the vanishing ones too, when there are no more than this."""

_SCANNED = 64
"""Up to this index a row is listed to see whether it is empty; beyond it its terms are counted."""


def _pair(factor: Factor, outer: str, inner: str) -> tuple[Apply, Apply] | None:
    if isinstance(factor, Apply) and factor.key == outer:
        below = only(factor.argument)
        if isinstance(below, Apply) and below.key == inner:
            return factor, below
    return None


def _refuse_long(terms: int) -> None:
    if terms > TERM_LIMIT:
        raise TooMany(f"an Adem relation with {terms:,} terms")


def _shown(rows: tuple[tuple[int, int, int], ...], p: int) -> tuple[Binomial, ...]:
    """The binomials C(n - (p-1) j, k - p j) for each (n, k, number of j), all of them or only the nonzero ones."""
    total = sum(count for _, _, count in rows)
    if total > 4096:
        return ()
    values = [(n - (p - 1) * j, k - p * j) for n, k, count in rows for j in range(count)]
    shown = [(n, k, binomial_mod(n, k, p)) for n, k in values]
    return tuple(shown if total <= _SHOWN else [b for b in shown if b[2]])


# --- p = 2 ----------------------------------------------------------------------------------------


def _adem(p: int, a: int, b: int, x: Monomial) -> Equation:
    require(p == 2 and 0 < a < 2 * b, f"Sq^{a} Sq^{b} is already admissible")
    _refuse_long(adem.count_squares(a, b))
    rhs = collect(2, ((word((("Sq", i), ("Sq", j)), x), 1) for i, j in adem.squares(a, b)))
    return Equation(Apply("Sq", a, single(Apply("Sq", b, x))), 1, rhs)


def _match_adem(factor: Factor, exponent: int, p: int) -> Bindings | None:
    pair = _pair(factor, "Sq", "Sq")
    if pair and pair[0].index < 2 * pair[1].index:
        return {"p": p, "a": pair[0].index, "b": pair[1].index, "x": pair[1].argument}
    return None


def _adem_binomials(p: int, a: int, b: int, x: Monomial) -> tuple[Binomial, ...]:
    return _shown(((b - 1, a, a // 2 + 1),), 2)


def _adem_vanishes(p: int, a: int, b: int, x: Monomial) -> bool:
    return not (adem.squares(a, b) if a <= _SCANNED else adem.count_squares(a, b))


ADEM = Law(
    name="adem",
    title="the Adem relation",
    formula=r"\mathrm{Sq}^{a}\mathrm{Sq}^{b} = \sum_{j} \binom{b-1-j}{a-2j} \mathrm{Sq}^{a+b-j}\mathrm{Sq}^{j}",
    condition="p = 2, 0 < a < 2b",
    source="Adem 1952; Steenrod and Epstein 1962, chapter I",
    examples=("Sq^2 Sq^2 = Sq^3 Sq^1", "Sq^3 Sq^2 = 0", "Sq^2 Sq^3 = Sq^5 + Sq^4 Sq^1"),
    instance=_adem,
    match=_match_adem,
    coefficients=adem.squares,
    vanishes=_adem_vanishes,
    binomials=_adem_binomials,
)


# --- p odd ----------------------------------------------------------------------------------------


def _adem_powers(p: int, a: int, b: int, x: Monomial) -> Equation:
    require(p > 2 and 0 < a < p * b, f"P^{a} P^{b} is already admissible")
    _refuse_long(adem.count_powers(a, b, p))
    rhs = collect(p, ((word((("P", i), ("P", j)), x), c) for c, i, j in adem.powers(a, b, p)))
    return Equation(Apply("P", a, single(Apply("P", b, x))), 1, rhs)


def _match_powers(factor: Factor, exponent: int, p: int) -> Bindings | None:
    pair = _pair(factor, "P", "P")
    if pair and pair[0].index < p * pair[1].index:
        return {"p": p, "a": pair[0].index, "b": pair[1].index, "x": pair[1].argument}
    return None


def _powers_binomials(p: int, a: int, b: int, x: Monomial) -> tuple[Binomial, ...]:
    return _shown((((p - 1) * b - 1, a, a // p + 1),), p)


def _powers_vanish(p: int, a: int, b: int, x: Monomial) -> bool:
    return not (adem.powers(a, b, p) if a <= _SCANNED else adem.count_powers(a, b, p))


ADEM_POWERS = Law(
    name="adem-powers",
    title="the Adem relation for reduced powers",
    formula=(
        r"\mathcal{P}^{a}\mathcal{P}^{b} = \sum_{j} (-1)^{a+j} \binom{(p-1)(b-j)-1}{a-pj}"
        r" \mathcal{P}^{a+b-j}\mathcal{P}^{j}"
    ),
    condition="p odd, 0 < a < pb",
    source="Steenrod and Epstein 1962, chapter VI",
    examples=("P^1 P^1 = 2 P^2", "P^1 P^2 = 0"),
    setting=("prime 3",),
    instance=_adem_powers,
    match=_match_powers,
    coefficients=adem.powers,
    vanishes=_powers_vanish,
    binomials=_powers_binomials,
)


def _adem_bockstein(p: int, a: int, b: int, x: Monomial) -> Equation:
    require(p > 2 and 0 < a <= p * b, f"P^{a} beta P^{b} is already admissible")
    _refuse_long(adem.count_powers_bockstein(a, b, p))
    outside, inside = adem.powers_bockstein(a, b, p)
    beta = ("beta", 1)
    terms = [(word((beta, ("P", i), ("P", j)), x), c) for c, i, j in outside]
    terms += [(word((("P", i), beta, ("P", j)), x), c) for c, i, j in inside]
    return Equation(Apply("P", a, single(Apply("beta", 1, single(Apply("P", b, x))))), 1, collect(p, terms))


def _match_bockstein(factor: Factor, exponent: int, p: int) -> Bindings | None:
    outer = _pair(factor, "P", "beta")
    inner = _pair(outer[1], "beta", "P") if outer else None
    if outer and inner and outer[1].index == 1 and outer[0].index <= p * inner[1].index:
        return {"p": p, "a": outer[0].index, "b": inner[1].index, "x": inner[1].argument}
    return None


def _bockstein_binomials(p: int, a: int, b: int, x: Monomial) -> tuple[Binomial, ...]:
    return _shown((((p - 1) * b, a, a // p + 1), ((p - 1) * b - 1, a - 1, (a - 1) // p + 1)), p)


ADEM_BOCKSTEIN = Law(
    name="adem-bockstein",
    title="the Adem relation with a Bockstein",
    formula=(
        r"\mathcal{P}^{a}\beta\mathcal{P}^{b} = \sum_{j} (-1)^{a+j} \binom{(p-1)(b-j)}{a-pj}"
        r" \beta\mathcal{P}^{a+b-j}\mathcal{P}^{j}"
        r" + \sum_{j} (-1)^{a+j-1} \binom{(p-1)(b-j)-1}{a-pj-1} \mathcal{P}^{a+b-j}\beta\mathcal{P}^{j}"
    ),
    condition="p odd, 0 < a <= pb",
    source="Steenrod and Epstein 1962, chapter VI",
    examples=("P^1 beta P^1 = beta P^2 + P^2 beta",),
    setting=("prime 3",),
    instance=_adem_bockstein,
    match=_match_bockstein,
    coefficients=adem.powers_bockstein,
    binomials=_bockstein_binomials,
)


def _beta_squared(p: int, x: Monomial) -> Equation:
    require(p > 2, "at 2 the Bockstein is Sq^1")
    return Equation(Apply("beta", 1, single(Apply("beta", 1, x))), 1, zero(p))


def _match_beta_squared(factor: Factor, exponent: int, p: int) -> Bindings | None:
    pair = _pair(factor, "beta", "beta")
    if p > 2 and pair and pair[0].index == pair[1].index == 1:
        return {"p": p, "x": pair[1].argument}
    return None


BETA_SQUARED = Law(
    name="beta-squared",
    title="the Bockstein has square 0",
    formula=r"\beta\beta = 0",
    condition="p odd (at 2 it is an Adem relation)",
    source="Steenrod and Epstein 1962, chapter VI",
    examples=("beta beta = 0",),
    setting=("prime 3",),
    instance=_beta_squared,
    match=_match_beta_squared,
    kills=True,
)
