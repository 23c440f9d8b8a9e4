"""The stages from a chunk of text to an outcome, written once: parse, lower, normalise.

A `Session` holds what one script declares.  It prints nothing and reads no files.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import TYPE_CHECKING, Any, cast

from attrs import evolve

from opslang.ground.grading import degree
from opslang.ground.source import Source, Span
from opslang.ir.measure import element_degree, element_excess
from opslang.ir.order import word_key
from opslang.ir.outcome import Kind, Link, Outcome, Verdict, changed
from opslang.ir.tree import ClassElement, Element, OperationElement
from opslang.meaning import statements
from opslang.meaning.homes import lost, one_home
from opslang.meaning.indices import number
from opslang.meaning.lower import Lowering
from opslang.meaning.scope import Scope
from opslang.meaning.spaces import space_value
from opslang.meaning.value import Sort, Value, as_sort
from opslang.report.diagnostic import Diagnostic, Refusal, error, note
from opslang.spaces.family import NotKnown
from opslang.spaces.space import SpaceValue, localise
from opslang.syntax import surface as sf
from opslang.syntax.parser import parse
from opslang.tables.bockstein import Undefined
from opslang.tables.budget import DEFAULT_LIMIT, TooLarge
from opslang.tables.engine import Engine
from opslang.tables.indeterminacy import within

if TYPE_CHECKING:
    from opslang.laws.derivation import Derivation

__all__ = ["DEFAULT_LIMIT", "Outcome", "Session"]

_WORST: tuple[Verdict, ...] = ("error", "false", "undecided", "true", "ok")
_KINDS: dict[str, Kind] = {
    "prime": "declaration",
    "space": "declaration",
    "on": "declaration",
    "let": "declaration",
    "map": "declaration",
    "manifold": "declaration",
    "bundle": "declaration",
    "why": "derivation",
    "basis": "listing",
    "series": "listing",
    "compare": "listing",
}


def kind_of(text: str) -> Kind:
    """The kind of a statement that could not be read, by its first word and its signs."""
    words = text.split(None, 1)
    found = _KINDS.get(words[0]) if words else None
    return found or ("relation" if any(sign in text for sign in ("=", "≡", r"\equiv")) else "element")


class Session:
    """One script's scope, and the engines that answer its statements.

    `prime` is the prime to begin with; `limit` bounds the terms that one statement may work with; `both` runs the
    explaining engine beside the fast one on every expression and reports where they differ.
    """

    def __init__(self, prime: int = 2, limit: int = DEFAULT_LIMIT, both: bool = False) -> None:
        self.scope = Scope(prime)
        self.limit = limit
        self.both = both
        self._engines: dict[int, Engine] = {}

    def engine(self) -> Engine:
        """The engine at the current prime."""
        found = self._engines.get(self.scope.prime)
        if found is None:
            found = self._engines[self.scope.prime] = Engine(self.scope.prime, self.limit)
        return found

    def run(self, source: Source) -> Outcome:
        """The outcome of one statement.  Never raises, but lets an interrupt pass."""
        statement, diagnostics = parse(source)
        if statement is None or any(d.severity == "error" for d in diagnostics):
            return self._failed(source, (0, len(source.text)), kind_of(source.text), diagnostics)
        lowering = Lowering(self.scope, source.text, list(diagnostics), self.normal)
        span = statement.span
        kind: Kind = "element"
        for engine in self._engines.values():
            engine.budget.refill()
        try:
            kind = _kind(statement)
            outcome = self._answer(statement, Outcome(source, span, kind, "ok", self.scope.prime), lowering)
            if lowering.home is not None and outcome.sort == "class":
                outcome = changed(outcome, space=lowering.home.text)
            said = (*lowering.diagnostics, *outcome.diagnostics)
            return changed(outcome, diagnostics=said) if said else outcome
        except Refusal as refusal:
            lowering.diagnostics += refusal.others
            found = refusal.diagnostic
        except TooLarge as refusal:
            found = error(
                "too-large",
                f"this needs more than {refusal.limit:,} terms",
                span,
                f"the limit is there to keep the memory small; `--limit {10 * refusal.limit}` raises it",
            )
        except NotKnown as refusal:
            found = error("not-known", str(refusal), span)
        except Undefined as refusal:
            found = error("bockstein-undefined", str(refusal), span)
        except (RecursionError, MemoryError):
            found = error("too-large", "this is nested too deeply or too large for the memory", span)
        return self._failed(source, span, kind, (*lowering.diagnostics, found))

    def _failed(self, source: Source, span: Span, kind: Kind, diagnostics: tuple[Diagnostic, ...]) -> Outcome:
        if source.text.split(None, 1)[:1] == ["on"]:
            self.scope.space, self.scope.lost = None, True
        first = next((d for d in diagnostics if d.severity == "error"), None)
        name, message = (first.name, first.message) if first else (None, None)
        return Outcome(
            source, span, kind, "error", self.scope.prime, name=name, message=message, diagnostics=diagnostics
        )

    # --- statements -----------------------------------------------------------------------------

    def _answer(self, statement: sf.Statement, blank: Outcome, lowering: Lowering) -> Outcome:
        scope = self.scope
        match statement:
            case sf.ExpressionStatement():
                return self._expression(statement, blank, lowering)
            case sf.RelationStatement():
                return self._relation(statement, blank, lowering)
            case sf.DeclareStatement():
                lowering.diagnostics += statements.declare(statement, scope)
            case sf.AbbreviateStatement():
                value = statements.abbreviate(statement, scope, lowering)
                one_home(self.scope, value.classes, statement.span)
                return self._described(changed(blank, degree=value.degree), (value,))
            case sf.OnStatement():
                lowering.diagnostics += statements.on(statement, scope)
                return changed(blank, space=scope.space.text if scope.space else None)
            case sf.SpaceStatement():
                lowering.diagnostics += statements.space(statement, scope, self.limit)
                return changed(blank, space=scope.spaces[statement.name].text)
            case sf.PrimeStatement():
                lowering.diagnostics += statements.prime(statement, scope)
                return changed(blank, prime=scope.prime)
            case sf.WhyStatement():
                return self._why(statement, blank, lowering)
            case sf.BasisStatement():
                return self._basis(statement, blank)
            case sf.SeriesStatement():
                return self._series(statement, blank)
            case _:
                from opslang.inquiry.statements import answer

                return answer(statement, blank, lowering, self.engine())
        return blank

    def _expression(self, statement: sf.ExpressionStatement, blank: Outcome, lowering: Lowering) -> Outcome:
        value = as_sort_or_class(lowering.sum(statement.body), "class", statement.body.span)
        one_home(self.scope, value.classes, statement.span)
        engine = self.engine()
        engine.start()
        element = self.normal(value)
        outcome = self._measured(self._described(blank, (value,)), element, value.degree)
        if engine.modulo:
            lowering.diagnostics.append(self._modulo(statement.span))
        return self._cross_checked(outcome, (value,), (element,)) if self.both else outcome

    def normal(self, value: Value) -> Element:
        """The canonical form of a lowered operation or class."""
        engine = self.engine()
        if value.sort == "operation":
            return engine.normal_operation(value.op, value.top)
        return engine.normal_class(value.cls)

    def _modulo(self, span: Span) -> Diagnostic:
        return note("modulo-lower-bocksteins", "this value is defined modulo the images of the lower Bocksteins", span)

    def _measured(self, outcome: Outcome, element: Element, written: int | None) -> Outcome:
        degree = element_degree(element) if element.terms else written
        return changed(outcome, element=element, degree=degree, excess=element_excess(element))

    def _described(self, outcome: Outcome, values: tuple[Value, ...]) -> Outcome:
        """The sort of the values, and the space that their classes live in."""
        sort, space = self._sort_and_space(values)
        return changed(outcome, sort=sort, space=space)

    def _sort_and_space(self, values: tuple[Value, ...]) -> tuple[Sort, str | None]:
        sort: Sort = next((value.sort for value in values if value.sort != "scalar"), "class")
        if sort == "operation":
            return sort, None
        if self.scope.space is not None:
            return "class", self.scope.space.text
        classes = values[0].classes.union(*[value.classes for value in values[1:]])
        space = None
        if classes and all(of.letter == "iota" for of in classes):
            space = " x ".join([f"K(Z/{self.scope.prime}, {n})" for n in sorted([of.degree for of in classes])])
        return "class", space

    # --- relations ------------------------------------------------------------------------------

    def _sides(self, statement: sf.RelationStatement, lowering: Lowering) -> tuple[Value, ...]:
        statements.congruence(statement, self.scope)
        values = [lowering.sum(side) for side in statement.sides]
        sort: Sort = next((value.sort for value in values if value.sort != "scalar"), "class")
        for value, side in zip(values, statement.sides):
            if value.sort not in (sort, "scalar"):
                first, second = ("an operation", "a class") if sort == "operation" else ("a class", "an operation")
                raise Refusal(error("sorts-differ", f"the left side is {first}, and this side is {second}", side.span))
        lifted = tuple([as_sort_or_class(value, sort, side.span) for value, side in zip(values, statement.sides)])
        one_home(self.scope, lifted[0].classes.union(*[value.classes for value in lifted[1:]]), statement.span)
        return lifted

    def _relation(self, statement: sf.RelationStatement, blank: Outcome, lowering: Lowering) -> Outcome:
        values = self._sides(statement, lowering)
        engine = self.engine()
        engine.start()
        elements, differences = self._normal_sides(values)
        links: list[Link] = []
        name = message = None
        for at in range(len(values) - 1):
            difference = differences[at]
            verdict, words = self._compare(values, difference, at)
            links.append(Link(verdict, difference))
            if words and message is None:
                name, message = words
        if engine.modulo:
            lowering.diagnostics.append(self._modulo(statement.span))
        worst = min(links, key=lambda link: _WORST.index(link.verdict))
        degrees = {value.degree for value in values if not _bare_zero(value)}
        degree = degrees.pop() if len(degrees) == 1 else None if degrees else 0
        sort, space = self._sort_and_space(values)
        outcome = changed(
            blank,
            sort=sort,
            space=space,
            verdict=worst.verdict,
            element=worst.difference,
            sides=elements,
            degree=degree,
            excess=element_excess(worst.difference),
            links=tuple(links) if len(links) > 1 else (),
            name=name,
            message=message,
        )
        return self._cross_checked(outcome, values, elements) if self.both else outcome

    def _normal_sides(self, values: tuple[Value, ...]) -> tuple[tuple[Element, ...], tuple[Element, ...]]:
        """The canonical forms of the sides, and left minus right of each equation."""
        if values[0].sort == "class":
            sides, differences = self.engine().normal_classes([value.cls for value in values])
            return tuple(sides), tuple(differences)
        elements = tuple([self.normal(value) for value in values])
        return elements, tuple([subtract(left, right) for left, right in pairwise(elements)])

    def _compare(
        self, values: tuple[Value, ...], difference: Element, at: int
    ) -> tuple[Verdict, tuple[str, str] | None]:
        """The verdict on one equation, and the name and the words of what is to be said first."""
        left, right = values[at], values[at + 1]
        apart = left.degree is not None and right.degree is not None and left.degree != right.degree
        if apart and not _bare_zero(left) and not _bare_zero(right):
            return "false", (
                "degrees-differ",
                f"the right side has degree {right.degree}, the left side degree {left.degree}",
            )
        if not difference.terms:
            return "true", None
        if self.engine().modulo and isinstance(difference, ClassElement):
            classes = left.classes | right.classes
            decided = within(self.engine(), difference, tuple(classes), max(left.top, right.top))
            if decided is None:
                return "undecided", (
                    "modulo-lower-bocksteins",
                    "equal at most modulo the images of the lower Bocksteins; not decided",
                )
            return ("true" if decided else "false"), None
        return "false", None

    # --- derivations ----------------------------------------------------------------------------

    def _why(self, statement: sf.WhyStatement, blank: Outcome, lowering: Lowering) -> Outcome:
        from opslang.render.derivation import items

        body = statement.body
        again = Lowering(self.scope, lowering.text, [], self.normal)
        if isinstance(body, sf.RelationStatement):
            outcome = self._relation(body, blank, lowering)
            values = self._sides(body, again)
        else:
            outcome = self._expression(body, blank, lowering)
            values = (as_sort_or_class(again.sum(body.body), "class", body.body.span),)
        derivations = []
        for value in values:
            derivation, found = derive_value(value, self.scope.prime)
            lowering.diagnostics += [evolve(d, span=statement.span) for d in found]
            derivations.append(derivation)
        elements = outcome.sides or (cast(Element, outcome.element),)
        agreed(derivations, elements, statement.span)
        steps = tuple([item for derivation in derivations for item in items(derivation)])
        return changed(outcome, kind="derivation", items=steps, derivations=tuple(derivations))

    def _cross_checked(self, outcome: Outcome, values: tuple[Value, ...], elements: tuple[Element, ...]) -> Outcome:
        """The outcome, unless the explaining engine finishes with another element."""
        agreed([derive_value(value, self.scope.prime)[0] for value in values], elements, outcome.span)
        return outcome

    # --- listings -------------------------------------------------------------------------------

    def _space_of(self, space: sf.Space | None, span: Span) -> SpaceValue:
        found = self.scope.space if space is None else space_value(space, self.scope)
        if found is None and self.scope.lost:
            raise Refusal(lost(span))
        if found is None:
            raise Refusal(
                error(
                    "no-space",
                    "no space is named, and none is chosen",
                    span,
                    "write one in the brackets, or `on K(Z/2, 3)` before",
                )
            )
        return found

    def _basis(self, statement: sf.BasisStatement, blank: Outcome) -> Outcome:
        from opslang.tables.generators import basis

        space = self._space_of(statement.space, statement.span)
        degree = number(statement.degree, statement.span)
        prime = self.scope.prime
        engine = self.engine()
        engine.start()
        found = tuple(basis(prime, localise(space, prime), degree, engine.budget)) if degree >= 0 else ()
        return changed(blank, space=space.text, sort="class", degree=degree, basis=found, items=found)

    def _series(self, statement: sf.SeriesStatement, blank: Outcome) -> Outcome:
        from opslang.tables.generators import series

        space = self._space_of(statement.space, statement.span)
        to = number(statement.to, statement.span)
        engine = self.engine()
        engine.start()
        if to < 0:
            raise Refusal(
                error("index-range", f"a series goes to a degree of at least 0, and here it is {to}", statement.span)
            )
        engine.budget.spend(to * to // 64)
        found = tuple(series(self.scope.prime, localise(space, self.scope.prime), to))
        return changed(blank, space=space.text, items=found)


def derive_value(value: Value, prime: int) -> tuple[Derivation, tuple[Diagnostic, ...]]:
    """The derivation of a lowered operation or class."""
    from opslang.rewrite.engine import derive

    return derive(cast(Any, value.tree), prime)


def agreed(derivations: Sequence[Derivation], elements: Sequence[Element], span: Span) -> None:
    """Refuse unless the kernel accepts each derivation and each finished one ends in its element."""
    from opslang.ir.convert import to_canonical
    from opslang.kernel.check import Rejected, check
    from opslang.laws.book import LAWS
    from opslang.render.text import element_text

    for derivation, element in zip(derivations, elements):
        try:
            check(derivation, LAWS)
            other = to_canonical(derivation.result, derivation.operation) if derivation.finished else element
        except (Rejected, ValueError) as reason:
            raise Refusal(error("engines-disagree", f"the derivation does not hold: {reason}", span)) from reason
        if other != element:
            words = f"the fast engine gives {element_text(element)}, the explaining engine {element_text(other)}"
            raise Refusal(error("engines-disagree", words, span, "no answer is given; please report the expression"))


def _kind(statement: sf.Statement) -> Kind:
    match statement:
        case sf.ExpressionStatement():
            return "element"
        case sf.RelationStatement():
            return "relation"
        case sf.WhyStatement():
            return "derivation"
        case sf.BasisStatement() | sf.SeriesStatement() | sf.CompareStatement():
            return "listing"
    return "declaration"


def as_sort_or_class(value: Value, sort: Sort, span: Span) -> Value:
    """A value, scalars lifted to the sort of their neighbours; to a class where they stand alone."""
    return as_sort(value, "class" if sort == "scalar" else sort, span)


def _bare_zero(value: Value) -> bool:
    """A literal 0: it has every degree."""
    terms = getattr(value.tree, "terms", None)
    return terms == () and value.degree == 0


def subtract(left: Element, right: Element) -> Element:
    """left - right of two operations, in canonical order."""
    p = left.prime
    terms: dict[Any, int] = dict(left.terms)
    for term, c in right.terms:
        terms[term] = (terms.get(term, 0) - c) % p
    kept = [(term, c) for term, c in terms.items() if c]
    kept.sort(key=lambda pair: (degree(pair[0], p), word_key(pair[0], p)))
    return OperationElement(p, tuple(kept))
