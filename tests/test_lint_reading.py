"""Reading TeX drafts: which formulas are found, what macros leave, where each token stands.

What TeX does with a construct is common practice unless a source is named.
"""

from __future__ import annotations

import re
from pathlib import Path
from time import process_time

import pytest

from opslang.lint.reading import Directive, Document, Formula, Text, read, read_text

HARD = Path(__file__).parent / "data" / "reading" / "hard.tex"


def spell(formula: Formula) -> str:
    """The tokens of a formula with blanks between them; styles in front."""
    return " ".join(f"{token.style}:{token.text}" if token.style else token.text for token in formula.tokens)


def only(source: str, name: str = "x.tex") -> str:
    """The one formula of a draft."""
    (formula,) = read_text(source, name).formulas()
    return spell(formula)


def spelled(source: str) -> list[str]:
    """All formulas of a draft."""
    return [spell(formula) for formula in read_text(source).formulas()]


def names(document: Document) -> list[str]:
    """The marked letters in the formulas of the hard file: A_1, B_2, …"""
    found = []
    for formula in document.formulas():
        found += re.findall(r"\b[A-Z] _ \d", spell(formula))
    return found


def test_every_kind_of_formula_is_found_and_nothing_else() -> None:
    document = read(str(HARD))
    wanted = "A1 B1 B2 C1 D1 E1 F1 G1 H1 I1 J1 J2 K1 L1 M1 N1 N2 O1 P1 P2 Q1 R1 S1 T1 T2 U1 U2".split()
    assert sorted(set(names(document))) == [f"{name[0]} _ {name[1]}" for name in wanted]
    assert "NOT" not in "".join(spell(formula) for formula in document.formulas())
    assert [(notice.name, document.place(notice).line) for notice in document.notices] == [("formula-not-closed", 33)]


@pytest.mark.parametrize(
    ("source", "kind"),
    [
        ("$x$", "inline"),
        (r"\(x\)", "inline"),
        (r"\ensuremath{x}", "inline"),
        (r"\begin{math}x\end{math}", "inline"),
        ("$$x$$", "display"),
        (r"\[x\]", "display"),
        (r"\begin{displaymath}x\end{displaymath}", "display"),
        *(
            (rf"\begin{{{name}}}x\end{{{name}}}", name)
            for name in ("equation", "equation*", "align", "align*", "gather", "multline", "eqnarray")
        ),
        (r"\begin{alignat}{2}x\end{alignat}", "alignat"),
        (r"\begin{empheq}[box=\fbox]{align*}x\end{empheq}", "align*"),
        (r"\begin{subequations}\begin{align}x\end{align}\end{subequations}", "align"),
        (r"\begin{tikzcd}[column sep=small]x\end{tikzcd}", "tikzcd"),
        (r"\newcommand{\be}{\begin{equation}}\newcommand{\ee}{\end{equation}}\be x \ee", "equation"),
        (r"\newenvironment{eq}{\begin{equation}}{\end{equation}}\begin{eq}x\end{eq}", "equation"),
        (r"\def\[#1\]{}\[x\]", "display"),
    ],
)
def test_kinds(source: str, kind: str) -> None:
    (formula,) = read_text(source).formulas()
    assert (formula.kind, spell(formula)) == (kind, "x")


def test_inner_environments_stay_inside_their_display() -> None:
    cases = r"\[ f = \begin{cases} 0 & \text{if $i>0$} \\ 1 \end{cases} \]"
    first, second = spelled(cases + r"\begin{equation}\begin{split}a&=b\\&=c\end{split}\end{equation}")
    assert first == r"f = cases 0 & if  $ i > 0 $ \\ 1 cases"
    assert second == r"split a & = b \\ & = c split"


def test_text_in_mathematics_is_one_token() -> None:
    (formula,) = read_text(r"$a \quad\text{if }i \mbox{ and  so} \textrm{on}$").formulas()
    assert [token.text for token in formula.tokens if token.kind == "text"] == ["if ", " and so", "on"]
    assert only(r"$\text{for $x \in \mbox{a $y$ b}$ and}$") == r"for  $ x \in a  $ y $  b $  and"


@pytest.mark.parametrize(
    ("source", "left"),
    [
        (r"\left( x \right. \bigl[ y \Bigr]", "( x [ y ]"),
        (r"a\,b\;c\!d~e\ f", "a b c d e f"),
        (r"\textcolor{red}{x} \color{blue} y \mathclap{z}", "x y z"),
        (r"\sum_{\mathclap{i+j=k}} x^{\textcolor{red}{12}}", r"\sum _ { i + j = k } x ^ { 1 2 }"),
        (r"x^\textcolor{red}{12}", "x ^ { 1 2 }"),
        (r"\textcolor{red}{a \choose b}", r"{ a \choose b }"),
        (r"x \label{eq:x} \tag{$*$} \notag \nonumber \qedhere \pause", "x"),
        (r"\vphantom{y} x \phantom{=} \displaystyle y \limits", "x y"),
        (r"x \overset{\text{def}}{=} y", r"x \text {def} = y"),
        (r"x \stackrel{(1)}{=} y", r"x (1) = y"),
        (r"\underbrace{x+y}_{2} z", "x + y z"),
        (r"x \kern-3pt plus 1fil y \hskip 2em z", "x y z"),
        (r"a \quad b \hspace{2em} c \hspace{1pt} d", r"a \quad b \hspace c d"),
        (r"a \\[2pt] b \\* c \cr d", r"a \\ b \\ c \\ d"),
        (r"\le \ge \ne \rightarrow \lbrack \vert \ast", r"\leq \geq \neq \to [ | *"),
        (r"\tfrac12 \dbinom{n}{k}", r"\frac 1 2 \binom { n } { k }"),
        (r"\mathchoice{a}{b}{c}{d} e", "a e"),
        (r"\only<2->{x} \alert{y}", "x y"),
        ("x''", "x ' '"),
        (r"x = y \eqno (1)", "x = y"),
        (r"x \not= y \not\in z \not\sim w", r"x \neq y \notin z \not \sim w"),
        (r"\unknowncommand{x}", r"\unknowncommand { x }"),
    ],
)
def test_layout_falls_away(source: str, left: str) -> None:
    assert only(f"${source}$") == left


@pytest.mark.parametrize(
    ("source", "left"),
    [
        (r"\mathrm{Sq}^2", "rm:Sq ^ 2"),
        (r"{\rm Sq}^2", "rm:Sq ^ 2"),
        (r"\operatorname{Sq}^2", "rm:Sq ^ 2"),
        (r"\mathop{\mathrm{Sq}}\nolimits^2", "rm:Sq ^ 2"),
        (r"\mathbb{Z}/2 \mathbb Z \mathbb{CP}^2", "bb:Z / 2 bb:Z bb:CP ^ 2"),
        (r"\mathcal{P}^1 \mathcal A \mathfrak{P}", "cal:P ^ 1 cal:A frak:P"),
        (r"\mathsf{Sq}\mathrm{d}x", "sf:Sq rm:d x"),
        (r"\mathrm{H^2}", "{ rm:H ^ 2 }"),
        (r"Sq^12", "S q ^ 1 2"),
    ],
)
def test_alphabets(source: str, left: str) -> None:
    assert only(f"${source}$") == left


@pytest.mark.parametrize(
    ("definition", "call", "left"),
    [
        (r"\newcommand{\Sq}{\mathrm{Sq}}", r"\Sq^2", "rm:Sq ^ 2"),
        (r"\newcommand*{\Sq}{\text{Sq}}", r"\Sq^2", "Sq ^ 2"),
        (r"\newcommand\Sq{\mathrm{Sq}}", r"\Sq^2", "rm:Sq ^ 2"),
        (r"\DeclareMathOperator*{\Sq}{Sq}", r"\Sq^2", "rm:Sq ^ 2"),
        (r"\DeclareRobustCommand{\Sq}{S}", r"\Sq", "S"),
        (r"\newcommand*{\SQ}{Sq}\newcommand*{\Sq}[1]{\SQ^{#1}}", r"\Sq i", "S q ^ { i }"),
        (r"\newcommand*{\Sq}[1]{S^{#1}}", r"\Sq0(1)", "S ^ { 0 } ( 1 )"),
        (r"\newcommand*{\Sq}[1]{S^{#1}}", r"\Sq\alpha", r"S ^ { \alpha }"),
        (r"\newcommand*{\Sq}[1]{S^{#1}}", r"\Sq  {12}", "S ^ { 1 2 }"),
        (r"\newcommand{\w}[2]{w_{#1}(#2)}", r"\w{i}{\N M}", r"w _ { i } ( \N M )"),
        (r"\newcommand{\w}[2][k]{w_{#1}(#2)}", r"\w{E}\w[2]F", "w _ { k } ( E ) w _ { 2 } ( F )"),
        (r"\def\pair<#1,#2>{\langle #1|#2\rangle}", r"\pair<a,{b,c}>", r"\langle a | b , c \rangle"),
        (r"\def\pair<#1,#2>{#2#1}", r"\pair<a b,{c}>", "c a b"),
        (r"\def\S#1{x#1}\gdef\T{y}", r"\S2\T", "x 2 y"),
        (r"\let\iso\cong", r"\iso", r"\cong"),
        (r"\let\iso=\cong \renewcommand{\cong}{x}", r"\iso \cong", r"\cong x"),
        (r"\newcommand{\a}{x}\let\b\a \renewcommand{\a}{y}", r"\a\b", "y x"),
        (r"\let\oldphi\phi \renewcommand{\phi}{\oldphi'}", r"\phi", r"\phi '"),
        (r"\providecommand{\a}{x}\providecommand{\a}{y}", r"\a", "x"),
        (r"\renewcommand{\u}{\upsilon}\renewcommand{\v}[1]{v_{#1}}\def\H{H^*}\let\d\delta\def\l{\lambda}",
         r"\u \v i \H \d \l", r"\upsilon v _ { i } H ^ * \delta \lambda"),
        (r"\newcommand{\make}[1]{\newcommand{\out}[1]{##1#1}}\make{y}", r"\out x", "x y"),
        (r"\newcommand{\x}{\ensuremath{X}}", r"\x", "X"),
        (r"\makeatletter\newcommand{\@in}{x}\newcommand{\out}{\@in y}\makeatother", r"\out", "x y"),
        (r"\newcommand{\name}[1]{\expandafter\newcommand\csname c#1\endcsname{\mathcal{#1}}}\name{A}", r"\cA", "cal:A"),
        (r"\NewDocumentCommand{\Sq}{m}{S^{#1}}", r"\Sq2", "S ^ { 2 }"),
        (r"\DeclarePairedDelimiter{\abs}{\lvert}{\rvert}", r"\abs{x}", r"\lvert x \rvert"),
        (r"\newcommand{\Sq}% a comment" + "\n" + r"  [1]{S^{#1}}", r"\Sq2", "S ^ { 2 }"),
        ("% opslang: macro \\Sq#1 = S^{#1}\n\\newcommand{\\Sq}[1]{T}", r"\Sq2", "S ^ { 2 }"),
    ],
)  # fmt: skip
def test_macros(definition: str, call: str, left: str) -> None:
    assert only(f"{definition} ${call}$") == left
    whole = f"\\documentclass{{article}}\n{definition}\n\\begin{{document}}\n${call}$\n\\end{{document}}"
    assert only(whole) == left


def test_what_is_no_mathematics() -> None:
    assert spelled(r"\% $a$ \$5 % $b$" + "\n" + r"\verb|$c$| \verb*+$d$+ \url{x_$y} \href{a%$e$}{$f$}") == ["a", "f"]
    for name in ("verbatim", "lstlisting", "minted", "comment", "Verbatim*"):
        assert spelled(rf"\begin{{{name}}}$a$\end{{{name}}}$b$") == ["b"]
    assert spelled(r"\DefineVerbatimEnvironment{code}{Verbatim}{}\begin{code}$a$\end{code}$b$") == ["b"]
    assert spelled(r"\begin{document}$a$\end{document}$b$") == ["a"]
    assert spelled(r"\newcolumntype{C}{>{$}c<{$}} $a$") == ["a"]
    assert spelled(r"\newtheorem{lem}{Lemma $x$}[section] $a$") == ["a"]


def test_conditionals() -> None:
    assert spelled(r"\iffalse $a$ \iftrue $b$ \fi $c$ \else $d$ \fi $e$") == ["d", "e"]
    assert spelled(r"\iftrue $a$ \else $b$ \fi $c$") == ["a", "c"]
    assert spelled(r"\newif\ifdraft \ifdraft $a$ \else $b$ \fi \drafttrue \ifdraft $c$ \fi") == ["b", "c"]
    assert spelled(r"\newcommand{\x}{\ifmmode y\else $z$\fi} $\x$ \x") == ["y", "z"]
    assert spelled(r"$a \ifx\b\c d\else e\fi$ $f$") == ["f"], "both branches in one formula cannot be read"


def test_places_of_pieces() -> None:
    source = (
        "\\section{On $a$}\\begin{theorem}[of $b$]$c$\\footnote{$d$} and $e$\\end{theorem}\n"
        "\\begin{itemize}\\item[$f$] $g$\\end{itemize}\\caption{$h$}\\marginnote{$i$}\\subsection*{Deep}$j$\n\n"
        "\\begin{abstract}$k$\\end{abstract}"
    )
    found = {
        spell(formula): (formula.where.place, [env.name for env in formula.where.environments], formula.where.section)
        for formula in read_text(source).formulas()
    }
    top = ("On $a$",)
    assert found == {
        "a": ("title", [], ()),
        "b": ("title", ["theorem"], top),
        "c": ("body", ["theorem"], top),
        "e": ("body", ["theorem"], top),
        "d": ("footnote", ["theorem"], top),
        "f": ("item", ["itemize"], top),
        "g": ("body", ["itemize"], top),
        "h": ("caption", [], top),
        "i": ("margin", [], top),
        "j": ("body", [], (*top, "Deep")),
        "k": ("abstract", ["abstract"], (*top, "Deep")),
    }


def test_a_footnote_comes_after_its_sentence() -> None:
    document = read_text("One $a$ two\\footnote{note $b$} three $c$.\n\nNext $d$.")
    shown = [piece.text.strip() if isinstance(piece, Text) else spell(piece) for piece in document.pieces
             if not isinstance(piece, Directive)]  # fmt: skip
    assert shown == ["One", "a", "two three", "c", ".", "note", "b", "Next", "d", "."]
    paragraphs = [piece.where.paragraph for piece in document.pieces]
    assert paragraphs[:5] == [0] * 5 and len(set(paragraphs)) == 3


def test_intertext_parts_a_display() -> None:
    document = read_text(r"\begin{align} a \\ \intertext{so, by $b$,} c \end{align}")
    shown = [(spell(f), f.kind, f.where.place, f.continues) for f in document.formulas()]
    assert shown == [
        (r"a \\", "align", "body", False),
        ("b", "inline", "intertext", False),
        ("c", "align", "body", True),
    ]


def test_labels_of_diagrams() -> None:
    document = read_text(
        r"\[\begin{tikzcd} A \arrow[r, bend left, "
        r"""\Sq^2, swap="{f,g}"', near start] & B \ar{d}{h} \\ & C \end{tikzcd}\]""".replace("\\Sq^2,", '"\\Sq^2",')
    )
    assert [(spell(f), f.where.place) for f in document.formulas()] == [
        (r"tikzcd A & B \\ & C tikzcd", "body"),
        (r"\Sq ^ 2", "label"),
        ("{ f , g }", "label"),
        ("h", "label"),
    ]
    assert spelled(r"$\xymatrix@C=2pc{A \ar[r]^{f}_g & B}$") == ["xymatrix A & B xymatrix", "f", "g"]


def test_directives() -> None:
    document = read_text("a % opslang: let x in H^2\n\\[ x % opslang: skip\n\\] \\% opslang: no")
    found = [piece for piece in document.pieces if isinstance(piece, Directive)]
    assert [piece.text for piece in found] == ["let x in H^2", "skip"]
    assert document.raw(found[0]) == "% opslang: let x in H^2"
    assert spelled("\\[ x % opslang: skip\n y\\]") == ["x y"]


def test_text_is_words_with_their_places() -> None:
    source = "The \\emph{class}  Poincar\\'e~of\n degree~5, see \\cite[p.~3]{x} and $x$"
    document = read_text(source)
    text = document.pieces[0]
    assert isinstance(text, Text)
    assert text.text == "The class Poincaré of degree 5, see and "
    for word in ("class", "degree", "5", "see", "and"):
        at = text.text.index(word)
        start, end = text.span(at, at + len(word))
        assert source[start:end] == word


def test_positions_are_code_points_of_the_source() -> None:
    source = "é𝔽 $x$\r\n\r\n\\newcommand{\\Sq}[1]{\\mathrm{Sq}^{#1}}\r\n$\\Sq{12} y$"
    document = read_text(source)
    first, second = document.formulas()
    assert (document.place(first).line, document.place(first).column, document.place(first).end_column) == (1, 4, 7)
    name, _, _, one, two, _, y = second.tokens
    assert [document.place(token).column for token in (name, one, two, y)] == [2, 6, 7, 10]
    assert document.place(name).line == 4 and document.raw(name) == r"\Sq{12}" and document.raw(two) == "2"
    assert one.within is None and y.within is None and name.within is not None
    file, start, end = name.within
    assert document.files[file].text[start:end] == "Sq"
    assert document.files[0].newline == "\n", "given as text"


def test_bytes_that_are_no_utf8() -> None:
    document = read_text("caf\xe9 $x$".encode("latin-1"))
    assert [notice.name for notice in document.notices] == ["not-utf-8"]
    assert document.place(next(document.formulas())).column == 6
    marked = read_text(b"\xef\xbb\xbf$x$\r\n$y$")
    assert marked.files[0].mark and marked.files[0].newline == "\r\n"
    assert [marked.place(formula).line for formula in marked.formulas()] == [1, 2]


@pytest.mark.parametrize(
    ("source", "left"),
    [
        ("An unclosed $ here.\n\nThen $x$.", ["x"]),
        ("Broken $x^{2$ and\n\n$y$", ["y"]),
        ("A $a$ b $c d.\n\n$y$", ["y"]),
        ("$a$ \\[ b \n\n $c$", ["a", "c"]),
        ("\\begin{align} a &= \n\n $b$ \\end{align} $c$", ["b", "c"]),
        ("$a \\begin{equation} b \\end{equation} $c$", ["b", "c"]),
        ("\\begin{theorem} $a \\end{theorem} $b$", ["b"]),
        ("Stray } and $x$", ["x"]),
        ("$x$ \\", ["x"]),
        ("{" * 3000 + "$x$" + "}" * 3000 + "$y$", ["x", "y"]),
        ("$" + "{" * 3000 + "x" + "}" * 3000 + "$", ["{ " * 3000 + "x" + " }" * 3000]),
        ("\\footnote{never closed $a$\n\n\\section{S} $b$", ["a", "b"]),
        ("\\newcommand{\\a}{never closed $x$\n\n$y$", ["x", "y"]),
        ("$\\text{a$ b}$ c\n\n$y$", ["y"]),
        ("\\begin{verbatim} never closed $x$\n\n$y$", ["x", "y"]),
        ("$x} y$ $z$", ["z"]),
        ("$\\frac{1}{2$ \\(x\\)\n\n$y$", ["x", "y"]),
        ("\\(x \\[ y \\]", ["y"]),
        ("$$ x $ y $$\n\n$z$", ["z"]),
        ("\\section{never closed $a$\n\n$b$", ["a", "b"]),
        ("\\item[$a$ $b$\n\n$c$", ["a", "b", "c"]),
    ],
)
def test_broken_tex_loses_a_paragraph_and_not_the_file(source: str, left: list[str]) -> None:
    found = spelled(source)
    assert found[-1] == left[-1]
    assert set(found) <= set(left)
    assert len(found) >= len(left) - 1


@pytest.mark.parametrize(
    "definition",
    [
        r"\def\a{\a}",
        r"\def\a{\a\a}",
        r"\def\a{x\a}",
        r"\def\a#1{\a{#1#1}}",
        r"\def\a#1{\a{#1}\a{#1}}",
        r"\def\a{\b\b}\def\b{\a\a}",
        r"\let\a\b \let\b\a",
        r"\newenvironment{q}{\begin{q}}{\end{q}}\def\a{\begin{q}}",
        "".join(rf"\def\{chr(98 + i)}{{{(chr(92) + chr(97 + i)) * 10}}}" for i in range(20)) + r"\def\a{xxxxxxxxxx}\u",
    ],
)
def test_macros_without_end_are_cut_off(definition: str) -> None:
    document = read_text(f"{definition} $\\a{{y}}$\n\nLater $z$.")
    assert [spell(formula) for formula in document.formulas()][-1] == "z"
    assert len(document.pieces) < 20


def test_the_same_draft_twice_is_the_same() -> None:
    assert read(str(HARD)) == read(str(HARD))


def test_the_time_of_reading_grows_as_the_paper() -> None:
    """Four times the paper takes well under sixteen times as long (the speed itself is measured, not tested)."""
    head = HARD.read_text().partition("\\begin{document}")[0]
    paragraph = r"""
Let $X$ be a space and $x \in H^n(X;\mathbb{Z}/2)$ a class of degree $n$; squares are stable operations, natural
in the evident sense, and the formula of Cartan holds for them, as has been said in the section before this one.
\begin{align*}
\Sq^2 (x y) &= \Sq^2 x \cdot y + \Sq^1 x \Sq^1 y + x \Sq^2 y \\
\St i \St j \iota_n &= \sum_k \binom{j-k-1}{i-2k} \St{i+j-k} \St k \iota_n , \quad \text{for $0 < i < 2j$}
\end{align*}
"""
    seconds = []
    for copies in (40, 160):
        source = head + "\\begin{document}" + paragraph * copies + "\\end{document}"
        best = float("inf")
        for _ in range(3):
            start = process_time()
            document = read_text(source)
            best = min(best, process_time() - start)
        assert sum(1 for _ in document.formulas()) == 4 * copies
        seconds.append(best)
    assert seconds[1] < 10 * seconds[0], seconds
