"""The witness itself, checked against other people's polynomials, published theorems and its own two routes."""

from __future__ import annotations

import os
import random
import subprocess
import sys
from itertools import permutations
from math import comb, factorial
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from outside.flint_action import FlintPolynomials
from outside.sympy_action import SympyPolynomials

from opslang.ground.grading import degree, is_admissible
from opslang.witness import detect, milnor, polynomial

LIBRARIES = (FlintPolynomials, SympyPolynomials)
PRIMES = (2, 3, 5)


def words_at(p: int, letters: int, most: int) -> st.SearchStrategy[tuple[int, ...]]:
    return st.lists(st.integers(1 if p == 2 else 0, most), max_size=letters).map(tuple)


def prime_and_words(letters: int, most: int, many: int) -> st.SearchStrategy[Any]:
    return st.sampled_from((2, 3, 5, 7)).flatmap(
        lambda p: st.tuples(st.just(p), *[words_at(p, letters, most) for _ in range(many)])
    )


# --- the libraries ------------------------------------------------------------------------------


def outside_polynomial(library: Any, f: dict[tuple[int, ...], int]) -> Any:
    """A polynomial of the witness, rebuilt in a library: degree m is x^m at 2, y^(m mod 2) x^(m div 2) at odd p."""
    zero = total = 0 * library.t
    for m, coefficient in f.items():
        term = zero + coefficient
        for i, d in enumerate(m):
            if library.p == 2:
                term = term * library.x[i] ** d
            else:
                term = term * library.x[i] ** (d // 2) * library.y[i] ** (d % 2)
        total = total + term
    return total


def read_back(library: Any, f: Any) -> dict[tuple[int, ...], int]:
    n = library.n
    scale = 1 if library.p == 2 else 2
    return {tuple(scale * x + y for x, y in zip(m[:n], m[n:])): c for m, c in library.terms(f).items()}


def act_outside(library: Any, word: tuple[int, ...], f: Any) -> Any:
    for token in reversed(word):
        f = library.power(token, f) if token else library.beta(f)
    return f


@pytest.mark.parametrize("kind", LIBRARIES)
@settings(deadline=None, max_examples=40)
@given(st.data())
def test_the_action_agrees_with_the_libraries(kind: Any, data: Any) -> None:
    p = data.draw(st.sampled_from(PRIMES))
    monomials = st.tuples(*[st.integers(0, 7)] * 3)
    f = data.draw(st.dictionaries(monomials, st.integers(1, p - 1), min_size=1, max_size=4))
    word = data.draw(words_at(p, 3, 5))
    library = kind(p, 3)
    expected = read_back(library, act_outside(library, word, outside_polynomial(library, f)))
    assert polynomial.act(word, f, p) == expected


ADEM_RANGE = {2: 8, 3: 5, 5: 6}
"""a + b at most this; at p = 5 the first relation with two terms on the right has b = 2."""


def adem_two(a: int, b: int) -> dict[tuple[int, ...], int]:
    """The right side of Adem's relation at 2 (Adem 1952; Steenrod and Epstein 1962, ch. I, theorem 1.1)."""
    return {(a + b - j, j): comb(b - 1 - j, a - 2 * j) for j in range(a // 2 + 1) if b - 1 - j >= 0}


def adem_odd(a: int, b: int, p: int, with_beta: bool) -> dict[tuple[int, ...], int]:
    """The right side at odd p (Steenrod and Epstein 1962, ch. VI): P^a P^b, or P^a beta P^b."""

    def c(n: int, k: int) -> int:
        return comb(n, k) if 0 <= k <= n else 0

    total: dict[tuple[int, ...], int] = {}
    for j in range(a // p + 1):
        sign = -1 if (a + j) % 2 else 1
        i = a + b - j
        if not with_beta:
            total[i, j] = sign * c((p - 1) * (b - j) - 1, a - p * j)
            continue
        total[0, i, j] = sign * c((p - 1) * (b - j), a - p * j)
        total[i, 0, j] = -sign * c((p - 1) * (b - j) - 1, a - p * j - 1)
    return total


def drop_units(word: tuple[int, ...]) -> tuple[int, ...]:
    """P^0 = 1 has no token: the last 0 of P^i P^0 or P^i beta P^0 stands for it."""
    return word[:-1] if word[-1] == 0 else word


def relations() -> list[Any]:
    found = []
    for p, most in ADEM_RANGE.items():
        for b in range(1, most):
            for a in range(1, most - b + 1):
                if p == 2 and a < 2 * b:
                    found.append((2, (a, b), adem_two(a, b)))
                elif p > 2 and a < p * b:
                    found.append((p, (a, b), adem_odd(a, b, p, False)))
                if p > 2 and a <= p * b:
                    found.append((p, (a, 0, b), adem_odd(a, b, p, True)))
    return found


@pytest.mark.parametrize("kind", LIBRARIES)
def test_adem_relations_are_identities_between_actions(kind: Any) -> None:
    """Both sides act alike on x_1 … x_N (p = 2) and on y_1 x_2 … x_N, N large enough to detect the difference."""
    for p, left, right in relations():
        if kind is SympyPolynomials and sum(left) > 5:
            continue  # sympy's substitution is slow; flint does the whole range
        n = sum(left) + (0 in left)
        library = kind(p, n)
        f = library.x[0] ** 0
        for i in range(n):
            f = f * (library.y[i] if 0 in left and i == 0 else library.x[i])
        total = act_outside(library, left, f)
        for word, coefficient in right.items():
            if coefficient % p:
                total = total - coefficient * act_outside(library, drop_units(word), f)
        assert not library.terms(total), (p, left)


def test_adem_relations_hold_in_the_witness() -> None:
    """The same relations, further out, in the orbit witness and in Milnor's basis."""
    for p in (2, 3, 5, 7):
        for b in range(1, 9):
            for a in range(1, p * b + 1):
                cases = [] if a == p * b else [((a, b), adem_two(a, b) if p == 2 else adem_odd(a, b, p, False))]
                cases += [((a, 0, b), adem_odd(a, b, p, True))] if p > 2 else []
                for left, right in cases:
                    terms = {drop_units(w): c % p for w, c in right.items() if c % p}
                    assert milnor.combine({left: 1}, p) == milnor.combine(terms, p), (p, left)
                    if a + b < 14:
                        assert detect.same_action({left: 1}, terms, p), (p, left)


def test_the_sympy_reference_without_flint() -> None:
    """sympy's element types change when python-flint is there: the reference gives the same without it."""
    script = (
        "from outside.sympy_action import SympyPolynomials as S\n"
        "s = S(3, 2); f = s.x[0]**2 * s.x[1] * s.y[1]\n"
        "print(sorted(s.terms(s.beta(s.power(2, f))).items()))\n"
    )
    answers = set()
    for types in ("python", "flint"):
        environment = {**os.environ, "SYMPY_GROUND_TYPES": types, "PYTHONPATH": str(Path(__file__).parent)}
        run = subprocess.run(
            [sys.executable, "-c", script], env=environment, capture_output=True, text=True, check=True
        )
        answers.add(run.stdout)
    library = FlintPolynomials(3, 2)
    f = library.x[0] ** 2 * library.x[1] * library.y[1]
    assert answers == {f"{sorted(library.terms(library.beta(library.power(2, f))).items())}\n"}


# --- the two forms of the polynomial witness ----------------------------------------------------


def spread(f: detect.Orbits, p: int) -> polynomial.Polynomial:
    """Orbit sums written out as polynomials in slots."""
    total: polynomial.Polynomial = {}
    for (levels, counts), coefficient in f.items():
        singly = [1 if level < 0 else 2 * p**level for level in levels]
        grouped = [(1 if p == 2 else 2) * p**k for k, n in enumerate(counts) for _ in range(n)]
        for arrangement in set(permutations(grouped)):
            total[(*singly, *arrangement)] = coefficient
    return total


@settings(deadline=None, max_examples=60)
@given(st.sampled_from(PRIMES).flatmap(lambda p: st.tuples(st.just(p), words_at(p, 4, 4))))
def test_orbits_are_polynomials(case: Any) -> None:
    p, word = case
    bocksteins = 0 if p == 2 else 2
    start = detect.detecting_class(bocksteins, 5 - bocksteins)
    assert spread(detect.act_on_orbits(word, start, p), p) == polynomial.act(word, spread(start, p), p)


# --- slots of other orders ----------------------------------------------------------------------


def test_a_slot_of_order_two_at_two() -> None:
    """H^*(K(Z/4, 1); F_2) = Lambda[y] (x) F_2[x]: y^2 = 0, Sq^1 y = 0, beta_2 y = x, Sq^2 x = x^2 (common practice)."""
    ring = polynomial.Ring(2, (2,))
    y, x = ring.monomial(1), ring.monomial(2)
    assert ring.product(y, y) == {}
    assert ring.act((1,), y) == {}
    assert ring.act((-2,), y) == x
    assert ring.act((2,), x) == ring.product(x, x)
    assert ring.act((2,), ring.product(x, y)) == ring.product(ring.product(x, x), y)


def test_graded_commutativity() -> None:
    """y_2 y_1 = -y_1 y_2, and beta is a derivation with its sign (Steenrod and Epstein 1962, ch. VI)."""
    ring = polynomial.Ring(3, (1, 1))
    first, second = ring.class_in(0, 1), ring.class_in(1, 1)
    forward = ring.product(first, second)
    assert polynomial.add(forward, ring.product(second, first), 3) == {}
    left = ring.product(ring.act((0,), first), second)
    right = ring.product(first, ring.act((0,), second))
    assert ring.act((0,), forward) == polynomial.add(left, right, 3, scale=-1)


def test_complex_projective_space() -> None:
    """P^i y^m = C(m, i) y^(m + i(p-1)), Sq^(2i) y^m = C(m, i) y^(m+i) (Steenrod and Epstein 1962, ch. I and VI)."""
    for p in (2, 3, 5):
        ring = polynomial.Ring(p, (0,))
        for m in range(8):
            for i in range(1, 8):
                token = 2 * i if p == 2 else i
                expected = comb(m, i) % p
                image = {(2 * (m + i * (p - 1)),): expected} if expected else {}
                assert ring.act((token,), ring.power(ring.monomial(2), m)) == image
        with pytest.raises(ValueError, match="odd degree"):
            ring.class_in(0, 3)


# --- Milnor's basis -----------------------------------------------------------------------------


@settings(deadline=None, max_examples=80)
@given(prime_and_words(3, 5, 3))
def test_milnors_product_is_associative(case: Any) -> None:
    p, *words = case
    a, b, c = (milnor.to_milnor(word, p) for word in words)
    assert milnor.product(milnor.product(a, b, p), c, p) == milnor.product(a, milnor.product(b, c, p), p)


@settings(deadline=None, max_examples=120)
@given(prime_and_words(4, 6, 1))
def test_the_two_routes_agree(case: Any) -> None:
    """Words read off Milnor's basis are admissible and act on polynomials as the word they came from."""
    p, word = case
    terms = milnor.normal_form(word, p)
    assert all(is_admissible(w, p) and degree(w, p) == degree(word, p) for w in terms)
    assert detect.same_action({word: 1}, terms, p)


def admissible_words(p: int, top: int) -> list[tuple[int, ...]]:
    """Every admissible word up to a degree, letter by letter."""
    found: list[tuple[int, ...]] = [()]
    frontier = found
    while frontier:
        letters = range(1 if p == 2 else 0, top + 1)
        frontier = [
            (a, *w) for w in frontier for a in letters if degree((a, *w), p) <= top and is_admissible((a, *w), p)
        ]
        found = found + frontier
    return found


@pytest.mark.parametrize(("p", "top"), [(2, 30), (3, 60), (5, 120)])
def test_leading_terms_are_triangular(p: int, top: int) -> None:
    """Each admissible word has a leading term of its own, which gives it back (Milnor 1958, lemma 8)."""
    words = admissible_words(p, top)
    for word in words:
        assert milnor.admissible(milnor.to_milnor(word, p), p) == {word: 1}


def test_dimensions_of_the_algebra() -> None:
    """OEIS A000929, degrees 0 … 20, in both bases."""
    expected = [1, 1, 1, 2, 2, 2, 3, 4, 4, 5, 6, 6, 7, 8, 9, 11, 12, 13, 15, 16, 17]
    words = admissible_words(2, 20)
    for d, dimension in enumerate(expected):
        assert sum(1 for w in words if sum(w) == d) == dimension
        assert len(set(milnor.partitions(d, 2))) == dimension


@pytest.mark.parametrize("p", [2, 3, 5, 7])
def test_primitives(p: int) -> None:
    """Q_0 = beta, Q_(k+1) = [P^(p^k), Q_k], at 2 [Sq^(2^(k+1)), Q_k]; they anticommute, Q_k^2 = 0 (Milnor 1958)."""
    assert milnor.q(0, p) == milnor.to_milnor((1,) if p == 2 else (0,), p)
    for k in range(3):
        letter = milnor.letter(2 ** (k + 1) if p == 2 else p**k, p)
        before, after = milnor.product(letter, milnor.q(k, p), p), milnor.product(milnor.q(k, p), letter, p)
        assert milnor.add(before, after, p, scale=-1) == milnor.q(k + 1, p)
        for j in range(3):
            one = milnor.product(milnor.q(j, p), milnor.q(k, p), p)
            assert milnor.add(one, milnor.product(milnor.q(k, p), milnor.q(j, p), p), p) == {}
        assert milnor.product(milnor.q(k, p), milnor.q(k, p), p) == {}


@pytest.mark.parametrize("p", [2, 3, 5])
def test_conjugation(p: int) -> None:
    """sum_i P^i chi(P^(n-i)) = 0 for n > 0, and chi chi = 1 (Milnor 1958, section 7)."""
    for n in range(1, 14):
        total: milnor.Milnor = {}
        for i in range(n + 1):
            left = milnor.to_milnor((i,) if i else (), p)
            right = milnor.conjugate((n - i,) if n - i else (), p)
            total = milnor.add(total, milnor.product(left, right, p), p)
        assert total == {}
    for word in admissible_words(p, 12 * (p - 1)):
        twice: milnor.Milnor = {}
        for inner, coefficient in milnor.admissible(milnor.conjugate(word, p), p).items():
            twice = milnor.add(twice, milnor.conjugate(inner, p), p, scale=coefficient)
        assert twice == milnor.to_milnor(word, p), word


def test_conjugates_of_straffin_and_davis() -> None:
    """chi(Sq^(2^r - 1)) = Sq^(2^(r-1)) chi(Sq^(2^(r-1) - 1)) (Straffin 1972; Davis 1974)."""
    for r in range(1, 6):
        short = milnor.conjugate((2 ** (r - 1) - 1,) if r > 1 else (), 2)
        assert milnor.conjugate((2**r - 1,), 2) == milnor.product(milnor.letter(2 ** (r - 1), 2), short, 2)


def test_powers_of_the_first_power() -> None:
    """(P^1)^i = i! P^i, so (P^1)^p = 0 (Steenrod and Epstein 1962, ch. VI)."""
    for p in (3, 5, 7):
        for i in range(1, p + 1):
            value = factorial(i) % p
            assert milnor.to_milnor((1,) * i, p) == ({((), (i,)): value} if value else {})


def test_the_witness_can_tell_words_apart() -> None:
    """A planted wrong coefficient is seen by both routes, at every prime."""
    generator = random.Random(20240611)
    for p in (2, 3, 5, 7):
        for _ in range(25):
            word = tuple(generator.randrange(1 if p == 2 else 0, 6) for _ in range(3))
            terms = milnor.normal_form(word, p)
            if not terms:
                continue
            spoilt = dict(terms)
            key = generator.choice(sorted(terms))
            spoilt[key] = (spoilt[key] + 1) % p
            assert not detect.same_action({word: 1}, spoilt, p), (p, word)
            assert milnor.combine(spoilt, p) != milnor.to_milnor(word, p), (p, word)


def test_higher_bocksteins_are_refused() -> None:
    with pytest.raises(ValueError, match="higher Bockstein"):
        milnor.letter(-2, 2)
