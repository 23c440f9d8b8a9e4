"""General relations with symbols: the right ones agree, planted slips are found; Wu's formula against published
values.
"""

from __future__ import annotations

import pytest

from opslang.lint.rule import rule_named
from opslang.lint.run import lint_text
from opslang.lint.templates.wu import formula

MINE = (
    "degrees-differ", "adem-cartan", "false-for-small-values", "bound-variable", "index-of-one-digit",
    "ambiguous-scope", "rows-of-a-map", "coproduct", "wu-formula",
)  # fmt: skip
BAD = [(name, line) for name in MINE for line in getattr(rule_named(name), "bad", ())]
GOOD = [(name, line) for name in MINE for line in getattr(rule_named(name), "good", ())]


def said(tex: str) -> list[str]:
    report = lint_text(tex, "a.tex")
    assert report.failure is None
    return [row.name for row in report.findings]


@pytest.mark.parametrize(("name", "tex"), BAD)
def test_bad_lines_are_spoken_of(name: str, tex: str) -> None:
    assert said(tex)


@pytest.mark.parametrize(("name", "tex"), GOOD)
def test_good_lines_are_passed_over(name: str, tex: str) -> None:
    assert said(tex) == []


# Adem 1952; Steenrod and Epstein 1962, chapter I and chapter VI.
ADEM = (
    r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_{j=0}^{\lfloor a/2\rfloor}\binom{b-1-j}{a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^j$"
)
ODD = (
    r"Let $p$ be an odd prime. For $a<pb$, "
    r"$P^aP^b=\sum_{j=0}^{\lfloor a/p\rfloor}(-1)^{a+j}\binom{(p-1)(b-j)-1}{a-pj}P^{a+b-j}P^j$"
)


@pytest.mark.parametrize(
    ("old", "new"),
    [
        (r"b-1-j", r"b-j"),
        (r"a-2j", r"a-j"),
        (r"\lfloor a/2\rfloor", r"\lfloor a/4\rfloor"),
        (r"j=0", r"j=1"),
        (r"a+b-j", r"a-j"),
        (r"b-1-j", r"b-1"),
        (r"a-2j", r"b-2j"),
    ],
)
def test_a_slip_in_adems_relation_is_found(old: str, new: str) -> None:
    assert said(f"For $0<a<2b$, {ADEM}") == []
    assert said(f"For $0<a<2b$, {ADEM.replace(old, new)}")


@pytest.mark.parametrize(
    ("old", "new"), [(r"(-1)^{a+j}", ""), (r"(b-j)-1", r"(b-j)"), (r"a-pj", r"a-2j"), ("a+b-j", "a-j")]
)
def test_a_slip_in_the_odd_relation_is_found(old: str, new: str) -> None:
    assert said(ODD) == []
    assert said(ODD.replace(old, new))


def test_a_missing_range_is_a_warning() -> None:
    (row,) = lint_text(ADEM, "a.tex").findings
    assert (row.name, row.severity) == ("range-missing", "warning")


@pytest.mark.parametrize(
    ("k", "m", "value"),
    [  # Milnor and Stasheff 1974, problem 8-A, worked out: Sq^1 w_2 = w_1 w_2 + w_3, Sq^2 w_3 = w_2 w_3 + w_1 w_4 + w_5
        (1, 2, {(1, 2), (3,)}),
        (2, 3, {(2, 3), (1, 4), (5,)}),
        (1, 3, {(1, 3)}),
        (2, 4, {(2, 4), (6,)}),
        (2, 2, {(2, 2)}),
        (3, 2, set()),
    ],
)
def test_wus_formula(k: int, m: int, value: set[tuple[int, ...]]) -> None:
    assert formula(k, m) == value


def test_agreement_is_never_called_truth() -> None:
    report = lint_text(r"$\mathrm{Sq}^{2n-1}\mathrm{Sq}^n=0$ for all $n\ge1$", "a.tex")
    messages = [row.message for row in report.formulas]
    assert any("agrees for n ≤" in message for message in messages)
    assert not any(message.startswith("true") for message in messages)


LINE = r"Let $a\in H^1(X;\mathbb{Z}/2)$. $\mathrm{Sq}^i(a^m)=\binom{m}{i}a^{m+i}$"


def test_powers_of_a_class_of_degree_one() -> None:
    assert said(LINE) == []
    assert said(LINE.replace(r"\binom{m}", r"\binom{2m}")) == ["false-for-small-values"]
