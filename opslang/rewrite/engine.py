"""The engine that explains: applies laws until none applies, and returns the derivation.

Strategy.  Terms are taken from the left.  In a term, instances that give 0 are looked for first, outermost first:
one ends the term at once.  Then every law of the book in order, innermost factors first.  What has been found normal is
remembered, so a step costs a search through the terms that it made and not through the whole sum.  Fuel is the number
of steps; when it runs out the derivation so far comes back with a diagnostic, since nobody reads thousands of lines.
"""

from __future__ import annotations

from collections.abc import Sequence

from opslang.ir.convert import from_tree
from opslang.ir.term import Apply, Element, Monomial, Path, TooMany, replace, zero
from opslang.ir.tree import OPS, Tree
from opslang.laws.book import BOOK
from opslang.laws.derivation import Derivation, Step
from opslang.laws.law import Bindings, Law
from opslang.laws.ring import letter_on_class
from opslang.report.diagnostic import Diagnostic, warning
from opslang.spaces.family import NotKnown

FUEL = 500
"""Steps of a derivation, unless asked for more."""

LENGTH = 120
"""Letters that a line of a derivation may have on average, for each step of fuel."""

Redex = tuple[Path, Law, Bindings]


class Search:
    """Finds the next place where a law applies; remembers where none does."""

    def __init__(self, prime: int, laws: Sequence[Law] = BOOK) -> None:
        self.prime = prime
        self.laws = laws
        self.killers = [law for law in laws if law.kills or law.vanishes]
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
                if bindings is not None and (law.vanishes is None or law.vanishes(**bindings)):
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
                if bindings is None and law.match_product is not None:
                    bindings = law.match_product(monomial, at, self.prime)
                if bindings is not None:
                    return (at,), law, bindings
        self.settled.add(monomial)
        return None


def _not_known(element: Element) -> str:
    """Why no law opens an operation on a class of a named space, where one is left; empty where none is."""
    waiting = [factor for monomial, _ in element.terms for factor, _ in monomial.blocks]
    while waiting:
        factor = waiting.pop()
        acts = letter_on_class(factor, element.prime)
        if acts is not None:
            try:
                acts[1].ring.operation(element.prime, *acts)
            except NotKnown as reason:
                return f"this is not known: {reason}"
        if isinstance(factor, Apply):
            waiting += [inner for inner, _ in factor.argument.blocks]
    return ""


def run(start: Element, laws: Sequence[Law] = BOOK, fuel: int = FUEL, operation: bool = False) -> Derivation:
    """The derivation from an element to where no law applies, or to where it grows too long to read."""
    search = Search(start.prime, laws)
    current: Element = start
    steps: list[Step] = []
    length, stopped = 0, ""
    while not stopped:
        redex = search.first(current)
        if redex is None:
            stopped = _not_known(current)
            break
        if len(steps) >= fuel:
            stopped = f"it has more than {fuel:,} steps"
        elif length > LENGTH * fuel:
            stopped = f"its lines have more than {LENGTH * fuel:,} letters together"
        else:
            path, law, bindings = redex
            try:
                equation = law.instance(**bindings)
                current = replace(current, path, equation.power, equation.rhs, equation.part)
            except TooMany as reason:
                stopped = f"the next step has {reason}"
            except ValueError as reason:
                # A search that proposes what its law refuses is a fault of ours, but no reason to lose the rest.
                stopped = f"{law.name} was tried where it does not apply: {reason}"
            else:
                steps.append(Step(law.name, bindings, path, current))
                length += len(current.terms) * len(path)
    return Derivation(start, tuple(steps), operation, stopped)


def derive(tree: Tree, prime: int, fuel: int = FUEL) -> tuple[Derivation, tuple[Diagnostic, ...]]:
    """The derivation of a typed tree, and what there is to say of it.

    Where it does not end within its fuel or its terms are too many to read, what was found so far comes back
    unfinished, with a warning `derivation-too-long`.
    """
    operation = isinstance(tree, OPS)
    try:
        derivation = run(from_tree(tree, prime), BOOK, fuel, operation)
    except TooMany as reason:
        derivation = Derivation(zero(prime), (), operation, stopped=f"its first line has {reason}")
    if derivation.finished:
        return derivation, ()
    message = f"the derivation is not written out to its end: {derivation.stopped}"
    help_ = "explain a smaller expression; to have only the value, leave `why` out"
    return derivation, (warning("derivation-too-long", message, tree.span, help_),)
