"""Reduced powers of characteristic classes and of Thom classes, by the splitting principle.

The class is a symmetric polynomial in roots x_i of degree 2 with P x = x + x^p (or in their squares y_i, with
P y = y (1 + y^h)^2, h = (p-1)/2); so its power is one, which the space writes through its classes.  The remark
says which.
"""

from __future__ import annotations

from opslang.ir.term import Apply, Class, Factor, Monomial, add, of_factor
from opslang.laws.law import Bindings, Equation, Law, Remark, require, single
from opslang.laws.ring import applied, element_of, is_open, joined, known, letter_on_class
from opslang.spaces.characteristic import Classifying
from opslang.spaces.thom import Thom

_SHOWN = 12
"""Variables that a monomial of a remark may have."""


def _covers(p: int, k: int, of: Class) -> bool:
    return p > 2 and k > 0 and isinstance(of.ring, Classifying | Thom) and is_open(p, k, of)


def _splitting(p: int, k: int, of: Class) -> Equation:
    require(_covers(p, k, of), "no characteristic class, or settled by instability")
    return Equation(applied(p, k, of), 1, element_of(p, of.ring.operation(p, k, of)))


def _match_splitting(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = letter_on_class(factor, p)
    if acts is None or not _covers(p, *acts) or known(p, *acts) is None:
        return None
    return {"p": p, "k": acts[0], "of": acts[1]}


def shapes(p: int, k: int, of: Class) -> list[tuple[int, tuple[int, ...]]]:
    """P^k of the class as a sum of c times the symmetric polynomial with this leading exponent vector.

    For the Euler class and for Thom classes: what the class is multiplied by.
    """
    half = (p - 1) // 2
    ring = of.ring
    factor_of = isinstance(ring, Thom) or of.letter == "e"
    base = ring.base if isinstance(ring, Thom) else ring
    if base.step == 2:
        return [(1, (p - 1,) * k)] if factor_of else [(1, (p,) * k + (1,) * ((of.index or 0) - k))]
    if factor_of and base.letter != "q":
        return [(1, (half,) * k)]
    low, high, rest = (half, p - 1, 0) if factor_of else (half + 1, p, 1)
    found = []
    for twice in range(k // 2, -1, -1):
        once = k - 2 * twice
        others = (of.index or 0) - once - twice if rest else 0
        if others >= 0:
            found.append((pow(2, once, p), (high,) * twice + (low,) * once + (rest,) * others))
    return found


def _total_power(p: int, letter: str) -> Equation:
    """P x = x + x^p for a root, P y = y (1 + y^h)^2 for the square of one."""
    root = Class(letter, None, 0, 2 if letter == "x" else 4)
    terms = [(1, of_factor(p, root)), (1, of_factor(p, root, p))]
    if letter == "y":
        terms.append((2, of_factor(p, root, (p + 1) // 2)))
    return Equation(Apply("total", 0, single(root)), 1, add(p, *terms))


def _remarks(p: int, k: int, of: Class) -> tuple[Remark, ...]:
    ring = of.ring
    base = ring.base if isinstance(ring, Thom) else ring
    letter = "x" if base.step == 2 else "y"
    pieces: list[str | Equation | Monomial] = []
    if isinstance(ring, Thom) or of.letter == "e":
        pieces += [single(of), " times "]
    for number, (c, exponents) in enumerate(shapes(p, k, of)):
        if len(exponents) > _SHOWN:
            return ()
        monomial = Monomial(tuple([(Class(letter, i, 0, base.step), n) for i, n in enumerate(exponents, start=1)]))
        pieces.append((" and " if number else "") + (f"{c} times " if c != 1 else "") + "the sum of all ")
        pieces.append(monomial)
    pieces.append(" in the roots, with " if letter == "x" else " in the squares of the roots, with ")
    pieces.append(_total_power(p, letter))
    last = (of.index or 0) + k * (p - 1) // (1 if letter == "x" else 2) if of.letter == base.letter else k * (p - 1)
    return (tuple(pieces), *_written(p, base, last))


def _written(p: int, base: Classifying, last: int) -> tuple[Remark, ...]:
    """Which classes up to a number are no generators of the space, and what they are."""
    found = []
    for i in range(1, last + 1):
        value = base.member(i)
        if value != ((1, ((base.of(i), 1),)),):
            found.append(Equation(base.of(i), 1, element_of(p, value)))
    return joined("", found, f" on {base.text}", 3)


SPLITTING = Law(
    name="splitting-principle",
    title="the splitting principle",
    formula=(
        r"\mathcal{P}\prod(1 + x_{i}) = \prod(1 + x_{i} + x_{i}^{p}), \quad c_{m} = e_{m}(x),"
        r" \quad p_{m}, q_{m} = e_{m}(x^{2}), \quad \mathcal{P}U = U\prod(1 + x_{i}^{p-1})"
    ),
    condition="p odd; c_m, p_m, q_m, e, U",
    source="Borel and Serre 1953",
    examples=("P^1 c_1 = c_1^3", "P^1 c_2 = c_1^2 c_2 + c_2^2 + 2 c_1 c_3 + c_4"),
    setting=("prime 3", "on BU"),
    instance=_splitting,
    match=_match_splitting,
    remarks=_remarks,
)
