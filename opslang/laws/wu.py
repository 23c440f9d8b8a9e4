"""Wu's formula on Stiefel-Whitney classes, and mod 2 on Chern and symplectic classes; Thom's on Thom classes.

The instance holds in the ring of the space that the class carries: classes out of range are 0 there, and those that a
relation of BSpin writes through others are written so.  The remarks name them.
"""

from __future__ import annotations

from opslang.ground.arith import binomial_mod
from opslang.ir.term import Apply, Class, Element, Factor, Monomial, add, cup, of_factor, zero
from opslang.laws.law import Bindings, Binomial, Equation, Law, Remark, require
from opslang.laws.ring import applied, element_of, is_open, joined, letter_on_class
from opslang.spaces.characteristic import Classifying, Pontryagin, wu
from opslang.spaces.spin import Spin
from opslang.spaces.thom import Thom

_SHOWN = 8
"""Binomials of an instance that are shown one by one, the vanishing ones too, when there are no more than this."""


def _ring(of: Class) -> Classifying | None:
    ring = of.ring
    fits = isinstance(ring, Classifying) and not isinstance(ring, Pontryagin) and of.letter == ring.letter
    return ring if fits else None


def _applies(p: int, i: int, of: Class) -> bool:
    ring = _ring(of)
    return p == 2 and ring is not None and is_open(2, i, of) and i % ring.step == 0


def _wu(p: int, k: int, m: int, of: Class) -> Equation:
    ring = _ring(of)
    require(ring is not None and m == of.index, "no class w_m, c_m or q_m")
    assert ring is not None
    require(_applies(p, ring.step * k, of), "Wu's formula is for 0 < k < m, at the prime 2")
    parts = [(1, cup(element_of(2, ring.member(a)), element_of(2, ring.member(b)))) for a, b in wu(k, m)]
    return Equation(applied(2, ring.step * k, of), 1, add(2, *parts))


def _match_wu(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = letter_on_class(factor, p)
    if acts is None or not _applies(p, *acts):
        return None
    i, of = acts
    return {"p": p, "k": i // of.ring.step, "m": of.index, "of": of}


def _wu_binomials(p: int, k: int, m: int, of: Class) -> tuple[Binomial, ...]:
    values = [(m - k + t - 1, t) for t in range(k + 1)] if k < 4096 else []
    shown = [(n, t, binomial_mod(n, t, 2)) for n, t in values]
    return tuple(shown if len(shown) <= _SHOWN else [b for b in shown if b[2]])


def _wu_vanishes(p: int, k: int, m: int, of: Class) -> bool:
    return not _wu(p, k, m, of).rhs.terms


def _wu_remarks(p: int, k: int, m: int, of: Class) -> tuple[Remark, ...]:
    return written(of.ring, [i for pair in wu(k, m) for i in pair])


def _wu_words(p: int, k: int, m: int, of: Class) -> str:
    return str(of.ring.law(p, k * of.ring.step, of))


WU = Law(
    name="wu",
    title="Wu's formula",
    formula=r"\mathrm{Sq}^{k}w_{m} = \sum_{t=0}^{k} \binom{m-k+t-1}{t} w_{k-t} w_{m+t}, \quad w_{0} = 1",
    condition="0 < k < m; mod 2 also c_m and q_m, with all degrees times 2 and 4",
    source="Wu 1950; Milnor and Stasheff 1974, problem 8-A",
    examples=("Sq^1 w_2 = w_1 w_2 + w_3", "Sq^2 w_4 = w_2 w_4 + w_6"),
    setting=("on BO",),
    instance=_wu,
    match=_match_wu,
    vanishes=_wu_vanishes,
    binomials=_wu_binomials,
    remarks=_wu_remarks,
    words=_wu_words,
)


# --- what stands for a class --------------------------------------------------------------------


def written(ring: Classifying, numbers: list[int]) -> tuple[Remark, ...]:
    """How the space writes the classes of these numbers that are no generators, and the relations it comes from."""
    plain: list[Equation] = []
    relations: list[Equation] = []
    for i in sorted({i for i in numbers if i}):
        value = ring.member(i)
        generator = ring.of(i)
        if value == ((1, ((generator, 1),)),):
            continue
        equation = Equation(generator, 1, element_of(2, value))
        killed = isinstance(ring, Spin) and i > 2 and i in dict(ring.relations())
        (relations if killed else plain).append(equation)
    remarks = joined("", plain, f" on {ring.text}")
    for equation in relations:
        assert isinstance(equation.factor, Class)
        remarks += (("", equation, f" on {ring.text}, from ", _spin_relation(ring, equation.factor.index or 0)),)
    return remarks


def _spin_relation(ring: Classifying, i: int) -> Equation:
    """The relation that writes w_i: Sq^{2^r} … Sq^2 Sq^1 w_2 = 0, of degree 2^{r+1} + 1."""
    x: Factor = ring.of(2)
    letter = 1
    while letter + 2 <= i:
        x = Apply("Sq", letter, Monomial(((x, 1),)))
        letter *= 2
    return Equation(x, 1, zero(2))


# --- Thom classes ---------------------------------------------------------------------------------


def _thom_value(k: int, of: Class) -> Element:
    ring: Thom = of.ring
    number, odd = divmod(k, ring.base.step)
    return zero(2) if odd else cup(element_of(2, ring.base.member(number)), of_factor(2, of))


def _thom(p: int, k: int, of: Class) -> Equation:
    require(p == 2 and isinstance(of.ring, Thom) and is_open(2, k, of), "no square on a Thom class below its degree")
    return Equation(applied(2, k, of), 1, _thom_value(k, of))


def _match_thom(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = letter_on_class(factor, p)
    if p != 2 or acts is None or not isinstance(acts[1].ring, Thom) or not is_open(2, *acts):
        return None
    return {"p": p, "k": acts[0], "of": acts[1]}


def _thom_remarks(p: int, k: int, of: Class) -> tuple[Remark, ...]:
    base = of.ring.base
    number, odd = divmod(k, base.step)
    if not odd:
        return written(base, [number])
    kind = "complex" if base.step == 2 else "quaternionic"
    return ((f"the Stiefel-Whitney classes of a {kind} bundle are 0 in degrees that {base.step} does not divide",),)


def _thom_vanishes(p: int, k: int, of: Class) -> bool:
    return not _thom_value(k, of).terms


THOM = Law(
    name="thom",
    title="Thom's formula",
    formula=r"\mathrm{Sq}^{k}U = w_{k}U",
    condition="p = 2, U the Thom class; for complex bundles w_{2i} = c_i",
    source="Thom 1952; Milnor and Stasheff 1974, section 8",
    examples=("Sq^2 U = w_2 U",),
    setting=("on thom(BO(3))",),
    instance=_thom,
    match=_match_thom,
    vanishes=_thom_vanishes,
    remarks=_thom_remarks,
)
