"""What a draft says of its classes: true sentences in which nothing may be found, and slips that only the context
shows.

The mathematics beside each draft is common practice unless another source is named."""

from __future__ import annotations

import pytest

from opslang.lint.run import lint_text

HEAD = "\\newcommand{\\Sq}{\\mathrm{Sq}}\\newcommand{\\Z}{\\mathbb{Z}}\\newcommand{\\F}{\\mathbb{F}}\n"

TRUE = {
    "a ring with a relation": r"Let $H^*(X;\F_2)=\F_2[x]/(x^4)$ with $|x|=2$. Then $\Sq^4(x^3)=0$.",
    "a described space": r"Let $X$ be the total space of this fibration and $x\in H^3(X;\Z/2)$. Then $\Sq^1x=0$.",
    "a space by a formula": r"Put $X=S^3\cup_\nu e^7$ and let $x\in H^3(X;\Z/2)$. Then $\Sq^1x=0$ and $\Sq^2x=0$.",
    "a reason": r"Let $x\in H^3(X;\Z/2)$. Since $\Sq^1x=0$ we get $\Sq^2\Sq^2x=0$.",
    "a supposition": r"Let $x\in H^3(X;\Z/2)$ and suppose $\Sq^1x=0$. Then $\Sq^2\Sq^2x=0$ and $\Sq^3\Sq^1x=0$.",
    "a relation between classes": r"Let $x,y\in H^2(X;\Z/2)$ with $xy=0$. Then $\Sq^2(xy)=0$ and $x^2y=0$.",
    "an integral class": r"Let $c\in H^4(X;\Z)$ be an integral class. Then $\Sq^1c=0$ and $\Sq^2\Sq^2c=0$.",
    "a class of Z/4": r"Let $z\in H^2(X;\Z/4)$. Then $\Sq^1z=0$, and $\beta_2z\in H^3(X;\Z/2)$.",
    "a fundamental class": r"On $K(\Z,4)$ we have $\Sq^1\iota_4=0$, on $K(\Z/2,4)$ not.",
    "two spaces of one degree": r"Compare $K(\Z,3)$ and $K(\Z/2,3)$. In the first $\Sq^1\iota_3=0$.",
    "a declaration behind": r"Then $\Sq^3x=0$ and $\Sq^2x=x^2$ for every class $x$ of degree $2$.",
    "respectively": r"Let $x$ and $y$ be classes of degrees $1$ and $2$ respectively. Then $\Sq^2(xy)=xy^2+x^2\Sq^1y$.",
    "another section": (
        r"\section{A} Let $x\in H^2(X)$. Then $\Sq^2x=x^2$. \section{B} Let $x\in H^3(X)$. Then $\Sq^3x=x^2$."
    ),
    "a letter used twice": (
        r"\section{A} Let $x\in H^2(X)$. \section{B} Let $x\in H^3(X)$. \section{C} Here $\Sq^2x=x^2$ if you like."
    ),
    "a projective space": r"Let $a\in H^1(\mathbb{RP}^4)$. Then $\Sq^2(a^3)=0$.",
    "an oriented bundle": r"Let $V$ be an oriented vector bundle. Then $\Sq^1w_2(V)=w_3(V)$.",
    "any bundle": r"For a vector bundle, $\Sq^1w_2=w_1w_2+w_3$.",
    "coordinates": r"We use coordinates $w_1,w_2,w_3$ on the plane of all bundles, in which $w_1^2=w_2$ and $w_3=0$.",
    "a temperature": r"At inverse temperature $\beta=2$ we have $\beta^2=4$ and $\beta(g)=g^3$.",
    "a root": r"Let $p$ be an odd prime. The roots $\beta_1$ and $\beta_2$ have $\beta_1\beta_2=-1$.",
    "a projective line": r"Let $p$ be odd. The projective line $P^1$ has $P^1\times P^1\to P^3$, and $P^1=C$ "
    r"for a conic.",
    "a manifold": r"Let $M$ be a closed oriented manifold of dimension $5$, $B\in H^2(M;\Z/2)$. Then "
    r"$w_2\Sq^1B=\Sq^2\Sq^1B$.",
    "the prime three": r"At the prime $3$ we have $P^1P^1=2P^2$ and $P^1P^2=0$.",
    "an odd prime": r"Let $p$ be an odd prime. Then $P^1\beta P^1=\beta P^2+P^2\beta$.",
    "an odd number": r"For $n$ odd, $\Sq^1\Sq^n=0$; for $n$ even it is $\Sq^{n+1}$.",
    "a quoted name": r"The $\Sq^2$-homology of the module is $\ker\Sq^2/\mathrm{im}\,\Sq^2$, and $\dim=3$.",
    "the other primitives": r"Here $Q_1=\Sq^1$. Then $Q_2=\Sq^3+\Sq^2\Sq^1$.",
    "a definition": r"Let $u\in H^1(X;\Z/2)$ and put $v=\Sq^1u$. Then $\Sq^1(uv)=v^2$ and $\Sq^1v=0$.",
}

FALSE = {
    "a general class": (r"Let $x\in H^3(X;\Z/2)$ be a class. Then $\Sq^2\Sq^2x=0$.", "false-relation"),
    "any space": (r"Let $X$ be a space and $x\in H^2(X;\Z/2)$. Then $\Sq^1x=0$.", "false-relation"),
    "a declaration behind": (
        r"Then $\Sq^2(xy)=x^2y$ for classes $x$ and $y$ of degrees $1$ and "
        r"$2$.",
        "degrees-differ",
    ),
    "the author's comment": ("% opslang: let x in H^2\nThen $\\Sq^2x=0$.", "false-relation"),
    "the author's prime": ("% opslang: prime 3\nHere $P^1P^1=P^2$.", "false-relation"),
    "the author's rule": (
        "% opslang: given d iota_4 = Sq^2 iota_3\nThen $d(\\Sq^2\\iota_4)=\\iota_3\\Sq^1\\iota_3$.",
        "false-relation",
    ),
    "the author's convention": ("% opslang: convention Q_1 is Sq^1\nIt is $Q_2=\\Sq^3$.", "false-relation"),
    "the author's numbering": (
        "% opslang: prime 3\n% opslang: convention P^i has degree i\n$P^4P^4=P^8$",
        "false-relation",
    ),
    "the author's space": ("% opslang: on BSO(3)\nHere $\\Sq^1w_2=0$.", "false-relation"),
    "an oriented bundle": (r"Let $V$ be an $SO(4)$ bundle. Then $\Sq^1w_4(V)=w_2(V)w_3(V)$.", "false-relation"),
    "the prime three": (r"At the prime $3$ we have $P^1P^1=P^2$.", "false-relation"),
    "the wrong page": (
        "% opslang: given d iota_1 = iota_2\nThen $d_4(\\iota_1^4)=\\Sq^2\\Sq^1\\iota_2$.",
        "false-relation",
    ),
}


def found(text: str) -> list[tuple[str, str]]:
    report = lint_text(HEAD + text, "draft.tex")
    assert report.failure is None, report.failure
    return [(row.name, row.message) for row in report.findings]


@pytest.mark.parametrize("text", TRUE.values(), ids=TRUE.keys())
def test_nothing_is_said_of_what_is_true(text: str) -> None:
    assert found(text) == []


@pytest.mark.parametrize(("text", "name"), FALSE.values(), ids=FALSE.keys())
def test_the_context_shows_the_slip(text: str, name: str) -> None:
    assert name in [said for said, _ in found(text)]


def test_skipping_and_allowing() -> None:
    wrong = "$\\Sq^1\\Sq^2=0$"
    assert found(f"% opslang: skip\n{wrong}") == []
    assert len(found(f"% opslang: skip\n{wrong} and {wrong}")) == 1
    assert len(found(f"% opslang: skip paragraph\n{wrong} and {wrong}\n\n{wrong}")) == 1
    assert len(found(f"% opslang: skip all\n{wrong}\n\n{wrong}\n% opslang: resume\n{wrong}")) == 1
    assert found(f"% opslang: allow false-relation\n{wrong}") == []
    assert len(found(f"% opslang: allow degrees-differ\n{wrong}")) == 1


@pytest.mark.parametrize(
    "line", ["lett x in H^2", "let x in", "convention of mine", "macro \\Q is nothing", "skip it", "given d"]
)
def test_a_comment_that_is_not_understood_is_said(line: str) -> None:
    assert [name for name, _ in found(f"% opslang: {line}\n$x$")] == ["unread-directive"]
