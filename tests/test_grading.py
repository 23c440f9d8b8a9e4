"""Degree, excess and admissibility of words, against the theorems in which they occur."""

from __future__ import annotations

from collections import Counter

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from outside.series import (
    Series,
    iterated_bar,
    one,
    serre,
    times_exterior,
    times_geometric,
)

from opslang.ground.grading import Word, degree, excess, is_admissible, token_degree
from opslang.witness.polynomial import Ring


def admissible_words(p: int, top: int, last: tuple[int, ...] = ()) -> list[Word]:
    """Every admissible word up to a degree that ends in a given way, letter by letter from the right."""
    found: list[Word] = [last]
    frontier = found
    while frontier:
        frontier = [
            (a, *w)
            for w in frontier
            for a in range(1 if p == 2 else 0, top + 1)
            if degree((a, *w), p) <= top and is_admissible((a, *w), p)
        ]
        found = found + frontier
    return found


def test_degrees_of_letters() -> None:
    """|Sq^i| = i, |P^i| = 2i(p-1), |beta| = |beta_k| = 1 (Steenrod and Epstein 1962, ch. I and VI)."""
    assert [token_degree(t, 2) for t in (1, 2, 9, -2, -5)] == [1, 2, 9, 1, 1]
    assert [token_degree(t, 3) for t in (0, 1, 2, -2)] == [1, 4, 8, 1]
    assert [token_degree(t, 7) for t in (0, 1, 2, -3)] == [1, 12, 24, 1]


@settings(deadline=None, max_examples=100)
@given(st.sampled_from((2, 3, 5, 7)), st.lists(st.integers(-4, 9), max_size=6))
def test_degree_is_additive(p: int, letters: list[int]) -> None:
    word = tuple(t for t in letters if p > 2 or t)
    assert degree(word, p) == sum(token_degree(t, p) for t in word)


def test_admissible_words_by_hand() -> None:
    """i_j >= 2 i_(j+1); s_j >= p s_(j+1) + eps_j (Steenrod and Epstein 1962, ch. I and VI)."""
    assert all(is_admissible(w, 2) for w in [(), (1,), (7,), (2, 1), (4, 2, 1), (5, 2, 1), (2, -2)])
    assert not any(is_admissible(w, 2) for w in [(1, 1), (1, 2), (2, 2), (4, 2, 2), (3, 2), (1, -2)])
    assert all(
        is_admissible(w, 3)
        for w in [
            (),
            (0,),
            (1,),
            (0, 1, 0),
            (3, 1),
            (4, 0, 1),
            (0, 4, 0, 1, 0),
            (1, -2),
        ]
    )
    assert not any(is_admissible(w, 3) for w in [(0, 0), (1, 1), (2, 1), (3, 0, 1), (0, -2), (5, 2)])


def test_dimensions_of_the_algebra() -> None:
    """OEIS A000929 for degrees 0 … 20."""
    sizes = Counter(sum(word) for word in admissible_words(2, 20))
    assert [sizes[d] for d in range(21)] == [
        1,
        1,
        1,
        2,
        2,
        2,
        3,
        4,
        4,
        5,
        6,
        6,
        7,
        8,
        9,
        11,
        12,
        13,
        15,
        16,
        17,
    ]


@pytest.mark.parametrize(("p", "top"), [(3, 60), (5, 100), (7, 150)])
def test_dimensions_at_odd_primes(p: int, top: int) -> None:
    """As many as in the dual: |xi_i| = 2(p^i - 1), |tau_i| = 2 p^i - 1 (Milnor 1958, theorem 2)."""
    dual = one(top)
    for i in range(4):
        if i:
            times_geometric(dual, 2 * (p**i - 1))
        times_exterior(dual, 2 * p**i - 1)
    sizes = Counter(degree(word, p) for word in admissible_words(p, top))
    assert [sizes[d] for d in range(top + 1)] == dual


def of_generators(words: list[Word], p: int, n: int, top: int) -> Series:
    """The series of the free graded-commutative algebra on the words of admitted excess on a class of degree n."""
    series = one(top)
    for word in words:
        begins = bool(word) and word[0] <= 0
        if excess(word, p) < n or (p > 2 and begins and excess(word, p) == n):
            total = n + degree(word, p)
            if total <= top:
                (times_exterior if p > 2 and total % 2 else times_geometric)(series, total)
    return series


def ends_in_bockstein(word: Word, p: int) -> bool:
    return bool(word) and word[-1] == (1 if p == 2 else 0)


@pytest.mark.parametrize("n", [1, 2, 3, 4, 5])
def test_excess_gives_serres_series(n: int) -> None:
    """H^*(K(Z/2, n)) is polynomial on the words of excess < n; K(Z, n): not ending in Sq^1 (Serre 1953)."""
    words = admissible_words(2, 40 - n)
    assert of_generators(words, 2, n, 40) == serre(n, 40)
    if n > 1:
        integral = [word for word in words if not ends_in_bockstein(word, 2)]
        assert of_generators(integral, 2, n, 40) == serre(n, 40, integral=True)


@pytest.mark.parametrize(("p", "top"), [(3, 50), (5, 90), (7, 130)])
@pytest.mark.parametrize("n", [1, 2, 3, 4, 5])
def test_excess_gives_cartans_series(p: int, top: int, n: int) -> None:
    """H^*(K(Z/p, n)), p odd, and K(Z, n), against the iterated bar construction (Cartan 1954-55)."""
    words = admissible_words(p, top - n)
    assert of_generators(words, p, n, top) == iterated_bar(p, 1, n, top)
    if n > 1:
        integral = [word for word in words if not ends_in_bockstein(word, p)]
        assert of_generators(integral, p, n, top) == iterated_bar(p, 0, n, top)


@pytest.mark.parametrize(("p", "n", "top"), [(2, 2, 40), (2, 3, 30), (3, 2, 50), (3, 3, 40), (5, 2, 90)])
def test_words_that_end_in_a_higher_bockstein(p: int, n: int, top: int) -> None:
    """K(Z/p^k, n), k >= 2: the last Bockstein read as beta_k has the degree and excess of the Bockstein."""
    plain = [word for word in admissible_words(p, top - n) if not ends_in_bockstein(word, p)]
    higher = admissible_words(p, top - n, last=(-2,))
    expected = serre(n, top) if p == 2 else iterated_bar(p, 1, n, top)
    assert of_generators(plain + higher, p, n, top) == expected


@pytest.mark.parametrize(("p", "top"), [(2, 9), (3, 21), (5, 34)])
def test_words_vanish_below_their_excess(p: int, top: int) -> None:
    """A word of excess e is 0 on every class of degree < e, and not on the product of e classes that shows it.

    Steenrod and Epstein 1962, ch. I and VI; the classes are products in F_2[x_i], or in Lambda[y_i] (x) F_p[x_i].
    """
    for word in admissible_words(p, top):
        least = excess(word, p)
        shown = False
        for n in range(1, least + 1):
            for odd in range(n % 2, n + 1, 2) if p > 2 else [n]:
                degrees = (1,) * odd + (2,) * ((n - odd) // 2)
                ring = Ring(p, (1,) * len(degrees))
                image = ring.act(word, ring.monomial(*degrees))
                assert n == least or not image, (word, degrees)
                shown = shown or bool(image)
        assert shown or least == 0, word


def test_excess_by_hand() -> None:
    """e(Sq^I) = 2 i_1 - |I|; e = 2p s_1 + 2 eps_0 - |I| at odd p (Serre 1953; Cartan 1954-55)."""
    assert [excess(w, 2) for w in [(), (1,), (4,), (2, 1), (4, 2, 1), (5, 2), (2, -2), (-2,)]] == [
        0,
        1,
        4,
        1,
        1,
        3,
        1,
        1,
    ]
    assert [excess(w, 3) for w in [(), (0,), (1,), (0, 1), (1, 0), (0, 1, 0), (3, 1), (-2,)]] == [
        0,
        1,
        2,
        3,
        1,
        2,
        2,
        1,
    ]
