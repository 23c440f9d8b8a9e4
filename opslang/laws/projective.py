"""Operations on powers of the one generator of a projective or lens space: a binomial; and degrees where nothing is."""

from __future__ import annotations

from opslang.ground.arith import binomial_mod
from opslang.ir.term import Apply, Class, Factor, Monomial, add, degree_of_monomial, letter_degree, of_factor, zero
from opslang.laws.law import Bindings, Binomial, Equation, Law, Remark, head, require
from opslang.laws.ring import degree_step, single_generator
from opslang.spaces.projective import Lens


def _power_of(factor: Factor, p: int) -> tuple[int, Class, int] | None:
    """(i, x, m) for Sq^i or P^i of x^m, x the generator of such a ring."""
    if not isinstance(factor, Apply) or factor.key != head(p) or len(factor.argument.blocks) != 1:
        return None
    of, m = factor.argument.blocks[0]
    return (factor.index, of, m) if isinstance(of, Class) and single_generator(of, p) else None


def _row(p: int, i: int, m: int, x: Class) -> tuple[int, int, int] | None:
    """The upper and lower argument of the binomial and the exponent of x; None where degrees leave 0 alone."""
    if p == 2:
        j, odd = divmod(i, x.degree)
        return None if odd else (m, j, m + j)
    if x.degree == 2:
        return m, i, m + i * (p - 1)
    return 2 * m, i, m + i * (p - 1) // 2


def _binomial(p: int, i: int, m: int, x: Class) -> Equation:
    require(single_generator(x, p) and i > 0 and m > 0, "no power of the generator of a projective or lens space")
    row = _row(p, i, m, x)
    rhs = zero(p) if row is None else add(p, (binomial_mod(row[0], row[1], p), of_factor(p, x, row[2])))
    return Equation(Apply(head(p), i, Monomial(((x, m),))), 1, rhs)


def _match_binomial(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = _power_of(factor, p)
    return {"p": p, "i": acts[0], "m": acts[2], "x": acts[1]} if acts else None


def _binomials(p: int, i: int, m: int, x: Class) -> tuple[Binomial, ...]:
    row = _row(p, i, m, x)
    return () if row is None else ((row[0], row[1], binomial_mod(row[0], row[1], p)),)


def _binomial_vanishes(p: int, i: int, m: int, x: Class) -> bool:
    return not any(value for _, _, value in _binomials(p, i, m, x))


def _words(p: int, i: int, m: int, x: Class) -> str:
    return f"the binomial formula on a {'lens' if isinstance(x.ring, Lens) else 'projective'} space"


BINOMIAL = Law(
    name="projective-power",
    title="the binomial formula on a projective space",
    formula=(
        r"\mathrm{Sq}^{di}x^{m} = \binom{m}{i}x^{m+i}, \quad \mathcal{P}^{i}y^{m} = \binom{m}{i}y^{m+i(p-1)},"
        r" \quad \mathcal{P}^{i}u^{m} = \binom{2m}{i}u^{m+i(p-1)/2}"
    ),
    condition="x in H^d of RP^n, CP^n, HP^n or a lens space, d = 1, 2, 4, 0 for other squares; p odd: y, and u on HP^n",
    source="Steenrod and Epstein 1962, chapters I and VI",
    examples=("Sq^2(x^3) = x^5", "Sq^1(x^4) = 0"),
    setting=("on RP^6",),
    instance=_binomial,
    match=_match_binomial,
    vanishes=_binomial_vanishes,
    binomials=_binomials,
    words=_words,
)


# --- degrees --------------------------------------------------------------------------------------


def _fits(p: int, i: int, x: Monomial) -> bool:
    degree = degree_of_monomial(x, p)
    return i > 0 and degree is not None and (letter_degree((head(p), i), p) or 0) % degree_step(x, p) != 0


def _empty(p: int, i: int, x: Monomial) -> Equation:
    require(_fits(p, i, x), "the space may have classes of that degree")
    return Equation(Apply(head(p), i, x), 1, zero(p))


def _match_empty(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if isinstance(factor, Apply) and factor.key == head(p) and _fits(p, factor.index, factor.argument):
        return {"p": p, "i": factor.index, "x": factor.argument}
    return None


def _empty_remarks(p: int, i: int, x: Monomial) -> tuple[Remark, ...]:
    of = x.blocks[0][0]
    assert isinstance(of, Class)
    degree = (degree_of_monomial(x, p) or 0) + (letter_degree((head(p), i), p) or 0)
    return (
        (f"the degrees of classes of {of.ring.text} are multiples of {degree_step(x, p)}, and here it is {degree}",),
    )


EMPTY = Law(
    name="empty-degree",
    title="no classes in that degree",
    formula=r"\theta x = 0 \text{ where } H^{|\theta| + |x|}(X) = 0",
    condition="CP^n, HP^n, BU, BSp and their like: all degrees are even, or divisible by 4; RP^n at odd p",
    source="Steenrod and Epstein 1962, chapter I; Borel 1953 (the rings)",
    examples=("Sq^3 c_2 = 0",),
    setting=("on BU",),
    instance=_empty,
    match=_match_empty,
    kills=True,
    remarks=_empty_remarks,
    unseen="test_degrees_without_classes",
)
