"""The algebra behind presented rings: Gröbner bases, dimensions, the laws on random elements."""

from __future__ import annotations

from itertools import product
from random import Random

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.ground.source import Source
from opslang.laws import adem as law
from opslang.pipeline import Session
from opslang.spaces.groebner import Ideal, Poly, Ring, Work
from opslang.spaces.hilbert import dimensions
from opslang.spaces.presentation import adem


def monomials(degrees: tuple[int, ...], degree: int) -> list[tuple[int, ...]]:
    """All exponents of one degree."""
    ranges = [range(degree // d + 1) for d in degrees]
    return [m for m in product(*ranges) if sum(map(int.__mul__, degrees, m)) == degree]


def random_poly(ring: Ring, degree: int, random: Random) -> Poly:
    """A random homogeneous polynomial; odd variables occur at most once."""
    found: Poly = {}
    for m in monomials(ring.degrees, degree):
        if random.random() < 0.6 and not any(m[at] > 1 for at in ring.odd):
            ring.add(found, {m: random.randrange(1, ring.prime)})
    return found


IDEALS = [(2, (1, 1, 2)), (2, (2, 3, 4)), (3, (2, 2, 4)), (5, (2, 4, 6))]


@pytest.mark.parametrize(("prime", "degrees"), IDEALS)
def test_normal_forms_are_those_of_sympy(prime: int, degrees: tuple[int, ...]) -> None:
    # the same order there: all is homogeneous, so the lexicographic order with the last variable first
    random = Random(prime)
    symbols = sympy.symbols("a b c")
    for _ in range(6):
        ring = Ring(prime, degrees, ())
        relations = [f for f in (random_poly(ring, d, random) for d in (4, 6, 8)) if f]
        if not relations:
            continue
        ideal = Ideal(ring, relations)

        def expression(f: Poly) -> sympy.Expr:
            return sum((c * sympy.prod([x**e for x, e in zip(symbols, m)]) for m, c in f.items()), sympy.Integer(0))

        basis = sympy.groebner(
            [expression(f) for f in relations], *reversed(symbols), modulus=prime, order="lex", symmetric=False
        )
        leads = {tuple(reversed(sympy.Poly(g, *reversed(symbols)).monoms(order="lex")[0])) for g in basis.exprs}
        assert leads == set(ideal.rules)
        for degree in (6, 9, 12):
            f = random_poly(ring, degree, random)
            rest = sympy.Poly(basis.reduce(expression(f))[1], *symbols, modulus=prime)
            expected = {m: int(c) % prime for m, c in rest.terms() if c}
            assert ideal.reduce(f) == expected


def rank(rows: list[Poly], prime: int) -> int:
    """The rank of polynomials over F_p, by elimination."""
    pivots: dict[tuple[int, ...], Poly] = {}
    for row in rows:
        row = dict(row)
        while row:
            lead = max(row)
            if lead not in pivots:
                inverse = pow(row[lead], -1, prime)
                pivots[lead] = {m: c * inverse % prime for m, c in row.items()}
                break
            factor = row[lead]
            for m, c in pivots[lead].items():
                value = (row.get(m, 0) - factor * c) % prime
                if value:
                    row[m] = value
                else:
                    row.pop(m, None)
    return len(pivots)


@pytest.mark.parametrize(
    ("prime", "degrees"), [(3, (1, 1, 2, 3)), (3, (3, 3, 3, 5)), (5, (1, 2, 3, 3)), (2, (1, 2, 3))]
)
def test_dimensions_of_graded_commutative_quotients_by_linear_algebra(prime: int, degrees: tuple[int, ...]) -> None:
    odd = tuple(at for at, d in enumerate(degrees) if d % 2) if prime != 2 else ()
    random = Random(sum(degrees))
    for _ in range(4):
        ring = Ring(prime, degrees, odd)
        relations = [f for f in (random_poly(ring, d, random) for d in (4, 6)) if f]
        ideal = Ideal(ring, relations)
        squares = [tuple(2 if i == at else 0 for i in range(len(degrees))) for at in odd]
        found = dimensions(degrees, [*ideal.rules, *squares], 14, Work())
        for degree in range(15):
            free = [m for m in monomials(degrees, degree) if not any(m[at] > 1 for at in odd)]
            multiples = [
                ring.times({m: 1}, f)
                for f in relations
                for m in monomials(degrees, degree - ring.degree(next(iter(f))))
                if degree >= ring.degree(next(iter(f))) and not any(m[at] > 1 for at in odd)
            ]
            assert found[degree] == len(free) - rank(multiples, prime), (relations, degree)


@settings(deadline=None, max_examples=60)
@given(st.lists(st.tuples(*[st.integers(0, 4)] * 3), max_size=6), st.integers(1, 3))
def test_dimensions_of_monomial_ideals_are_counts(leads: list[tuple[int, ...]], step: int) -> None:
    degrees = (1, step, 2)
    found = dimensions(degrees, leads, 9, Work())
    for degree in range(10):
        left = [m for m in monomials(degrees, degree) if not any(all(map(int.__le__, lead, m)) for lead in leads)]
        assert found[degree] == len(left)


def test_the_adem_relations_are_those_of_the_laws() -> None:
    for b in range(1, 12):
        for a in range(1, 2 * b):
            assert sorted(word for _, word in adem(2, a, b)) == sorted(
                tuple(i for i in word if i) for word in law.squares(a, b)
            )
    for p in (3, 5):
        for b in range(1, 5):
            for a in range(1, p * b):
                assert sorted(adem(p, a, b)) == sorted((c, (i, j) if j else (i,)) for c, i, j in law.powers(a, b, p))
            for a in range(1, p * b + 1):
                outside, inside = law.powers_bockstein(a, b, p)
                expected = [(c, (0, i, j) if j else (0, i)) for c, i, j in outside]
                expected += [(c, (i, 0, j) if j else (i, 0)) for c, i, j in inside]
                assert sorted(adem(p, a, b, bockstein=True)) == sorted(expected)


RINGS = [
    (2, "F_2[u:2, v:3] / (u^3, u^2 v, u v^2, v^3) where Sq^1 u = v, Sq^2 v = u v", "uv"),
    (2, "F_2[a:1, b:1] / (b^3 + a b^2 + a^2 b + a^3, a^5) where Sq a = a + a^2, Sq b = b + b^2", "ab"),
    (2, "F_2[u:2, v:3, w:4] where Sq^1 u = v, Sq^2 v = u v, Sq^1 w = 0, Sq^2 w = u w", "uvw"),
    (3, "F_3[x:1, y:2, u:4] / (x u, y u) where beta x = y, beta u = 0, P^1 u = 2 u^2", "xyu"),
    (3, "F_3[x:3, y:7, z:8] / (z^3) where P^1 x = y, beta y = z, P^3 y = 0, P^1 z = 0, P^3 z = 0, beta x = 0", "xyz"),
]


@pytest.mark.parametrize(("prime", "text", "letters"), RINGS, ids=[row[1] for row in RINGS])
def test_laws_hold_on_random_elements(prime: int, text: str, letters: str) -> None:
    session = Session(prime)

    def run(line: str) -> str:
        outcome = session.run(Source("a.ops", line))
        assert outcome.verdict in ("ok", "true"), (line, outcome.message)
        return outcome.verdict

    run(f"space R = {text}")
    run("on R")
    random = Random(len(text))

    def element() -> str:
        return "(" + " ".join(f"{letter}^{random.randrange(4)}" for letter in letters) + ")"

    op = "Sq" if prime == 2 else "P"
    for _ in range(25):
        x, y, k = element(), element(), random.randint(1, 5)
        b = random.randint(1, 4)
        a = random.randint(1, prime * b - 1)
        run(f"{op}^{k}({x} {y}) = " + " + ".join(f"{op}^{i} {x} {op}^{{{k - i}}} {y}" for i in range(k + 1)))
        pair = law.squares(a, b) if prime == 2 else law.powers(a, b, prime)
        rows = [row if prime != 2 else (1, *row) for row in pair]
        run(f"{op}^{a} {op}^{b} {x} = " + (" + ".join(f"{c} {op}^{i} {op}^{j} {x}" for c, i, j in rows) or "0"))
        run(f"{op}^99 {x} = 0")
        if prime != 2:
            run(f"beta beta {x} = 0")


def test_wu_classes_given_by_hand_act_as_those_of_the_space() -> None:
    # BSO(4) presented with the values of its own formula on generators must act alike on everything
    native, own = Session(), Session()
    native.run(Source("a.ops", "on BSO(4)"))
    presented = "w_2:2, w_3:3, w_4:4] where Sq^1 w_2 = w_3, Sq^2 w_3 = w_2 w_3, Sq^1 w_4 = 0, Sq^2 w_4 = w_2 w_4"
    assert own.run(Source("a.ops", "space R = F_2[" + presented)).verdict == "ok"
    own.run(Source("a.ops", "on R"))
    random = Random(3)
    for _ in range(40):
        powers = " ".join(f"w_{i}^{random.randrange(3)}" for i in (2, 3, 4))
        line = Source("a.ops", f"Sq^{random.randint(1, 6)} Sq^{random.randint(1, 4)} ({powers})")
        texts = []
        for session in (native, own):
            element = session.run(line).element
            assert element is not None
            texts.append([[(g.of.index, e) for g, e in monomial] for monomial, _ in element.terms])
        assert texts[0] == texts[1], line.text
