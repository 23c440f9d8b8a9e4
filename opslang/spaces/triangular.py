"""Symmetric polynomials in few variables, by a triangular system: the splitting principle where partitions are few.

Where 1 + t P_s(x) is a polynomial in the root x, say prod_j (1 + theta_j x) with N factors, the total power of the
total class is prod_j c(theta_j), the sum over partitions r of at most N parts of m_r(theta) c_{r_1} c_{r_2} …; and
the elementary symmetric polynomials of the theta_j are the coefficients of 1 + t P_s(x).  So what is needed is the
coefficient of one product of elementary symmetric polynomials in each monomial symmetric polynomial m_r in N
variables.  Source: Borel and Serre 1953 (the splitting principle); the arrangement is our own."""

from __future__ import annotations

from functools import lru_cache
from math import comb

Partition = tuple[int, ...]
"""Parts in decreasing order, all at least 1."""

FEW = 200
"""So many partitions are gone through in about two seconds; beyond it Newton's identities are quicker."""


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


def count(n: int, parts: int, largest: int | None = None) -> int:
    """The number of partitions of n into at most `parts` parts, each at most `largest`."""
    rows = [[1] + [0] * n] + [[0] * (n + 1) for _ in range(parts)]
    for part in range(1, min(n, n if largest is None else largest) + 1):
        for used in range(1, parts + 1):
            for k in range(part, n + 1):
                rows[used][k] += rows[used - 1][k - part]
    return sum(row[n] for row in rows)


def _times_elementary(r: int, f: dict[Partition, int], variables: int, p: int, largest: int) -> dict[Partition, int]:
    """e_r times a symmetric polynomial given on the basis m_r, in so many variables, mod p; larger parts are left
    out.
    """
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
            if left or chosen.get(largest):
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
def coefficients(
    p: int, variables: int, target: Partition, largest: int | None = None
) -> tuple[tuple[Partition, int], ...]:
    """For each partition r with parts at most `largest` the coefficient mod p of e_target = e_{t_1} e_{t_2} … in m_r,
    in so many variables; nonzero ones only.

    Where c_i = 0 beyond a rank, only the partitions with parts up to it matter, and they come first in the system.
    """
    degree = sum(target)
    most = degree if largest is None else min(largest, degree)
    rows: dict[Partition, dict[Partition, int]] = {(): {(): 1}}
    found: dict[Partition, int] = {}
    # m_r first occurs in e_{r'}, r' the conjugate partition; smaller partitions are known by then.
    for r in partitions(degree, variables, most):
        conjugate = tuple([sum(part > i for part in r) for i in range(r[0])]) if r else ()
        row = _row(conjugate, rows, variables, p, most)
        value = int(conjugate == target) - sum([c * found[s] for s, c in row.items() if s != r and s in found])
        found[r] = value % p
    return tuple([(r, c) for r, c in found.items() if c])


def _row(
    product: Partition, rows: dict[Partition, dict[Partition, int]], variables: int, p: int, largest: int
) -> dict[Partition, int]:
    """The product e_{t_1} e_{t_2} … on the basis m_r; products of fewer factors are remembered."""
    known = rows.get(product)
    if known is None:
        below = _row(product[:-1], rows, variables, p, largest)
        known = rows[product] = _times_elementary(product[-1], below, variables, p, largest)
    return known
