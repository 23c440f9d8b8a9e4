"""Looks at a statement without computing: sort, degree, or what is wrong.  Knows parsing and lowering only."""

from __future__ import annotations

from copy import copy
from typing import Literal

from attrs import evolve, fields, frozen

from opslang.ground.source import Source, Span
from opslang.meaning.lower import Lowering
from opslang.meaning.scope import Scope
from opslang.meaning.spaces import space_value
from opslang.meaning.statements import abbreviate, declare, on, prime
from opslang.meaning.value import Sort, Value
from opslang.report.diagnostic import Diagnostic, Refusal
from opslang.spaces.family import Family
from opslang.syntax import surface as sf
from opslang.syntax.parser import parse

Tone = Literal["quiet", "warning", "error"]

OTHERS: dict[type, str] = {
    sf.MapStatement: "a map",
    sf.ComposeStatement: "a map",
    sf.BundleStatement: "a vector bundle",
    sf.BundleSumStatement: "a vector bundle",
    sf.CompareStatement: "a comparison of two spaces",
}
"""Statements that cannot be checked without computing."""

LOW = 16
"""Up to this degree Tab knows the classes of a named space."""

LONGEST = 6_000
"""A text of more characters is not looked at while it is typed: reading it takes longer than a keystroke may."""


@frozen
class Glance:
    """What a text is, in a few words; for an error or a warning with its place."""

    words: str = ""
    tone: Tone = "quiet"
    span: Span | None = None


def tables(scope: Scope) -> list[str]:
    """The tables that declarations fill, by the names of their fields."""
    return [each.name for each in fields(Scope) if isinstance(getattr(scope, each.name), dict)]


def copy_of(scope: Scope) -> Scope:
    """A scope that later declarations do not change."""
    copied = copy(scope)
    for name in tables(scope):
        setattr(copied, name, dict(getattr(scope, name)))
    return copied


def same_scope(scope: Scope, other: Scope) -> bool:
    """Whether two scopes say the same."""
    return all(getattr(scope, name) == getattr(other, name) for name in ("prime", "space", *tables(scope)))


def glance(source: Source, scope: Scope) -> Glance:
    """What one statement is.  The scope stays as it is."""
    statement, found = parse(source)
    wrong = next((d for d in found if d.severity == "error"), None)
    if wrong is not None:
        return _trouble(wrong, "error")
    if statement is None:
        return Glance()
    trial = copy_of(scope)
    lowering = Lowering(trial, source.text, list(found))
    try:
        words = _words(statement, trial, lowering)
    except Refusal as refusal:
        return _trouble(refusal.diagnostic, "error")
    except (RecursionError, MemoryError):
        return Glance("nested too deeply", "error")
    for diagnostic in lowering.diagnostics:
        if diagnostic.severity == "warning":
            return evolve(_trouble(diagnostic, "warning"), words=f"{words}; {diagnostic.message}")
    return Glance(words)


def _trouble(diagnostic: Diagnostic, tone: Tone) -> Glance:
    return Glance(diagnostic.message, tone, diagnostic.span)


def lowered(statement: sf.Statement, scope: Scope, text: str) -> tuple[Value, ...] | None:
    """The values of the sides of a formula; None for a statement that holds none.  Raises Refusal."""
    if isinstance(statement, sf.WhyStatement):
        return lowered(statement.body, scope, text)
    lowering = Lowering(scope, text)
    if isinstance(statement, sf.RelationStatement):
        return tuple([lowering.sum(side) for side in statement.sides])
    if isinstance(statement, sf.ExpressionStatement):
        return (lowering.sum(statement.body),)
    return None


def reads_alike(text: str, scope: Scope, other: Scope) -> bool:
    """Whether a statement says the same in two scopes, and of the same space."""
    return scope.space == other.space and means_alike(text, scope, other)


def means_alike(text: str, scope: Scope, other: Scope) -> bool:
    """Whether the names in a statement stand for the same in two scopes."""
    if scope.prime != other.prime:
        return False
    statement, _ = parse(Source("input", text))
    if statement is None:
        return False
    try:
        if isinstance(statement, (sf.BasisStatement, sf.SeriesStatement, sf.CompareStatement)):
            named = (
                (statement.left, statement.right) if isinstance(statement, sf.CompareStatement) else (statement.space,)
            )
            return all(each is None or space_value(each, scope) == space_value(each, other) for each in named)
        values = lowered(statement, scope, text)
        return values is not None and values == lowered(statement, other, text)
    except Refusal:
        return False


# --- in words -----------------------------------------------------------------------------------


def _words(statement: sf.Statement, scope: Scope, lowering: Lowering) -> str:
    match statement:
        case sf.ExpressionStatement():
            return of_value(lowering.sum(statement.body))
        case sf.RelationStatement():
            return _relation(statement, lowering)
        case sf.WhyStatement():
            return f"derivation, {_words(statement.body, scope, lowering)}"
        case sf.AbbreviateStatement():
            return of_value(abbreviate(statement, scope, lowering))
        case sf.DeclareStatement():
            lowering.diagnostics += declare(statement, scope)
            return f"{'class' if len(statement.names) == 1 else 'classes'} of degree {statement.degree}"
        case sf.PrimeStatement():
            lowering.diagnostics += prime(statement, scope)
            return "the prime from here on"
        case sf.SpaceStatement():
            if not isinstance(statement.space, sf.Presentation):  # whether that is well defined takes computing
                space_value(statement.space, scope)
            return "a space"
        case sf.OnStatement():
            lowering.diagnostics += on(statement, scope)
            names = classes_here(scope)
            return f"space with {names}" if names else "a point at this prime"
        case sf.BasisStatement():
            return "basis of one degree"
        case sf.SeriesStatement():
            return "dimensions, degree by degree"
    return OTHERS.get(type(statement), "")


def classes_here(scope: Scope) -> str:
    """The names of the classes of the current space; empty where there are none, or no space is chosen."""
    from opslang.render.text import class_text

    here = scope.localised()
    if here is None:
        return ""
    named = [family.names(scope.prime) for family in here.families]
    none = Family().names(scope.prime)
    return ", ".join([*(class_text(of) for of in here.classes), *(names for names in named if names != none)])


def generators_here(scope: Scope) -> dict[str, int]:
    """The names of generators of the current space in low degrees, with their degrees."""
    from opslang.render.text import class_text

    here = scope.localised()
    if here is None:
        return {}
    found = [*here.classes, *(of for family in here.families for of in family.classes(scope.prime, LOW))]
    return {class_text(of): of.degree for of in found}


def of_value(value: Value) -> str:
    """Sort and degree of a value."""
    if value.sort == "scalar":
        return "scalar"
    return f"{value.sort}, {_degree(value)}"


def _degree(value: Value) -> str:
    return "of several degrees" if value.degree is None else f"degree {value.degree}"


def _relation(statement: sf.RelationStatement, lowering: Lowering) -> str:
    values = [lowering.sum(side) for side in statement.sides]
    sorts: list[Sort] = [value.sort for value in values if value.sort != "scalar"]
    if len(set(sorts)) > 1:
        at = next(k for k, value in enumerate(values) if value.sort not in (sorts[0], "scalar"))
        one, other = ("an operation", "a class") if sorts[0] == "operation" else ("a class", "an operation")
        raise Refusal(
            Diagnostic("error", "sorts-differ", f"the left side is {one}, this side {other}", statement.sides[at].span)
        )
    kind = "relation" if not sorts else f"relation of {'classes' if sorts[0] == 'class' else 'operations'}"
    degrees = list(dict.fromkeys(value.degree for value in values if value.sort != "scalar"))
    if len(degrees) == 1:
        return f"{kind}, {'of several degrees' if degrees[0] is None else f'degree {degrees[0]}'}"
    if not degrees or None in degrees:
        return kind
    return f"{kind}: degrees {' and '.join(str(d) for d in degrees)} differ"
