"""Binomials modulo a prime, digits, primality.  Knows numbers and nothing else."""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache
from math import comb


@lru_cache(maxsize=1 << 14)
def _small_binomial(n: int, k: int, p: int) -> int:
    if k > n:
        return 0
    if p <= 64:
        return comb(n, k) % p
    # For a large prime the numbers stay below p, so the quotient of the products is taken modulo p.
    k = min(k, n - k)
    top = bottom = 1
    for i in range(k):
        top = top * (n - i) % p
        bottom = bottom * (i + 1) % p
    return top * pow(bottom, -1, p) % p


def binomial_mod(n: int, k: int, p: int) -> int:
    """C(n, k) mod p, in 0 … p-1, by Lucas' theorem; 0 unless 0 <= k <= n.

    Negative upper arguments are read as 0 (the convention of Adem's relations in range).
    Source: Lucas 1878; Steenrod and Epstein 1962, ch. I, lemma 2.6.
    """
    if k < 0 or n < k:
        return 0
    if p == 2:
        return int(n & k == k)
    value = 1
    while k:
        n, top = divmod(n, p)
        k, bottom = divmod(k, p)
        value = value * _small_binomial(top, bottom, p) % p
        if not value:
            return 0
    return value


def digits(n: int, p: int) -> Iterator[int]:
    """The base-p digits of n >= 0, lowest first."""
    while n:
        n, digit = divmod(n, p)
        yield digit


_WITNESSES = (2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37)


def is_prime(n: int) -> bool:
    """Whether n is a prime, for n < 3.3e24 (Miller and Rabin with the first twelve primes as bases; Sorenson and
    Webster 2017)."""
    if n < 2:
        return False
    for q in _WITNESSES:
        if n % q == 0:
            return n == q
    odd, twos = n - 1, 0
    while odd % 2 == 0:
        odd //= 2
        twos += 1
    for base in _WITNESSES:
        x = pow(base, odd, n)
        if x in (1, n - 1):
            continue
        for _ in range(twos - 1):
            x = x * x % n
            if x == n - 1:
                break
        else:
            return False
    return True


def p_part(m: int, p: int) -> int:
    """The exponent of p in m > 0: Z/m localised at p is Z/p^k with this k."""
    k = 0
    while m % p == 0:
        m //= p
        k += 1
    return k
