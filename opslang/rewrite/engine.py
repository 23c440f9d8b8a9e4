"""The engine that explains: applies laws until none applies, and returns the derivation.

Strategy.  Terms are taken from the left.  In a term, a law that gives 0 is tried first, outermost first, since it ends
the term at once; then every law of the book in order, innermost factors first.  What has been found normal is
remembered, so a step costs a search through the terms that it made and not through the whole sum.  Fuel is the number
of steps; when it runs out the derivation so far comes back with a diagnostic, since nobody reads thousands of lines.
"""

from __future__ import annotations

from collections.abc import Sequence

from attrs import evolve

from opslang.ground.source import Span
from opslang.ir.convert import from_tree
from opslang.ir.term import Apply, Element, Monomial, Path, TooMany, replace, zero
from opslang.ir.tree import OPS, Tree
from opslang.laws.book import BOOK
from opslang.laws.derivation import Derivation, Step
from opslang.laws.law import Bindings, Law
from opslang.report.diagnostic import Diagnostic, warning

FUEL = 500
"""Steps of a derivation, unless asked for more."""

Redex = tuple[Path, Law, Bindings]


class Search:
    """Finds the next place where a law applies; remembers where none does."""

    def __init__(self, prime: int, laws: Sequence[Law] = BOOK) -> None:
        self.prime = prime
        self.laws = laws
        self.killers = [law for law in laws if law.kills]
        self.settled: set[Monomial] = set()

    def first(self, element: Element) -> Redex | None:
        """The next redex of an element, or None where it is normal."""
        for number, (monomial, _) in enumerate(element.terms):
            if monomial in self.settled:
                continue
            found = self._killed(monomial) or self._inner(monomial)
            if found:
                return (number, *found[0]), found[1], found[2]
        return None

    def _killed(self, monomial: Monomial) -> Redex | None:
        for at, (factor, exponent) in enumerate(monomial.blocks):
            for law in self.killers:
                bindings = law.match(factor, exponent, self.prime)
                if bindings is not None:
                    return (at,), law, bindings
            if isinstance(factor, Apply) and factor.argument not in self.settled:
                below = self._killed(factor.argument)
                if below:
                    return (at, *below[0]), below[1], below[2]
        return None

    def _inner(self, monomial: Monomial) -> Redex | None:
        if monomial in self.settled:
            return None
        for at, (factor, exponent) in enumerate(monomial.blocks):
            if isinstance(factor, Apply):
                below = self._inner(factor.argument)
                if below:
                    return (at, *below[0]), below[1], below[2]
            for law in self.laws:
                bindings = law.match(factor, exponent, self.prime)
                if bindings is not None:
                    return (at,), law, bindings
        self.settled.add(monomial)
        return None


def run(start: Element, laws: Sequence[Law] = BOOK, fuel: int = FUEL, operation: bool = False) -> Derivation:
    """The derivation from an element to where no law applies or the fuel ends.  TooMany where a sum grows too long."""
    search = Search(start.prime, laws)
    current: Element = start
    steps: list[Step] = []
    while True:
        redex = search.first(current)
        if redex is None or len(steps) >= fuel:
            return Derivation(start, tuple(steps), operation, finished=redex is None)
        path, law, bindings = redex
        equation = law.instance(**bindings)
        current = replace(current, path, equation.power, equation.rhs)
        steps.append(Step(law.name, bindings, path, current))


def _stopped(message: str, span: Span) -> Diagnostic:
    return warning(
        "derivation-too-long",
        message,
        span,
        help="explain a smaller expression; the value itself does not need the derivation",
    )


def derive(tree: Tree, prime: int, fuel: int = FUEL) -> tuple[Derivation, tuple[Diagnostic, ...]]:
    """The derivation of a typed tree, and what there is to say of it.

    Where it does not end within its fuel or its terms are too many to read, what was found so far comes back
    unfinished, with a warning `derivation-too-long`.
    """
    operation = isinstance(tree, OPS)
    derivation = Derivation(zero(prime), (), operation, finished=False)
    try:
        derivation = evolve(derivation, start=from_tree(tree, prime))
        derivation = run(derivation.start, BOOK, fuel, operation)
    except TooMany as reason:
        return derivation, (_stopped(f"the derivation cannot be written out: {reason}", tree.span),)
    if not derivation.finished:
        return derivation, (_stopped(f"the derivation has more than {fuel:,} steps; these are the first", tree.span),)
    return derivation, ()
