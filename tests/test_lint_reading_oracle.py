"""The formulas found in TeX against those of pylatexenc, which reads LaTeX independently; and random input."""

from __future__ import annotations

import random
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.lint.reading import Document, Formula, read_text

DISPLAYS = ("equation", "align", "gather", "multline", "alignat", "eqnarray", "flalign", "displaymath", "math")
NAMES = frozenset(DISPLAYS) | {name + "*" for name in DISPLAYS}


def segments(text: str) -> list[tuple[int, int]]:
    """Where pylatexenc sees mathematics."""
    walker = pytest.importorskip("pylatexenc.latexwalker")

    def inside(nodes: object) -> Iterator[tuple[int, int]]:
        for node in nodes or ():  # type: ignore[attr-defined]
            if node is None:
                continue
            environment = getattr(node, "environmentname", None)
            if isinstance(node, walker.LatexMathNode) or environment in NAMES:
                yield node.pos, node.pos + node.len
                continue
            arguments = getattr(node, "nodeargd", None)
            if arguments is not None and arguments.argnlist:
                yield from inside(arguments.argnlist)
            yield from inside(getattr(node, "nodelist", None))

    nodes, _, _ = walker.LatexWalker(text, tolerant_parsing=False).get_latex_nodes()
    return sorted(set(inside(nodes)))


def ours(document: Document) -> list[tuple[int, int]]:
    """Where we see it."""
    return sorted({(formula.start, formula.end) for formula in document.formulas() if formula.file == 0})


INLINE = (
    "$x$", r"\(\Sq^2 x\)", r"$\text{if $i>0$ and } y_{1}$", r"$\frac{a}{b}$", r"$a\,b$", r"$\{x\}$",
    r"$\left(x\right)$",
)  # fmt: skip
WORDS = (
    "Let", "be", r"\emph{such a class}", r"a \textbf{bold $z$} word", r"\% per cent", r"\$5", r"\verb|$no$|",
    "% $no$\n", r"\footnote{See $w$ and \(v\).}", r"\cite{abc}", "{grouped $g$}", r"\label{a_b}", "``quoted''",
    "-- é𝔽 --", r"\\",
)  # fmt: skip
BLOCKS = (
    "\n\n", "\n", "\n\\[ y = z \\]\n", "\n$$ y \\mbox{for $k$} $$\n", "\n\\section{A heading $h$}\n",
    "\n\\begin{theorem} Any $t$. \\end{theorem}\n", "\n\\begin{itemize}\\item $i$ \\item[$l$] two\\end{itemize}\n",
    "\n\\begin{verbatim}\n$no$ \\[ no \\]\n\\end{verbatim}\n",
    *(f"\n\\begin{{{name}}} a &= b \\\\ &= c \\end{{{name}}}\n" for name in ("align", "gather*", "multline")),
    "\n\\begin{equation}\\begin{split} a &= b \\end{split}\\label{x}\\end{equation}\n",
)  # fmt: skip


def test_generated_papers_agree_with_another_reader() -> None:
    rng = random.Random(7)
    compared = 0
    for _ in range(150):
        parts = [rng.choice(rng.choice((INLINE, WORDS, WORDS, BLOCKS))) for _ in range(30)]
        text = "\\documentclass{article}\n\\begin{document}\n" + " ".join(parts) + "\n\\end{document}\n"
        theirs = segments(text)
        compared += len(theirs)
        assert ours(read_text(text)) == theirs, text
    assert compared > 1500


@pytest.mark.parametrize("name", ["short_words", "operad_squares", "postnikov_tower", "basis_notes", "odd_notes"])
def test_drafts_agree_with_another_reader(name: str) -> None:
    path = Path(__file__).parent / "drafts" / name / "main.tex"
    text = path.read_text(encoding="utf-8")
    body = text.index("\\begin{document}")
    theirs = {span for span in segments(text[body:]) if "\\intertext" not in text[body:][slice(*span)]}
    found = {(start - body, end - body) for start, end in ours(read_text(text))}
    assert len(theirs) > 15
    assert theirs - found == set()


PIECES = st.sampled_from(
    [
        *('$ $$ \\( \\) \\[ \\] { } [ ] ^ _ & \\\\ # #1 ## ~ % a x 12 \\Sq | \\ " ` ``` > - < é 𝔽'.split()),
        *("\n", "\n\n", " ", "\t", "\x00", "\\text{", "\\mathrm", "\\mathbb{", "\\def\\a#1", "\\def\\a{\\a\\a}", "\\a"),
        *("\\def\\b#1{\\b{#1#1}}", "\\b", "\\newcommand{\\a}[2][x]{#1 #2}", "\\let\\a\\b", "\\begin{align}"),
        *(
            "\\end{align}",
            "\\begin{theorem}[t]",
            "\\end{theorem}",
            "\\begin{tikzcd}",
            '\\arrow[r,"x"]',
            "\\end{tikzcd}",
        ),
        *("\\iffalse", "\\iftrue", "\\else", "\\fi", "\\footnote{", "\\section{", "\\item[", "\\intertext{", "\\verb|"),
        *("\\begin{verbatim}", "\\end{verbatim}", "\\left", "\\right.", "\\overset{a}", "\\underbrace{", "\\csname"),
        *("\\textcolor{red}{", "\\expandafter", "\\newenvironment{q}{\\begin{align}}{\\end{align}}", "\\begin{q}"),
        *("\\end{q}", "\\newif\\ifd", "\\ifd", "\\rm", "\\end{document}", "\\documentclass{a}", "\\xymatrix{"),
        *("\\ar[r]^x", "% opslang: macro \\a#1 = x#1\n", "\\ensuremath{", "\\input{a}", "\\newcommand"),
        *("\\hspace{2em}", "\\kern 3pt"),
    ]
)


@settings(max_examples=250, deadline=None)
@given(st.lists(PIECES | st.text(max_size=4), max_size=40), st.sampled_from(["x.tex", "x.md"]))
def test_any_text_is_read_to_its_end(parts: list[str], name: str) -> None:
    text = "".join(parts)
    document = read_text(text, name)
    size = len(document.files[0].text)
    for piece in document.pieces:
        assert 0 <= piece.start <= piece.end <= size
        assert not isinstance(piece, Formula) or piece.tokens
        depth = 0
        for token in piece.tokens if isinstance(piece, Formula) else ():
            assert 0 <= token.start <= token.end <= size
            depth += (token.kind in ("open", "begin")) - (token.kind in ("close", "end"))
            assert depth >= 0
        assert depth == 0, "what is handed out is balanced"


@settings(max_examples=60, deadline=None)
@given(st.binary(max_size=200), st.sampled_from(["x.tex", "x.md", "x.ipynb"]))
def test_any_bytes_are_read_to_their_end(data: bytes, name: str) -> None:
    assert read_text(data, name).files[0].encoding in ("utf-8", "utf-16", "latin-1")
