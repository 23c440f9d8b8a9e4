"""Sums and products of operations and classes over tokens.  Knows shapes; settles no sort and no degree.

An operation is read with its indices and no argument: a product is a flat list of factors, as in scripts.
"""

from __future__ import annotations

from opslang.lint.formula.factors import FACTORS, letter_factor, starts_factor, word_factor
from opslang.lint.formula.indices import DOTS, GREEK, index_of
from opslang.lint.formula.signs import GLUES, SUMS
from opslang.lint.formula.stretch import NotRead, Stretch, shown
from opslang.lint.model import BigSum, ClassName, Coefficient, Dots, Factor, Group, Index, Number, Power, Product, Sum


def sum_of(stretch: Stretch) -> Sum:
    """A sum that fills the stretch."""
    found = read_sum(stretch)
    if not stretch.done:
        text = shown(stretch.rest()[:1])
        raise NotRead(f"{text} was not understood here", stretch.origin(stretch.at, stretch.at + 1))
    return found


def read_sum(stretch: Stretch) -> Sum:
    """Products with signs between them, as far as they go."""
    start = stretch.at
    terms: list[tuple[int, Product]] = []
    sign = 1
    if stretch.takes("-", "−"):
        sign = -1
    else:
        stretch.takes("+", "\\pm", "\\oplus")
    while True:
        terms.append((sign, read_product(stretch)))
        if stretch.takes("+", "\\oplus"):
            sign = 1
        elif stretch.takes("-", "−"):
            sign = -1
        else:
            break
        if stretch.done:
            raise NotRead("the formula ends in a sign", stretch.origin(stretch.at - 1, stretch.at))
    return Sum(tuple(terms), stretch.origin(start))


def read_product(stretch: Stretch) -> Product:
    """Factors side by side or joined by a sign, as far as they go."""
    start = stretch.at
    factors: list[Factor] = []
    glues: list[str] = []
    glue = ""
    while not stretch.done:
        token = stretch.tokens[stretch.at]
        joined = GLUES.get(token.text) if token.kind in ("command", "other") else None
        if joined is not None and not (factors or joined != "*"):
            break
        if joined is not None:
            stretch.at += 1
            after = stretch.peek()
            if after is not None and after.kind in ("sub", "sup"):
                raise NotRead("a product with an index of its own, such as cup-i", stretch.origin(stretch.at - 1))
            glue = joined
            continue
        if not starts_factor(stretch):
            break
        factors.append(read_factor(stretch))
        glues.append(glue)
        glue = ""
    if not factors:
        reason = "a term is missing" if stretch.done else f"{stretch.tokens[stretch.at].text} was not understood"
        raise NotRead(reason, stretch.origin(stretch.at, stretch.at + 1))
    if glue:
        raise NotRead("a sign of multiplication with nothing after it", stretch.origin(stretch.at - 1))
    glues[0] = ""
    return Product(tuple(factors), tuple(glues), stretch.origin(start))


def read_factor(stretch: Stretch) -> Factor:
    """One factor with its powers."""
    start = stretch.at
    factor = _bare(stretch)
    while not stretch.done:
        token = stretch.tokens[stretch.at]
        if token.kind == "sup":
            stretch.at += 1
            factor = _powered(factor, stretch, start)
        elif token.kind == "other" and token.text == "!" and isinstance(factor, (Number, Group, ClassName)):
            stretch.at += 1
            factor = Coefficient(Index("call", ("factorial", "")), stretch.origin(start))
        elif token.kind == "sub" and isinstance(factor, Group):
            raise NotRead("an index on a bracket", stretch.origin(start))
        else:
            break
    return factor


def _powered(factor: Factor, stretch: Stretch, start: int) -> Factor:
    mark = stretch.at
    argument = stretch.argument()
    try:
        exponent = index_of(argument)
    except NotRead as trouble:
        raise NotRead("an exponent that was not understood", stretch.origin(mark)) from trouble
    at = stretch.origin(start)
    if isinstance(factor, Number) or (isinstance(factor, Group) and _is_minus_one(factor)):
        base = factor.value if isinstance(factor, Number) else -1
        return Coefficient(Index("power", (Index("number", (base,)), exponent), at), at)
    return Power(factor, exponent, at)


def _is_minus_one(group: Group) -> bool:
    terms = group.body.terms
    return len(terms) == 1 and terms[0][0] < 0 and all(isinstance(factor, Number) for factor in terms[0][1].factors)


def _bare(stretch: Stretch) -> Factor:
    token = stretch.tokens[stretch.at]
    start = stretch.at
    if token.kind == "digit":
        digits = ""
        while (after := stretch.peek()) is not None and after.kind == "digit":
            digits += after.text
            stretch.at += 1
        return Number(int(digits), stretch.origin(start))
    if token.kind == "word":
        return word_factor(stretch)
    if token.kind == "letter" or token.text in GREEK:
        return letter_factor(stretch)
    if token.text in SUMS:
        return _big_sum(stretch)
    if token.text in DOTS:
        stretch.at += 1
        return Dots(stretch.origin(start))
    handler = FACTORS.get(token.text) if token.kind != "open" else FACTORS["{"]
    if handler is None:
        raise NotRead(f"{token.text} was not understood", stretch.origin(start, start + 1))
    return handler(stretch)


def _big_sum(stretch: Stretch) -> Factor:
    from opslang.lint.formula.bounds import read_bounds

    start = stretch.at
    sign = stretch.tokens[start].text
    bounds = read_bounds(stretch)
    body = read_product(stretch)
    return BigSum(bounds, body, "\\sum" if sign == "∑" else sign, stretch.origin(start))
