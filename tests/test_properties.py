"""Properties of the language as a user meets it: text in, canonical text out, through the Python interface.

The values themselves are checked against outside references elsewhere; here the laws that any right answer obeys.
"""

from __future__ import annotations

from functools import cache

from hypothesis import given, settings
from hypothesis import strategies as st

import opslang

PRIMES = (2, 3, 5, 7)
DECLARED = {
    2: ("x in H^1", "y in H^2", "u in H^3(X; Z/4)", "v_1' in H^2(X; Z)", "alpha in H^4"),
    3: ("x in H^1", "y in H^2", "u in H^3(X; Z/9)", "v_1' in H^2(X; Z)", "alpha in H^4"),
    5: ("x in H^1", "y in H^2", "u in H^3(X; Z/5)", "v_1' in H^2(X; Z)", "alpha in H^4"),
    7: ("x in H^1", "y in H^2", "u in H^3(X; Z/49)", "v_1' in H^2(X; Z)", "alpha in H^6"),
}
NAMES = ("x", "y", "u", "v_1'", "alpha")
FEW = settings(max_examples=40, deadline=None)


@cache
def script(p: int) -> opslang.Script:
    return opslang.Script(p, let=DECLARED[p])


def letters(p: int) -> st.SearchStrategy[str]:
    if p == 2:
        return st.integers(1, 5).map(lambda i: f"Sq^{i}")
    return st.one_of(st.just("beta"), st.integers(1, 3).map(lambda i: f"P^{i}"))


def words(p: int, most: int = 3) -> st.SearchStrategy[str]:
    return st.lists(letters(p), min_size=1, max_size=most).map(" ".join)


@st.composite
def monomials(draw: st.DrawFn, p: int) -> str:
    factors = draw(st.lists(st.sampled_from(NAMES), min_size=1, max_size=3))
    written = []
    for name in factors:
        word = draw(st.one_of(st.just(""), words(p, 2)))
        power = draw(st.integers(1, 3))
        written.append(f"({word} {name})^{power}" if word else f"{name}^{power}")
    return " * ".join(written)


def classes(p: int) -> st.SearchStrategy[str]:
    term = st.tuples(st.integers(1, max(1, p - 1)), monomials(p)).map(lambda pair: f"{pair[0]} {pair[1]}")
    return st.lists(term, min_size=1, max_size=3).map(" + ".join)


def operations(p: int) -> st.SearchStrategy[str]:
    term = st.tuples(st.integers(1, max(1, p - 1)), words(p)).map(lambda pair: f"{pair[0]} {pair[1]}")
    return st.lists(term, min_size=1, max_size=3).map(" + ".join)


primes = st.sampled_from(PRIMES)


@FEW
@given(st.data(), primes)
def test_what_is_printed_reads_back_in_all_three_spellings(data: st.DataObject, p: int) -> None:
    kind = data.draw(st.sampled_from((classes, operations)))
    first = script(p).normalise(data.draw(kind(p)))
    for spelling in (first.text, first.unicode, first.latex, f"${first.latex}$."):
        again = script(p).normalise(spelling)
        if first.element.terms:
            assert again.element == first.element, spelling
            assert again.text == first.text


@FEW
@given(st.data(), primes)
def test_operations_are_linear(data: st.DataObject, p: int) -> None:
    theta, f, g = data.draw(words(p)), data.draw(classes(p)), data.draw(classes(p))
    c = data.draw(st.integers(0, p - 1))
    assert script(p).compare(f"{theta} ({f} + {c} ({g})) = {theta} ({f}) + {c} ({theta} ({g}))")


@FEW
@given(st.data(), primes)
def test_composition_is_associative_and_acts_on_classes(data: st.DataObject, p: int) -> None:
    a, b, c = (data.draw(words(p, 2)) for _ in range(3))
    f = data.draw(classes(p))
    assert script(p).compare(f"({a}) (({b}) ({c})) = (({a}) ({b})) ({c})")
    assert script(p).compare(f"(({a}) ({b})) ({f}) = ({a}) (({b}) ({f}))")
    normal = script(p).normalise(f"({a}) ({b})")
    assert script(p).compare(f"({normal}) ({f}) = ({a}) (({b}) ({f}))") or not normal


@FEW
@given(st.data(), primes)
def test_cartan(data: st.DataObject, p: int) -> None:
    f, g = data.draw(monomials(p)), data.draw(monomials(p))
    k = data.draw(st.integers(0, 6 if p == 2 else 3))
    head = "Sq" if p == 2 else "P"
    right = " + ".join(f"({head}^{i} ({f})) * ({head}^{k - i} ({g}))" for i in range(k + 1))
    assert script(p).compare(f"{head}^{k} (({f}) * ({g})) = {right}")


@FEW
@given(st.data(), st.sampled_from(PRIMES[1:]))
def test_the_bockstein_is_a_derivation_with_its_sign(data: st.DataObject, p: int) -> None:
    f, g = data.draw(monomials(p)), data.draw(monomials(p))
    degree = script(p).parse(f).degree or 0
    sign = "-" if degree % 2 else "+"
    assert script(p).compare(f"beta(({f}) * ({g})) = (beta ({f})) * ({g}) {sign} ({f}) * (beta ({g}))")
    assert script(p).compare(f"beta beta ({f}) = 0")


@FEW
@given(st.data(), primes)
def test_graded_commutativity(data: st.DataObject, p: int) -> None:
    f, g = data.draw(monomials(p)), data.draw(monomials(p))
    both = (script(p).parse(f).degree or 0) * (script(p).parse(g).degree or 0)
    sign = "-" if both % 2 and p > 2 else ""
    assert script(p).compare(f"({f}) * ({g}) = {sign}(({g}) * ({f}))")


@FEW
@given(st.data(), primes)
def test_the_order_of_terms_does_not_matter(data: st.DataObject, p: int) -> None:
    kind = data.draw(st.sampled_from((classes, operations)))
    terms = [f"({data.draw(kind(p))})" for _ in range(3)]
    shuffled = data.draw(st.permutations(terms))
    assert script(p).normalise(" + ".join(terms)).text == script(p).normalise(" + ".join(shuffled)).text


@FEW
@given(st.data(), primes)
def test_instability(data: st.DataObject, p: int) -> None:
    f = data.draw(monomials(p))
    degree = script(p).parse(f).degree or 0
    k = degree + data.draw(st.integers(1, 5)) if p == 2 else degree // 2 + data.draw(st.integers(1, 5))
    head = "Sq" if p == 2 else "P"
    assert script(p).compare(f"{head}^{k} ({f}) = 0")
    if p == 2 or degree % 2 == 0:
        top = degree if p == 2 else degree // 2
        assert script(p).compare(f"{head}^{top} ({f}) = ({f})^{p}")


@FEW
@given(st.data(), primes)
def test_cross_products_pull_back_from_the_factors(data: st.DataObject, p: int) -> None:
    """An operation on K(G, 2) x K(H, 3) is what Cartan gives from the values on each factor alone."""
    k = data.draw(st.integers(0, 5 if p == 2 else 2))
    head = "Sq" if p == 2 else "P"
    product = opslang.Script(p, on=f"K(Z/{p}, 2) x K(Z/{p * p}, 3)")
    left, right = opslang.Script(p, on=f"K(Z/{p}, 2)"), opslang.Script(p, on=f"K(Z/{p * p}, 3)")
    parts = []
    for i in range(k + 1):
        a, b = left.normalise(f"{head}^{i} iota_2"), right.normalise(f"{head}^{k - i} iota_3")
        if a and b:
            parts.append(f"({a}) ⊗ ({b})")
    assert product.compare(f"{head}^{k} (iota_2 ⊗ iota_3) = {' + '.join(parts) or '0'}")


@FEW
@given(primes, st.integers(0, 12))
def test_conjugation_is_an_involution_and_inverts_the_total_operation(p: int, n: int) -> None:
    head = "Sq" if p == 2 else "P"
    n = n if p == 2 else n % 5
    assert script(p).compare(f"chi(chi({head}^{n})) = {head}^{n}")
    if n:
        total = " + ".join(f"{head}^{i} chi({head}^{n - i})" for i in range(n + 1))
        assert script(p).compare(f"{total} = 0")


@FEW
@given(st.data(), primes)
def test_conjugation_reverses_products(data: st.DataObject, p: int) -> None:
    a, b = data.draw(letters(p)), data.draw(letters(p))
    sign = "-" if a == b == "beta" else ""
    assert script(p).compare(f"chi(({a}) ({b})) = {sign}(chi({b}) chi({a}))")


@FEW
@given(primes, st.integers(0, 2), st.integers(0, 2))
def test_milnor_primitives_anticommute_and_square_to_zero(p: int, j: int, k: int) -> None:
    if p > 3 and max(j, k) > 1:
        return
    assert script(p).compare(f"Q_{j} Q_{k} = - Q_{k} Q_{j}") if j != k else script(p).compare(f"Q_{j} Q_{k} = 0")
