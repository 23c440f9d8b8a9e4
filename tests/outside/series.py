"""Poincaré series of Eilenberg–MacLane spaces by two published theorems, with lists of integers.

`serre` multiplies out Serre's product (Serre 1953, section 3).  `iterated_bar` follows Cartan (Séminaire H. Cartan
1954-55): H_*(K(G, n+1)) is Tor over H_*(K(G, n)), where Tor of an exterior algebra on a class of degree m is a divided
power algebra on one of degree m + 1, and a divided power algebra is a product of truncated polynomial algebras.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

Series = list[int]


def times_geometric(series: Series, degree: int) -> None:
    """Multiply by 1/(1 - t^degree) in place."""
    for i in range(degree, len(series)):
        series[i] += series[i - degree]


def times_exterior(series: Series, degree: int) -> None:
    """Multiply by 1 + t^degree in place."""
    for i in range(len(series) - 1, degree - 1, -1):
        series[i] += series[i - degree]


def multiply(a: Series, b: Series) -> Series:
    """The product of two series, to the length of the first."""
    return [sum(a[j] * b[i - j] for j in range(i + 1)) for i in range(len(a))]


def one(top: int) -> Series:
    return [1] + [0] * top


def _heights(length: int, room: int, most: int | None = None) -> Iterator[tuple[int, ...]]:
    """h_1 >= … >= h_length >= 0 with the sum of 2^h at most the room."""
    if length == 0:
        yield ()
        return
    h = 0
    while 2**h <= room and (most is None or h <= most):
        for rest in _heights(length - 1, room - 2**h, h):
            yield (h, *rest)
        h += 1


def serre(n: int, top: int, integral: bool = False) -> Series:
    """The series of K(Z/2, n), or of K(Z, n) with n >= 2, to t^top."""
    series = one(top)
    for heights in _heights(n - 1, top - 1):
        if integral and (heights[0] != heights[1] if n > 2 else heights[0] != 0):
            continue
        times_geometric(series, 1 + sum(2**h for h in heights))
    return series


def iterated_bar(p: int, k: int, n: int, top: int) -> Series:
    """The mod p series of K(Z/p^k, n), or of K(Z, n) for k = 0, to t^top."""
    exterior, divided = Counter({1: 1}), Counter[int]()
    if k:
        divided[2] = 1
    for _ in range(n - 1):
        fresh_exterior, fresh_divided = Counter[int](), Counter[int]()
        for m, many in exterior.items():
            fresh_divided[m + 1] += many
        for m, many in divided.items():
            # Gamma[m] is the product over i of F_p[x]/(x^p) on classes of degree m p^i.
            while m <= top:
                if p == 2:
                    fresh_divided[m + 1] += many
                else:
                    fresh_exterior[m + 1] += many
                    fresh_divided[m * p + 2] += many
                m *= p
        exterior, divided = fresh_exterior, fresh_divided
    series = one(top)
    for m, many in exterior.items():
        for _ in range(many):
            times_exterior(series, m)
    for m, many in divided.items():
        for _ in range(many):
            times_geometric(series, m)
    return series
