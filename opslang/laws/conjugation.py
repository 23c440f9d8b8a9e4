"""The conjugation of the Steenrod algebra: anti-multiplicative, and given by a recursion on its letters."""

from __future__ import annotations

from opslang.ir.term import (
    TERM_LIMIT,
    Apply,
    Factor,
    Letter,
    Letters,
    Monomial,
    TooMany,
    add,
    letter_degree,
    of_monomial,
)
from opslang.laws.law import Bindings, Equation, Law, require, word


def _inner(factor: Factor) -> Letters | None:
    if isinstance(factor, Apply) and factor.key == "chi":
        return factor.index  # type: ignore[no-any-return]
    return None


def _only_letter(factor: Factor, *keys: str) -> Letter | None:
    inner = _inner(factor)
    return inner[0] if inner and len(inner) == 1 and inner[0][0] in keys else None


def _word(p: int, letters: Letters, x: Monomial) -> Equation:
    require(len(letters) > 1, "one letter is no product")
    degrees = [letter_degree(letter, p) or 0 for letter in letters]
    odd = sum(degree % 2 for degree in degrees)
    sign = -1 if odd * (odd - 1) // 2 % 2 else 1
    rhs = word(tuple(("chi", (letter,)) for letter in reversed(letters)), x)
    return Equation(Apply("chi", letters, x), 1, of_monomial(p, rhs, sign))


def _match_word(factor: Factor, exponent: int, p: int) -> Bindings | None:
    inner = _inner(factor)
    if inner and len(inner) > 1:
        assert isinstance(factor, Apply)
        return {"p": p, "letters": inner, "x": factor.argument}
    return None


CHI_WORD = Law(
    name="conjugate-of-a-product",
    title="conjugation reverses products",
    formula=r"\chi(ab) = (-1)^{|a||b|}\chi(b)\chi(a)",
    condition="any operations a, b",
    source="Milnor 1958, section 7; Steenrod and Epstein 1962, chapter II",
    examples=("chi(Sq^2 Sq^1) = chi(Sq^1) chi(Sq^2)",),
    instance=_word,
    match=_match_word,
)


def _letter(p: int, n: int, x: Monomial) -> Equation:
    require(n > 0, "the identity is its own conjugate")
    if n > TERM_LIMIT:
        raise TooMany(f"a conjugate with {n:,} terms in its recursion")
    key = "Sq" if p == 2 else "P"
    terms = []
    for i in range(1, n + 1):
        rest = word((("chi", ((key, n - i),)),), x) if n > i else x
        terms.append((-1, of_monomial(p, word(((key, i),), rest))))
    return Equation(Apply("chi", ((key, n),), x), 1, add(p, *terms))


def _match_letter(factor: Factor, exponent: int, p: int) -> Bindings | None:
    letter = _only_letter(factor, "Sq", "P")
    if letter:
        assert isinstance(factor, Apply)
        return {"p": p, "n": letter[1], "x": factor.argument}
    return None


CHI_LETTER = Law(
    name="conjugate-of-a-letter",
    title="the recursion of conjugation",
    formula=(
        r"\chi(\mathrm{Sq}^{n}) = -\sum_{i=1}^{n} \mathrm{Sq}^{i}\chi(\mathrm{Sq}^{n-i}),"
        r" \quad \mathcal{P}^{n} \text{ likewise}"
    ),
    condition="n > 0",
    source="Milnor 1958, section 7; Steenrod and Epstein 1962, chapter II",
    examples=("chi(Sq^3) = Sq^2 Sq^1", "chi(Sq^4) = Sq^4 + Sq^3 Sq^1"),
    instance=_letter,
    match=_match_letter,
)


def _straffin(p: int, n: int, x: Monomial) -> Equation:
    require(p == 2 and n > 1 and n & (n + 1) == 0, "n is not 2^r - 1 with r >= 2")
    half = (n + 1) // 2
    rhs = word((("Sq", half), ("chi", (("Sq", half - 1),))), x)
    return Equation(Apply("chi", (("Sq", n),), x), 1, of_monomial(2, rhs))


def _match_straffin(factor: Factor, exponent: int, p: int) -> Bindings | None:
    letter = _only_letter(factor, "Sq")
    if letter and letter[1] > 1 and letter[1] & (letter[1] + 1) == 0:
        assert isinstance(factor, Apply)
        return {"p": p, "n": letter[1], "x": factor.argument}
    return None


CHI_STRAFFIN = Law(
    name="conjugate-of-a-full-square",
    title="the conjugate of a square one below a power of 2",
    formula=r"\chi(\mathrm{Sq}^{2^{r}-1}) = \mathrm{Sq}^{2^{r-1}}\chi(\mathrm{Sq}^{2^{r-1}-1})",
    condition="p = 2, n = 2^r - 1, r >= 2",
    source="Davis 1974; Straffin 1975",
    examples=("chi(Sq^7) = Sq^4 chi(Sq^3)",),
    instance=_straffin,
    match=_match_straffin,
)


def _primitive(p: int, letter: Letter, x: Monomial) -> Equation:
    require(letter[0] in ("beta", "Q"), "not a primitive")
    return Equation(Apply("chi", (letter,), x), 1, of_monomial(p, word((letter,), x), -1))


def _match_primitive(factor: Factor, exponent: int, p: int) -> Bindings | None:
    letter = _only_letter(factor, "beta", "Q")
    if letter:
        assert isinstance(factor, Apply)
        return {"p": p, "letter": letter, "x": factor.argument}
    return None


CHI_PRIMITIVE = Law(
    name="conjugate-of-a-primitive",
    title="conjugation changes the sign of primitives",
    formula=r"\chi(\beta) = -\beta, \quad \chi(Q_{k}) = -Q_{k}",
    condition="beta and Q_k",
    source="Milnor 1958",
    examples=("chi(Q_1) = Q_1",),
    instance=_primitive,
    match=_match_primitive,
)


def _twice(p: int, letters: Letters, x: Monomial) -> Equation:
    require(bool(letters), "the identity is its own conjugate")
    return Equation(Apply("chi", (("chi", letters),), x), 1, of_monomial(p, word(letters, x)))


def _match_twice(factor: Factor, exponent: int, p: int) -> Bindings | None:
    letter = _only_letter(factor, "chi")
    if letter:
        assert isinstance(factor, Apply)
        return {"p": p, "letters": letter[1], "x": factor.argument}
    return None


CHI_TWICE = Law(
    name="conjugate-twice",
    title="conjugation is an involution",
    formula=r"\chi(\chi(a)) = a",
    condition="any operation a",
    source="Milnor 1958, section 7",
    examples=("chi(chi(Sq^5)) = Sq^5",),
    instance=_twice,
    match=_match_twice,
)
