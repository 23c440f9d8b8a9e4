"""Formulas without symbols as surface trees of the language, so that the engines can compute them.

Only closed expressions pass: numbers in all indices, no sum sign, no ellipsis, no map, no symbol as coefficient.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from math import floor
from operator import mul

from opslang.lint.model import (
    BigSum,
    ClassName,
    Coefficient,
    Condition,
    Conjugate,
    Factor,
    Group,
    Index,
    Number,
    Operation,
    Origin,
    Power,
    Product,
    Sum,
)
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import polynomial_of, value_of
from opslang.syntax import surface as sf

_GLUES = {"": "", "*": "*", "cup": "cup", "cross": "cross", "times": "cross", "compose": "compose"}
MOST_TERMS = 400
"""A sum sign with numbers as limits is written out up to this many terms."""


class NotClosed(Exception):
    """The expression holds something that is no closed element."""


def to_surface(tree: Sum, values: Mapping[str, int] | None = None) -> sf.Sum | None:
    """The surface tree of a closed expression; None where it is not closed.

    `values` gives numbers for symbols: indices are computed with them, sums written out, coefficients put in.
    Spans are offsets in the file.
    """
    try:
        return _sum(tree, dict(values or {}))
    except NotClosed:
        return None


def _span(at: Origin) -> tuple[int, int]:
    return at.start, at.end


def _number(index: Index, values: Mapping[str, int]) -> int:
    value = value_of(index, values)
    if value is None or isinstance(value, Fraction):
        raise NotClosed
    return value


def _sum(tree: Sum, values: dict[str, int]) -> sf.Sum:
    terms: list[tuple[int, sf.Product]] = []
    for sign, product in tree.terms:
        for product_sign, one in _products(product, values):
            terms.append((sign * product_sign, one))
    if not terms:
        terms = [(1, sf.Product((sf.Number(0, _span(tree.at)),), ("",), _span(tree.at)))]
    return sf.Sum(tuple(terms), _span(tree.at))


def _products(product: Product, values: dict[str, int]) -> list[tuple[int, sf.Product]]:
    """A product as signed surface products: more than one, or none, where a sum sign stands in it."""
    last = product.factors[-1]
    if isinstance(last, BigSum):
        head = Product(product.factors[:-1], product.glues[:-1], product.at) if len(product.factors) > 1 else None
        found = []
        for sign, tail in _written_out(last, values):
            for head_sign, front in _products(head, values) if head else [(1, sf.Product((), (), tail.span))]:
                joined = sf.Product((*front.factors, *tail.factors), (*front.glues, *tail.glues), tail.span)
                found.append((sign * head_sign, joined))
        return found
    sign = 1
    factors: list[sf.Factor] = []
    glues: list[str] = []
    for factor, glue in zip(product.factors, product.glues):
        if glue not in _GLUES:
            raise NotClosed
        if isinstance(factor, Coefficient):
            number = _number(factor.value, values)
            sign, number = (-sign, -number) if number < 0 else (sign, number)
            made: sf.Factor = sf.Number(number, _span(factor.at))
        else:
            made = _factor(factor, values)
        factors.append(made)
        glues.append(_GLUES[glue])
    return [(sign, sf.Product(tuple(factors), tuple(glues), _span(product.at)))]


def _written_out(big: BigSum, values: dict[str, int]) -> list[tuple[int, sf.Product]]:
    if big.sign != "\\sum" or big.bounds.unread:
        raise NotClosed
    found = []
    for chosen in _choices(big, values):
        found += _products(big.body, {**values, **chosen})
    return found


def _choices(big: BigSum, values: dict[str, int]) -> list[dict[str, int]]:
    """The values of the bound variables."""
    bounds = big.bounds
    free = [name for name in bounds.variables if name not in values]
    if bounds.conditions and bounds.lower is None:
        return _solutions(big, free, values)
    if len(bounds.variables) != 1 or (bounds.upper is None and not _vanishing_in_the_end(big)):
        raise NotClosed
    first = 0 if bounds.lower is None else _number(bounds.lower, values)
    if bounds.upper is None:  # an open sum: its binomials vanish outside their range
        last = first + sum(abs(value) for value in values.values()) + 1
    else:
        limit = value_of(bounds.upper, values)
        if limit is None:
            raise NotClosed
        last = floor(limit)
    if last - first > MOST_TERMS:
        raise NotClosed
    return [{bounds.variables[0]: n} for n in range(first, last + 1)]


def _vanishing_in_the_end(big: BigSum) -> bool:
    """Whether a binomial stands in the summand."""
    return any(isinstance(factor, Coefficient) and "binom" in _kinds(factor.value) for factor in big.body.factors)


def _kinds(index: Index) -> set[str]:
    found = {index.kind}
    for part in index.parts:
        if isinstance(part, Index):
            found |= _kinds(part)
    return found


def _solutions(big: BigSum, free: list[str], values: dict[str, int]) -> list[dict[str, int]]:
    """Non-negative solutions of i + j = k, and of inequalities that bound one variable."""
    ceiling = sum(abs(value) for value in values.values()) + 2
    if not 1 <= len(free) <= 2 or (ceiling + 1) ** len(free) > MOST_TERMS * 4:
        raise NotClosed
    ranges = [range(ceiling + 1)] * len(free)
    grid = [(a,) for a in ranges[0]] if len(free) == 1 else [(a, b) for a in ranges[0] for b in ranges[1]]
    linear = [_linear(condition, free, values) for condition in big.bounds.conditions]
    found = []
    for point in grid:
        chosen = dict(zip(free, point))
        for condition, form in zip(big.bounds.conditions, linear):
            if form is not None:
                slopes, constant, holds = form
                if not holds(sum(map(mul, slopes, point)) + constant):
                    break
            elif not _holds(condition.sign, condition.left, condition.right, {**values, **chosen}):
                break
        else:
            if ceiling in point:
                raise NotClosed  # nothing bounds it
            found.append(chosen)
    return found


_SIGNS: dict[str, Callable[[int], bool]] = {
    "<": lambda n: n < 0,
    ">": lambda n: n > 0,
    "≤": lambda n: n <= 0,
    "≥": lambda n: n >= 0,
    "=": lambda n: n == 0,
    "≠": lambda n: n != 0,
}


def _linear(
    condition: Condition, free: list[str], values: Mapping[str, int]
) -> tuple[list[int], int, Callable[[int], bool]] | None:
    """A comparison as a linear form in the free variables, compared with 0; None where it is no such thing."""
    if condition.left is None or condition.right is None or condition.sign not in _SIGNS:
        return None
    left, right = polynomial_of(condition.left), polynomial_of(condition.right)
    if left is None or right is None:
        return None
    form = (left - right).substitute({name: Polynomial.of(value) for name, value in values.items() if name not in free})
    slopes, constant = dict.fromkeys(free, 0), 0
    for monomial, c in form.terms:
        if not isinstance(c, int) or len(monomial) > 1 or (monomial and monomial[0] not in slopes):
            return None
        if monomial:
            slopes[monomial[0]] = c
        else:
            constant = c
    return list(slopes.values()), constant, _SIGNS[condition.sign]


def _holds(sign: str, left: Index | None, right: Index | None, values: Mapping[str, int]) -> bool:
    from opslang.lint.symbolic.values import compare

    if left is None or right is None:
        raise NotClosed
    verdict = compare(sign, left, right, values)
    if verdict is None:
        raise NotClosed
    return verdict


def _factor(factor: Factor, values: dict[str, int]) -> sf.Factor:
    span = _span(factor.at)
    match factor:
        case Operation():
            return _operation(factor, values)
        case ClassName():
            return _class(factor, values)
        case Number():
            return sf.Number(factor.value, span)
        case Group():
            return sf.Group(_sum(factor.body, values), span)
        case Conjugate():
            return sf.Conjugate(_sum(factor.body, values), span)
        case Power():
            exponent = _number(factor.exponent, values)
            if exponent < 0:
                raise NotClosed
            return sf.Power(_factor(factor.base, values), exponent, span)
        case BigSum():
            raise NotClosed
    raise NotClosed


def _operation(factor: Operation, values: Mapping[str, int]) -> sf.Factor:
    span = _span(factor.at)
    if factor.bound or factor.tensor:
        raise NotClosed
    if factor.head in ("Sq", "P"):
        if factor.lower is not None:
            raise NotClosed
        return sf.Operation(factor.head, tuple([_number(index, values) for index in factor.upper]), span)
    if factor.upper:
        if factor.head == "beta" and len(factor.upper) == 1:  # beta^2
            base = sf.Bockstein(None if factor.lower is None else _number(factor.lower, values), span)
            exponent = _number(factor.upper[0], values)
            if exponent < 0:
                raise NotClosed
            return sf.Power(sf.Group(sf.Sum(((1, sf.Product((base,), ("",), span)),), span), span), exponent, span)
        raise NotClosed
    if factor.head == "beta":
        return sf.Bockstein(None if factor.lower is None else _number(factor.lower, values), span)
    if factor.lower is None:
        raise NotClosed
    return sf.Milnor(_number(factor.lower, values), span)


def _class(factor: ClassName, values: Mapping[str, int]) -> sf.Factor:
    span = _span(factor.at)
    if factor.label or len(factor.index) > 1:
        raise NotClosed
    index = _number(factor.index[0], values) if factor.index else None
    if factor.letter == "iota":
        if index is None:
            raise NotClosed
        return sf.Fundamental(index, factor.primes, span)
    return sf.Name(factor.letter, index, factor.primes, span)
