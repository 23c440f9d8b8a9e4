"""Degrees with symbols: polynomials, and what the linter says of hand-made drafts."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.lint.run import lint_text
from opslang.lint.symbolic.polynomial import Polynomial

N, K = Polynomial.symbol("n"), Polynomial.symbol("k")


def said(tex: str) -> list[str]:
    """The names of the findings in a draft."""
    report = lint_text(tex, "a.tex")
    assert report.failure is None
    return [row.name for row in report.findings]


_SMALL = st.integers(-5, 5)
_POLYNOMIALS = st.recursive(
    st.one_of(_SMALL.map(Polynomial.of), st.sampled_from([N, K])),
    lambda inner: st.tuples(inner, inner, st.sampled_from("+-*")).map(
        lambda triple: {"+": triple[0] + triple[1], "-": triple[0] - triple[1], "*": triple[0] * triple[1]}[triple[2]]
    ),
    max_leaves=6,
)


@settings(deadline=None, max_examples=100)
@given(_POLYNOMIALS, _POLYNOMIALS, _SMALL, _SMALL)
def test_polynomials_compute_like_numbers(left: Polynomial, right: Polynomial, n: int, k: int) -> None:
    at = {"n": n, "k": k}
    a, b = left.at(at), right.at(at)
    assert a is not None
    assert b is not None
    assert (left + right).at(at) == a + b
    assert (left * right).at(at) == a * b
    assert (left - right).at(at) == a - b
    assert left.substitute({"n": K}).at({"k": k}) == left.at({"n": k, "k": k})


def test_a_polynomial_in_words() -> None:
    assert str(N + N + K - Polynomial.of(1)) == "k + 2n - 1"
    assert str(Polynomial()) == "0"


HEAD = r"All cohomology is mod 2. Let $x\in H^n(X)$ and $y\in H^3(X)$. "

APART = [
    HEAD + r"$\mathrm{Sq}^{2n}(x^2)=(\mathrm{Sq}^{n+1}x)^2$",
    HEAD + r"$\mathrm{Sq}^2 y = y^2$",
    r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_j\binom{b-1-j}{a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^{j+1}$ for $0<a<2b$",
    r"$\mathrm{Sq}^i\colon H^n(X)\to H^{n-i}(X)$",
    r"Let $p$ be an odd prime. $P^i\colon H^n(X;\mathbb{F}_p)\to H^{n+i(p-1)}(X;\mathbb{F}_p)$",
    r"$\mathrm{Sq}^4\mathrm{Sq}^2\iota_3\in H^{8}(K(\mathbb{Z}/2,3))$",
    r"$\mathrm{Sq}^I\colon H^q(X)\to H^{q+2|I|}(X)$",
]
ALIKE = [
    HEAD + r"$\mathrm{Sq}^{2n}(x^2)=(\mathrm{Sq}^{n}x)^2$",
    HEAD + r"$\mathrm{Sq}^3 y = y^2$",
    r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_j\binom{b-1-j}{a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^{j}$ for $0<a<2b$",
    r"$\mathrm{Sq}^i\colon H^n(X)\to H^{n+i}(X)$",
    r"Let $p$ be an odd prime. $P^i\colon H^n(X;\mathbb{F}_p)\to H^{n+2i(p-1)}(X;\mathbb{F}_p)$",
    r"$\mathrm{Sq}^4\mathrm{Sq}^2\iota_3\in H^{9}(K(\mathbb{Z}/2,3))$",
    r"$\mathrm{Sq}^I\colon H^q(X)\to H^{q+|I|}(X)$",
    r"$\mathrm{Sq}^{2^{j-1}}\cdots\mathrm{Sq}^2\mathrm{Sq}^1\iota_1=\iota_1^{2^j}$",
    r"$\mathrm{Sq}=\sum_{i\ge 0}\mathrm{Sq}^i$",
]
SILENT = [
    r"$\mathrm{Sq}^k z = z^2$",  # nothing is known of z and k
    r"At inverse temperature $\beta=1/T$ the coupling runs with $\beta(g)=-b_0g^3$.",
    r"On $\mathbb{C}^3$ we use coordinates $w_1,w_2,w_3$ with $w_1^2+w_2^2+w_3^2=0$.",
    r"The roots satisfy $\beta^2=\beta+1$ and $\beta_1\beta_2=-1$.",
    r"The embedding of $P^1$ in $P^n$ has degree $d$; $P^1\times P^1\to P^3$.",
]


@pytest.mark.parametrize("tex", APART)
def test_different_degrees_are_found(tex: str) -> None:
    assert "degrees-differ" in said(tex)


@pytest.mark.parametrize("tex", ALIKE + SILENT)
def test_nothing_is_said_of_what_is_right_or_unknown(tex: str) -> None:
    assert said(tex) == []


def test_the_finding_stands_at_the_relation() -> None:
    tex = "Some words.\n$\\mathrm{Sq}^2\\mathrm{Sq}^6=\\mathrm{Sq}^7\\mathrm{Sq}^2$\n"
    (row,) = lint_text(tex, "a.tex").findings
    assert (row.line, row.column) == (2, 2)
    assert "9" in row.message
    assert "8" in row.message
