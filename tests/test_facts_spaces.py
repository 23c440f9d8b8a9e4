"""Series and bases of random Eilenberg–MacLane spaces, against Cartan's bar construction and Künneth's formula.

The seed is new in every run and is printed when something fails; set OPSLANG_SEED to repeat it.
"""

from __future__ import annotations

import os
from random import Random, SystemRandom

import pytest
from outside.series import Series, iterated_bar, multiply, one

import opslang

SEED = int(os.environ.get("OPSLANG_SEED") or SystemRandom().randrange(10**9))
PRIMES = (2, 3, 5, 7)


def p_exponent(m: int, p: int) -> int:
    k = 0
    while m % p == 0:
        m, k = m // p, k + 1
    return k


def random_group(rng: Random, p: int) -> tuple[str, list[int]]:
    """A group as text, and the order of each of its cyclic summands: 0 for Z."""
    parts, orders = [], []
    for _ in range(rng.choice((1, 1, 1, 2))):
        m = rng.choice((0, p, p, p * p, p**3, 6, 12, 5, 30))
        name = f"Z/{m}" if m else "Z"
        power = rng.choice((1, 1, 1, 2))
        if power == 2:
            name = f"({name})^2" if m else "Z^2"
        parts.append(name)
        orders += [m] * power
    return " + ".join(parts), orders


def random_space(rng: Random, p: int, top: int) -> tuple[str, Series]:
    """A product of spaces K(G, n) as text, and its series."""
    names, series = [], one(top)
    for _ in range(rng.choice((1, 1, 2))):
        group, orders = random_group(rng, p)
        n = rng.randint(1, 4)
        names.append(f"K({group}, {n})")
        for m in orders:
            if m == 0:
                series = multiply(series, iterated_bar(p, 0, n, top))
            elif p_exponent(m, p):
                series = multiply(series, iterated_bar(p, p_exponent(m, p), n, top))
    return " x ".join(names), series


@pytest.mark.parametrize("p", PRIMES)
def test_series_of_random_spaces(p: int) -> None:
    """Cartan 1954-55; Künneth over F_p."""
    rng = Random(f"{SEED} series {p}")
    for _ in range(60):
        top = rng.randint(0, 40)
        space, expected = random_space(rng, p, top)
        assert opslang.series(space, top, prime=p) == expected, f"seed {SEED}: {space} at {p}"


@pytest.mark.parametrize("p", PRIMES)
def test_bases_of_random_spaces(p: int) -> None:
    """As many monomials as the series says, no two the same, each in canonical form and of that degree."""
    rng = Random(f"{SEED} basis {p}")
    for _ in range(25):
        space, dimensions = random_space(rng, p, 14)
        degree = rng.randint(0, 14)
        if dimensions[degree] > 300:
            continue
        found = opslang.basis(space, degree, prime=p)
        assert len(found) == len(set(found)) == dimensions[degree], f"seed {SEED}: H^{degree}({space}) at {p}"
        if not found or not degree:
            continue
        script = opslang.Script(p, space)
        for text in rng.sample(found, min(3, len(found))):
            value = script.normalise(text)
            assert value.text == text and value.degree == degree, f"seed {SEED}: {text} on {space} at {p}"
            assert len(value.terms) == 1 and value.terms[0].coefficient == 1
