"""Reduced powers on elementary symmetric polynomials, by the splitting principle.  Knows numbers and partitions only.

Let the roots x_i of a bundle satisfy sum_k P^k s^k (x) = x + … in such a way that 1 + t P_s(x) is a polynomial in x,
say
prod_j (1 + theta_j x) with N factors.  Then the total power of sum_m c_m t^m is prod_i prod_j (1 + theta_j x_i),
that is
prod_j c(theta_j) = sum over partitions r of at most N parts of m_r(theta) c_{r_1} c_{r_2} …; the elementary symmetric
polynomials of the theta_j are the coefficients of 1 + t P_s(x).  So what is needed is the coefficient of one product
of elementary symmetric polynomials in each monomial symmetric polynomial m_r in N variables: the solution of a
triangular system.  Source: Borel and Serre 1953 (the splitting principle); the arrangement is our own.
"""

from __future__ import annotations

from functools import lru_cache
from math import comb

from opslang.spaces.family import NotKnown

Partition = tuple[int, ...]
"""Parts in decreasing order, all at least 1."""

MOST_PARTITIONS = 2_500


def partitions(n: int, parts: int, largest: int | None = None) -> list[Partition]:
    """The partitions of n into at most `parts` parts, each at most `largest`, lexicographically increasing."""
    if n == 0:
        return [()]
    if parts == 0:
        return []
    found = []
    for first in range(-(-n // parts), min(n, n if largest is None else largest) + 1):
        found += [(first, *rest) for rest in partitions(n - first, parts - 1, first)]
    return found


def count(n: int, parts: int) -> int:
    """The number of partitions of n into at most `parts` parts."""
    ways = [1] + [0] * n
    for part in range(1, parts + 1):
        for k in range(part, n + 1):
            ways[k] += ways[k - part]
    return ways[n]


def _times_elementary(r: int, f: dict[Partition, int], variables: int, p: int) -> dict[Partition, int]:
    """e_r times a symmetric polynomial given on the basis m_r, in so many variables, mod p."""
    result: dict[Partition, int] = {}
    for partition, c in f.items():
        counts: dict[int, int] = {}
        for part in partition:
            counts[part] = counts.get(part, 0) + 1
        counts[0] = variables - len(partition)
        values = sorted(counts, reverse=True)
        choices: list[tuple[int, dict[int, int]]] = [(r, {})]
        for value in values:
            choices = [
                (left - raised, {**chosen, value: raised})
                for left, chosen in choices
                for raised in range(min(left, counts[value]) + 1)
            ]
        for left, chosen in choices:
            if left:
                continue
            new: dict[int, int] = {}
            for value in values:
                new[value] = new.get(value, 0) + counts[value] - chosen[value]
                new[value + 1] = new.get(value + 1, 0) + chosen[value]
            ways = 1
            for value in values:
                ways = ways * comb(new[value + 1], chosen[value]) % p
            if ways:
                key = tuple([value for value in sorted(new, reverse=True) if value for _ in range(new[value])])
                result[key] = (result.get(key, 0) + c * ways) % p
    return {key: c for key, c in result.items() if c}


@lru_cache(maxsize=256)
def coefficients(p: int, variables: int, target: Partition) -> tuple[tuple[Partition, int], ...]:
    """For each partition r the coefficient mod p of e_target = e_{t_1} e_{t_2} … in m_r, in so many variables;
    nonzero ones only.

    NotKnown where there are too many partitions to go through.
    """
    degree = sum(target)
    if count(degree, variables) > MOST_PARTITIONS:
        raise NotKnown(f"the splitting principle would need more than {MOST_PARTITIONS:,} partitions of {degree}")
    rows: dict[Partition, dict[Partition, int]] = {(): {(): 1}}
    found: dict[Partition, int] = {}
    # m_r first occurs in e_{r'}, r' the conjugate partition; smaller partitions are known by then.
    for r in partitions(degree, variables):
        conjugate = tuple([sum(part > i for part in r) for i in range(r[0])]) if r else ()
        row = _row(conjugate, rows, variables, p)
        value = int(conjugate == target) - sum([c * found[s] for s, c in row.items() if s != r and s in found])
        found[r] = value % p
    return tuple([(r, c) for r, c in found.items() if c])


def _row(
    product: Partition, rows: dict[Partition, dict[Partition, int]], variables: int, p: int
) -> dict[Partition, int]:
    """The product e_{t_1} e_{t_2} … on the basis m_r; products of fewer factors are remembered."""
    known = rows.get(product)
    if known is None:
        known = rows[product] = _times_elementary(product[-1], _row(product[:-1], rows, variables, p), variables, p)
    return known


def linear_roots(p: int, k: int, m: int) -> tuple[tuple[Partition, int], ...]:
    """P^k of the m-th elementary symmetric polynomial in roots with P x = x + x^p: pairs (r, c), the sum of c
    c_{r_1} c_{r_2} …

    1 + t(x + s x^p) has the elementary symmetric polynomials e_1 = t and e_p = ts.
    """
    if k > m:
        return ()
    return coefficients(p, p, (p,) * k + (1,) * (m - k))


def square_roots(p: int, k: int, m: int) -> tuple[tuple[Partition, int], ...]:
    """P^k of the m-th elementary symmetric polynomial in y = x^2, p odd: P y = y (1 + y^h)^2, h = (p-1)/2.

    1 + ty + 2ts y^{h+1} + ts^2 y^p: the sum over b + 2c = k of 2^b times the product e_1^{m-b-c} e_{h+1}^b e_p^c.
    """
    half = (p - 1) // 2
    total: dict[Partition, int] = {}
    for c in range(k // 2 + 1):
        b = k - 2 * c
        if b + c > m:
            continue
        target = tuple(sorted((p,) * c + (half + 1,) * b + (1,) * (m - b - c), reverse=True))
        for r, value in coefficients(p, p, target):
            total[r] = (total.get(r, 0) + 2**b * value) % p
    return tuple([(r, value) for r, value in total.items() if value])


def power_of_roots(p: int, k: int) -> tuple[tuple[Partition, int], ...]:
    """The k-th elementary symmetric polynomial in y^h, h = (p-1)/2, through those in y: 1 + s y^h has e_h = s alone."""
    half = (p - 1) // 2
    return coefficients(p, half, (half,) * k)
