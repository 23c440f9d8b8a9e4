"""Bundles: Whitney sums, inverses and tensor products against the splitting principle in sympy; Thom spaces; what is
no bundle."""

from __future__ import annotations

from functools import reduce
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy import GF
from sympy.polys.rings import ring

from opslang.api import OpslangError, Script

LETTERS = "abcd"


def script(prime: int, *lines: str) -> Script:
    found = Script(prime)
    for line in lines:
        found.run(line)
    return found


def polynomial(script_: Script, text: str, names: dict[str, Any], one: Any) -> Any:
    """The canonical form of an expression as a sympy polynomial in the roots."""
    total = 0 * one
    for term in script_.normalise(text).terms:
        product = one * term.coefficient
        for factor in term.factors:
            product *= names[str(factor.name)] ** factor.power
        total += product
    return total


class Split:
    """Lines over a product of infinite projective spaces, and bundles given by elementary symmetric polynomials in
    them."""

    def __init__(self, prime: int, complex_: bool, count: int) -> None:
        self.prime = prime
        self.ring, *self.roots = ring(list(LETTERS[:count]), GF(prime))
        self.names = dict(zip(LETTERS, self.roots))
        word, self.letter = ("CP", "c") if complex_ else ("RP", "w")
        self.space = " x ".join(f"{word}({name})" for name in LETTERS[:count])
        self.script = script(prime, f"on {self.space}")

    def declare(self, name: str, roots: str) -> None:
        """A bundle with these roots, by its multiplied-out total class."""
        total = " ".join(f"(1 + {root})" for root in roots)
        self.script.run(f"bundle {name} of rank {len(roots)} over {self.space} with {self.letter} = {total}")

    def value(self, text: str) -> Any:
        return polynomial(self.script, text, self.names, self.ring.one)

    def product(self, sums: list[Any]) -> Any:
        return reduce(lambda x, y: x * y, [1 + one for one in sums], self.ring.one)


ROOTS = st.text(alphabet="abc", min_size=1, max_size=3)


@settings(deadline=None, max_examples=12)
@given(st.sampled_from([(2, False), (2, True), (3, True), (5, True)]), ROOTS, ROOTS)
def test_whitney_sums_and_tensor_products_split(case: tuple[int, bool], first: str, second: str) -> None:
    """Milnor and Stasheff 1974, chapter 4 and problem 7-C; Hirzebruch 1966, § 4.4: everything is seen in the roots."""
    split = Split(*case, count=4)
    split.declare("E", first)
    split.declare("F", second)
    split.declare("L", "d")
    x = split.names
    letter = split.letter
    es, fs = [x[name] for name in first], [x[name] for name in second]
    assert split.value(f"{letter}(E + F)") == split.product(es + fs)
    assert split.value(f"{letter}(2 E + 3)") == split.product(es + es)
    assert split.value(f"{letter}(L ⊗ E + F)") == split.product([e + x["d"] for e in es] + fs)
    assert split.value(f"{letter}(E + F - F)") == split.product(es)
    assert split.value(f"{letter}(dual(E))") == split.product([-e for e in es])
    for k in range(1, 5):
        inverse = split.value(f"{letter}_{k}(F - E)")
        total = split.product(fs)
        series = split.ring.one
        for e in es:
            series *= sum([(-e) ** i for i in range(5)], split.ring.zero)
        assert inverse == split.ring.from_dict({m: c for m, c in (total * series).terms() if sum(m) == k})


@settings(deadline=None, max_examples=8)
@given(st.sampled_from((3, 5)), ROOTS)
def test_pontryagin_classes_of_complex_bundles(prime: int, roots: str) -> None:
    """p(E) is the product of the 1 + x^2 (Milnor and Stasheff 1974, corollary 15.8)."""
    split = Split(prime, True, 3)
    split.declare("E", roots)
    squares = [split.names[name] ** 2 for name in roots]
    assert split.value("p(E)") == split.product(squares)
    assert split.value("e(E)") == reduce(lambda x, y: x * y, [split.names[name] for name in roots])


@settings(deadline=None, max_examples=12)
@given(st.sampled_from([(2, False), (2, True), (3, True), (5, True)]), ROOTS, st.integers(1, 4))
def test_operations_on_thom_classes_split(case: tuple[int, bool], roots: str, k: int) -> None:
    """U restricts to the product of the roots along the zero section, so that P U = U times the product of 1 +
    x^{p-1}."""
    prime, complex_ = case
    split = Split(prime, complex_, 3)
    split.declare("E", roots)
    split.script.run("on thom(E)")
    degree = (2 if complex_ else 1) * (prime - 1)
    op = f"Sq^{2 * k if complex_ else k}" if prime == 2 else f"P^{k}"
    value = split.script.normalise(f"{op} U")
    total = split.product([split.names[name] ** (prime - 1) for name in roots])
    expected = split.ring.from_dict({m: c for m, c in total.terms() if sum(m) == (prime - 1) * k})
    if k == len(roots):  # U^p is written through the Euler class: e^{p-1} U
        assert value.text == split.script.normalise(f"e(E)^{prime - 1} U").text
    found = split.ring.zero
    for term in value.terms:
        assert [(f.name, f.power) for f in term.factors if f.name == "U"] == [("U", 1)]
        product = split.ring.one * term.coefficient
        for factor in term.factors:
            if factor.name != "U":
                product *= split.names[str(factor.name)] ** factor.power
        found += product
    assert found == expected and (not value or value.degree == degree * k + (2 if complex_ else 1) * len(roots))


@pytest.mark.parametrize(
    ("prime", "lines", "relation"),
    [
        # Milnor and Stasheff 1974, theorem 4.5 and the text behind theorem 4.8: the dual classes of RP^{2^r}
        (2, ["bundle T of rank 4 over RP^4(a) with w = (1 + a)^5", "on RP^4(a)"], "w(T) = 1 + a + a^4"),
        (2, ["bundle T of rank 4 over RP^4(a) with w = (1 + a)^5", "on RP^4(a)"], "w(-T) = 1 + a + a^2 + a^3"),
        (2, ["bundle T of rank 8 over RP^8(a) with w = (1 + a)^9", "on RP^8(a)"], "w_7(-T) = a^7"),
        # example 15.6: p(CP^n) = (1 + y^2)^{n+1}
        (5, ["bundle T of rank 3 over CP^3 with c = (1 + y)^4", "on CP^3"], "p_1(T) = 4 y^2"),
        # the tautological relations of tensor products of lines (common practice)
        (2, ["bundle L over RP(a)", "on RP(a)"], "w(L ⊗ L) = 1"),
        (3, ["bundle L over CP", "on CP"], "c_1(L ⊗ L ⊗ L) = 0"),
        (2, ["bundle L over CP", "on CP"], "w(L) = 1 + y"),
        (2, ["bundle V over BSp(2)", "on BSp(2)"], "c_4(V) = q_2"),
        (3, ["bundle V over BSp(2)", "on BSp(2)"], "c_2(V) = -q_1"),
        # W_3 reduces to Sq^1 w_2 = w_3 over BSO(n); over BO(n) to w_3 + w_1 w_2 (Milnor and Stasheff 1974, problem 8-A)
        (2, ["bundle E over BSO(3)", "on BSO(3)"], "W_3(E) = w_3"),
        (2, ["bundle E over BO(3)", "on BO(3)"], "W_3(E) = w_1 w_2 + w_3"),
        (2, ["bundle E over BO(3)", "on BO(3)"], "e(E) = w_3"),
        (2, ["bundle E over BO(3)", "on BO(3)"], "p_1(E) = w_2^2"),
        # pull-backs
        (2, ["map f : RP^7(a) -> CP^3 standard", "bundle L over CP^3", "on RP^7(a)"], "w_2(f^* L) = a^2"),
        (2, ["map f : RP^7(a) -> CP^3 standard", "bundle L over CP^3", "on RP^7(a)"], "f^* c_1(L)^2 = a^4"),
        # Thom 1952: Sq^2(x U) over BO(n)
        (2, ["bundle E over BO(3)", "on thom(E)", "let z in H^2"], "Sq^2(z U) = z^2 U + (Sq^1 z) w_1 U + z w_2 U"),
        (2, ["bundle E over BO(3)", "on thom(E)"], "U^2 = w_3 U"),
        (2, ["bundle E over BSO(3)", "on thom(E)"], "Sq^1 U = 0"),
        # thom(L) over CP^n is CP^{n+1}: U is y there (common practice)
        (3, ["bundle L over CP^5", "on thom(L)"], "P^1 U = U^3"),
        (3, ["bundle E over BSO(4)", "on thom(E)"], "P^1 U = p_1 U"),
        (
            2,
            ["bundle E of rank 2 over K(Z/2, 1) x K(Z/2, 1) with w = (1 + iota_1)(1 + iota_1')", "on thom(E)"],
            "U^2 = iota_1 iota_1' U",
        ),
    ],
)
def test_values_of_bundles(prime: int, lines: list[str], relation: str) -> None:
    assert script(prime, *lines).compare(relation)


def test_the_named_and_the_declared_thom_space_agree() -> None:
    """thom(BO(3)) knows its operations by itself; thom(E) has them from the classes of E."""
    declared = script(2, "bundle E over BO(3)", "on thom(E)")
    named = script(2, "on thom(BO(3))")
    for text in ("Sq^2(w_2 U)", "Sq^3 U", "Sq^4(w_1 w_2 U)", "U^2", "Sq^1(w_3 U)"):
        assert declared.normalise(text).text == named.normalise(text).text
    (one,) = declared.run("series to 9")
    (other,) = named.run("series to 9")
    assert one.items == other.items
    (listed,) = declared.run("basis H^6")
    assert listed.items is not None and one.items is not None and len(listed.items) == one.items[6]


@pytest.mark.parametrize(
    ("prime", "line", "words"),
    [
        (2, "bundle E of rank 3 over RP^4(a) with w = 1 + a^3", "Sq^1 w_2 = w_1 w_2 + w_3"),
        (2, "bundle E over K(Z/2, 3) with w = 1 + iota_3", "w_3"),
        (2, "bundle E of rank 2 over RP^4(a) with w = 1 + a + a^3", "rank is 2"),
        (2, "bundle E over RP^4(a) with w = a", "begins with 1"),
        (2, "bundle E over CP^4 with c = 1 + y + Sq^1 y", None),
        (2, "bundle E over RP^4(a) with c = 1 + a", "degrees divisible by 2"),
        (2, "bundle E over K(Z/2, 2) with c = 1 + iota_2", "Sq^1 of it is not 0"),
        (3, "bundle E over CP^4 with w = 1 + y", "classes at 2"),
        (3, "bundle E over CP^4 with c = 1 + y^2", "Chern class"),
        (5, "bundle E of rank 4 over HP^2 with p = 1, e = u", "e^2 is p_2"),
        (2, "bundle E over RP^4(a)", None),
        (2, "bundle E over RP^4(a) x RP^2(b)", "no universal bundle"),
        (2, "bundle E of rank 2 over BO(3)", "rank 3"),
        (2, "bundle E with w = 1", None),
        (2, "bundle E over RP^4(a) with w = 1 + a, w = 1", "one total class"),
        (2, "bundle D = E + F", "declared"),
    ],
)
def test_what_is_a_bundle_and_what_is_none(prime: int, line: str, words: str | None) -> None:
    if words is None:
        script(prime, line)
        return
    with pytest.raises(OpslangError) as refused:
        script(prime, line)
    assert refused.value.name == "bundle" and words in str(refused.value)


@pytest.mark.parametrize(
    "text",
    ["c_1(E)", "w(-E)", "w_2(E ⊗ E)", "e(F)", "W_0(E)", "w_2(E + L)"],
)
def test_what_is_not_known_of_a_bundle(text: str) -> None:
    lines = script(2, "bundle E over BO(3)", "bundle F over BO", "bundle L over CP^2")
    with pytest.raises(OpslangError) as refused:
        lines.normalise(text)
    assert refused.value.name == "bundle"
