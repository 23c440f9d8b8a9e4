"""The Python interface: `import opslang` gives what stands in `__all__` here.

    >>> import opslang
    >>> print(opslang.normalise("Sq^2 Sq^2 iota_3"))
    Sq^3 Sq^1 iota_3
    >>> opslang.compare("P^1 P^1 = 2 P^2", prime=3).verdict
    'true'

A `Script` keeps declarations from line to line; the four functions use a fresh one each time.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from attrs import frozen

from opslang.ground.grading import excess as word_excess
from opslang.ground.source import Source
from opslang.ir.measure import element_degree, element_excess, monomial_excess, term_degree
from opslang.ir.outcome import Outcome
from opslang.ir.tree import Element, OperationElement, Tree
from opslang.pipeline import Session
from opslang.render.record import monomial_record, word_letters
from opslang.render.text import class_text, element_text
from opslang.report.diagnostic import Diagnostic
from opslang.syntax import surface
from opslang.tables.budget import DEFAULT_LIMIT

__all__ = [
    "Comparison", "Explanation", "Factor", "Normal", "OpslangError", "Parsed", "Script", "Term",
    "basis", "compare", "explain", "normalise", "parse", "series",
]  # fmt: skip


class OpslangError(ValueError):
    """What is wrong with an input: `name` is the diagnostic's name, `line` and `column` its place (from 1), in the
    text given."""

    def __init__(self, name: str, message: str, line: int, column: int, shown: str) -> None:
        super().__init__(shown)
        self.name = name
        self.message = message
        self.line = line
        self.column = column


@frozen
class Factor:
    """A word on a class, to a power; `name` is None in an operation.  The degree includes the power, the excess is
    the word's."""

    word: tuple[tuple[str, int], ...]
    name: str | None
    power: int
    degree: int
    excess: int


@frozen
class Term:
    """A coefficient 1 … p-1 and factors; the excess is None unless the term is one word on one class to the first
    power."""

    coefficient: int
    factors: tuple[Factor, ...]
    degree: int
    excess: int | None


@frozen
class Normal:
    """A canonical element: an operation, or a class.

    `degree` is None where the terms differ in degree; a zero keeps the degree of what was written.  `excess` is the
    least of the terms', where all have one.  Equal elements of one prime are equal objects.
    """

    element: Element
    degree: int | None
    excess: int | None

    @property
    def prime(self) -> int:
        """The prime."""
        return self.element.prime

    @property
    def sort(self) -> str:
        """ "operation" or "class"."""
        return "operation" if isinstance(self.element, OperationElement) else "class"

    @property
    def text(self) -> str:
        """The element in plain text."""
        return element_text(self.element)

    @property
    def unicode(self) -> str:
        """The element in Unicode."""
        return element_text(self.element, "unicode")

    @property
    def latex(self) -> str:
        """The element in TeX, without dollar signs."""
        return element_text(self.element, "latex")

    @property
    def terms(self) -> tuple[Term, ...]:
        """The terms, in canonical order."""
        return tuple([_term(self.element, term, c) for term, c in self.element.terms])

    def sympy(self) -> Any:
        """The element as a sympy expression (see `opslang.render.sympy_form`).  Needs sympy."""
        from opslang.render.sympy_form import to_sympy

        return to_sympy(self.element)

    def __str__(self) -> str:
        return self.text

    def __bool__(self) -> bool:
        return bool(self.element.terms)

    def _repr_latex_(self) -> str:
        return f"$\\displaystyle {self.latex}$"


def _term(element: Element, term: Any, coefficient: int) -> Term:
    p = element.prime
    if isinstance(element, OperationElement):
        letters = tuple([(head, i) for head, i in word_letters(term, p)])
        degree = term_degree(term, p, True)
        return Term(
            coefficient, (Factor(letters, None, 1, degree, word_excess(term, p)),), degree, word_excess(term, p)
        )
    factors = []
    for (generator, power), row in zip(term, monomial_record(term, 1, p)["factors"]):
        letters = tuple([(head, i) for head, i in row["word"]])
        factors.append(Factor(letters, class_text(generator.of), power, row["degree"], row["excess"]))
    return Term(coefficient, tuple(factors), term_degree(term, p, False), monomial_excess(term, p))


@frozen
class Comparison:
    """A decided relation: the verdict "true", "false" or "undecided", the sides in canonical form, left minus right,
    and why."""

    verdict: str
    sides: tuple[Normal, ...]
    difference: Normal
    message: str | None

    def __bool__(self) -> bool:
        return self.verdict == "true"


@frozen
class Explanation:
    """A derivation: numbered lines, the TeX of an align*, the steps as plain data, and what it is a derivation of."""

    lines: tuple[str, ...]
    latex: str
    steps: tuple[Any, ...]
    result: Normal | Comparison

    def __str__(self) -> str:
        return "\n".join(self.lines)

    def _repr_latex_(self) -> str:
        return self.latex


@frozen
class Parsed:
    """A statement as read: its surface tree, and for an expression its sort, degree and typed tree."""

    statement: surface.Statement
    sort: str | None
    degree: int | None
    tree: Tree | None
    warnings: tuple[Diagnostic, ...]


class Script:
    """A script that grows line by line: prime, space and declarations hold from one call to the next."""

    def __init__(
        self, prime: int = 2, on: str | None = None, let: Iterable[str] = (), limit: int = DEFAULT_LIMIT
    ) -> None:
        self._session = Session(2, limit)
        if prime != 2:
            self.run(f"prime {prime}")
        if on is not None:
            self.run(f"on {on}")
        for declaration in [let] if isinstance(let, str) else let:
            self.run(f"let {declaration.removeprefix('let ')}")

    def run(self, text: str) -> tuple[Outcome, ...]:
        """Every statement of a text, in order.  OpslangError at the first that is wrong."""
        from opslang.syntax.layout import chunks

        found = []
        for source in chunks(text.splitlines(keepends=True), "input"):
            outcome = self._session.run(source)
            _raise(outcome.source, outcome.error)
            found.append(outcome)
        return tuple(found)

    def _one(self, text: str, kind: str, prefix: str = "") -> Outcome:
        outcome = self._session.run(Source("input", prefix + text.strip()))
        _raise(outcome.source, outcome.error)
        if outcome.kind != kind:
            raise OpslangError(
                "kind",
                f"this is a {outcome.kind}, and a {kind} is needed here",
                1,
                1,
                f"{text!r} is a {outcome.kind}, not a {kind}",
            )
        return outcome

    def normalise(self, text: str) -> Normal:
        """The canonical form of an expression."""
        return _normal(self._one(text, "element"))

    def compare(self, text: str) -> Comparison:
        """The verdict on a relation, or on a chain of them."""
        return _comparison(self._one(text, "relation"))

    def explain(self, text: str) -> Explanation:
        """The derivation of an expression or a relation, rule by rule."""
        from opslang.render.derivation import align, lines

        outcome = self._one(text, "derivation", "" if text.lstrip().startswith("why ") else "why ")
        rows = [row for derivation in outcome.derivations for row in lines(derivation, "text", 100)]
        tex = "\n".join(align(derivation) for derivation in outcome.derivations)
        return Explanation(
            tuple(rows), tex, outcome.items or (), _comparison(outcome) if outcome.sides else _normal(outcome)
        )

    def parse(self, text: str) -> Parsed:
        """A statement, read and lowered but not computed."""
        from opslang.meaning.lower import Lowering
        from opslang.pipeline import as_sort_or_class
        from opslang.report.diagnostic import Refusal
        from opslang.syntax.parser import parse as read

        source = Source("input", text.strip())
        statement, found = read(source)
        _raise(source, next((d for d in found if d.severity == "error"), None))
        assert statement is not None
        if not isinstance(statement, surface.ExpressionStatement):
            return Parsed(statement, None, None, None, tuple(found))
        lowering = Lowering(self._session.scope, source.text, list(found), self._session.normal)
        try:
            value = as_sort_or_class(lowering.sum(statement.body), "class", statement.span)
        except Refusal as refusal:
            _raise(source, refusal.diagnostic)
            raise
        return Parsed(statement, value.sort, value.degree, value.tree, tuple(lowering.diagnostics))


def _raise(source: Source, found: Diagnostic | None) -> None:
    if found is None:
        return
    from opslang.report.render import render

    line, column = source.position(found.span[0])
    raise OpslangError(found.name, found.message, line, column, render(found, source))


def _normal(outcome: Outcome) -> Normal:
    assert outcome.element is not None
    return Normal(outcome.element, outcome.degree, outcome.excess)


def _plain(element: Element) -> Normal:
    return Normal(element, element_degree(element), element_excess(element))


def _comparison(outcome: Outcome) -> Comparison:
    assert outcome.element is not None
    return Comparison(
        outcome.verdict, tuple([_plain(side) for side in outcome.sides]), _plain(outcome.element), outcome.message
    )


def normalise(
    text: str, prime: int = 2, on: str | None = None, let: Iterable[str] = (), limit: int = DEFAULT_LIMIT
) -> Normal:
    """The canonical form of an expression.

    `on` names the space, as in "K(Z/2, 3)"; `let` declares classes, as in ["x, y in H^2", "z in H^3(X; Z/4)"]; `limit`
    bounds the terms to work with.  OpslangError where the input is wrong or too large.
    """
    return Script(prime, on, let, limit).normalise(text)


def compare(
    text: str, prime: int = 2, on: str | None = None, let: Iterable[str] = (), limit: int = DEFAULT_LIMIT
) -> Comparison:
    """The verdict on a relation "a = b"; arguments as for `normalise`."""
    return Script(prime, on, let, limit).compare(text)


def explain(
    text: str, prime: int = 2, on: str | None = None, let: Iterable[str] = (), limit: int = DEFAULT_LIMIT
) -> Explanation:
    """The derivation of an expression or a relation; arguments as for `normalise`."""
    return Script(prime, on, let, limit).explain(text)


def parse(text: str, prime: int = 2, on: str | None = None, let: Iterable[str] = ()) -> Parsed:
    """A statement, read and lowered; arguments as for `normalise`."""
    return Script(prime, on, let).parse(text)


def series(space: str, to: int, prime: int = 2) -> list[int]:
    """The dimensions of H^0 … H^to of a space with coefficients F_p."""
    return list(Script(prime)._one(f"series {space} to {to}", "listing").items or ())


def basis(space: str, degree: int, prime: int = 2) -> list[str]:
    """The canonical basis of one degree of H^* of a space, as text."""
    from opslang.render.text import monomial_text

    found = Script(prime)._one(f"basis H^{degree}({space})", "listing").basis
    return [monomial_text(monomial, prime) for monomial in found]
