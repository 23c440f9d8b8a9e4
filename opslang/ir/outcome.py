"""What a statement comes to: a value that the printers, the records and the API read."""

from __future__ import annotations

from typing import Any, Literal

from attrs import field, frozen
from attrs import fields as attrs_fields

from opslang.ground.source import Source, Span
from opslang.ir.tree import Element, Monomial
from opslang.report.diagnostic import Diagnostic

Kind = Literal["element", "relation", "declaration", "listing", "derivation"]
Verdict = Literal["ok", "true", "false", "undecided", "error"]


@frozen
class Link:
    """One equation of a chain: its verdict and the difference of its sides."""

    verdict: Verdict
    difference: Element


@frozen
class Outcome:
    """The result of one statement.

    `element`: the canonical form of an expression, or the difference (left - right) of a relation; `sides`: the
    canonical forms of the sides of a relation; `links`: for a chain of two equations or more.
    `items`: the monomials of a basis, the dimensions of a series, or the steps of a derivation (as records).
    `lines`: what a comparison says, in words.
    `derivations`: for `why`, what `opslang.render.derivation` prints.
    """

    source: Source
    span: Span
    kind: Kind
    verdict: Verdict
    prime: int
    space: str | None = None
    sort: Literal["class", "operation"] | None = None
    degree: int | None = None
    excess: int | None = None
    element: Element | None = None
    sides: tuple[Element, ...] = ()
    links: tuple[Link, ...] = ()
    items: tuple[Any, ...] | None = None
    basis: tuple[Monomial, ...] = ()
    derivations: tuple[Any, ...] = ()
    lines: tuple[str, ...] = ()
    name: str | None = None
    message: str | None = None
    diagnostics: tuple[Diagnostic, ...] = field(default=())

    @property
    def error(self) -> Diagnostic | None:
        """The error that left the statement without a result."""
        return next((d for d in self.diagnostics if d.severity == "error"), None)


_FIELDS = tuple(attribute.name for attribute in attrs_fields(Outcome))


def changed(outcome: Outcome, **changes: Any) -> Outcome:
    """The outcome with some fields changed.  Three or four times a statement, so not by way of the initialiser."""
    new = object.__new__(Outcome)
    put = object.__setattr__
    for name in _FIELDS:
        put(new, name, changes[name] if name in changes else getattr(outcome, name))
    return new
