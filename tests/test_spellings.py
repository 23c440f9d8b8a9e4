"""ASCII, Unicode and TeX spellings of one thing parse to equal trees.

The spellings are those of the language reference; readings of TeX (one raised digit, letters side by side a product)
are TeX's own: Knuth 1984, The TeXbook, ch. 16.
"""

from __future__ import annotations

from itertools import combinations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.ground.source import Source
from opslang.syntax.parser import parse
from opslang.syntax.surface import Statement


def tree(text: str) -> Statement:
    statement, diagnostics = parse(Source("a.ops", text))
    assert statement is not None, (text, diagnostics)
    return statement


SAME = [
    (
        "Sq^4",
        "Sq⁴",
        r"\mathrm{Sq}^4",
        r"\operatorname{Sq}^{4}",
        r"\text{Sq}^4",
        r"\Sq^4",
        r"{\rm Sq}^4",
        r"$\mathit{Sq}^{4}$",
    ),
    ("Sq^{4,2,1}", "Sq^{4, 2,1}", r"\mathrm{Sq}^{4,2,1}", r"\Sq^{4,\,2,\,1}"),
    ("Sq^{42}", "Sq^42", "Sq⁴²", r"\mathrm{Sq}^{42}"),
    ("P^1 x", r"\mathcal{P}^1 x", r"\mathcal{P}^{1}x", "P¹ x", "𝒫¹x", r"\mathcal P^1 x", r"\mathscr{P}^1 x"),
    ("P(B)", r"\mathcal{P}(B)", r"\mathfrak{P}(B)", r"\mathfrak{P}\left(B\right)"),
    ("iota_3", "ι₃", r"\iota_3", r"\iota_{3}", "iota_{3}", "ι_3"),
    ("iota_3'", "ι₃'", "ι₃′", r"\iota_3'", r"\iota_{3}^{\prime}", r"\iota_3^\prime", "iota'_3", r"\iota'_{3}"),
    ("iota_10''", "ι₁₀″", r"\iota_{10}''", r"\iota_{10}^{\prime\prime}"),
    ("beta_2 x", "β₂ x", r"\beta_2 x", r"\beta_{2}x", r"\beta_2\,x"),
    ("beta x", "β x", "βx", r"\beta x", r"\beta{}x"),
    ("x ∪ y", "x cup y", r"x \cup y", r"x\smile y", r"x \smallsmile y", "x⌣y"),
    ("x ⊗ y", "x cross y", r"x \otimes y", "x × y", r"x\times y", "x⊗y"),
    ("x * y", "x · y", r"x \cdot y", "x⋅y", r"x\cdot{}y"),
    ("Sq^2 ∘ Sq^1", r"\mathrm{Sq}^2\circ\mathrm{Sq}^1"),
    ("x y", r"$xy$", r"\( xy \)", r"x\,y \! \quad", "$x~y$", r"x & y \\"),
    (
        "Sq^2(x + y)",
        r"\mathrm{Sq}^2\left( x + y \right)",
        r"\Sq^2\bigl(x+y\bigr)",
        r"\Sq^2\Big( x + y \Big).",
        "Sq²(x + y)",
    ),
    ("x - y", "x − y", r"x - y ,", r"\[ x - y \]"),
    ("-x^2 y_3", "−x² y₃", r"-x^2y_3.", r"- x^{2} y_{3}", r"$-x^2 {y}_3$"),
    ("x_3^2", "x₃²", r"\, x^2_3", r"x_{3}^{2}", r"x_{3}{}^2", "x_3^2."),
    ("alpha Gamma", "αΓ", r"\alpha\Gamma", r"\alpha \,\Gamma", "α Γ"),
    ("phi + epsilon", "φ + ε", r"\varphi + \varepsilon", r"\phi+\epsilon", "ϕ + ϵ"),
    ("chi(Sq^4)", "χ(Sq⁴)", r"\chi(\mathrm{Sq}^4)", r"\chi\left(\Sq^{4}\right)", "chi( Sq^{4} )"),
    ("Q_1 x", "Q₁x", r"Q_1 x", r"Q_{1}x", r"\mathcal{Q}_1 x"),
    ("f^*(x)", "f^* x", r"f^{*}(x)", r"f^\ast x", r"f^{\ast}(x)", "f^*x"),
    ("Sq^{2n-1}", "Sq²ⁿ⁻¹", r"\mathrm{Sq}^{2n-1}", "Sq^{2*n - 1}", r"\Sq^{2\cdot n-1}", "Sq^(2n-1)"),
    ("Sq^n", "Sqⁿ", r"\Sq^n", r"\mathrm{Sq}^{n}"),
    ("Sq^{2^k}", r"\mathrm{Sq}^{2^k}", r"\Sq^{2^{k}}"),
    ("Sq^{binom(n, k)}", r"\Sq^{\binom{n}{k}}", r"\Sq^{\tbinom{n}{k}}"),
    ("Sq^{|x|} x", r"\Sq^{|x|} x", r"\Sq^{\lvert x \rvert}x", r"\Sq^{\left|x\right|}x"),
    ("Sq^2 Sq^2 = Sq^3 Sq^1 = y", r"\Sq^2\Sq^2 &= \Sq^3\Sq^1 \\ &= y.", "Sq²Sq² = Sq³Sq¹ = y"),
    (
        "on K(Z/2, 3)",
        r"on K(\mathbb{Z}/2, 3)",
        "on K(ℤ/2, 3)",
        r"on K(\Z/2,3)",
        "on K(Z_2, 3)",
        "on K(ℤ₂, 3)",
        r"on K(\mathbb{Z}_2, 3)",
    ),
    ("on K(Z/2, 3)", r"on K(\mathbb{Z}/2\mathbb{Z}, 3)", "on K(Z/2Z, 3)", r"on K(\mathbb Z/2, 3)", "on K(Z/(2), 3)"),
    ("on K(F_2, 3)", r"on K(\mathbb{F}_2, 3)", "on K(𝔽₂, 3)", r"on K(\F_{2}, 3)"),
    ("on K(Z/4, 2)", "on K(Z/2^2, 2)", r"on K(\mathbb{Z}/2^2, 2)", r"on K(\Z/{2^2},2)"),
    (
        "on K((Z/2)^2, 2)",
        "on K((ℤ/2)², 2)",
        r"on K((\mathbb{Z}/2)^{2}, 2)",
        r"on K(\left(\Z/2\right)^2,2)",
        "on K(Z_2^2, 2)",
    ),
    ("on K(Z/4 + Z, 2)", "on K(Z/4 ⊕ Z, 2)", r"on K(\mathbb{Z}/4 \oplus \mathbb{Z}, 2)", "on K(Z/4 x Z, 2)"),
    (
        "on K(Z, 2) x K(Z, 3)",
        "on K(Z,2)×K(Z,3)",
        r"on K(\Z,2) \times K(\Z,3)",
        "on K(Z,2)xK(Z,3)",
        "on (K(Z,2) x K(Z,3))",
    ),
    (
        "on RP^5 x CP^2",
        "on RP⁵ × CP²",
        r"on \mathbb{R}P^5 \times \mathbb{C}P^2",
        "on ℝP⁵×ℂP²",
        "on RP^5xCP^2",
        r"on \RP^5\times\CP^2",
    ),
    ("space B = BSO(3)", r"space B = B\mathrm{SO}(3)", r"space B = \mathrm{BSO}(3)"),
    (
        "let x, y in H^2(X; F_2)",
        "let x, y ∈ H²(X; 𝔽₂)",
        r"let x, y \in H^2(X;\mathbb{F}_2)",
        "let x,y in H^{2}(X, F_2)",
    ),
    ("let z in H^3(BSO(3); Z/4)", r"let z \in H^3(B\mathrm{SO}(3); \mathbb{Z}/4).", "let z ∈ H³(BSO(3); ℤ/4)"),
    ("let u = Sq^2 x", r"let u = \mathrm{Sq}^2 x", "let u = Sq² x"),
    ("basis H^9(K(Z/2, 3))", r"basis H^9(K(\mathbb{Z}/2, 3))", "basis H⁹(K(ℤ/2, 3))"),
    ("series K(Z/4, 3) to 20", r"series K(\Z/4,3) to 20", "series K(ℤ/4,3) to 20"),
    ("why Sq^2 Sq^2", r"why $\mathrm{Sq}^2 \mathrm{Sq}^2$", "why Sq²Sq²"),
]


@pytest.mark.parametrize("spellings", SAME, ids=lambda spellings: spellings[0])
def test_spellings_give_equal_trees(spellings: tuple[str, ...]) -> None:
    first, *others = spellings
    for other in others:
        assert tree(other) == tree(first), other


def test_different_things_stay_different() -> None:
    trees = {first: tree(first) for first, *_ in SAME}
    for first, second in combinations(trees, 2):
        assert trees[first] != trees[second], (first, second)


def test_tex_raises_one_digit_with_a_warning() -> None:
    statement, diagnostics = parse(Source("a.ops", r"\mathrm{Sq}^12 x^12 \iota_12"))
    assert statement == tree(r"\mathrm{Sq}^1 2 x^1 2 \iota_1 2")
    assert [found.name for found in diagnostics] == ["tex-script"] * 3
    assert [found.mend for found in diagnostics] == ["{12}"] * 3
    assert tree("Sq^12 x^12 iota_10") == tree(r"\Sq^{12} x^{12} \iota_{10}")


def test_percent_is_a_comment_in_tex_spelling_only() -> None:
    assert tree("\\alpha % and so on\n + x") == tree("alpha + x")
    assert parse(Source("a.ops", "x % y"))[1][0].name == "invalid-character"


# --- random expressions, spelled three ways --------------------------------------------------------

_number = st.integers(1, 130)
_UP = str.maketrans("0123456789,", "⁰¹²³⁴⁵⁶⁷⁸⁹ ")
_DOWN = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
Spelled = tuple[str, str, str]


def _operation(number: int) -> Spelled:
    return f"Sq^{number} ", f"Sq{str(number).translate(_UP)}", rf"\mathrm{{Sq}}^{{{number}}}"


def _class(letter: tuple[str, str, str], index: int, power: int) -> Spelled:
    plain, sign, tex = letter
    return (
        f"{plain}_{index}^{power} ",
        f"{sign}{str(index).translate(_DOWN)}{str(power).translate(_UP)}",
        f"{tex}_{{{index}}}^{{{power}}}",
    )


def _joined(parts: list[Spelled], between: Spelled) -> Spelled:
    return tuple(between[way].join(part[way] for part in parts) for way in range(3))  # type: ignore[return-value]


_letters = st.sampled_from([("x", "x", "x"), ("alpha", "α", r"\alpha"), ("iota", "ι", r"\iota"), ("B", "B", "{B}")])
_atoms = st.builds(_class, _letters, _number, _number)
_glues = st.sampled_from(
    [(" ", "", r"\,"), (" * ", "·", r" \cdot "), (" cup ", "∪", r"\cup "), (" cross ", "⊗", r"\otimes ")]
)
_applied = st.builds(
    lambda words, of: _joined([*words, of], ("", "", "")), st.lists(st.builds(_operation, _number), max_size=3), _atoms
)
_products = st.builds(_joined, st.lists(_applied, min_size=1, max_size=3), _glues)
_sums = st.builds(
    _joined, st.lists(_products, min_size=1, max_size=3), st.sampled_from([(" + ", "+", "+"), (" - ", "−", "-")])
)
_bracketed = st.builds(
    lambda word, inner: (f"{word[0]}({inner[0]})", f"{word[1]}({inner[1]})", rf"{word[2]}\left({inner[2]}\right)"),
    st.builds(_operation, _number),
    _sums,
)
_expressions = st.builds(_joined, st.lists(_bracketed | _sums, min_size=1, max_size=3), st.just((" + ", " + ", " &+ ")))
_relations = st.builds(_joined, st.lists(_expressions, min_size=1, max_size=3), st.just((" = ", "=", r" \\ &= ")))


@settings(max_examples=80, deadline=None)
@given(_relations)
def test_random_relations_in_three_spellings(spelled: Spelled) -> None:
    plain, signs, tex = spelled
    assert tree(signs) == tree(plain)
    assert tree(f"${tex}$.") == tree(plain)
