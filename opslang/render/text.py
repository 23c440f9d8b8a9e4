"""One printer, three spellings: plain text, Unicode and TeX.  What it prints reads back to the same element.

Degrees and verdicts are not its business.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache
from typing import Literal

from opslang.ir.names import GREEK
from opslang.ir.tree import Class, Element, Generator, Monomial, OperationElement, Word

Notation = Literal["text", "unicode", "latex"]
_UP = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_DOWN = str.maketrans("0123456789-", "₀₁₂₃₄₅₆₇₈₉₋")


def superscript(n: int, notation: Notation) -> str:
    """An integer as an exponent or upper index."""
    if notation == "latex":
        return f"^{{{n}}}"
    return str(n).translate(_UP) if notation == "unicode" else f"^{n}" if n >= 0 else f"^{{{n}}}"


def subscript(n: int, notation: Notation) -> str:
    """An integer as a lower index."""
    if notation == "latex":
        return f"_{{{n}}}"
    return str(n).translate(_DOWN) if notation == "unicode" else f"_{n}"


def letter_text(token: int, prime: int, notation: Notation) -> str:
    """One letter of a word."""
    if token < 0 or (token == 0 and prime != 2):
        name = {"text": "beta", "unicode": "β", "latex": r"\beta"}[notation]
        return name + subscript(-token, notation) if token else name
    head = (
        ("Sq" if notation != "latex" else r"\mathrm{Sq}")
        if prime == 2
        else "P"
        if notation != "latex"
        else r"\mathcal{P}"
    )
    return head + superscript(token, notation)


@lru_cache(maxsize=1 << 13)
def word_text(word: Word, prime: int, notation: Notation = "text") -> str:
    """A word of letters; "1" for the identity."""
    letters = [letter_text(token, prime, notation) for token in word]
    if notation == "latex":
        return "".join(letters) or "1"
    return " ".join(letters) or "1"


@lru_cache(maxsize=1 << 12)
def class_text(of: Class, notation: Notation = "text") -> str:
    """The name of a class."""
    letter = of.letter
    if letter in GREEK:
        letter = {"text": letter, "unicode": GREEK[letter], "latex": "\\" + letter}[notation]
    index = "" if of.index is None else subscript(of.index, notation)
    return letter + index + "'" * of.primes


@lru_cache(maxsize=1 << 13)
def generator_text(generator: Generator, prime: int, notation: Notation = "text") -> str:
    """A generator: a word on a class."""
    name = class_text(generator.of, notation)
    if not generator.word:
        return name
    between = "" if notation == "latex" and (name.startswith("\\") or generator.word[-1]) else " "
    return word_text(generator.word, prime, notation) + between + name


@lru_cache(maxsize=1 << 13)
def factor_text(generator: Generator, exponent: int, last: bool, prime: int, notation: Notation = "text") -> str:
    """A factor of a monomial; a word that another factor follows, or that carries a power, stands in brackets."""
    name = generator_text(generator, prime, notation)
    if generator.word and (exponent > 1 or not last):
        name = f"({name})"
    return name + superscript(exponent, notation) if exponent > 1 else name


@lru_cache(maxsize=1 << 12)
def monomial_text(monomial: Monomial, prime: int, notation: Notation = "text") -> str:
    """A monomial; "1" for the unit."""
    last = len(monomial) - 1
    factors = [factor_text(g, e, i == last, prime, notation) for i, (g, e) in enumerate(monomial)]
    return (r"\," if notation == "latex" else " ").join(factors) or "1"


def _multiple_text(coefficient: int, name: str, notation: Notation) -> str:
    if name == "1":
        return str(coefficient)
    return f"{coefficient}{chr(92) + ',' if notation == 'latex' else ' '}{name}"


def term_texts(element: Element, notation: Notation = "text") -> list[str]:
    """The terms of an element, each with its coefficient."""
    p = element.prime
    one: Callable[..., str] = word_text if isinstance(element, OperationElement) else monomial_text
    return [
        one(term, p, notation) if c == 1 else _multiple_text(c, one(term, p, notation), notation)
        for term, c in element.terms
    ]


def element_text(element: Element, notation: Notation = "text") -> str:
    """An element; "0" for zero."""
    return " + ".join(term_texts(element, notation)) or "0"
