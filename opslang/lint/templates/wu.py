"""Wu's formula for Sq^k of a Stiefel–Whitney class w_m, and its double for mod 2 Chern classes.

A written right side is compared with the formula as a polynomial in the classes.  A difference counts only if it stays
where classes vanish that may vanish for the bundle at hand: w_1 (oriented), or w_1, w_2, w_3, w_5 (spin).

Source: Wu 1950; Milnor and Stasheff 1974, problem 8-A.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import product as grid

from opslang.ground.arith import binomial_mod
from opslang.lint.formula.closed import to_surface
from opslang.lint.model import ClassName, Finding, Index, Known, Statement, Sum, Verdict, found
from opslang.lint.symbolic.trial import free_symbols
from opslang.lint.symbolic.values import compare, value_of
from opslang.lint.symbolic.walk import factors_of
from opslang.lint.templates.shapes import wu
from opslang.syntax import surface as sf

Monomial = tuple[int, ...]
Polynomial = frozenset[Monomial]
"""Polynomials over F_2 in w_1, w_2, …: sets of sorted tuples of indices."""
VANISHING = (frozenset[int](), frozenset((1,)), frozenset((1, 2, 3, 5)))
MOST = 5


def formula(k: int, m: int) -> Polynomial:
    """Sq^k w_m = sum of C(m-k+t-1, t) w_{k-t} w_{m+t}; w_m² for k = m and 0 for k > m."""
    if k > m:
        return frozenset()
    if k == m:
        return frozenset({(m, m)})
    terms = [(k - t, m + t) for t in range(k + 1) if binomial_mod(m - k + t - 1, t, 2)]
    return frozenset(tuple(sorted(i for i in term if i)) for term in terms)


class Unlike(Exception):
    """The side is no polynomial in the classes."""


def polynomial(side: Sum, letter: str, values: Mapping[str, int]) -> Polynomial:
    """The value of a side at some numbers."""
    surface = to_surface(side, values)
    if surface is None:
        raise Unlike
    return _sum(surface, letter)


def _sum(surface: sf.Sum, letter: str) -> Polynomial:
    total: set[Monomial] = set()
    for _, product in surface.terms:
        total ^= _product(product, letter)
    return frozenset(total)


def _product(product: sf.Product, letter: str) -> Polynomial:
    value: Polynomial = frozenset({()})
    for factor in product.factors:
        value = _times(value, _factor(factor, letter))
    return value


def _factor(factor: sf.Factor, letter: str) -> Polynomial:
    if isinstance(factor, sf.Number):
        return frozenset({()}) if factor.value % 2 else frozenset()
    if isinstance(factor, sf.Group):
        return _sum(factor.body, letter)
    if isinstance(factor, sf.Power) and isinstance(factor.exponent, int) and factor.exponent < 20:
        value: Polynomial = frozenset({()})
        for _ in range(factor.exponent):
            value = _times(value, _factor(factor.base, letter))
        return value
    if isinstance(factor, sf.Name) and factor.letter == letter and isinstance(factor.index, int) and not factor.primes:
        index = factor.index
        return frozenset() if index < 0 else frozenset({(index,)}) if index else frozenset({()})
    raise Unlike


def _times(left: Polynomial, right: Polynomial) -> Polynomial:
    total: set[Monomial] = set()
    for one in left:
        for other in right:
            total ^= {tuple(sorted(one + other))}
    return frozenset(total)


def stays(difference: Polynomial) -> bool:
    """Whether a difference is not 0 for any of the bundles that one may mean."""
    return all(any(gone.isdisjoint(monomial) for monomial in difference) for gone in VANISHING)


# --- the verdict --------------------------------------------------------------------------------


def judge(statement: Statement, known: Known) -> Verdict | None:
    """The verdict on a statement Sq^k(w_m) = … with a symbol as m."""
    shape = wu(statement)
    right = statement.right if shape is not None else None
    if shape is None or statement.unread or not isinstance(right, Sum) or known.prime not in (2, None):
        return None
    letter, k, m = shape
    if not any(isinstance(factor, ClassName) and factor.letter == letter for factor in factors_of(right)):
        return None
    tried: list[str] = []
    for values in _points(statement, known, k, m):
        a, b = value_of(k, values), value_of(m, values)
        if not isinstance(a, int) or not isinstance(b, int) or not (0 < a < b or (a == b and _top(k, m))):
            continue
        if letter == "c":
            if a % 2 or a // 2 >= b:
                continue
            a //= 2
        try:
            written = polynomial(right, letter, values)
        except Unlike:
            return None
        difference = written ^ formula(a, b)
        text = ", ".join(f"{name} = {value}" for name, value in values.items())
        if stays(difference):
            return found(_finding(statement, letter, a, b, text))
        tried.append(text)
    return Verdict("agrees", reason="agrees with Wu's formula for " + tried[-1] + " and below") if tried else None


def _top(k: Index, m: Index) -> bool:
    return k == m


def _points(statement: Statement, known: Known, k: Index, m: Index) -> Iterator[dict[str, int]]:
    symbols = free_symbols(statement, known)
    if not 1 <= len(symbols) <= 2:
        return
    for point in grid(range(1, MOST + 1), repeat=len(symbols)):
        values = dict(zip(symbols, point))
        if all(_holds(condition.sign, condition.left, condition.right, values) for condition in statement.conditions):
            yield values


def _holds(sign: str, left: Index | None, right: Index | None, values: Mapping[str, int]) -> bool:
    return left is None or right is None or compare(sign, left, right, values) is not False


def _finding(statement: Statement, letter: str, k: int, m: int, at: str) -> Finding:
    wanted = formula(k, m)
    names = " + ".join(_name(monomial, letter) for monomial in sorted(wanted)) or "0"
    double = 2 * k if letter == "c" else k
    message = f"this is not Wu's formula: for {at} it should give Sq^{double} {letter}_{m} = {names}"
    return Finding("wu-formula", "error", message, statement.at)


def _name(monomial: Monomial, letter: str) -> str:
    return " ".join(f"{letter}_{index}" for index in monomial) or "1"
