"""Polynomials with rational coefficients in named symbols, for degrees and indices.  Knows numbers and names only.

A symbol is any text: `n`, `i_1`, `|x|`, `|I|`, `2^{j}`.  Equal polynomials are equal values.  That a polynomial is
not 0 as written does not say that it is never 0: `n - k` vanishes for n = k.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import Union

from attrs import frozen

Monomial = tuple[str, ...]
"""Symbols with repetition, sorted; empty for 1."""
Value = Union[int, Fraction]


@frozen
class Polynomial:
    """Pairs (monomial, coefficient), sorted, no coefficient 0; a coefficient that is whole is an int."""

    terms: tuple[tuple[Monomial, Value], ...] = ()

    @staticmethod
    def of(value: Value) -> Polynomial:
        """A constant."""
        return _built({(): value})

    @staticmethod
    def symbol(name: str) -> Polynomial:
        """One symbol."""
        return Polynomial((((name,), 1),))

    @property
    def constant(self) -> Value | None:
        """The value of a polynomial without symbols, else None."""
        if not self.terms:
            return 0
        if len(self.terms) == 1 and not self.terms[0][0]:
            return self.terms[0][1]
        return None

    @property
    def symbols(self) -> frozenset[str]:
        """The symbols that occur."""
        return frozenset(name for monomial, _ in self.terms for name in monomial)

    @property
    def is_zero(self) -> bool:
        """Whether it is the zero polynomial."""
        return not self.terms

    def linear_in(self, name: str) -> tuple[Polynomial, Polynomial] | None:
        """(a, b) with self = a·name + b and a, b free of it; None where the symbol occurs in a power."""
        slope: dict[Monomial, Value] = {}
        rest: dict[Monomial, Value] = {}
        for monomial, c in self.terms:
            count = monomial.count(name)
            if count > 1:
                return None
            if count:
                slope[tuple(s for s in monomial if s != name)] = c
            else:
                rest[monomial] = c
        return _built(slope), _built(rest)

    def substitute(self, values: Mapping[str, Polynomial]) -> Polynomial:
        """Some symbols replaced."""
        if not values or not (self.symbols & values.keys()):
            return self
        total = Polynomial()
        for monomial, c in self.terms:
            term = Polynomial.of(c)
            for name in monomial:
                term = term * (values[name] if name in values else Polynomial.symbol(name))
            total = total + term
        return total

    def at(self, values: Mapping[str, int]) -> Value | None:
        """The value at numbers; None where one is missing."""
        total: Value = 0
        for monomial, c in self.terms:
            term: Value = c
            for name in monomial:
                if name not in values:
                    return None
                term = term * values[name]
            total = total + term
        return _whole(total)

    def __add__(self, other: Polynomial) -> Polynomial:
        terms: dict[Monomial, Value] = dict(self.terms)
        for monomial, c in other.terms:
            terms[monomial] = terms.get(monomial, 0) + c
        return _built(terms)

    def __neg__(self) -> Polynomial:
        return Polynomial(tuple((monomial, -c) for monomial, c in self.terms))

    def __sub__(self, other: Polynomial) -> Polynomial:
        return self + -other

    def __mul__(self, other: Polynomial) -> Polynomial:
        terms: dict[Monomial, Value] = {}
        for left, c in self.terms:
            for right, d in other.terms:
                monomial = tuple(sorted(left + right))
                terms[monomial] = terms.get(monomial, 0) + c * d
        return _built(terms)

    def scaled(self, factor: Value) -> Polynomial:
        """A multiple."""
        return _built({monomial: c * factor for monomial, c in self.terms})

    def __str__(self) -> str:
        if not self.terms:
            return "0"
        ordered = sorted(self.terms, key=lambda term: (not term[0], -len(term[0]), term[0]))
        if ordered[0][1] < 0:  # a positive term first, where there is one
            ordered.sort(key=lambda term: term[1] < 0)
        text = ""
        for monomial, c in ordered:
            names = _names(monomial)
            size = abs(c)
            body = names if size == 1 and names else f"{size}{' ' if names and not names[0].isalpha() else ''}{names}"
            text += (" - " if c < 0 else " + ") + body if text else ("-" if c < 0 else "") + body
        return text


def _names(monomial: Monomial) -> str:
    parts = []
    for name in dict.fromkeys(monomial):
        count = monomial.count(name)
        parts.append(name if count == 1 else f"{name}^{count}")
    return " ".join(parts)


def _whole(value: Value) -> Value:
    return value.numerator if isinstance(value, Fraction) and value.denominator == 1 else value


def _built(terms: Mapping[Monomial, Value]) -> Polynomial:
    return Polynomial(tuple(sorted((monomial, _whole(c)) for monomial, c in terms.items() if c)))


ZERO = Polynomial()
ONE = Polynomial.of(1)
