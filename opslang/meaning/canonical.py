"""Canonical elements back to expressions, and arithmetic with canonical elements.  Knows trees; the engine is given
in as a function."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any

from attrs import frozen

from opslang.ground.grading import degree as word_degree
from opslang.ground.source import Span
from opslang.ir import tree as ir
from opslang.ir.measure import term_degree
from opslang.ir.tree import ClassElement, Generator, Monomial
from opslang.meaning.value import NONE, Value, cls
from opslang.spaces.family import Polynomial


def generator_tree(generator: Generator, prime: int, span: Span = ir.HERE) -> ir.Cls:
    """A word on a class as an expression."""
    of, word = generator.of, generator.word
    tree: ir.Cls = ir.Fundamental(of, of.degree, of.degree, span)
    degree = of.degree
    if word and word[-1] < 0:
        degree += 1
        tree, word = ir.HigherBockstein(-word[-1], tree, degree, degree, span), word[:-1]
    if word:
        shift = word_degree(word, prime)
        tree = ir.Apply(ir.Composite(word, shift, span), tree, degree + shift, degree + shift, span)
    return tree


def monomial_tree(monomial: Monomial, prime: int, span: Span = ir.HERE) -> ir.Cls:
    """A product of powers of generators as an expression."""
    factors: list[ir.Cls] = []
    for generator, exponent in monomial:
        one = generator_tree(generator, prime, span)
        degree = (one.degree or 0) * exponent
        factors.append(one if exponent == 1 else ir.ClassPower(one, exponent, degree, degree, span))
    if not factors:
        return ir.Unit(0, 0, span)
    degree = sum([factor.degree or 0 for factor in factors])
    return factors[0] if len(factors) == 1 else ir.Cup(tuple(factors), degree, degree, span)


def element_value(element: ClassElement, degree: int | None, span: Span = ir.HERE) -> Value:
    """A canonical class as an expression; `degree` is the one that 0 keeps."""
    p = element.prime
    terms = tuple([(c, monomial_tree(monomial, p, span)) for monomial, c in element.terms])
    degrees = {term.degree for _, term in terms}
    top = max([term.top for _, term in terms], default=degree or 0)
    of = frozenset([generator.of for monomial, _ in element.terms for generator, _ in monomial])
    if len(terms) == 1 and terms[0][0] == 1:
        return cls(terms[0][1], of)
    whole = degrees.pop() if len(degrees) == 1 else None if degrees else degree
    return cls(ir.ClassSum(terms, whole, top, span), of or NONE)


def element_polynomial(element: ClassElement) -> Polynomial:
    """A canonical class as a polynomial: in classes where no word acts on them, else in generators."""
    found: list[Any] = []
    for monomial, c in element.terms:
        # the rings place words on classes like classes (`place`), though polynomials of families have classes only
        found.append((c, tuple([(g if g.word else g.of, exponent) for g, exponent in monomial])))
    return tuple(found)


def pieces(element: ClassElement) -> dict[int, ClassElement]:
    """The homogeneous parts of a class, by degree."""
    found: dict[int, list[tuple[Monomial, int]]] = {}
    for monomial, c in element.terms:
        found.setdefault(term_degree(monomial, element.prime, False), []).append((monomial, c))
    return {degree: ClassElement(element.prime, tuple(terms)) for degree, terms in found.items()}


@frozen
class Arithmetic:
    """Sums and products of canonical classes; `evaluate` gives the canonical form of an expression."""

    prime: int
    evaluate: Callable[[Value], ClassElement]

    def zero(self) -> ClassElement:
        """0."""
        return ClassElement(self.prime, ())

    def one(self, number: int = 1) -> ClassElement:
        """A multiple of the unit."""
        number %= self.prime
        return ClassElement(self.prime, (((), number),) if number else ())

    def combined(self, terms: Iterable[tuple[int, ClassElement, ClassElement]]) -> ClassElement:
        """The sum of c · a · b over the terms (c, a, b)."""
        sums: list[tuple[int, ir.Cls]] = []
        top = 0
        classes = NONE
        for c, left, right in terms:
            if not (c % self.prime and left.terms and right.terms):
                continue
            a, b = element_value(left, 0), element_value(right, 0)
            degree = None if a.degree is None or b.degree is None else a.degree + b.degree
            sums.append((c % self.prime, ir.Cup((a.cls, b.cls), degree, a.top + b.top)))
            top = max(top, a.top + b.top)
            classes |= a.classes | b.classes
        if not sums:
            return self.zero()
        return self.evaluate(cls(ir.ClassSum(tuple(sums), None, top), classes))

    def product(self, left: ClassElement, right: ClassElement) -> ClassElement:
        """The cup product."""
        return self.combined([(1, left, right)])

    def power(self, base: ClassElement, exponent: int) -> ClassElement:
        """A power."""
        a = element_value(base, 0)
        degree = None if a.degree is None else a.degree * exponent
        return self.evaluate(cls(ir.ClassPower(a.cls, exponent, degree, a.top * exponent), a.classes))

    def applied(self, token: int, element: ClassElement) -> ClassElement:
        """Sq^token (p = 2), P^token, or the Bockstein (token 0, p odd) of a class."""
        a = element_value(element, 0)
        shift = word_degree((token,), self.prime)
        degree = None if a.degree is None else a.degree + shift
        return self.evaluate(cls(ir.Apply(ir.Composite((token,), shift), a.cls, degree, a.top + shift), a.classes))
