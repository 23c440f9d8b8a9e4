"""Formulas cut into statements: hand-made drafts, and what each of their formulas says."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.lint.formula import statements_of
from opslang.lint.formula.closed import to_surface
from opslang.lint.model import BigSum, Cohomology, Index, Operation, Statement, Sum, spelled
from opslang.lint.reading import read_text


def read(tex: str, preamble: str = "") -> list[Statement]:
    """The statements of a draft of one or more formulas."""
    document = read_text(preamble + "\n" + tex, "a.tex")
    return [statement for formula in document.formulas() for statement in statements_of(formula)]


def quoted(tex: str, preamble: str = "") -> list[str]:
    """The statements as the author typed them."""
    document = read_text(preamble + "\n" + tex, "a.tex")
    found = []
    for formula in document.formulas():
        for one in statements_of(formula):
            found.append(document.files[one.at.file].text[one.at.start : one.at.end])
    return found


def kinds(tex: str, preamble: str = "") -> list[str]:
    return [statement.kind for statement in read(tex, preamble)]


@pytest.mark.parametrize(
    ("tex", "expected"),
    [
        (r"$\mathrm{Sq}^2 x = y$", ["relation"]),
        (r"$\mathrm{Sq}^3 x = \mathrm{Sq}^1\mathrm{Sq}^2 x = 0.$", ["relation", "relation"]),
        (r"$x, y \in H^2(X; \mathbb{Z}/2)$", ["membership"]),
        (r"$|x| = 1$", ["degree"]),
        (r"$\mathrm{Sq}^n\colon H^k(X)\to H^{k+n}(X)$", ["signature"]),
        (r"$\iota_2,\ \mathrm{Sq}^1\iota_2,\ \ldots$", ["list"]),
        (r"$\mathrm{Sq}^2 x$", ["mention"]),
        (r"$0<a<2b$", ["condition"]),
        (r"$\mathrm{Sq}^I x \coloneqq y$", ["definition"]),
        (r"\begin{align}\mathrm{Sq}^1 x&\mapsto y,\\ \mathrm{Sq}^2 x&\mapsto z\end{align}", ["mapsto", "mapsto"]),
        (r"\begin{align*}a x&=\mathrm{Sq}^1 y, & b x&=\mathrm{Sq}^2 z\end{align*}", ["relation", "relation"]),
        (r"$\{\mathrm{Sq}^I \mid I \text{ admissible}\}$", ["list"]),
    ],
)
def test_kinds(tex: str, expected: list[str]) -> None:
    assert kinds(tex) == expected


def test_a_chain_over_rows_gives_its_links() -> None:
    tex = "\\begin{align}\n 0 &= d(x)\\\\\n &= \\mathrm{Sq}^2 y\\\\\n &= z .\n\\end{align}"
    first, second, third = read(tex)
    assert (second.inherited, third.inherited) == (True, True)
    assert second.left == first.right
    assert third.left == second.right
    assert first.chain == second.chain == third.chain


def test_a_sum_over_two_rows_is_one_side() -> None:
    tex = "\\begin{align}\n \\mathrm{Sq}^2 x=&\\ y\\\\ &+z\n\\end{align}"
    (only,) = read(tex)
    assert isinstance(only.right, Sum)
    assert len(only.right.terms) == 2


def test_hypotheses_are_conditions_of_the_statement_before() -> None:
    (only,) = read(r"\[\mathrm{Sq}^i x = 0 \quad\text{for } i>n .\]")
    (condition,) = only.conditions
    assert (condition.sign, spelled(condition.left), spelled(condition.right)) == (">", "i", "n")  # type: ignore[arg-type]


def test_a_range_in_brackets_is_a_condition() -> None:
    (only,) = read(r"$\mathrm{Sq}^a\mathrm{Sq}^b = \sum_j \mathrm{Sq}^{a+b-j}\mathrm{Sq}^j\qquad(0<a<2b)$")
    assert [condition.sign for condition in only.conditions] == ["<", "<"]


def test_something_that_is_a_hypothesis_is_no_claim() -> None:
    found = read(r"$\mathrm{Sq}^2 x = 0 \quad\text{if } \mathrm{Sq}^1 x = 0$")
    assert [statement.kind for statement in found] == ["relation"]
    assert found[0].conditions[0].sign == "words"


@pytest.mark.parametrize(
    "binomial",
    [r"\binom{b-1-j}{a-2j}", r"{b-1-j \choose a-2j}", r"\left({b-1-j \atop a-2j}\right)", r"C_{b-1-j}^{a-2j}"],
)
def test_the_four_written_binomials(binomial: str) -> None:
    (only,) = read(rf"$\mathrm{{Sq}}^a\mathrm{{Sq}}^b=\sum_j {binomial}\mathrm{{Sq}}^{{a+b-j}}\mathrm{{Sq}}^j$")
    assert not only.unread
    assert isinstance(only.right, Sum)
    big = only.right.terms[0][1].factors[-1]
    assert isinstance(big, BigSum)
    value = big.body.factors[0].value  # type: ignore[union-attr]
    assert value.kind == "binom"
    assert [spelled(part) for part in value.parts] == ["b-1-j", "a-2j"]


def test_macros_with_unbraced_arguments_and_their_places() -> None:
    preamble = r"\newcommand{\Sq}[1]{\mathrm{Sq}^{#1}}"
    assert quoted(r"$\Sq i x = 0$ and $\Sq{2n-1}\Sq n=0$", preamble) == [r"\Sq i x = 0", r"\Sq{2n-1}\Sq n=0"]


def test_two_statements_of_one_row_have_their_own_places() -> None:
    assert quoted(r"\[\mathrm{Sq}^1x=y,\qquad \mathrm{Sq}^2x=z .\]") == [r"\mathrm{Sq}^1x=y", r"\mathrm{Sq}^2x=z"]


def test_a_group_is_a_side() -> None:
    (only,) = read(r"$\mathrm{Sq}^2\iota_3\in H^5(K(\mathbb{Z},3);\mathbb{F}_2)$")
    assert isinstance(only.right, Cohomology)
    assert only.right.degree == Index("number", (5,))


def test_one_digit_is_an_index() -> None:
    (only,) = read(r"$\mathrm{Sq}^12 x$")
    assert isinstance(only.left, Sum)
    first = only.left.terms[0][1].factors[0]
    assert isinstance(first, Operation)
    assert first.upper == (Index("number", (1,)),)


def test_what_is_not_understood_is_said_and_not_guessed() -> None:
    (only,) = read(r"$\mathrm{Sq}^2 x = \int_M y$")
    assert only.unread
    assert "int" in only.unread[0].reason


def test_letters_of_indices_are_numbers() -> None:
    (only,) = read(r"$\mathrm{Sq}^1(a^m) = m a^{m+1}$")
    surface = to_surface(only.right, {"m": 3})  # type: ignore[arg-type]
    assert surface is not None
    assert [type(factor).__name__ for factor in surface.terms[0][1].factors] == ["Number", "Power"]


_PIECES = st.sampled_from(
    [r"\mathrm{Sq}^", "{", "}", "2", "n", "x", "_", "^", "(", ")", "=", "+", "-", r"\sum", r"\binom", "&", r"\\", ",",
     r"\text{if }", "|", r"\mid", r"\{", r"\}", r"\in", "H^2", r"\colon", r"\to", "[", "]", r"\cdots",
     r"\lfloor", r"\chi", r"\frac", "d", r"\mapsto", r"\quad", ".", r"\begin{cases}", r"\end{cases}",
     r"\bar", "C", "'", "!"]
)  # fmt: skip


@settings(deadline=None, max_examples=150)
@given(st.lists(_PIECES, max_size=25))
def test_nothing_raises(pieces: list[str]) -> None:
    tex = "\\begin{align}" + " ".join(pieces) + "\\end{align}"
    document = read_text(tex, "a.tex")
    for formula in document.formulas():
        for statement in statements_of(formula):
            assert 0 <= statement.at.start <= statement.at.end <= len(tex) + 1
