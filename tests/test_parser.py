"""One statement at a time: its tree and places, or an error at the place, with the mend where one is likely."""

from __future__ import annotations

import time

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from opslang.ground.source import Source
from opslang.report.codes_syntax import SYNTAX_CODES
from opslang.report.diagnostic import Diagnostic
from opslang.syntax import surface as s
from opslang.syntax.layout import chunks
from opslang.syntax.parser import by_grammar, parse


def tree(text: str) -> s.Statement:
    statement, diagnostics = parse(Source("a.ops", text))
    assert statement is not None, (text, diagnostics)
    return statement


def factors(text: str) -> tuple[s.Factor, ...]:
    statement = tree(text)
    assert isinstance(statement, s.ExpressionStatement)
    ((_, product),) = statement.body.terms
    return product.factors


def the_error(text: str) -> Diagnostic:
    statement, diagnostics = parse(Source("a.ops", text))
    assert statement is None, text
    assert all(found.severity == "error" for found in diagnostics)
    return diagnostics[0]


# --- trees ---------------------------------------------------------------------------------------

x, y, n = s.Name("x"), s.Name("y"), s.IndexExpression("name", ("n",))


def total(*terms: s.Factor) -> s.Sum:
    return s.Sum(((1, s.Product(terms, ("",) * len(terms))),))


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("Sq^2x", (s.Operation("Sq", (2,)), x)),
        ("Sq^{4,2,1}", (s.Operation("Sq", (4, 2, 1)),)),
        ("Sq^{-1}", (s.Operation("Sq", (-1,)),)),
        ("Sq^n", (s.Operation("Sq", (n,)),)),
        (
            "Sq^{2n-1}",
            (s.Operation("Sq", (s.IndexExpression("difference", (s.IndexExpression("product", (2, n)), 1)),)),),
        ),
        ("Sq^{2(3+1), 2^3, binom(4,2)}", (s.Operation("Sq", (8, 8, 6)),)),
        ("Sq^{binom(3,5)}", (s.Operation("Sq", (0,)),)),
        ("Sq^{2^k}", (s.Operation("Sq", (s.IndexExpression("power", (2, s.IndexExpression("name", ("k",)))),)),)),
        ("Sq^{|x|} x", (s.Operation("Sq", (s.IndexExpression("length", (x,)),)), x)),
        ("Sq^{i_1 + 2}", (s.Operation("Sq", (s.IndexExpression("sum", (s.IndexExpression("name", ("i_1",)), 2)),)),)),
        ("P^3 P", (s.Operation("P", (3,)), s.Operation("P", ()))),
        ("beta beta_2 beta^2", (s.Bockstein(None), s.Bockstein(2), s.Power(s.Bockstein(None), 2))),
        ("Q_0 Q_1^2", (s.Milnor(0), s.Power(s.Milnor(1), 2))),
        ("iota_3''", (s.Fundamental(3, 2),)),
        ("x_3' x'_3", (s.Name("x", 3, 1), s.Name("x", 3, 1))),
        ("x^2_3", (s.Power(s.Name("x", 3), 2),)),
        ("2x", (s.Number(2), x)),
        ("(Sq^2)^3", (s.Power(s.Group(total(s.Operation("Sq", (2,)))), 3),)),
        ("Sq^2(x)^2", (s.Operation("Sq", (2,)), s.Power(s.Group(total(x)), 2))),
        ("chi(Sq^4)", (s.Conjugate(total(s.Operation("Sq", (4,)))),)),
        ("[x] y", (s.Group(total(x)), y)),
        ("f^*(x) y", (s.PullBack("f", total(x)), y)),
        ("f^* Sq^2 x y", (s.PullBack("f", total(s.Operation("Sq", (2,)), x)), y)),
        ("g_1^* x^2", (s.PullBack("g_1", total(s.Power(x, 2))),)),
        (r"\mathcal{P}(B)", (s.Operation("P", ()), s.Group(total(s.Name("B"))))),
        (r"\Sq^2 xy", (s.Operation("Sq", (2,)), x, y)),
    ],
)
def test_factors(text: str, expected: tuple[s.Factor, ...]) -> None:
    assert factors(text) == expected


def test_glue_and_signs() -> None:
    statement = tree("-x * y ∪ 2 + x ⊗ y - x ∘ y")
    assert isinstance(statement, s.ExpressionStatement)
    assert [(sign, product.glues) for sign, product in statement.body.terms] == [
        (-1, ("", "*", "cup")),
        (1, ("", "cross")),
        (-1, ("", "compose")),
    ]


Z, Z2, Z4 = s.Summand(0), s.Summand(2), s.Summand(4)


def space(*summands: s.Summand, degree: int = 3) -> s.EilenbergMacLane:
    return s.EilenbergMacLane(s.Coefficients(summands), degree)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("prime 3", s.PrimeStatement(3)),
        ("space X = K(Z/4, 3) x K(Z, 5)", s.SpaceStatement("X", s.SpaceProduct((space(Z4), space(Z, degree=5))))),
        ("on X", s.OnStatement(s.NamedSpace("X"))),
        ("on X_1'", s.OnStatement(s.NamedSpace("X_1'"))),
        ("on K(Z^2 + (Z/2 + Z)^3, 3)", s.OnStatement(space(s.Summand(0, 2), s.Summand(2, 3), s.Summand(0, 3)))),
        ("on K(Z/2^2, 3)", s.OnStatement(space(Z4))),
        ("on K(F_2, 3)", s.OnStatement(space(s.Summand(2, 1, True)))),
        ("on BO(3)", s.OnStatement(s.NamedSpace("BO", None, (s.Number(3),)))),
        (
            "on RP^5(a) x CP^2",
            s.OnStatement(s.SpaceProduct((s.NamedSpace("RP", 5, (s.Name("a"),)), s.NamedSpace("CP", 2)))),
        ),
        ("on thom(BO(3))", s.OnStatement(s.NamedSpace("thom", None, (s.NamedSpace("BO", None, (s.Number(3),)),)))),
        ("on lens(4)", s.OnStatement(s.NamedSpace("lens", None, (s.Number(4),)))),
        ("let x, y in H^2", s.DeclareStatement((x, y), 2)),
        ("let x in H^{n+1}", s.DeclareStatement((x,), s.IndexExpression("sum", (n, 1)))),
        ("let x in H^2(X)", s.DeclareStatement((x,), 2, "X")),
        ("let x in H^2(X; Z/4)", s.DeclareStatement((x,), 2, "X", s.Coefficients((Z4,)))),
        ("let x in H^2(; Z)", s.DeclareStatement((x,), 2, None, s.Coefficients((Z,)))),
        (
            "let x in H^2(RP^5 x BO(3); F_2)",
            s.DeclareStatement((x,), 2, "RP^5 x BO(3)", s.Coefficients((s.Summand(2, 1, True),))),
        ),
        ("let u = x", s.AbbreviateStatement(s.Name("u"), total(x))),
        ("x", s.ExpressionStatement(total(x))),
        ("x = y = x", s.RelationStatement((total(x), total(y), total(x)))),
        ("why x", s.WhyStatement(s.ExpressionStatement(total(x)))),
        ("why x = y", s.WhyStatement(s.RelationStatement((total(x), total(y))))),
        ("basis H^9(K(Z/2, 3))", s.BasisStatement(9, space(Z2))),
        ("basis H^9", s.BasisStatement(9)),
        ("series K(Z/2, 3) to 20", s.SeriesStatement(space(Z2), 20)),
        ("series to 20", s.SeriesStatement(None, 20)),
    ],
)
def test_statements(text: str, expected: s.Statement) -> None:
    assert tree(text) == expected
    assert by_grammar(text)[0] == expected


@pytest.mark.parametrize("text", ["", "   ", "# words", "\n \n", r"\[", r"\quad", "$$"])
def test_nothing_gives_nothing(text: str) -> None:
    assert parse(Source("a.ops", text)) == (None, ())


@pytest.mark.parametrize(
    ("text", "pieces"),
    [
        ("  Sq^{4} x_3'^2 + (y)", ["Sq^{4} x_3'^2 + (y)", "Sq^{4} x_3'^2", "Sq^{4}", "x_3'^2", "(y)"]),
        (r"$\mathrm{Sq}^{4} \iota_{3}'$.", [r"\mathrm{Sq}^{4} \iota_{3}'", r"\mathrm{Sq}^{4}", r"\iota_{3}'"]),
        (r"\left( \alpha \cup x \right)^2", [r"( \alpha \cup x \right)^2", r"\alpha \cup x", r"\alpha"]),
        ("Sq⁴ ι₃′", ["Sq⁴ ι₃′", "Sq⁴", "ι₃′"]),
    ],
)
def test_places(text: str, pieces: list[str]) -> None:
    found: set[str] = set()
    waiting: list[object] = [tree(text)]
    while waiting:
        node = waiting.pop()
        if isinstance(node, tuple):
            waiting += node
        elif hasattr(node, "span"):
            found.add(text[node.span[0] : node.span[1]])
            waiting += [getattr(node, name) for name in node.__slots__ if name not in ("span", "__weakref__")]
    assert set(pieces) <= found


# --- errors --------------------------------------------------------------------------------------

MENDED = [
    ("betax", "run-of-letters", "betax", "beta x"),
    ("x + xy", "run-of-letters", "xy", "x y"),
    ("Sqx", "run-of-letters", "Sqx", "Sq x"),
    ("xalpha", "run-of-letters", "xalpha", "x alpha"),
    ("sq^2 x", "run-of-letters", "sq", "Sq"),
    ("Sq^{nm} x", "run-of-letters", "nm", "n m"),
    ("Sq 4", "index-place", "Sq 4", "Sq^4"),
    ("Sq4 x", "index-place", "Sq4", "Sq^4"),
    ("Sq_4 x", "index-place", "Sq_4", "Sq^4"),
    ("P 3", "index-place", "P 3", "P^3"),
    (r"\mathrm{Sq} 12", "index-place", r"\mathrm{Sq} 12", r"\mathrm{Sq}^{12}"),
    ("Q2", "index-place", "Q2", "Q_2"),
    ("Q^2", "index-place", "Q^2", "Q_2"),
    ("iota3", "index-place", "iota3", "iota_3"),
    ("iota^3", "index-place", "iota^3", "iota_3"),
    ("x2 + y", "index-place", "x2", "x_2"),
    ("beta2 x", "index-place", "beta2", "beta_2"),
    ("on BO3", "index-place", "BO3", "BO(3)"),
    ("on RP5 x X", "index-place", "RP5", "RP^5"),
    ("on X1", "index-place", "X1", "X_1"),
    ("Sq^2^2", "two-powers", "Sq^2^2", "(Sq^2)^2"),
    ("x^2^3 y", "two-powers", "x^2^3", "(x^2)^3"),
    ("chi Sq^4", "chi-brackets", "chi Sq^4", "chi(Sq^4)"),
    ("chi Sq^{4,2} x", "chi-brackets", "chi Sq^{4,2}", "chi(Sq^{4,2})"),
    (r"\chi\Sq^4", "chi-brackets", r"\chi\Sq^4", r"\chi(\Sq^4)"),
    ("lte x in H^2", "unknown-statement", "lte", "let"),
    ("bassis H^9", "unknown-statement", "bassis", "basis"),
    ("Series to 20", "unknown-statement", "Series", "series"),
    ("no X", "unknown-statement", "no", "on"),
    ("x, y in H^2", "unknown-statement", "x", "let x"),
    ("K(Z/2, 3)", "unknown-statement", "K", "on K"),
    ("H^9(K(Z/2, 3))", "unknown-statement", "H", "basis H"),
    ("x == y", "expected", "==", "="),
    ("x ** 2", "expected", "**", "^"),
    ("{x + y} y", "expected", "{x + y}", "(x + y)"),
    ("let x H^2", "expected", "H", "in H"),
    ("let x in H_2", "expected", "_", "^"),
    ("$let x in H^12$", "expected", "12", "{12}"),
    ("prime = 3", "expected", "=", ""),
    ("Sq^2 x)", "unopened-bracket", ")", ""),
    ("x \\", "unfinished", "\\", ""),
    ("Sq^𝟐", "invalid-character", "𝟐", "2"),
]


@pytest.mark.parametrize(("text", "name", "place", "mend"), MENDED, ids=[text for text, *_ in MENDED])
def test_a_likely_mend_is_offered_and_mends(text: str, name: str, place: str, mend: str) -> None:
    found = the_error(text)
    assert found.name == name
    assert text[found.span[0] : found.span[1]] == place
    assert found.mend == mend
    mended = text[: found.span[0]] + mend + text[found.span[1] :]
    assert parse(Source("a.ops", mended))[0] is not None, mended


PLACED = [
    ("Sq^2(x + (y)", "unclosed-bracket", "("),
    ("Sq^2 (x]", "bracket-mismatch", "("),
    ("Sq^{2", "unclosed-bracket", "{"),
    ("x +", "expected", "+"),
    ("x + * y", "expected", "*"),
    ("x = ", "expected", "="),
    ("= x", "expected", "="),
    ("Sq^", "expected", "^"),
    ("x y /", "expected", "/"),
    ("x, y", "expected", ","),
    ("prime p", "expected", "p"),
    ("basis 9", "expected", "9"),
    ("series X", "expected", "X"),
    ("on K(Z/2)", "expected", ")"),
    ("let x", "expected", "x"),
    ("f^* Sq^2", "expected", "f^*"),
    ("iota x", "missing-index", "iota"),
    ("x_3_4", "misplaced-script", "_4"),
    ("x^2'", "misplaced-script", "'"),
    ("(x)_2", "misplaced-script", "_2"),
    ("iota_{3,2}", "many-indices", "_{3,2}"),
    ("let x^2 in H^4", "bad-name", "x^2"),
    ("let x, P in H^2", "name-taken", "P"),
    ("on K(Z/n, 3)", "group-number", "n"),
    ("Sq^{2^{10^9}}", "number-too-large", "2^{10^9}"),
    ("Sq^{binom(10^9, 10^8)}", "number-too-large", "binom(10^9, 10^8)"),
    ("Sq^{2^{-1}}", "index-not-integer", "2^{-1}"),
    ("x + … + y", "ellipsis", "…"),
    (r"\frac{1}{2} x", "unknown-command", r"\frac"),
    ("x + é", "invalid-character", "é"),
    ("x\0", "invalid-character", "\0"),
    ("x ? y", "invalid-character", "?"),
    ("x \udcff y", "invalid-byte", "\udcff"),
    ("x . y", "invalid-character", "."),
]


@pytest.mark.parametrize(("text", "name", "place"), PLACED, ids=[repr(text) for text, *_ in PLACED])
def test_errors_stand_at_their_place(text: str, name: str, place: str) -> None:
    found = the_error(text)
    assert (found.name, text[found.span[0] : found.span[1]]) == (name, place)


@pytest.mark.parametrize(
    ("text", "word"),
    [
        ("manifold M of dimension 5, oriented, with a in H^1", "manifold"),
        ("kernel Sq^2 on H^5(X)", "kernel"),
        ("image Sq^2 on H^5(X)", "image"),
        ("rank Sq^2 on H^5(X)", "rank"),
        ("relations H^5(M)", "relations"),
        ("solve Sq^2 Sq^4 = a Sq^6 for a", "solve"),
        ("for all n >= 1: Sq^{2n-1} Sq^n = 0", "for"),
        ("Sq^n x = 0 for n > 3", "for"),
        ("sum_{j=0}^{n} Sq^j", "sum"),
        (r"\sum_{j=0}^{n} \mathrm{Sq}^j", r"\sum"),
        ("x = ∑ y", "∑"),
    ],
)
def test_what_comes_later_is_named_and_never_misread(text: str, word: str) -> None:
    found = the_error(text)
    assert (found.name, text[found.span[0] : found.span[1]]) == ("not-yet-supported", word)


def test_messages_speak_of_the_field() -> None:
    assert the_error("x + * y").message == "expected an operation, a class or a number, not *"
    assert the_error("prime p").message == "expected a number, not p"
    assert "`to`" in the_error("series X").message
    assert the_error("on").help == "it is written: on K(Z/2, 3)"
    for text, *_ in [*PLACED, *MENDED]:
        message = the_error(text).message
        assert not any(token in message for token in ("LPAR", "CARET", "NUMBER", "$END", "Token", "LETTER"))


def test_every_name_is_explained_and_shown() -> None:
    shown = set()
    for name, code in SYNTAX_CODES.items():
        assert code.title and code.explanation
        if not code.example.startswith("$ "):
            pieces = list(chunks(code.example.split("\n"), "a.ops"))
            found = {one.name for piece in pieces for one in parse(piece)[1]}
            assert name in found, name
            shown.add(name)
    assert len(shown) > 20


def test_a_bad_statement_hides_no_other() -> None:
    script = "Sq^2(x\n\nSq^2 y\nSq^2 (\nlet u in H^2\nx +\non X\n\udc80\nx y\nkernel Sq^2\nprime 3"
    results = [(piece.first_line, parse(piece)[0] is not None) for piece in chunks(script.split("\n"), "a.ops")]
    assert results == [
        *((1, False), (3, True), (4, False), (5, True), (6, False)),
        *((7, True), (8, False), (9, True), (10, False), (11, True)),
    ]


# --- limits --------------------------------------------------------------------------------------


@pytest.mark.parametrize("depth", [100, 200])
@pytest.mark.parametrize("tex", ["", "$"])
def test_deep_brackets_are_read(depth: int, tex: str) -> None:
    assert parse(Source("a.ops", tex + "Sq^1(" * depth + "x" + ")" * depth + tex))[0] is not None


HOSTILE = {
    "5,000 brackets": "(" * 5000 + "x" + ")" * 5000,
    "5,000 open brackets": "Sq^2(" * 5000,
    "5,000 braces": "x^" + "{" * 5000,
    "a long line": "x + " * 250_000 + "x",
    "a long number": "Sq^" + "9" * 90_000,
    "a long word": "a" * 90_000,
    "many words": "ab " * 30_000,
    "many carets": "^" * 90_000,
    "many backslashes": "\\" * 89_999,
    "many chis": "chi " * 20_000,
    "a long index": "Sq^{" + "n+" * 40_000 + "n}",
    "a long list": "Sq^{" + "1," * 40_000 + "1}",
    "wide gaps": "^ " * 45_000,
    "labels": "\\label{" * 12_000,
}


@pytest.mark.parametrize("kind", HOSTILE)
def test_hostile_lines_end_soon_in_an_error(kind: str) -> None:
    by_grammar(r"\alpha")
    start = time.process_time()
    found = the_error(HOSTILE[kind])
    assert time.process_time() - start < 10
    assert len(found.message) < 200 and len(found.help) < 200


def test_the_limit_of_length_can_be_moved() -> None:
    text = "x + " * 100 + "x"
    assert parse(Source("a.ops", text), limit=400)[1][0].name == "long-statement"
    assert parse(Source("a.ops", text), limit=401)[0] is not None


@settings(max_examples=300, deadline=None)
@example("\\")
@example("{")
@example("Sq^{}")
@example("$.$")
@given(st.text(max_size=60) | st.text("Sqx^_{}()[]23 +=\\'*|$&,;.HKZ/", max_size=40))
def test_any_text_has_a_tree_or_a_placed_reason(text: str) -> None:
    statement, diagnostics = parse(Source("a.ops", text))
    if statement is None and not diagnostics:
        assert not any(char.isalnum() for char in text.split("#")[0].split("%")[0]) or "\\" in text
    for found in diagnostics:
        assert found.name in SYNTAX_CODES
        assert 0 <= found.span[0] <= found.span[1] <= len(text)
        assert (found.severity == "error") == (statement is None)
