"""The canonical order of words, generators and monomials: one order, fixed here, documented in the language reference.

Words of one degree: lexicographic, greatest first (at odd p compare eps_0, s_1, eps_1, s_2, …).
Generators: by class (degree, then name; a Thom class last), then by the degree of the word, then by the word.
Terms of a sum: by degree, lowest first; words of one degree in the order of words; monomials of one degree by their
first generator in the order of generators, its power (highest first), and so on along the monomial.
"""

from __future__ import annotations

from opslang.ground.grading import degree
from opslang.ir.tree import Class, Generator, Monomial, Word

Key = tuple[object, ...]


def word_key(word: Word, p: int) -> tuple[int, ...]:
    """Sorts words of one degree, the lexicographically greatest first."""
    if p == 2:
        return tuple([-token if token > 0 else -1 for token in word])
    key = []
    expects_power = False
    for token in word:
        if token > 0:
            if not expects_power:
                key.append(0)
            key.append(-token)
            expects_power = False
        else:
            key.append(-1)
            expects_power = True
    return tuple(key)


def class_key(of: Class) -> Key:
    """Sorts classes: by degree, then letter, index and primes; a Thom class stands last."""
    last = of.ring is not None and of.letter == "U"
    return last, of.degree, of.letter, -1 if of.index is None else of.index, of.primes, of.order, of.factor


def generator_key(generator: Generator, p: int) -> Key:
    """Sorts polynomial generators."""
    return *class_key(generator.of), degree(generator.word, p), word_key(generator.word, p)


def monomial_key(monomial: Monomial, p: int) -> Key:
    """Sorts monomials of one degree."""
    return tuple([(generator_key(generator, p), -exponent) for generator, exponent in monomial])


def monomial_degree(monomial: Monomial, p: int) -> int:
    """The degree of a monomial."""
    return sum([(degree(generator.word, p) + generator.of.degree) * exponent for generator, exponent in monomial])
