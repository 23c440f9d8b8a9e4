"""Slips of a first hour: what was written, the error it gets, and the mend that is offered."""

from __future__ import annotations

import pytest

from opslang import Script
from opslang.front.vocabulary import ALSO_LEAVE, SHELL_WORDS
from opslang.ground.source import Source
from opslang.pipeline import Session
from opslang.report.diagnostic import Diagnostic
from opslang.syntax import surface as s
from opslang.syntax.parser import parse
from opslang.syntax.spellings import STATEMENT_WORDS


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


# --- words ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "word", "says"),
    [
        ("Sq^2 iota_3 on K(Z,3)", "on", "a line of its own"),
        ("Sq^2 iota_3 let x in H^2", "let", "a line of its own"),
        ("Sq^2 iota_3 basis H^4(BO)", "basis", "a line of its own"),
        ("quit", "quit", "the end of the input"),
        ("exit", "exit", "the end of the input"),
        ("explain wu", "explain", "why"),
        ("dim H^5(K(Z/2, 3))", "dim", "basis"),
        ("St^2 iota_3", "St", "Sq^i"),
        ("simplify Sq^2 Sq^2", "simplify", "canonical form"),
        ("Sq^2 iota_3 and Sq^1 iota_3", "and", "single letters"),
        ("Sq^2 foobar", "foobar", "single letters"),
        ("Sq^2 w_2 BO", "BO", "`on BO`"),
        ("Sq^{quit} x", "quit", "the end of the input"),
    ],
)
def test_words_are_not_taken_apart(text: str, word: str, says: str) -> None:
    (found,) = errors(text)
    assert text[found.span[0] : found.span[1]] == word and found.mend is None
    assert says in f"{found.message} {found.help}"


@pytest.mark.parametrize("word", [*STATEMENT_WORDS, *SHELL_WORDS, *ALSO_LEAVE, "explain", "eval", "run", "lint"])
def test_no_word_of_ours_is_taken_apart(word: str) -> None:
    for text in (word + " 3 /", f"x + {word}"):
        statement, diagnostics = parse(Source("a.ops", text))
        assert statement is not None or not any(" " in (found.mend or "") for found in diagnostics)


@pytest.mark.parametrize(
    ("text", "better"),
    [
        ("xy", "x y"),
        ("abx", "a b x"),
        ("betaxy", "beta x y"),
        ("Sqiota_3", "Sq iota_3"),
        ("ioat_3", "iota_3"),
        ("BO", "on BO"),
        ("BO(3)", "on BO(3)"),
        ("RP^5", "on RP^5"),
        ("let x = H^2(X; Z)", "let x in H^2(X; Z)"),
        ("let x = H^2(X; Z/4)", "let x in H^2(X; Z/4)"),
    ],
)
def test_runs_of_letters_are(text: str, better: str) -> None:
    assert mended(text) == better


@pytest.mark.parametrize(
    ("text", "says", "mend"),
    [
        ("w_2", "on BO;", None),
        ("Sq^2 W_3", "on BSO;", None),
        ("c_1^2", "on BU;", None),
        ("p_1", "on BSO;", None),
        ("let x = H^2", "let x in H^2", "in H"),
        ("let x_2' = H^{2}(X)", "let x in H^2", "in H"),
    ],
)
def test_names_that_nobody_declared(text: str, says: str, mend: str | None) -> None:
    outcome = Session().run(Source("a.ops", text))
    (found,) = outcome.diagnostics
    assert found.name == "unknown-name" and says in found.help and found.mend == mend
    if mend:
        better = text[: found.span[0]] + mend + text[found.span[1] :]
        assert Session().run(Source("a.ops", better)).verdict == "ok"


def test_a_class_of_the_name_h_has_powers() -> None:
    script = Script(let="H in H^2")
    script.run("let x = H^2")
    assert str(script.normalise("x")) == "H^2"
