"""Whether a presentation is one of an unstable algebra over the Steenrod algebra, and what is wrong with it if not.

Checked are: degrees, instability, that the ideal is closed under the operations, the Adem relations on generators.
By the Cartan formula that is all there is to check, and it is finite: Sq^a Sq^b on a class of degree n says something
new for b < n, a < 2b only.  Operations that an Adem relation determines are filled in on the way.
Source: Steenrod and Epstein 1962, ch. I and VI; the arrangement is our own.
"""

from __future__ import annotations

from heapq import heappop, heappush
from itertools import count

from attrs import define, field, frozen

from opslang.spaces.groebner import Exponents, Poly, TooMany, Work
from opslang.spaces.presentation import MOST_DEGREE, Action, Combination, Key, Presentation, Unknown, Word

CHECKED_TO = 64
"""Presentations are checked up to this degree, where nothing else is said."""

MOST_MISSING = 12
"""So many missing relations are listed, and no more."""


@frozen
class Fault:
    """What is wrong: a diagnostic name, the words, the place, help, a mend.

    The place is "given", "value" (of what is given), "relation" or "generator", and its number.
    """

    name: str
    message: str
    place: tuple[str, int]
    help: str = ""
    mend: str | None = None


@define
class Verdict:
    """The operations of a checked presentation, or its faults; what was left open."""

    action: Action
    faults: list[Fault] = field(factory=list)
    needed: int = 0
    """The degree to which everything would be checked, where that is above the bound; else 0."""


def check(presentation: Presentation, to: int = CHECKED_TO, work: Work | None = None) -> Verdict:
    """Check a presentation up to a degree.  Raises TooMany."""
    work = Work() if work is None else work
    faults = _given(presentation)
    action = Action(presentation, work)
    verdict = Verdict(action, faults)
    if not faults:
        Check(verdict, to).run()
    return verdict


def _given(presentation: Presentation) -> list[Fault]:
    """Faults of single given operations: degrees and instability."""
    faults = []
    ring = presentation.ring(Work())
    p = presentation.prime
    for number, ((at, token), frozen_value) in enumerate(presentation.given):
        of, value = presentation.generators[at], dict(frozen_value)
        what = f"{presentation.operation(token)} {of.text}"
        shift = token if p == 2 else 2 * token * (p - 1) if token else 1
        degrees = sorted({ring.degree(m) for m in value})
        if degrees and degrees != [of.degree + shift]:
            listed = ", ".join(map(str, degrees))
            message = (
                f"{what} has degree {of.degree + shift}, and {presentation.show(value)}, given for it, degree {listed}"
            )
            faults.append(Fault("given-degree", message, ("value", number)))
            continue
        twice = token if p == 2 else 2 * token
        if not token or twice < of.degree:
            continue
        value = Action(presentation, Work()).ideal.reduce(value)
        if twice > of.degree and value:
            bound = f"{token} > {of.degree}" if p == 2 else f"2·{token} > {of.degree}"
            message = f"{what} is 0 by instability, since {bound}, and {presentation.show(value)} is given for it"
            faults.append(Fault("given-unstable", message, ("value", number), "", "0"))
        elif twice == of.degree:
            power = Action(presentation, Work()).value(at, token)
            if power != value:
                written = f"{of.text}^{p}"
                message = f"{what} is {written} by instability, and {presentation.show(value)} is given for it"
                faults.append(Fault("given-unstable", message, ("value", number), "", written))
    return faults


class Check:
    """The checks that need the whole algebra."""

    def __init__(self, verdict: Verdict, to: int) -> None:
        self.verdict = verdict
        self.action = verdict.action
        self.of = self.action.of
        self.to = to
        self._turn = count()
        self._highest = 0

    def run(self) -> None:
        """Determine what can be determined, then look for faults."""
        self.determine()
        self.closed()
        if not self.verdict.faults:
            self.relations()
        if not self.verdict.faults:
            self.verdict.needed = self._needed()

    def _beyond(self, degree: int) -> bool:
        """Whether a check in a degree is left out; where the algebra is 0 nothing is to be checked."""
        self._highest = max(self._highest, degree)
        return degree > self.to or self.action.empty(degree)

    def _needed(self) -> int:
        """The highest degree above the bound in which something was left out; 0 where nothing was."""
        highest = max([self._highest, *map(self.action.highest_relation, range(len(self.of.generators)))])
        if highest > MOST_DEGREE:
            return highest
        return next((d for d in range(highest, self.to, -1) if not self.action.empty(d)), 0)

    def determine(self) -> None:
        """Fill in the operations that Adem relations determine, until nothing new is found."""
        action = self.action
        open_relations = [
            (at, word, equals)
            for at in range(len(self.of.generators))
            for word, equals in action.adem_relations(at, self.to)
        ]
        while True:
            left = []
            found = False
            for at, word, equals in open_relations:
                try:
                    action.sides(at, word, equals)
                    continue
                except Unknown as unknown:
                    left.append((at, word, equals))
                    found = self._determined(unknown.key, at, word, equals) or found
            open_relations = left
            if not found:
                return

    def _determined(self, key: Key, at: int, word: Word, equals: Combination) -> bool:
        try:
            value = self.action.determine(key, at, word, equals)
        except Unknown:
            return False
        if value is None:
            return False
        self.action.settle(key, value)
        return True

    # --- Cartan on relations --------------------------------------------------------------------

    def _letters(self, degree: int) -> list[int]:
        """The indecomposable letters that can be other than a p-th power on a polynomial of a degree."""
        p = self.of.prime
        found = [] if p == 2 else [0]
        power = 1
        while (power if p == 2 else 2 * power) < degree:
            found.append(power)
            power *= p
        return found

    def _wait(self, waiting: list[tuple[int, int, int, int, Poly]], number: int, relation: Poly) -> None:
        """Put the operations on a relation down for later, the lowest degrees first."""
        if not relation:
            return
        degree = self.action.ring.degree(next(iter(relation)))
        for token in self._letters(degree):
            target = degree + self.action.shift(token)
            if not self._beyond(target):
                heappush(waiting, (target, next(self._turn), number, token, relation))

    def closed(self) -> None:
        """Whether the ideal is closed under the operations; if not, the relations that are missing."""
        missing: list[Poly] = []
        first: tuple[int, str] | None = None
        waiting: list[tuple[int, int, int, int, Poly]] = []
        action = self.action
        for number, f in enumerate(self.of.relations):
            self._wait(waiting, number, dict(f))
        while waiting and len(missing) < MOST_MISSING:
            _, _, number, token, relation = heappop(waiting)
            try:
                value = action.operate(token, relation)
                if not value:
                    continue
                said = f"{self.of.operation(token)}({self.of.show(relation)}) = {self.of.show(value)}"
                first = first or (number, said)
                missing.append(value)
                self._wait(waiting, number, value)
                action = self.action.modulo(tuple(missing))
            except Unknown:
                continue  # what was not given is told in a note
            except TooMany:
                if first is None:
                    raise
                break
        if first is not None:
            listed = ", ".join(map(self.of.show, missing))
            written = self.of.show(dict(self.of.relations[first[0]]))
            more = " and more" if waiting else ""
            message = f"the relations are not closed under the operations: {first[1]} is not 0 by them"
            help = f"the relations that are missing: {listed}{more}"
            mend = None if more else f"{written}, {listed}"
            self.verdict.faults.append(Fault("ideal-not-closed", message, ("relation", first[0]), help, mend))

    # --- Adem -----------------------------------------------------------------------------------

    def relations(self) -> None:
        """The Adem relations on every generator."""
        for at in range(len(self.of.generators)):
            for word, equals in self.action.adem_relations(at, self.to):
                try:
                    left, right = self.action.sides(at, word, equals)
                except Unknown:
                    continue
                if left != right:
                    self.verdict.faults.append(self._adem_fault(at, word, equals, left, right))
                    break

    def _adem_fault(self, at: int, word: Word, equals: Combination, left: Poly, right: Poly) -> Fault:
        show, of = self.of.show, self.of.generators[at].text
        said = " ".join(map(self.of.operation, word))
        if word == (0, 0):
            message = f"beta beta {of} is {show(left)} by what is given, and the Bockstein has square 0"
            return Fault("bockstein-squared", message, self._culprit(at, word))
        other = " + ".join(
            " ".join([*([str(c)] if c != 1 else []), *map(self.of.operation, letters), of]) for c, letters in equals
        )
        value = show(right) if equals else ""
        by_adem = f"by the Adem relation it is {other}" if equals else "by the Adem relation it is 0"
        message = f"{said} {of} is {show(left)} by what is given, and {by_adem}" + (
            f", which is {value}" if value else ""
        )
        return Fault("adem-violated", message, self._culprit(at, word))

    def _culprit(self, at: int, word: Word) -> tuple[str, int]:
        """The given operation to show: the last written one among those that the left side uses at first sight."""
        keys = {(at, word[-1])}
        try:
            inner = self.action.value(at, word[-1])
        except Unknown:
            inner = {}
        linear: list[Exponents] = [m for m in inner if sum(m) == 1]
        keys |= {(m.index(1), word[-2]) for m in linear}
        places = [number for number, (key, _) in enumerate(self.of.given) if key in keys]
        return ("given", places[-1]) if places else ("generator", at)


def not_given(verdict: Verdict) -> list[Key]:
    """The indecomposable operations on generators that are not determined."""
    action = verdict.action
    p = action.prime
    found = []
    for at, of in enumerate(action.of.generators):
        tokens = [] if p == 2 else [0]
        power = 1
        while (power if p == 2 else 2 * power) < of.degree:
            tokens.append(power)
            power *= p
        for token in tokens:
            try:
                action.value(at, token)
            except Unknown:
                found.append((at, token))
    return found
