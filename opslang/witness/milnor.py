"""Milnor's basis and product: a second route to the Steenrod algebra that never meets Adem's relations.

The room knows the basis Q(E) P(R) dual to the monomials of the dual algebra (at p = 2, Sq(R)), its product, and the
triangular change to admissible words.  It does not know the relations, classes or spaces.

A basis element is a pair (E, R): E the increasing indices k of the Q_k that occur (empty at p = 2), R the exponents
without trailing zeros.  An element is a dict from basis elements to 1 … p-1.
Source: Milnor 1958, "The Steenrod algebra and its dual", theorems 4a and 4b; lemma 8 for the leading terms.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import lru_cache
from math import comb

from opslang.ground.grading import Word

Exponents = tuple[int, ...]
Basis = tuple[tuple[int, ...], Exponents]
Milnor = dict[Basis, int]

UNIT: Basis = ((), ())


def _trim(exponents: list[int] | Exponents) -> Exponents:
    end = len(exponents)
    while end and not exponents[end - 1]:
        end -= 1
    return tuple(exponents[:end])


def _add_to(total: Milnor, element: Mapping[Basis, int], scale: int, p: int) -> None:
    for key, coefficient in element.items():
        value = (total.get(key, 0) + scale * coefficient) % p
        if value:
            total[key] = value
        else:
            total.pop(key, None)


def add(a: Mapping[Basis, int], b: Mapping[Basis, int], p: int, scale: int = 1) -> Milnor:
    """a + scale * b."""
    total = dict(a)
    _add_to(total, b, scale, p)
    return total


def _rows(total: int, columns: Exponents, p: int) -> Iterator[tuple[int, ...]]:
    """The rows (x_0, x_1, …) with sum p^j x_j = total and x_j <= columns[j-1] for j >= 1."""
    partial: list[tuple[tuple[int, ...], int]] = [((), total)]
    for j, most in enumerate(columns, start=1):
        weight = p**j
        partial = [
            ((*row, x), left - weight * x) for row, left in partial for x in range(min(most, left // weight) + 1)
        ]
    for row, left in partial:
        yield (left, *row)


def _fill(r: Exponents, s: Exponents, p: int) -> Iterator[tuple[Exponents, int]]:
    """For every matrix of Milnor's formula, its diagonal sums t and the product of the multinomials b mod p.

    Rows 1, 2, … are placed one after the other; t_n gathers the x_ij with i + j = n, so the multinomial
    t_n! / prod x_ij! is the product of the binomials C(sum so far, x_ij).
    """
    width = len(r) + len(s)
    partial: list[tuple[Exponents, tuple[int, ...], int]] = [(s, (0,) * width, 1)]
    for i, total in enumerate(r, start=1):
        further: list[tuple[Exponents, tuple[int, ...], int]] = []
        for columns, sums, b in partial:
            for row in _rows(total, columns, p):
                fresh, value = list(sums), b
                for j, x in enumerate(row):
                    fresh[i + j - 1] += x
                    value = value * comb(fresh[i + j - 1], x) % p
                if value:
                    rest = tuple(most - x for most, x in zip(columns, row[1:]))
                    further.append((rest, tuple(fresh), value))
        partial = further
    for columns, sums, b in partial:
        fresh, value = list(sums), b
        for j, x in enumerate(columns, start=1):
            fresh[j - 1] += x
            value = value * comb(fresh[j - 1], x) % p
        if value:
            yield _trim(fresh), value


@lru_cache(maxsize=1 << 14)
def _powers_product(r: Exponents, s: Exponents, p: int) -> tuple[tuple[Exponents, int], ...]:
    total: dict[Exponents, int] = {}
    for t, b in _fill(r, s, p):
        total[t] = (total.get(t, 0) + b) % p
    return tuple((t, b) for t, b in total.items() if b)


def _insert(indices: tuple[int, ...], k: int) -> tuple[tuple[int, ...], int]:
    """Q(E) Q_k in order, with its sign; sign 0 where Q_k occurs already."""
    if k in indices:
        return (), 0
    after = sum(1 for index in indices if index > k)
    return tuple(sorted((*indices, k))), -1 if after % 2 else 1


def _times_q(element: Mapping[Basis, int], k: int, p: int) -> Milnor:
    """element * Q_k, by P(R) Q_k = Q_k P(R) + sum_j Q_(k+j) P(R - p^k e_j)."""
    total: Milnor = {}
    for (indices, r), coefficient in element.items():
        moves = [(k, r)]
        for j, exponent in enumerate(r, start=1):
            if exponent >= p**k:
                moves.append((k + j, _trim((*r[: j - 1], exponent - p**k, *r[j:]))))
        for index, rest in moves:
            merged, sign = _insert(indices, index)
            if sign:
                _add_to(total, {(merged, rest): 1}, sign * coefficient, p)
    return total


def product(a: Mapping[Basis, int], b: Mapping[Basis, int], p: int) -> Milnor:
    """The product of two elements.  Source: Milnor 1958, theorems 4a and 4b."""
    total: Milnor = {}
    for (indices, s), second in b.items():
        left: Mapping[Basis, int] = a
        for k in indices:
            left = _times_q(left, k, p)
        for (before, r), first in left.items():
            terms: Milnor = {(before, t): value for t, value in _powers_product(r, s, p)}
            _add_to(total, terms, first * second, p)
    return total


def q(k: int, p: int) -> Milnor:
    """Milnor's primitive Q_k; at p = 2 it is Sq(0, …, 0, 1) with the 1 in place k + 1."""
    if p == 2:
        return {((), (0,) * k + (1,)): 1}
    return {((k,), ()): 1}


def letter(token: int, p: int) -> Milnor:
    """Sq^i, P^s or the Bockstein in Milnor's basis; a negative token is no element of the algebra."""
    if token < 0:
        raise ValueError("a higher Bockstein is not an element of the Steenrod algebra")
    return {((), (token,)): 1} if token else q(0, p)


@lru_cache(maxsize=1 << 12)
def _word(word: Word, p: int) -> Mapping[Basis, int]:
    result: Milnor = {UNIT: 1}
    for token in reversed(word):
        result = product(letter(token, p), result, p)
    return result


def to_milnor(word: Word, p: int) -> Milnor:
    """A word in Milnor's basis."""
    return dict(_word(tuple(word), p))


def combine(terms: Mapping[Word, int], p: int) -> Milnor:
    """A linear combination of words in Milnor's basis."""
    total: Milnor = {}
    for word, coefficient in terms.items():
        _add_to(total, _word(tuple(word), p), coefficient, p)
    return total


def partitions(n: int, p: int) -> Iterator[Exponents]:
    """All R with sum r_i (p^i - 1)/(p - 1) = n, without trailing zeros."""
    weights = [1]
    while weights[-1] * p + 1 <= n:
        weights.append(weights[-1] * p + 1)
    partial: list[tuple[Exponents, int]] = [((), n)]
    for weight in reversed(weights[1:]):
        partial = [((x, *tail), left - x * weight) for tail, left in partial for x in range(left // weight + 1)]
    for tail, left in partial:
        yield _trim((left, *tail))


def conjugate_letter(token: int, p: int) -> Milnor:
    """chi(Sq^n) = sum of all Sq(R), chi(P^n) = (-1)^n sum of all P(R) in that degree; chi(beta) = -beta.

    Source: Milnor 1958, corollary 6.
    """
    if token == 0:
        return {key: -value % p for key, value in q(0, p).items()}
    sign = -1 if token % 2 else 1
    return {((), r): sign % p for r in partitions(token, p)}


def conjugate(word: Word, p: int) -> Milnor:
    """chi of a word: the conjugates of its letters in reverse, with the sign for Bocksteins passing each other."""
    result: Milnor = {UNIT: 1}
    odd = word.count(0)
    for token in reversed(word):
        result = product(result, conjugate_letter(token, p), p)
    sign = -1 if odd * (odd - 1) // 2 % 2 else 1
    return {key: sign * value % p for key, value in result.items()}


def _leading(key: Basis) -> tuple[int, ...]:
    """What leading terms are compared by: (eps_0, r_1, eps_1, r_2, …) from the right, longer first."""
    indices, r = key
    length = max(len(r), indices[-1] if indices else 0)
    sequence = [1 if 0 in indices else 0]
    for i in range(1, length + 1):
        sequence += [r[i - 1] if i <= len(r) else 0, 1 if i in indices else 0]
    return (len(sequence), *reversed(sequence))


def _word_of(key: Basis, p: int) -> Word:
    """The admissible word whose leading term is the basis element: s_j = p s_(j+1) + eps_j + r_j."""
    indices, r = key
    length = max(len(r), indices[-1] if indices else 0)
    tokens: list[int] = []
    power = 0
    for j in range(length, 0, -1):
        bockstein = 1 if j in indices else 0
        power = p * power + bockstein + (r[j - 1] if j <= len(r) else 0)
        tokens += [0] * bockstein + [power]
    tokens += [0] if 0 in indices else []
    return tuple(reversed(tokens))


def admissible(element: Mapping[Basis, int], p: int) -> dict[Word, int]:
    """An element as a linear combination of admissible words, read off by leading terms."""
    rest, terms = dict(element), {}
    while rest:
        key = max(rest, key=_leading)
        word = _word_of(key, p)
        expansion = _word(word, p)
        coefficient = rest[key] * pow(expansion[key], -1, p) % p
        terms[word] = coefficient
        _add_to(rest, expansion, -coefficient, p)
        if key in rest or (rest and max(map(_leading, rest)) >= _leading(key)):
            raise AssertionError(f"the leading term of {word} is not {key}")
    return terms


def normal_form(word: Word, p: int) -> dict[Word, int]:
    """A word as a sum of admissible words, by way of Milnor's basis."""
    return admissible(_word(tuple(word), p), p)
