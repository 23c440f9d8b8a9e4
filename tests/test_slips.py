"""Slips of a first hour: what was written, the error it gets, and the mend that is offered."""

from __future__ import annotations

import pytest

from opslang import Script
from opslang.ground.source import Source
from opslang.report.diagnostic import Diagnostic
from opslang.syntax import surface as s
from opslang.syntax.parser import parse


def errors(text: str) -> tuple[Diagnostic, ...]:
    statement, diagnostics = parse(Source("a.ops", text))
    assert statement is None, text
    return diagnostics


def mended(text: str) -> str:
    """The text with the mend of its first error put in place."""
    found = errors(text)[0]
    assert found.mend is not None, found
    return text[: found.span[0]] + found.mend + text[found.span[1] :]


@pytest.mark.parametrize(
    ("text", "better"),
    [
        ("Sq_2 iota_3", "Sq^2 iota_3"),
        ("Sq_3 iota_5", "Sq^3 iota_5"),
        ("P_1 iota_4", "P^1 iota_4"),
        ("P_2 iota_4", "P^2 iota_4"),
        ("Sq_{12} iota_4", "Sq^{12} iota_4"),
        ("Sq₂ ι₃", "Sq^2 ι₃"),
        ("Sq_n iota_5", "Sq^n iota_5"),
        (r"\Sq_{2} \iota_3", r"\Sq^{2} \iota_3"),
        ("Sq^{4 2 1}", "Sq^{4,2,1}"),
        ("Sq^{12 3} iota_4", "Sq^{12,3} iota_4"),
        (r"\mathrm{Sq}^{4 2}", r"\mathrm{Sq}^{4,2}"),
        ("P^{3 1}", "P^{3,1}"),
        ("Sq^{2,}", "Sq^{2}"),
        ("Sq^{4,2,} iota_3", "Sq^{4,2} iota_3"),
        ("Sq^2,1", "Sq^{2,1}"),
        ("Sq^4,2,1 iota_3", "Sq^{4,2,1} iota_3"),
        (r"\sq^2 \iota_3", r"\Sq^2 \iota_3"),
        (r"\SQ^2", r"\Sq^2"),
    ],
)
def test_the_mend_is_what_was_meant(text: str, better: str) -> None:
    assert mended(text) == better
    assert parse(Source("a.ops", better))[0] is not None


@pytest.mark.parametrize("text", ["iota_{1 2}", "Q_{1 0}", "x_{2 3}", "x^{2 3}", "on K(Z/2, 3 4)", "series to 2 0"])
def test_numbers_side_by_side_are_no_product(text: str) -> None:
    found = errors(text)
    assert [one.name for one in found] == ["index-numbers"] and found[0].mend is None and "one number" in found[0].help


@pytest.mark.parametrize(
    "text", ["Sq^{2n}", "Sq^{2 n}", "Sq^{4 * 2}", "Sq^{2(3+1)}", "Sq^{2 binom(4,2)}", "iota_{2 * 3}"]
)
def test_other_products_in_an_index_are_read(text: str) -> None:
    assert parse(Source("a.ops", text))[1] == ()


# --- the integers localised at a prime -----------------------------------------------------------


@pytest.mark.parametrize("text", ["Z_(2)", "Z_{(2)}", r"\mathbb{Z}_{(2)}", "ℤ₍₂₎", r"\Z_{\left(2\right)}", "Z_( 2 )"])
def test_the_localised_integers_are_no_cyclic_group(text: str) -> None:
    statement, diagnostics = parse(Source("a.ops", f"on K({text}, 3)"))
    group = s.Coefficients((s.Summand(0, 1, local=2),))
    assert statement == s.OnStatement(s.EilenbergMacLane(group, 3)) and not diagnostics


@pytest.mark.parametrize("text", ["Z_2", "Z_{2}", "ℤ₂", r"\mathbb{Z}_2"])
def test_an_index_without_brackets_is_an_order(text: str) -> None:
    group = s.Coefficients((s.Summand(2),))
    assert parse(Source("a.ops", f"on K({text}, 3)"))[0] == s.OnStatement(s.EilenbergMacLane(group, 3))


@pytest.mark.parametrize("number", ["4", "0", "1", "n"])
def test_localised_at_a_prime_only(number: str) -> None:
    assert errors(f"on K(Z_({number}), 3)")[0].name == "group-number"


def test_at_its_own_prime_it_counts_as_the_integers() -> None:
    # H^*(K(Z_(p), n); F_p) is that of K(Z, n): common practice.
    local, whole = Script(2, "K(Z_(2), 3)"), Script(2, "K(Z, 3)")
    assert local.run("series to 12")[0].items == whole.run("series to 12")[0].items
    assert local._session.scope.space is not None and local._session.scope.space.text == "K(Z_(2), 3)"
    assert str(local.normalise("Sq^1 iota_3")) == "0" and str(local.normalise("Sq^2 iota_3")) == "Sq^2 iota_3"


def test_at_another_prime_it_is_nothing() -> None:
    # K(Z_(p), n) has no mod q cohomology, q another prime: multiplication by q is invertible.  Common practice.
    script = Script(3, "K(Z_(2)^2, 3)")
    assert script._session.scope.space is not None and script._session.scope.space.text == "K(Z_(2)^2, 3)"
    assert str(script.normalise("iota_3'")) == "0"
    (declared,) = script.run("let z in H^3(X; Z_(2))")
    assert [d.name for d in declared.diagnostics] == ["zero-at-the-prime"]


def test_declared_classes_are_reductions_of_localised_ones() -> None:
    assert str(Script(2, let="let z in H^3(X; Z_(2))").normalise("Sq^1 z")) == "0"


def test_the_transgression_keeps_the_group() -> None:
    (outcome,) = Script(2, "K(Z_(2), 3)").run("transgression(Sq^2 iota_3)")
    assert outcome.space == "K(Z_(2), 4)"
