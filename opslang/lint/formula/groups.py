"""Graded groups and spaces as sides: H^n(X; G), K(G, n), sets of maps O(a, b).  What stands in their brackets stays
tokens.
"""

from __future__ import annotations

from opslang.lint.formula.indices import index_of, read_indices
from opslang.lint.formula.stretch import NotRead, Stretch
from opslang.lint.model import Cohomology, Index
from opslang.lint.reading.document import Token

Tokens = tuple[Token, ...]


def cohomology(stretch: Stretch) -> Cohomology | None:
    """H^n(X; G), where the whole side is one."""
    start = stretch.at
    token = stretch.tokens[start]
    accent = token.text in ("\\tilde", "\\widetilde")
    if accent:
        stretch.at += 1
        inner = stretch.argument()
        letters = inner.rest()
        if len(letters) != 1 or letters[0].text != "H":
            return None
    elif (token.text == "H" and token.kind == "letter") or token.text in ("Ext", "H"):
        stretch.at += 1
    else:
        return None
    letter = "Ext" if token.text == "Ext" else "H"
    degree, lower = None, False
    while (token_after := stretch.peek()) is not None and token_after.kind in ("sup", "sub", "prime"):
        stretch.at += 1
        if token_after.kind == "prime":
            continue
        lower = token_after.kind == "sub"
        inner = stretch.argument()
        if inner.sees("*", "\\bullet", "\\star", "•"):
            continue
        try:
            degree = index_of(inner)
        except NotRead:
            return None
    if stretch.done:
        return Cohomology(degree, (), (), letter, lower, stretch.origin(start))
    if not stretch.sees("("):
        return None
    inner = stretch.enclosed()
    if not stretch.done:
        return None
    space, coefficients = _space_and_coefficients(inner)
    return Cohomology(degree, space, coefficients, letter, lower, stretch.origin(start))


def _space_and_coefficients(inner: Stretch) -> tuple[Tokens, Tokens]:
    at = inner.at
    comma = None
    while at < inner.end:
        if inner.tokens[at].text == ";":
            return tuple(inner.tokens[inner.at : at]), tuple(inner.tokens[at + 1 : inner.end])
        if inner.tokens[at].text == ",":
            comma = at
        at = inner.pairs.get(at, at) + 1
    if comma is not None:
        return tuple(inner.tokens[inner.at : comma]), tuple(inner.tokens[comma + 1 : inner.end])
    return tuple(inner.rest()), ()


def eilenberg(stretch: Stretch) -> Cohomology | None:
    """K(G, n), where the whole side is one: a `Cohomology` with the letter K."""
    start = stretch.at
    if not stretch.takes("K") or not stretch.sees("("):
        return None
    inner = stretch.enclosed()
    if not stretch.done:
        return None
    space, last = _space_and_coefficients(inner)
    if not last:
        return None
    at = inner.end - len(last)
    try:
        degree = index_of(Stretch(inner.tokens, inner.pairs, at, inner.end))
    except NotRead:
        return None
    return Cohomology(degree, (), space, "K", False, stretch.origin(start))


def hom_set(stretch: Stretch) -> Index | None:
    """O(a, b) in a script alphabet: operations from degree a to degree b."""
    start = stretch.at
    token = stretch.tokens[start]
    if token.kind != "letter" or token.style not in ("cal", "scr"):
        return None
    stretch.at += 1
    if not stretch.sees("("):
        return None
    inner = stretch.enclosed()
    if not stretch.done:
        return None
    try:
        degrees = read_indices(inner)
    except NotRead:
        return None
    if len(degrees) != 2:
        return None
    return Index("call", ("hom", *degrees), stretch.origin(start))
