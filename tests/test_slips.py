"""Slips of a first hour: what was written, the error it gets, and the mend that is offered."""

from __future__ import annotations

import pytest

from opslang import Script
from opslang.front.vocabulary import ALSO_LEAVE, SHELL_WORDS
from opslang.ground.source import Source
from opslang.pipeline import Session
from opslang.report.diagnostic import Diagnostic
from opslang.syntax import surface as s
from opslang.syntax.layout import chunks, is_complete
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
        (r"\Sq^2 \iota_3 on K(\Z, 3)", "on", "a line of its own"),
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


# --- signs of papers -----------------------------------------------------------------------------


def read(text: str) -> s.Statement:
    statement, diagnostics = parse(Source("a.ops", text))
    assert statement is not None and not diagnostics, (text, diagnostics)
    return statement


@pytest.mark.parametrize("sign", ["≡", r"\equiv "])
def test_congruent_is_equal(sign: str) -> None:
    assert read(f"Sq^1 Sq^1 {sign} 0") == read("Sq^1 Sq^1 = 0")


@pytest.mark.parametrize(
    "tail",
    ["(mod 2)", "mod 2", r"\pmod{2}", r"\pmod 2", r"\mod 2.", r"\bmod{2}", r"(\mathrm{mod}\ 2)", r"\;(\text{mod }2)"],
)
def test_a_modulus_behind_a_relation(tail: str) -> None:
    text = f"Sq^1 Sq^2 = Sq^3 {tail}"
    statement = read(text)
    assert isinstance(statement, s.RelationStatement) and statement.modulus is not None
    assert statement.sides == read("Sq^1 Sq^2 = Sq^3").sides  # type: ignore[union-attr]
    assert text[slice(*statement.modulus.span)].strip("{}") == "2"
    assert Session().run(Source("a.ops", text)).verdict == "true"
    (found,) = Session(3).run(Source("a.ops", f"P^1 P^1 = 2 P^2 {tail}")).diagnostics
    assert found.name == "modulus" and "prime 2" in found.help


@pytest.mark.parametrize("tail", ["(mod p)", r"\pmod{p}", "mod p"])
def test_modulo_p_is_modulo_the_prime(tail: str) -> None:
    assert read(f"Sq^1 Sq^2 = Sq^3 {tail}") == read("Sq^1 Sq^2 = Sq^3")


def test_why_of_a_congruence_and_other_moduli() -> None:
    assert Session().run(Source("a.ops", r"why Sq^1 Sq^2 \equiv Sq^3 \pmod 2")).verdict == "true"
    for modulus in ("4", "3", "1"):
        (found,) = Session().run(Source("a.ops", f"Sq^1 Sq^2 = Sq^3 (mod {modulus})")).diagnostics
        assert found.name == "modulus"


@pytest.mark.parametrize("text", ["Sq^2 x (mod 2)", "Sq^2 mod 2 = x", "mod", "x = y mod", "x = (mod 2) y", "mod 2"])
def test_a_modulus_elsewhere_is_refused(text: str) -> None:
    found = errors(text)[0]
    assert "relation" in f"{found.message} {found.help}" and found.name == "expected"


@pytest.mark.parametrize(
    "sign", ["≠", r"\neq", r"\ne", "!=", "=?", "?=", "≟", r"\stackrel{?}{=}", r"\not=", "≢", r"\not\equiv"]
)
def test_unequal_is_no_statement(sign: str) -> None:
    (found,) = errors(f"Sq^1 Sq^2 {sign} Sq^3")
    assert "decided" in found.message and mended(f"Sq^1 Sq^2 {sign} Sq^3") == "Sq^1 Sq^2 = Sq^3"


@pytest.mark.parametrize("dash", ["–", "−", "‒"])
def test_dashes_are_minus(dash: str) -> None:
    assert read(f"x {dash} y_{{n{dash}1}}") == read("x - y_{n-1}")


@pytest.mark.parametrize(
    ("text", "better"),
    [
        ("Sqˆ2 iota_3", "Sq^2 iota_3"),
        ("Sq´2 iota_3", "Sq^2 iota_3"),
        ("xˆ{12}", "x^{12}"),
        ("x´", "x'"),
        ("Sq^２ iota_3", "Sq^2 iota_3"),
        ("iota_１２", "iota_12"),
        ("Sq２ iota_3", "Sq^2 iota_3"),
    ],
)
def test_dead_keys_and_wide_digits_get_one_error(text: str, better: str) -> None:
    assert len(errors(text)) == 1 and mended(text) == better


@pytest.mark.parametrize("power", ["^∞", r"^\infty", r"^{\infty}", "^infty", "^oo", "^{oo}", "^{∞}", "^infinity"])
@pytest.mark.parametrize("word", ["RP", "CP", "HP"])
def test_infinite_projective_spaces(word: str, power: str) -> None:
    assert read(f"on {word}{power}") == read(f"on {word}")
    assert read(f"on {word}{power}(a) x RP^2") == read(f"on {word}(a) x RP^2")


@pytest.mark.parametrize("text", ["on X^∞", "on BO^oo", r"on K(Z^\infty, 2)", "x^∞", "RP^5 + ∞"])
def test_infinity_elsewhere_is_refused(text: str) -> None:
    errors(text)


@pytest.mark.parametrize(
    ("text", "better"),
    [
        ("on BO3", "on BO(3)"),
        ("on BO_3", "on BO(3)"),
        ("on BSpin_7 x X", "on BSpin(7) x X"),
        ("on RP3", "on RP^3"),
        ("on RP_3", "on RP^3"),
        ("on RP(3)", "on RP^3"),
        ("on CP(12)", "on CP^12"),
        ("on BO^3", "on BO(3)"),
        ("on lens_4", "on lens(4)"),
    ],
)
def test_numbers_of_spaces(text: str, better: str) -> None:
    (found,) = Session().run(Source("a.ops", text)).diagnostics
    assert found.mend is not None and text[: found.span[0]] + found.mend + text[found.span[1] :] == better


# --- displays ------------------------------------------------------------------------------------

DISPLAYS = [
    "\\begin{equation}\n\\mathrm{Sq}^1 \\mathrm{Sq}^2 = \\mathrm{Sq}^3\n\\end{equation}",
    "\\begin{equation*}\\label{a}\\mathrm{Sq}^1 \\mathrm{Sq}^2 = \\mathrm{Sq}^3.\\end{equation*}",
    "\\begin{align}\n  \\Sq^1 \\Sq^2 &= \\Sq^3\n\\end{align}",
    "\\begin{align*} \\Sq^1 \\Sq^2 \\\\ &= \\Sq^3 \\end{align*}",
    "\\[ \\begin{aligned} \\Sq^1 \\Sq^2 & = \\\\[2pt] & \\Sq^3 \\\\ \\end{aligned} \\]",
    "\\begin{multline}\n\\Sq^1 \\Sq^2 \\\\\n= \\Sq^3\n\\end{multline}",
]


@pytest.mark.parametrize("text", DISPLAYS)
def test_a_display_of_one_statement_is_that_statement(text: str) -> None:
    statement = read(text)
    assert statement == read("Sq^1 Sq^2 = Sq^3")
    assert [piece.text for piece in chunks(text.splitlines(keepends=True), "a.ops")] == [text]
    assert is_complete(text)


@pytest.mark.parametrize(
    "text",
    [
        "\\begin{align}\n\\Sq^1 \\Sq^1 &= 0 \\\\\n\\Sq^1 \\Sq^2 &= \\Sq^3\n\\end{align}",
        "\\begin{gather*} \\Sq^1 \\Sq^1 = 0, \\\\ \\Sq^1 \\Sq^2 = \\Sq^3. \\end{gather*}",
        "\\begin{align*} \\iota_3 \\\\ \\Sq^2 \\iota_3 \\end{align*}",
    ],
)
def test_a_display_of_several_statements_is_refused(text: str) -> None:
    (found,) = errors(text)
    assert found.name == "several-statements" and "a line" in f"{found.message} {found.help}"


def test_displays_in_scripts_keep_their_lines() -> None:
    text = "let x in H^2\n\\begin{equation}\n  \\Sq^2 x\n  = x^2\n\\end{equation}\nSq^1 x\n"
    text += "\\begin{align}\n\\Sq^1 x\n\nSq^3 x\n"
    pieces = [(piece.first_line, piece.text.count("\n")) for piece in chunks(text.splitlines(keepends=True), "a.ops")]
    assert pieces == [(1, 0), (2, 3), (6, 0), (7, 1), (10, 0)]
    assert not is_complete("\\begin{equation}\n\\Sq^2 x")


@pytest.mark.parametrize("text", ["\\begin{equation} x", "x \\end{align}", "\\begin{align} x \\end{equation}"])
def test_displays_are_closed_by_their_own_end(text: str) -> None:
    assert errors(text)[0].name in ("unclosed-bracket", "unopened-bracket", "bracket-mismatch")


def test_other_surroundings_are_not_read() -> None:
    assert errors("\\begin{cases} x \\end{cases}")[0].name == "unknown-command"
