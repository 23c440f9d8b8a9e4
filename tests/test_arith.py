"""Binomials, digits, primality and p-parts, against the standard library, sympy and other methods."""

from __future__ import annotations

from math import comb

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy import isprime, multiplicity
from sympy.ntheory.residue_ntheory import binomial_mod as sympy_binomial_mod

from opslang.ground.arith import binomial_mod, digits, is_prime, p_part

PRIMES = (2, 3, 5, 7, 11, 13)


@pytest.mark.parametrize("p", PRIMES)
def test_small_binomials(p: int) -> None:
    for n in range(130):
        for k in range(n + 3):
            assert binomial_mod(n, k, p) == comb(n, k) % p


def test_binomials_outside_the_triangle_are_zero() -> None:
    """A lower argument outside 0 … upper, and every negative upper argument (the convention of Adem's relations)."""
    for p in PRIMES:
        assert binomial_mod(-1, 0, p) == binomial_mod(-3, 2, p) == binomial_mod(5, -1, p) == binomial_mod(5, 6, p) == 0
        assert binomial_mod(0, 0, p) == 1


def exponent_in_binomial(n: int, k: int, p: int) -> int:
    """The exponent of p in C(n, k): carries when k and n-k are added to base p (Kummer 1852)."""
    carries = carry = 0
    a, b = k, n - k
    while a or b or carry:
        carry = int(a % p + b % p + carry >= p)
        carries += carry
        a, b = a // p, b // p
    return carries


@settings(deadline=None, max_examples=150)
@given(st.sampled_from(PRIMES), st.integers(0, 10**30), st.integers(0, 10**30))
def test_big_binomials_vanish_by_kummer(p: int, n: int, k: int) -> None:
    if k > n:
        n, k = k, n
    assert (binomial_mod(n, k, p) == 0) == (exponent_in_binomial(n, k, p) > 0)


@settings(deadline=None, max_examples=80)
@given(st.sampled_from(PRIMES), st.integers(0, 10**6), st.data())
def test_big_binomials_against_sympy(p: int, n: int, data: st.DataObject) -> None:
    k = data.draw(st.integers(0, n))
    assert binomial_mod(n, k, p) == sympy_binomial_mod(n, k, p)


@settings(deadline=None, max_examples=80)
@given(st.sampled_from(PRIMES), st.integers(1, 10**40), st.integers(1, 10**40))
def test_pascals_rule(p: int, n: int, k: int) -> None:
    expected = (binomial_mod(n - 1, k - 1, p) + binomial_mod(n - 1, k, p)) % p
    assert binomial_mod(n, k, p) == expected


def test_binomials_at_a_big_prime() -> None:
    for p in (101, 1009):
        for n in range(0, 3 * p, 37):
            for k in range(0, n + 1, 11):
                assert binomial_mod(n, k, p) == comb(n, k) % p


@settings(deadline=None, max_examples=100)
@given(st.integers(0, 10**40), st.integers(2, 50))
def test_digits_rebuild_the_number(n: int, p: int) -> None:
    found = list(digits(n, p))
    assert all(0 <= d < p for d in found)
    assert sum(d * p**i for i, d in enumerate(found)) == n
    assert not found or found[-1] > 0


def test_primes_against_sympy() -> None:
    assert [n for n in range(-3, 5000) if is_prime(n)] == [n for n in range(-3, 5000) if isprime(n)]


@settings(deadline=None, max_examples=100)
@given(st.integers(2, 10**20))
def test_big_primes_against_sympy(n: int) -> None:
    assert is_prime(n) == isprime(n)


def test_numbers_that_fool_a_weak_test() -> None:
    """Carmichael numbers, and a strong pseudoprime to the bases 2, 3, 5 and 7 (OEIS A002997, A014233)."""
    assert not any(map(is_prime, (561, 1105, 1729, 2465, 2821, 6601, 8911, 3215031751)))
    assert is_prime(2**61 - 1) and not is_prime((2**61 - 1) * (2**31 - 1))


@settings(deadline=None, max_examples=100)
@given(st.integers(1, 10**12), st.sampled_from(PRIMES))
def test_p_part_against_sympy(m: int, p: int) -> None:
    assert p_part(m, p) == multiplicity(p, m)
    assert p_part(m * p**3, p) == p_part(m, p) + 3
