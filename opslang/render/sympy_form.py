"""Canonical elements as sympy expressions.  The only room that knows sympy; it is imported when asked for.

Operations become products of non-commutative symbols, named as in TeX; generators of H^* become symbols, commutative
where they have even degree or the prime is 2, else non-commutative, in the canonical order.  Coefficients are the
integers 1 … p-1: sympy is not told of the prime.
"""

from __future__ import annotations

from typing import Any

from opslang.ground.grading import degree
from opslang.ir.tree import Element, Generator, OperationElement
from opslang.render.text import generator_text, letter_text


def _generator(generator: Generator, prime: int) -> Any:
    from sympy import Symbol

    even = prime == 2 or (degree(generator.word, prime) + generator.of.degree) % 2 == 0
    return Symbol(generator_text(generator, prime, "latex"), commutative=even)


def to_sympy(element: Element) -> Any:
    """The element as a sympy expression.  ModuleNotFoundError where sympy is not installed."""
    from sympy import Add, Integer, Mul, Symbol

    p = element.prime
    terms = []
    if isinstance(element, OperationElement):
        for word, coefficient in element.terms:
            letters = [Symbol(letter_text(token, p, "latex"), commutative=False) for token in word]
            terms.append(Mul(Integer(coefficient), *letters))
    else:
        for monomial, coefficient in element.terms:
            factors = [_generator(generator, p) ** power for generator, power in monomial]
            terms.append(Mul(Integer(coefficient), *factors))
    return Add(*terms)
