"""Terms on their way to canonical form, in the three spellings.  Follows `text.py`; knows no law."""

from __future__ import annotations

from opslang.ir.term import STABLE, Apply, Class, Element, Factor, Letter, Letters, Monomial
from opslang.render.text import Notation, class_text, letter_text, subscript, superscript


def _glue(parts: list[str], notation: Notation) -> str:
    """Words side by side; in TeX a space only where a command would swallow the next letter."""
    if notation != "latex":
        return " ".join(parts)
    text = ""
    for part in parts:
        runs_on = text[-1:].isalpha() and part[:1].isalpha()
        text += (" " if runs_on else "") + part
    return text


def one_letter(letter: Letter, p: int, notation: Notation) -> str:
    """One letter: an operation, a conjugate, Q_k or a total operation."""
    key, index = letter
    if key == "chi":
        name = {"text": "chi", "unicode": "χ", "latex": r"\chi"}[notation]
        return f"{name}({letters_text(index, p, notation)})"
    if key == "Q":
        return "Q" + subscript(index, notation)
    if key == "total":
        plain = "Sq" if p == 2 else "P"
        return plain if notation != "latex" else (r"\mathrm{Sq}" if p == 2 else r"\mathcal{P}")
    token = index if key != "beta" else (0 if index == 1 else -index)
    return letter_text(token, p, notation)


def letters_text(letters: Letters, p: int, notation: Notation) -> str:
    """A word of letters; "1" for the identity."""
    return _glue([one_letter(letter, p, notation) for letter in letters], notation) or "1"


def factor_text(factor: Factor, p: int, notation: Notation) -> str:
    """A factor: letters, then the class or the bracketed product that they act on."""
    letters: list[Letter] = []
    while isinstance(factor, Apply):
        letters.append((factor.key, factor.index))
        blocks = factor.argument.blocks
        if len(blocks) != 1 or blocks[0][1] != 1:
            inner = monomial_text(factor.argument, p, notation)
            return letters_text(tuple(letters), p, notation) + f"({inner})"
        factor = blocks[0][0]
    if factor == STABLE:
        return letters_text(tuple(letters), p, notation)
    name = class_text(factor, notation)
    return _glue([letters_text(tuple(letters), p, notation), name], notation) if letters else name


def monomial_text(monomial: Monomial, p: int, notation: Notation) -> str:
    """A product; a factor with a letter stands in brackets unless it is the last and to the first power."""
    parts = []
    last = len(monomial.blocks) - 1
    for at, (factor, exponent) in enumerate(monomial.blocks):
        name = factor_text(factor, p, notation)
        if not isinstance(factor, Class) and (exponent > 1 or at != last):
            name = f"({name})"
        parts.append(name + (superscript(exponent, notation) if exponent > 1 else ""))
    return (r"\," if notation == "latex" else " ").join(parts) or "1"


def term_texts(element: Element, notation: Notation) -> list[str]:
    """The terms of a sum, each with its coefficient."""
    texts = []
    for monomial, coefficient in element.terms:
        name = monomial_text(monomial, element.prime, notation)
        if coefficient == 1:
            texts.append(name)
        elif name == "1":
            texts.append(str(coefficient))
        else:
            texts.append(f"{coefficient}{chr(92) + ',' if notation == 'latex' else ' '}{name}")
    return texts


def element_text(element: Element, notation: Notation) -> str:
    """A sum; "0" for zero."""
    return " + ".join(term_texts(element, notation)) or "0"
