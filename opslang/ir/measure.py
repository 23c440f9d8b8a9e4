"""Degree and excess of canonical elements.  Knows the definitions and nothing of how elements come about."""

from __future__ import annotations

from opslang.ground.grading import degree, excess
from opslang.ir.order import monomial_degree
from opslang.ir.tree import Element, Monomial, OperationElement, Word


def term_degree(term: Word | Monomial, prime: int, operation: bool) -> int:
    """The degree of one term."""
    return degree(term, prime) if operation else monomial_degree(term, prime)  # type: ignore[arg-type]


def monomial_excess(monomial: Monomial, prime: int) -> int | None:
    """The excess of a term that is one word on one class to the first power; None for any other."""
    if len(monomial) == 1 and monomial[0][1] == 1:
        return excess(monomial[0][0].word, prime)
    return None


def element_degree(element: Element) -> int | None:
    """The common degree of the terms; None where they differ or there are none."""
    operation = isinstance(element, OperationElement)
    degrees = {term_degree(term, element.prime, operation) for term, _ in element.terms}
    return degrees.pop() if len(degrees) == 1 else None


def element_excess(element: Element) -> int | None:
    """The least excess of the terms, where all have one; None otherwise, and for 0."""
    if isinstance(element, OperationElement):
        found = [excess(word, element.prime) for word, _ in element.terms]
    else:
        found = []
        for monomial, _ in element.terms:
            value = monomial_excess(monomial, element.prime)
            if value is None:
                return None
            found.append(value)
    return min(found, default=None)
