"""Named spaces against computations that share nothing with them: symmetric polynomials, binomials, power series."""

from __future__ import annotations

import tomllib
from math import comb
from pathlib import Path
from typing import Any

import pytest
from flint import nmod_mpoly_ctx
from outside.roots import Roots

import opslang
from opslang import Script

FACTS = tomllib.loads((Path(__file__).parent / "facts" / "characteristic.toml").read_text(encoding="utf-8"))["fact"]


@pytest.mark.parametrize("fact", FACTS, ids=lambda fact: f"{fact['text']} on {fact['space']} at {fact['prime']}")
def test_published_values(fact: dict[str, str]) -> None:
    script = Script(int(fact["prime"]), fact["space"])
    comparison = script.compare(f"{fact['text']} = {fact['equals']}")
    assert comparison.verdict == "true", comparison.difference.text
    assert not fact["source"].isspace()
    assert script.explain(f"{fact['text']} = {fact['equals']}").result.verdict == "true"  # type: ignore[union-attr]


# --- the splitting principle ----------------------------------------------------------------------

BUNDLES = [
    *((2, f"BO({n})", "w", n, range(1, n + 1), n) for n in (1, 2, 3, 4, 5)),
    *((2, f"BU({n})", "c", n, range(1, n + 1), n) for n in (2, 4)),
    *((2, f"BSp({n})", "q", n, range(1, n + 1), 2 * n) for n in (1, 2, 3)),
    *((p, f"BU({n})", "c", n, range(1, n + 1), n) for p, n in ((3, 3), (3, 4), (5, 3), (7, 2))),
    *((p, f"BSp({n})", "q", n, range(1, n + 1), 2 * n) for p, n in ((3, 2), (3, 3), (5, 2), (7, 2))),
    *((p, f"BO({n})", "p", n // 2, range(1, n // 2 + 1), n) for p, n in ((3, 4), (3, 7), (5, 4), (7, 5))),
    *((p, f"BSO({2 * n})", "p", n, range(1, n), 2 * n) for p, n in ((3, 2), (3, 3), (5, 2))),
]


@pytest.mark.parametrize(("p", "space", "letter", "n", "numbers", "top"), BUNDLES)
def test_operations_on_characteristic_classes(
    p: int, space: str, letter: str, n: int, numbers: range, top: int
) -> None:
    """Every square or power of every class (Wu 1950; Borel and Serre 1953), held against the substitution in roots."""
    script, roots = Script(p, space), Roots(p, n)
    names = [f"{letter}_{i}" for i in numbers] + (["e"] if space.startswith("BSO") and p > 2 else [])
    scale = {"w": 1, "c": 2, "q": 2, "p": 2}[letter] if p == 2 else 1
    for name in names:
        for k in range(1, top + 1):
            value = script.normalise(f"{'Sq' if p == 2 else 'P'}^{scale * k} {name}")
            assert roots.value(value.terms) == roots.operation(k, roots.class_(name)), f"{name}, {k}: {value}"


@pytest.mark.parametrize(("p", "n"), ((2, 6), (3, 4)))
def test_operations_on_products(p: int, n: int) -> None:
    """The same on products, so that Cartan's formula is held against the substitution too."""
    space, letter, head = ("BO(6)", "w", "Sq") if p == 2 else ("BU(4)", "c", "P")
    script, roots = Script(p, space), Roots(p, n)
    for i in range(1, 5):
        for j in range(i, 5):
            for k in (1, 2, 3):
                value = script.normalise(f"{head}^{k}({letter}_{i} {letter}_{j})")
                product = roots.class_(f"{letter}_{i}") * roots.class_(f"{letter}_{j}")
                assert roots.value(value.terms) == roots.operation(k, product), (i, j, k)


THOM = [(2, "BO", 1), (2, "BO", 3), (2, "BO", 5), (2, "BU", 3), (3, "BU", 2), (3, "BU", 4), (5, "BU", 3), (3, "BSO", 4),
        (3, "BSO", 6), (5, "BSO", 4), (2, "BSp", 2), (3, "BSp", 2), (5, "BSp", 2)]  # fmt: skip


@pytest.mark.parametrize(("p", "group", "rank"), THOM)
def test_operations_on_thom_classes(p: int, group: str, rank: int) -> None:
    """U restricts to the Euler class along the zero section, and U times a class to e times it (Thom 1952)."""
    script = Script(p, f"thom({group}({rank}))")
    n = rank // 2 if group == "BSO" else 2 * rank if group == "BSp" else rank
    roots = Roots(p, n)
    if group == "BSp":
        # a quaternionic line is x and -x over a maximal torus: half as many roots, U the product of their squares
        roots = Roots(p, rank)
        u, letter = roots.elementary(rank, True), "q"
    else:
        u, letter = roots.elementary(n), {"BO": "w", "BU": "c", "BSO": "p"}[group]
    scale = 2 if p == 2 and group != "BO" else 1
    for k in range(1, 2 * rank + 1):
        value = script.normalise(f"{'Sq' if p == 2 else 'P'}^{scale * k} U")
        found = roots.constant(0)
        for term in value.terms:
            product = roots.constant(term.coefficient)
            for factor in term.factors:
                one = u if factor.name == "U" else roots.class_(factor.name or "")
                product *= one**factor.power
            found += product
        assert found == roots.operation(k, u), (k, value.text, letter)


# --- projective and lens spaces -------------------------------------------------------------------


def multiple(c: int, x: str, n: int, top: int | None, p: int) -> str:
    return f"{c % p} {x}^{n}" if c % p and (top is None or n <= top) else "0"


@pytest.mark.parametrize("n", (1, 2, 5, 8, None))
def test_projective_spaces(n: int | None) -> None:
    """Sq^i x^m = C(m, i) x^{m+i} and its likes (Steenrod and Epstein 1962, ch. I and VI); integers from `math.comb`."""
    power = "" if n is None else f"^{n}"
    for prime, field, head, x, d in ((2, "R", "Sq", "x", 1), (2, "C", "Sq", "y", 2), (2, "H", "Sq", "u", 4)):
        script = Script(prime, f"{field}P{power}")
        for m in range(1, 7):
            for i in range(7):
                expected = multiple(comb(m, i), x, m + i, n, 2)
                assert script.compare(f"{head}^{d * i}({x}^{m}) = {expected}"), (field, n, m, i)
            for i in range(1, 2 * d * m):
                if i % d:
                    assert script.compare(f"{head}^{i}({x}^{m}) = 0")
    for p in (3, 5, 7):
        script = Script(p, f"CP{power} x HP{power}")
        for m in range(1, 6):
            for i in range(4):
                expected = multiple(comb(m, i), "y", m + i * (p - 1), n, p)
                assert script.compare(f"P^{i}(y^{m}) = {expected}"), (p, n, m, i)
                expected = multiple(comb(2 * m, i), "u", m + i * (p - 1) // 2, n, p)
                assert script.compare(f"P^{i}(u^{m}) = {expected}"), (p, n, m, i)


def test_real_projective_spaces_at_odd_primes() -> None:
    """RP^{2n} is a point and RP^{2n+1} a sphere at odd primes (transfer; common practice)."""
    for p in (3, 5):
        assert opslang.series("RP^4", 8, prime=p) == [1] + [0] * 8
        assert opslang.series("RP^5", 8, prime=p) == [1, 0, 0, 0, 0, 1, 0, 0, 0]
        assert not Script(p, "RP^5").normalise("P^1 x") and not Script(p, "RP^5").normalise("x^2")


@pytest.mark.parametrize(("p", "m"), ((2, 2), (2, 4), (2, 8), (2, 12), (3, 3), (3, 9), (5, 5), (3, 6)))
def test_lens_spaces(p: int, m: int) -> None:
    """H^*(K(Z/p^k, 1)) is an exterior class x and a polynomial class y with beta_k x = y (F_2[x] for Z/2)."""
    script = Script(p, f"lens({m})")
    k = next(k for k in range(9) if m % p ** (k + 1))
    assert opslang.series(f"lens({m})", 9, prime=p) == [1] * 10
    assert script.compare(("Sq^1 x" if (p, k) == (2, 1) else f"beta_{k} x") + " = y")
    assert script.compare("x^2 = " + ("y" if (p, k) == (2, 1) else "0"))
    for j in range(1, k):
        assert script.compare(f"beta_{j} x = 0")
    for n in range(1, 6):
        for sign in ("", "x "):
            for i in range(4):
                power = n + i * (p - 1)
                left = f"{'Sq' if p == 2 else 'P'}^{2 * i if p == 2 else i}({sign}y^{n})"
                coefficient = comb(2 * n + len(sign) // 2, 2 * i) if (p, k) == (2, 1) else comb(n, i)
                assert script.compare(f"{left} = {coefficient % p} {sign}y^{power}"), left
        assert script.compare((f"beta_{k}" if k > 1 or p > 2 else "Sq^1") + f"(x y^{n}) = y^{n + 1}")


# --- BSpin ----------------------------------------------------------------------------------------


def times(f: list[int], d: int, sign: int) -> list[int]:
    """A series divided by 1 - t^d (sign 1) or multiplied by it (sign -1)."""
    g = list(f)
    steps = range(d, len(f)) if sign > 0 else range(len(f) - 1, d - 1, -1)
    for n in steps:
        g[n] += sign * g[n - d]
    return g


def quotient_series(generators: list[int], relations: list[int], top: int) -> list[int]:
    """Of a polynomial ring modulo a regular sequence."""
    f = [1] + [0] * top
    for d in generators:
        f = times(f, d, 1)
    for d in relations:
        f = times(f, d, -1)
    return f


def test_series_of_bspin() -> None:
    """Quillen 1971: H^*(BSO) modulo the regular sequence of degrees 2, 3, 5, 9, 17, 33."""
    assert opslang.series("BSpin", 40) == quotient_series(list(range(2, 41)), [2, 3, 5, 9, 17, 33], 40)


@pytest.mark.parametrize(("n", "h"), ((3, 2), (4, 2), (5, 3), (6, 3), (7, 3), (8, 3), (9, 4)))
def test_series_of_bspin_of_a_rank(n: int, h: int) -> None:
    """Quillen 1971, theorem 6.5: h relations (degrees 2, 3, 5, …), tensor a polynomial class of degree 2^h."""
    relations = [2, *(2**r + 1 for r in range(1, h))]
    expected = quotient_series([*range(2, n + 1), 2**h], relations, 40)
    assert opslang.series(f"BSpin({n})", 40) == expected


def test_low_ranks_of_bspin() -> None:
    """Spin(3) = Sp(1), Spin(4) = Sp(1)^2, Spin(5) = Sp(2), Spin(6) = SU(4): common practice."""
    pairs = (("BSpin(3)", "BSp(1)"), ("BSpin(4)", "BSp(1) x BSp(1)"), ("BSpin(5)", "BSp(2)"), ("BSpin(6)", "BSU(4)"))
    for left, right in pairs:
        assert opslang.series(left, 40) == opslang.series(right, 40)


class Wu:
    """F_2[w_2 … w_n] with squares by Wu's formula, on python-flint's polynomials; binomials from `math.comb`."""

    def __init__(self, n: int) -> None:
        self.n = n
        self.context = nmod_mpoly_ctx.get([f"w{i}" for i in range(2, n + 1)] + ["t"], 2)
        *ws, self.t = self.context.gens()
        self.w = {
            0: self.context.from_dict({(0,) * n: 1}),
            1: self.context.from_dict({}),
            **dict(enumerate(ws, start=2)),
        }

    def square(self, k: int, m: int) -> Any:
        if k == m:
            return self.w[m] ** 2
        terms = [(t, comb(m - k + t - 1, t)) for t in range(k + 1) if m + t <= self.n]
        return sum((self.w[k - t] * self.w[m + t] for t, c in terms if c % 2), self.w[1])

    def sq(self, k: int, f: Any) -> Any:
        totals = [sum((self.square(i, m) * self.t**i for i in range(m + 1)), self.w[1]) for m in range(2, self.n + 1)]
        total = f.compose(*totals, self.t, ctx=self.context)
        return self.context.from_dict({(*e[:-1], 0): int(c) for e, c in total.to_dict().items() if e[-1] == k})


def test_the_relation_of_degree_17() -> None:
    """w_17 = w_4 w_13 + w_6 w_11 + w_7 w_10 in H^*(BSpin): Sq^8 Sq^4 Sq^2 Sq^1 w_2 modulo w_2, w_3, w_5, w_9."""
    wu = Wu(17)
    r = wu.w[2]
    lower = []
    for k in (1, 2, 4, 8):
        lower.append(r)
        r = wu.sq(k, r)
    zero = [wu.w[1] if i in (2, 3, 5, 9) else wu.w[i] for i in range(2, 18)]
    reduced = [f.compose(*zero, wu.t, ctx=wu.context) for f in (*lower, r)]
    assert all(f == wu.w[1] for f in reduced[:4])
    w = wu.w
    assert reduced[4] == w[17] + w[4] * w[13] + w[6] * w[11] + w[7] * w[10]
    assert Script(2, "BSpin").compare("w_17 = w_4 w_13 + w_6 w_11 + w_7 w_10")
    for name in ("w_1", "w_2", "w_3", "w_5", "w_9"):
        assert Script(2, "BSpin").compare(f"{name} = 0")


def test_squares_on_bspin_are_those_of_bso_modulo_the_ideal() -> None:
    """Every Sq^k w_m with m + k <= 16, by Wu's formula with w_2 = w_3 = w_5 = w_9 = 0."""
    script, wu = Script(2, "BSpin"), Wu(16)
    zero = [wu.w[1] if i in (2, 3, 5, 9) else wu.w[i] for i in range(2, 17)]
    for m in (4, 6, 7, 8, 10, 11, 12):
        for k in range(1, min(m, 16 - m) + 1):
            expected = wu.square(k, m).compose(*zero, wu.t, ctx=wu.context)
            value = script.normalise(f"Sq^{k} w_{m}")
            found = wu.w[1]
            for term in value.terms:
                product = wu.w[0]
                for factor in term.factors:
                    product *= wu.w[int((factor.name or "")[2:])] ** factor.power
                found = found + product
            assert found == expected, (k, m, value.text)


# --- series ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("prime", "space", "generators"),
    [
        (2, "BO(3)", [1, 2, 3]), (2, "BSO(5)", [2, 3, 4, 5]), (2, "BU(3)", [2, 4, 6]), (2, "BSU(4)", [4, 6, 8]),
        (2, "BSp(2)", [4, 8]), (3, "BU(2)", [2, 4]), (3, "BSO(5)", [4, 8]), (3, "BSO(6)", [4, 8, 6]),
        (3, "BO(6)", [4, 8, 12]), (5, "BSp(3)", [4, 8, 12]), (7, "BSU(3)", [4, 6]),
    ],
)  # fmt: skip
def test_series_of_classifying_spaces(prime: int, space: str, generators: list[int]) -> None:
    """Polynomial rings (Borel 1953)."""
    assert opslang.series(space, 24, prime=prime) == quotient_series(generators, [], 24)


@pytest.mark.parametrize(("prime", "base", "rank", "generators"), [(2, "BO(3)", 3, [1, 2, 3]), (2, "BU(2)", 4, [2, 4]),
    (3, "BSO(4)", 4, [4, 4]), (2, "BSpin(7)", 7, [4, 6, 7, 8])])  # fmt: skip
def test_series_of_thom_spaces(prime: int, base: str, rank: int, generators: list[int]) -> None:
    """The Thom isomorphism (Thom 1952): the series of the base, shifted by the rank, and a 1."""
    shifted = [0] * rank + quotient_series(generators, [], 24 - rank)
    shifted[0] = 1
    assert opslang.series(f"thom({base})", 24, prime=prime) == shifted
