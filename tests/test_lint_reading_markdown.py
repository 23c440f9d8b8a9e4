"""Markdown and notebooks: formulas, code, headings, and their places in the file.

The spans are compared with those of markdown-it-py and its plug-in for dollars, which reads Markdown independently.
"""

from __future__ import annotations

import json
import random

import pytest

from opslang.lint.reading import Directive, Document, cell_at, read_text

PAGE = r"""---
title: $NOT$
---
# Squares $A$ here

Text **bold** $B$, \$5 and \$6, `$NOT$`, ``a ` $NOT$``, {math}`C`, [link](http://x.y/$NOT$), costs $5 and $6.

```python
$NOT$
```

~~~{math}
:label: foo
D
~~~

```math
E
```

    $NOT$ indented code

- item $F$
- other

    still $G$

> a quotation $$
> H
> $$

$$
I \text{ for $x$}
$$ (label)

\begin{align}
J &= 2
\end{align}

<!-- opslang: let x in H^2 --> <!-- $NOT$ -->
% opslang: skip
\(K\) and \\[L\\]

:::{note}
:class: tip
Inside $M$[^1].
:::

```{admonition} Title
Inside $N$.
```

[^1]: Foot $O$.

$$\newcommand{\St}[1]{\mathrm{Sq}^{#1}}$$

Then $\St{2}P$ in $a
line$.

Unclosed $Q

Good $R$.
"""


def spelled(document: Document) -> list[str]:
    """The formulas, tokens run together."""
    return ["".join(token.text for token in formula.tokens) for formula in document.formulas()]


def test_formulas_of_a_page() -> None:
    document = read_text(PAGE, "page.md")
    first = ["A", "B", "C", "D", "E", "F", "G", "H", "I for $x$", "J&=2", "K", "L", "M", "N", "O"]
    assert spelled(document) == [*first, "Sq^{2}P", "aline", "R"]
    assert [piece.text for piece in document.pieces if isinstance(piece, Directive)] == ["let x in H^2", "skip"]
    places = {text: formula.where.place for text, formula in zip(spelled(document), document.formulas())}
    assert places["A"] == "title" and places["O"] == "footnote" and places["R"] == "body"
    assert next(reversed(list(document.formulas()))).where.section == ("Squares $A$ here",)


def test_every_token_stands_where_it_was_typed() -> None:
    document = read_text(PAGE, "page.md")
    for formula in document.formulas():
        for token in formula.tokens:
            if token.within is None and token.kind in ("letter", "digit"):
                assert document.raw(token) == token.text


def notebook(*cells: tuple[str, str | list[str]], indent: int | None = 1) -> str:
    """A notebook with these cells."""
    made = [{"cell_type": kind, "metadata": {"source": "$NOT$"}, "source": source} for kind, source in cells]
    return json.dumps({"nbformat": 4, "cells": made, "metadata": {"x": ["$NOT$"]}}, indent=indent)


@pytest.mark.parametrize("indent", [None, 1])
def test_notebooks(indent: int | None) -> None:
    text = notebook(
        ("markdown", ["# T $A$\n", "\n", "é𝔽 \"q\" $\\mathrm{Sq}^{12} x$\n", "$$\n", "\\alpha\\beta\n", "$$"]),
        ("code", "$NOT$"),
        ("markdown", "one string $B$\n\n$\\alpha$ % opslang: no"),
        indent=indent,
    )  # fmt: skip
    document = read_text(text, "n.ipynb")
    assert spelled(document) == ["A", "Sq^{12}x", "\\alpha\\beta", "B", "\\alpha"]
    formulas = list(document.formulas())
    for formula, raw in zip(formulas, ["$A$", r"$\\mathrm{Sq}^{12} x$", None, "$B$", r"$\\alpha$"]):
        if raw is not None:
            assert document.raw(formula) == raw
    tokens = {token.text: document.raw(token) for formula in formulas for token in formula.tokens}
    assert tokens["x"] == "x" and tokens["\\beta"] == r"\\beta" and tokens["1"] == "1"
    assert cell_at(document.files[0], formulas[1].start) == (1, 3)
    assert cell_at(document.files[0], formulas[4].start) == (3, 3)


@pytest.mark.parametrize("text", ["", "{", "[]", '{"cells": 3}', '{"cells": [{"cell_type": "markdown"}]}', "\x00"])
def test_what_is_no_notebook(text: str) -> None:
    document = read_text(text, "n.ipynb")
    assert document.pieces == ()


PARTS = (
    "word", "$x$", "$y_1+2$", "`code $x$`", "\\$", "5", "$$z$$", "\n\n$$\nw\n$$\n\n", "\n\n```\n$no$\n```\n\n",
    "\n\n- item", "\n\n> quoted $q$\n\n", "*em $e$*", "\n\n# Head $h$\n\n", "\n", "(", ")", "$a b$", "|", ".",
)  # fmt: skip


def test_agrees_with_a_general_reader_of_markdown() -> None:
    markdown_it = pytest.importorskip("markdown_it")
    dollars = pytest.importorskip("mdit_py_plugins.dollarmath")
    reader = markdown_it.MarkdownIt("commonmark").use(dollars.dollarmath_plugin, allow_space=False, double_inline=True)

    def others(text: str) -> list[str]:
        found: list[str] = []
        for token in reader.parse(text):
            for part in token.children or [token]:
                if part.type.startswith("math"):
                    found.append("".join(part.content.split()))
        return found

    rng = random.Random(20)
    compared = 0
    for _ in range(400):
        text = "".join(rng.choice(PARTS) + rng.choice((" ", " ", "")) for _ in range(12))
        if "$$$" in text or "$(" in text or "$5" in text or "$word" in text:
            continue  # one dollar sign beside another, or a digit after one: tastes differ
        compared += len(others(text))
        assert spelled(read_text(text, "t.md")) == others(text), text
    assert compared > 500
