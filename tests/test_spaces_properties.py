"""Adem, Cartan, instability, Frobenius and the Bockstein on random elements of every space; print and read again.

Operations are applied one letter at a time to printed elements, so that no relation is used by the engine itself.  The
seed is new in every run and is printed when something fails; set OPSLANG_SEED to repeat it.
"""

from __future__ import annotations

import os
from math import comb
from random import Random, SystemRandom

import pytest
from test_spaces_laws import PAIRS

import opslang
from opslang import Script

SEED = int(os.environ.get("OPSLANG_SEED") or SystemRandom().randrange(10**9))
TOP = {2: 9, 3: 14, 5: 18, 7: 26}


class Elements:
    """Random elements of H^* of a space, as text, and operations on them."""

    def __init__(self, p: int, space: str, rng: Random) -> None:
        self.p, self.space, self.rng = p, space, rng
        self.script = Script(p, space)
        series = opslang.series(space, TOP[p], prime=p)
        self.degrees = [d for d, n in enumerate(series) if d and n]
        self.bases = {d: opslang.basis(space, d, prime=p) for d in self.degrees}

    def element(self, most: int | None = None) -> tuple[str, int]:
        """An element and its degree."""
        degree = self.rng.choice([d for d in self.degrees if most is None or d <= most] or self.degrees[:1])
        basis = self.bases[degree]
        chosen = self.rng.sample(basis, min(len(basis), self.rng.randint(1, 3)))
        return " + ".join(f"{self.rng.randint(1, self.p - 1)} {x}" for x in chosen), degree

    def normal(self, text: str) -> str:
        return self.script.normalise(text).text

    def op(self, i: int, f: str) -> str:
        """Sq^i or P^i; the Bockstein for i = -1."""
        name = "beta" if i < 0 else f"{'Sq' if self.p == 2 else 'P'}^{i}"
        return self.normal(f"{name}({f})")

    def same(self, left: str, terms: list[tuple[int, str]]) -> bool:
        right = " + ".join(f"{c % self.p} ({f})" for c, f in terms if c % self.p) or "0"
        return self.normal(left) == self.normal(right)


def elements(p: int, space: str, what: str) -> Elements:
    return Elements(p, space, Random(f"{SEED} {what} {space} {p}"))


SOME = [pair for pair in PAIRS if pair[1] not in ("BSpin(7)", "thom(BSpin(7))")]


def binomial(n: int, k: int) -> int:
    return comb(n, k) if 0 <= k <= n else 0


@pytest.mark.parametrize(("p", "space"), SOME)
def test_adem_relations(p: int, space: str) -> None:
    """Steenrod and Epstein 1962, ch. I and VI."""
    e = elements(p, space, "adem")
    for _ in range(5):
        x, _ = e.element()
        b = e.rng.randint(1, 4 if p == 2 else 2)
        a = e.rng.randint(1, p * b - 1)
        left = e.op(a, e.op(b, x))
        if p == 2:
            terms = [(comb(b - 1 - j, a - 2 * j), e.op(a + b - j, e.op(j, x))) for j in range(a // 2 + 1) if b - 1 >= j]
            assert e.same(left, terms), f"seed {SEED}: {a}, {b} on {x}"
            continue
        terms = [
            ((-1) ** (a + j) * binomial((p - 1) * (b - j) - 1, a - p * j), e.op(a + b - j, e.op(j, x)))
            for j in range(a // p + 1)
        ]
        assert e.same(left, terms), f"seed {SEED}: {a}, {b} on {x}"
        left = e.op(a, e.op(-1, e.op(b, x)))
        for j in range(a // p + 1):
            c = (-1) ** (a + j) * binomial((p - 1) * (b - j), a - p * j)
            d = (-1) ** (a + j - 1) * binomial((p - 1) * (b - j) - 1, a - p * j - 1)
            terms = terms if j else []
            terms += [(c, e.op(-1, e.op(a + b - j, e.op(j, x)))), (d, e.op(a + b - j, e.op(-1, e.op(j, x))))]
        assert e.same(left, terms), f"seed {SEED}: {a}, beta, {b} on {x}"


@pytest.mark.parametrize(("p", "space"), SOME)
def test_cartan_instability_and_powers(p: int, space: str) -> None:
    """Steenrod and Epstein 1962, ch. I and VI."""
    e = elements(p, space, "cartan")
    for _ in range(4):
        (x, m), (y, n) = e.element(TOP[p] // 2), e.element(TOP[p] // 2)
        product = e.normal(f"({x}) ({y})")
        k = e.rng.randint(1, 6 if p == 2 else 3)
        terms = [(1, f"({e.op(i, x)}) ({e.op(k - i, y)})") for i in range(k + 1)]
        assert e.same(e.op(k, product), terms), f"seed {SEED}: Cartan, {k} on {x} and {y}"
        assert e.same(product, [((-1) ** (m * n), f"({y}) ({x})")]), f"seed {SEED}: {x} and {y} commute"
        top = m if p == 2 else m // 2
        assert e.op(top + 1 + e.rng.randint(0, 3), x) == "0", f"seed {SEED}: instability on {x}"
        if p == 2 or m % 2 == 0:
            assert e.op(top, x) == e.normal(f"({x})^{p}"), f"seed {SEED}: the top operation on {x}"
            i = e.rng.randint(1, max(1, top))
            assert e.op(p * i, e.normal(f"({x})^{p}")) == e.normal(f"({e.op(i, x)})^{p}"), f"seed {SEED}: {i} on {x}"
            assert e.op(p * i - 1, e.normal(f"({x})^{p}")) == "0"
        elif p > 2:
            assert e.normal(f"({x})^2") == "0"


@pytest.mark.parametrize(("p", "space"), SOME)
def test_the_bockstein(p: int, space: str) -> None:
    """beta^2 = 0, and beta is a derivation (Steenrod and Epstein 1962, ch. VI)."""
    e = elements(p, space, "bockstein")
    for _ in range(4):
        (x, m), (y, _) = e.element(TOP[p] // 2), e.element(TOP[p] // 2)
        assert e.op(-1, e.op(-1, x)) == "0", f"seed {SEED}: {x}"
        terms = [(1, f"({e.op(-1, x)}) ({y})"), ((-1) ** m, f"({x}) ({e.op(-1, y)})")]
        assert e.same(e.op(-1, e.normal(f"({x}) ({y})")), terms), f"seed {SEED}: {x} and {y}"


@pytest.mark.parametrize(("p", "space"), PAIRS)
def test_what_is_printed_is_read_again(p: int, space: str) -> None:
    """Normalising twice is normalising once, in all three spellings."""
    e = elements(p, space, "print")
    for _ in range(4):
        x, degree = e.element()
        value = e.script.normalise(x)
        assert value.degree == degree or not value
        for text in (value.text, value.unicode, value.latex):
            assert e.script.normalise(text) == value, f"seed {SEED}: {text} on {space} at {p}"
