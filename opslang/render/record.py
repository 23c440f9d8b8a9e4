"""The JSON record of a statement, as the language reference gives it.  Knows outcomes, computes nothing."""

from __future__ import annotations

from typing import Any

from opslang.ground.grading import degree, excess
from opslang.ir.measure import monomial_excess, term_degree
from opslang.ir.outcome import Outcome
from opslang.ir.tree import Element, Generator, Monomial, OperationElement, Word
from opslang.render.text import class_text, element_text

Record = dict[str, Any]


def word_letters(word: Word, prime: int) -> list[list[Any]]:
    """A word as a list of ["Sq", i], ["P", i], ["beta", k]."""
    letters: list[list[Any]] = []
    for token in word:
        if token > 0:
            letters.append(["Sq" if prime == 2 else "P", token])
        else:
            letters.append(["beta", -token or 1])
    return letters


def _factor(generator: Generator, power: int, prime: int) -> Record:
    word = generator.word
    return {
        "word": word_letters(word, prime),
        "class": class_text(generator.of),
        "power": power,
        "degree": (degree(word, prime) + generator.of.degree) * power,
        "excess": excess(word, prime),
    }


def monomial_record(monomial: Monomial, coefficient: int, prime: int) -> Record:
    """One term of a class."""
    return {
        "coefficient": coefficient,
        "degree": term_degree(monomial, prime, False),
        "excess": monomial_excess(monomial, prime),
        "factors": [_factor(generator, power, prime) for generator, power in monomial],
    }


def word_record(word: Word, coefficient: int, prime: int) -> Record:
    """One term of an operation: one factor, of class null."""
    measured = {"degree": degree(word, prime), "excess": excess(word, prime)}
    factor = {"word": word_letters(word, prime), "class": None, "power": 1, **measured}
    return {"coefficient": coefficient, **measured, "factors": [factor]}


def terms(element: Element) -> list[Record]:
    """The terms of an element, in canonical order."""
    if isinstance(element, OperationElement):
        return [word_record(word, c, element.prime) for word, c in element.terms]
    return [monomial_record(monomial, c, element.prime) for monomial, c in element.terms]


def _items(outcome: Outcome) -> list[Any]:
    if outcome.basis:
        return [monomial_record(monomial, 1, outcome.prime) for monomial in outcome.basis]
    return list(outcome.items or ())


def record(outcome: Outcome, file: str) -> Record:
    """The record of an outcome; `file` is the name that the script was read by."""
    line, column = outcome.source.position(outcome.span[0])
    element = outcome.element
    found: Record = {
        "file": file,
        "line": line,
        "column": column,
        "kind": outcome.kind,
        "verdict": outcome.verdict,
        "prime": outcome.prime,
        "space": outcome.space,
        "sort": outcome.sort,
        "degree": outcome.degree,
        "excess": outcome.excess,
        "terms": terms(element) if element is not None else [],
        "text": element_text(element) if element is not None else "",
        "latex": element_text(element, "latex") if element is not None else "",
        "name": outcome.name,
        "message": outcome.message,
        "warnings": [_warning(outcome, d) for d in outcome.diagnostics if d.severity != "error"],
    }
    if outcome.links:
        found["links"] = [
            {"verdict": link.verdict, "terms": terms(link.difference), "text": element_text(link.difference)}
            for link in outcome.links
        ]
    if outcome.items is not None:
        found["items"] = _items(outcome)
    wrong = outcome.error
    if wrong is not None:
        place = outcome.source.place(wrong.span)
        found |= {
            "line": place.line,
            "column": place.column,
            "end_line": place.end_line,
            "end_column": place.end_column,
        }
    return found


def _warning(outcome: Outcome, diagnostic: Any) -> Record:
    place = outcome.source.place(diagnostic.span)
    return {
        "name": diagnostic.name,
        "message": diagnostic.message,
        "line": place.line,
        "column": place.column,
        "end_line": place.end_line,
        "end_column": place.end_column,
    }
