"""Reduced powers on elementary symmetric polynomials, by the splitting principle.  Knows numbers and partitions only.

The total power of the total class prod_i (1 + t x_i) is prod_i (1 + t P_s(x_i)); where P_s(x) = x + …, that is the
total class times prod_i (1 + s z_i + …), z_i = t x_i^p / (1 + t x_i) and the like.  Its coefficient G_k of s^k comes
from Newton's identities, k G_k = sum_j ± pi_j G_{k-j}, where pi_j is a sum over i of powers of x_i and of 1 / (1 + t
x_i), so a combination of power sums of the x_i; those are polynomials in the classes by Newton's identities once
more.  All of it is done over the integers and reduced at the end.  Where there are few partitions a triangular system
is quicker.  Source: Borel and Serre 1953 (the splitting principle); the arrangement is our own.

A polynomial in classes c_1, c_2, … is a dict from partitions (the indices of a product) to coefficients."""

from __future__ import annotations

from functools import lru_cache
from math import comb

from opslang.spaces.family import NotKnown
from opslang.spaces.triangular import FEW, coefficients, count

Partition = tuple[int, ...]
"""Parts in decreasing order, all at least 1."""
Classes = dict[Partition, int]
Rows = tuple[tuple[Partition, int], ...]

MOST_PRODUCTS = 1_500_000
"""Products of terms that one answer may take: about two seconds."""


class Work:
    """A count of products, emptied for each answer."""

    left = MOST_PRODUCTS


def _times(f: Classes, g: Classes) -> Classes:
    Work.left -= len(f) * len(g)
    if Work.left < 0:
        raise NotKnown(f"the splitting principle would need more than {MOST_PRODUCTS:,} products of classes here")
    result: Classes = {}
    for r, c in f.items():
        for s, d in g.items():
            key = tuple(sorted(r + s, reverse=True)) if r and s else r or s
            result[key] = result.get(key, 0) + c * d
    return {key: c for key, c in result.items() if c}


def _add(into: Classes, f: Classes, factor: int) -> None:
    for key, c in f.items():
        into[key] = into.get(key, 0) + factor * c


class Roots:
    """Power sums of the roots of a bundle whose classes beyond `largest` are 0 (None: no end)."""

    def __init__(self, largest: int | None) -> None:
        self.largest = largest
        self._sums: list[Classes] = [{}]

    def has(self, i: int) -> bool:
        """Whether c_i can be other than 0."""
        return self.largest is None or i <= self.largest

    def power_sum(self, n: int) -> Classes:
        """The sum of the x_i^n, n >= 1: (-1)^{n-1} n c_n + sum_{i<n} (-1)^{i-1} c_i p_{n-i} (Newton)."""
        while len(self._sums) <= n:
            m = len(self._sums)
            total: Classes = {}
            if self.has(m):
                total[(m,)] = (-1) ** (m - 1) * m
            for i in range(1, m):
                if self.has(i):
                    _add(total, _times({(i,): 1}, self._sums[m - i]), (-1) ** (i - 1))
            self._sums.append({key: c for key, c in total.items() if c})
        return self._sums[n]


@lru_cache(maxsize=16)
def _roots(largest: int | None) -> Roots:
    return Roots(largest)


Graded = dict[int, Classes]
"""A power series in t: the coefficients by degree."""


def _over(roots: Roots, exponent: int, q: int, to: int) -> Graded:
    """The sum over i of t^q x_i^exponent (1 + t x_i)^{-q}, up to t^to."""
    if not q:
        return {0: roots.power_sum(exponent)}
    found: Graded = {}
    for a in range(to - q + 1):
        sums = roots.power_sum(exponent + a)
        factor = (-1) ** a * comb(q + a - 1, a)
        found[q + a] = {key: factor * c for key, c in sums.items()}
    return found


def _newton(sums: list[Graded], to: int) -> list[Graded]:
    """G_0, G_1, … with k G_k = sum_j sums[j] G_{k-j}, up to t^to; `sums[0]` is not used."""
    found: list[Graded] = [{0: {(): 1}}]
    for k in range(1, len(sums)):
        total: Graded = {}
        for j in range(1, k + 1):
            for b, f in sums[j].items():
                for a, g in found[k - j].items():
                    if a + b <= to:
                        _add(total.setdefault(a + b, {}), _times(f, g), 1)
        found.append({b: {key: c // k for key, c in f.items() if c} for b, f in total.items()})
    return found


def _reduced(f: Classes, p: int) -> Rows:
    return tuple([(key, c % p) for key, c in sorted(f.items()) if c % p])


def _with_total_class(roots: Roots, series: Graded, m: int) -> Classes:
    """The coefficient of t^m in the total class times a series."""
    total: Classes = {}
    for b, f in series.items():
        a = m - b
        if a == 0:
            _add(total, f, 1)
        elif a > 0 and roots.has(a):
            _add(total, _times({(a,): 1}, f), 1)
    return total


@lru_cache(maxsize=512)
def linear_roots(p: int, k: int, m: int, largest: int | None = None) -> Rows:
    """P^k of the m-th elementary symmetric polynomial in roots with P x = x + x^p: pairs (r, c), for the sum of the
    c c_{r_1} c_{r_2} …

    1 + t(x + s x^p) = (1 + tx) (1 + s z), z = t x^p / (1 + tx).
    """
    if k > m:
        return ()
    degree = m + k * (p - 1)
    if count(degree, p, largest) <= FEW:
        # 1 + t(x + s x^p) has the elementary symmetric polynomials e_1 = t and e_p = ts
        return coefficients(p, p, (p,) * k + (1,) * (m - k), largest)
    Work.left = MOST_PRODUCTS
    roots = _roots(largest)
    sums: list[Graded] = [{}]
    for j in range(1, k + 1):
        sign = (-1) ** (j - 1)
        sums.append({b: {key: sign * c for key, c in f.items()} for b, f in _over(roots, p * j, j, m).items()})
    return _reduced(_with_total_class(roots, _newton(sums, m)[k], m), p)


def _square_roots_by_partitions(p: int, k: int, m: int, largest: int | None) -> Rows:
    """1 + ty + 2ts y^{h+1} + ts^2 y^p: the sum over b + 2c = k of 2^b times the product e_1^{m-b-c} e_{h+1}^b e_p^c."""
    total: Classes = {}
    for c in range(k // 2 + 1):
        b = k - 2 * c
        if b + c <= m:
            target = tuple(sorted((p,) * c + ((p + 1) // 2,) * b + (1,) * (m - b - c), reverse=True))
            _add(total, dict(coefficients(p, p, target, largest)), 2**b)
    return _reduced(total, p)


@lru_cache(maxsize=512)
def square_roots(p: int, k: int, m: int, largest: int | None = None) -> Rows:
    """P^k of the m-th elementary symmetric polynomial in y = x^2, p odd: P y = y (1 + s y^h)^2, h = (p-1)/2.

    1 + ty (1 + s y^h)^2 = (1 + ty) (1 + 2sz + s^2 w), z = t y^{h+1} / (1 + ty), w = t y^{2h+1} / (1 + ty); with
    1 + 2sz + s^2 w = (1 - alpha s) (1 - beta s) the power sums alpha^j + beta^j follow q_j = -2z q_{j-1} - w q_{j-2}.
    """
    half = (p - 1) // 2
    if count(m + half * k, p, largest) <= FEW:
        return _square_roots_by_partitions(p, k, m, largest)
    Work.left = MOST_PRODUCTS
    roots = _roots(largest)
    # q_j as a combination of z^a w^b
    powers: list[dict[tuple[int, int], int]] = [{(0, 0): 2}, {(1, 0): -2}]
    while len(powers) <= k:
        fresh: dict[tuple[int, int], int] = {}
        for (a, b), c in powers[-1].items():
            fresh[a + 1, b] = fresh.get((a + 1, b), 0) - 2 * c
        for (a, b), c in powers[-2].items():
            fresh[a, b + 1] = fresh.get((a, b + 1), 0) - c
        powers.append(fresh)
    sums: list[Graded] = [{}]
    for j in range(1, k + 1):
        total: Graded = {}
        for (a, b), c in powers[j].items():
            for degree, f in _over(roots, (half + 1) * a + p * b, a + b, m).items():
                _add(total.setdefault(degree, {}), f, -c)
        sums.append(total)
    return _reduced(_with_total_class(roots, _newton(sums, m)[k], m), p)


@lru_cache(maxsize=512)
def powers_of_roots(p: int, k: int, exponent: int, largest: int | None = None) -> Rows:
    """The k-th elementary symmetric polynomial in the x_i^exponent, through those in the x_i, mod p."""
    if count(exponent * k, exponent, largest) <= FEW:
        # 1 + s x^e has the one elementary symmetric polynomial e_e = s
        return coefficients(p, exponent, (exponent,) * k, largest)
    Work.left = MOST_PRODUCTS
    roots = _roots(largest)
    sums: list[Graded] = [{}]
    for j in range(1, k + 1):
        sign = (-1) ** (j - 1)
        sums.append({0: {key: sign * c for key, c in roots.power_sum(exponent * j).items()}})
    return _reduced(_newton(sums, 0)[k].get(0, {}), p)
