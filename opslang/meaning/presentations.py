"""`space R = F_2[…] / (…) where …`: from surface to a checked presentation, every fault at its place.

Knows the diagnostics and the spans; what is wrong with the mathematics is found in the room of the spaces.
"""

from __future__ import annotations

from functools import lru_cache
from typing import NoReturn

from attrs import define, field, frozen

from opslang.ground.arith import is_prime
from opslang.ground.grading import excess
from opslang.ground.source import Span
from opslang.meaning.indices import number
from opslang.meaning.scope import spelled
from opslang.report.diagnostic import Diagnostic, Refusal, error, note, warning
from opslang.spaces.groebner import LIMIT, Exponents, Poly, Ring, TooMany, Work
from opslang.spaces.presentation import MOST_DEGREE, Frozen, Key, Named, Presentation
from opslang.spaces.presentation_check import CHECKED_TO, Verdict, check, not_given
from opslang.spaces.presented import PresentedFactor
from opslang.spaces.space import SpaceValue
from opslang.syntax import surface as sf

MOST_GENERATORS = 200
"""A presentation has at most so many generators."""

_SHOWN = 6
"""So many operations that were not given are listed."""


@lru_cache(maxsize=32)
def checked(presentation: Presentation, to: int, limit: int) -> Verdict:
    """A presentation with what there is to say about it; remembered, as a line may be read twice.  Raises TooMany."""
    return check(presentation, to, Work(limit, limit))


def refuse(name: str, message: str, span: Span, help: str = "", mend: str | None = None) -> NoReturn:
    """Raise the refusal of the statement."""
    raise Refusal(error(name, message, span, help, mend))


def presented(name: str, body: sf.Presentation, prime: int, limit: int = LIMIT) -> tuple[SpaceValue, list[Diagnostic]]:
    """The space that a presentation names, with warnings and notes.  Raises Refusal."""
    if not is_prime(body.prime):
        refuse("coefficients-prime", f"the coefficients are a field F_p, and {body.prime} is not a prime", body.span)
    if body.prime != prime:
        help = f"write `prime {body.prime}` first, or F_{prime}"
        refuse("coefficients-prime", f"the coefficients are F_{body.prime}, and the prime is {prime}", body.span, help)
    reader = Reader(name, body, prime, limit)
    try:
        presentation = reader.presentation()
        to = CHECKED_TO if body.to is None else number(body.to, body.span)
        if not 0 <= to <= MOST_DEGREE:
            refuse(
                "degree-range",
                f"a presentation is checked to a degree of at most {MOST_DEGREE:,}, and here it is {to}",
                body.span,
            )
        verdict = checked(presentation, to, limit)
        faults = [
            error(fault.name, fault.message, reader.place(*fault.place), fault.help, fault.mend)
            for fault in verdict.faults
        ]
        if faults:
            raise Refusal(faults[-1], (*reader.found, *faults[:-1]))
        value = SpaceValue((PresentedFactor(presentation, verdict.action),), name)
        return value, reader.found + _left_open(verdict, presentation, to, body.span)
    except TooMany as reason:
        help = f"the limit is there to keep the memory small; `--limit {10 * reason.limit}` raises it"
        raise Refusal(error("too-large", f"working out this presentation takes {reason}", body.span, help)) from reason


def _left_open(verdict: Verdict, presentation: Presentation, to: int, span: Span) -> list[Diagnostic]:
    """Notes on operations that were not given, and on degrees that were not looked at."""
    found = []
    lacking = [
        f"{presentation.operation(token)} {presentation.generators[at].text}" for at, token in not_given(verdict)
    ]
    if lacking:
        listed = ", ".join(lacking[:_SHOWN]) + (f" and {len(lacking) - _SHOWN} more" if len(lacking) > _SHOWN else "")
        message = (
            f"not given, and not determined by what is given: {listed}; what needs them is refused, and was not checked"
        )
        found.append(note("not-given", message, span))
    if verdict.needed:
        help = f"to check it all write `to {verdict.needed}` at the end" if verdict.needed <= MOST_DEGREE else ""
        found.append(note("checked-in-part", f"the presentation was checked to degree {to}", span, help))
    return found


@frozen
class Side:
    """The left side of a given operation: letters, leftmost first (None: the total operation), and a generator."""

    word: tuple[int | None, ...]
    at: int
    span: Span


@define
class Reader:
    """Reads one presentation; warnings gather in `found`."""

    name: str
    body: sf.Presentation
    prime: int
    limit: int
    found: list[Diagnostic] = field(factory=list)
    names: dict[tuple[str, int | None, int], int] = field(factory=dict)
    generators: list[Named] = field(factory=list)
    spans: list[tuple[Span, Span]] = field(factory=list)
    """For each operation that was given its place and that of its value."""
    given: dict[Key, Poly] = field(factory=dict)
    ring: Ring = Ring(2, (), ())
    plain: Ring = Ring(2, (), ())
    """The same without signs: shows what was meant where classes of odd degree meet."""

    def presentation(self) -> Presentation:
        """The presentation as a value.  Raises Refusal, TooMany."""
        self._generators()
        empty = Presentation(self.name, self.prime, tuple(self.generators), (), ())
        self.ring = empty.ring(Work(self.limit, self.limit))
        self.plain = Ring(self.prime, self.ring.degrees, (), self.ring.work)
        relations = tuple([self._relation(relation, empty) for relation in self.body.relations])
        for one in self.body.given:
            self._given(one)
        return Presentation(
            self.name,
            self.prime,
            tuple(self.generators),
            relations,
            tuple([(k, _frozen(f)) for k, f in self.given.items()]),
        )

    def place(self, kind: str, at: int) -> Span:
        """The place of a fault."""
        if kind == "relation":
            return self.body.relations[at].span
        if kind == "generator":
            return self.body.generators[at].span
        return self.spans[at][kind == "value"]

    def _generators(self) -> None:
        if len(self.body.generators) > MOST_GENERATORS:
            refuse("too-large", f"a presentation has at most {MOST_GENERATORS} generators", self.body.span)
        for one in self.body.generators:
            name = one.name
            key = (name.letter, None if name.index is None else number(name.index, name.span), name.primes)
            degree = number(one.degree, one.span)
            if key in self.names:
                refuse("declared-twice", f"{spelled(key)} stands twice among the generators", one.span)
            if not 1 <= degree <= MOST_DEGREE:
                refuse(
                    "degree-range",
                    f"a generator has a degree from 1 to {MOST_DEGREE:,}, and here it is {degree}",
                    one.span,
                )
            self.names[key] = len(self.generators)
            self.generators.append(Named(*key, degree))

    # --- relations ------------------------------------------------------------------------------

    def _relation(self, body: sf.Sum, empty: Presentation) -> Frozen:
        value = self.sum(body)
        degrees = sorted({self.ring.degree(m) for m in value})
        if len(degrees) > 1:
            listed = ", ".join(
                f"{empty.show({m: c})} has degree {self.ring.degree(m)}" for m, c in sorted(value.items(), reverse=True)
            )
            refuse("relation-degrees", f"the terms of this relation have different degrees: {listed}", body.span)
        if degrees == [0]:
            refuse("relation-unit", "a relation of degree 0 makes the whole ring 0", body.span)
        return _frozen(value)

    # --- operations -----------------------------------------------------------------------------

    def _given(self, one: sf.Assignment) -> None:
        side = self._side(one)
        value = self.sum(one.right)
        if side.word == (None,):
            for token, part in self._components(side, value, one):
                self._put((side.at, token), part, one)
            return
        word = [token or 0 for token in side.word]
        at, coefficient = side.at, 1
        while len(word) > 1:
            at, coefficient = self._inner(one, word, at, coefficient, bool(value))
            word.pop()
        scaled: Poly = {}
        self.ring.add(scaled, value, pow(coefficient, -1, self.prime))
        self._put((at, word[0]), scaled, one)

    def _put(self, key: Key, value: Poly, one: sf.Assignment) -> None:
        if key in self.given:
            what = f"{self._letter(key[1])} {self.generators[key[0]].text}"
            refuse("given-twice", f"{what} is given for the second time", one.span)
        self.given[key] = value
        self.spans.append((one.span, one.right.span))

    def _letter(self, token: int) -> str:
        return f"Sq^{token}" if self.prime == 2 else f"P^{token}" if token else "beta"

    def _inner(self, one: sf.Assignment, word: list[int], at: int, coefficient: int, nonzero: bool) -> tuple[int, int]:
        """The generator that the rightmost letter of a longer word gives, and the coefficient so far."""
        of = self.generators[at]
        letters = " ".join(map(self._letter, word))
        if nonzero and excess(tuple(word), self.prime) > of.degree:
            refuse(
                "given-unstable",
                f"{letters} {of.text} is 0 by instability, and another value is given for it",
                one.right.span,
                "",
                "0",
            )
        inner = self.given.get((at, word[-1]), {})
        if len(inner) == 1:
            ((m, c),) = inner.items()
            if sum(m) == 1:
                return m.index(1), coefficient * c % self.prime
        help = f"give the operations one by one: {self._letter(word[-1])} {of.text} first"
        refuse("given-form", f"{letters} {of.text} is not one operation on one generator", one.left.span, help)

    def _components(self, side: Side, value: Poly, one: sf.Assignment) -> list[tuple[int, Poly]]:
        """The values of the single operations in a total one."""
        degree = self.generators[side.at].degree
        step = 1 if self.prime == 2 else 2 * (self.prime - 1)
        last = degree if self.prime == 2 else degree // 2
        parts: list[Poly] = [{} for _ in range(last + 1)]
        for m, c in value.items():
            token, rest = divmod(self.ring.degree(m) - degree, step)
            if rest or not 0 <= token <= last:
                where = f"the total operation on {self.generators[side.at].text}, which has degree {degree}"
                message = f"a term of degree {self.ring.degree(m)} stands in {where}"
                refuse("given-degree", message, one.right.span)
            parts[token][m] = c
        if parts[0] != self.ring.variable(side.at):
            refuse(
                "given-form",
                f"the total operation on a class begins with the class: {self.generators[side.at].text} + …",
                one.right.span,
            )
        return list(enumerate(parts))[1:]

    def _side(self, one: sf.Assignment) -> Side:
        """The left side of a given operation."""
        terms = one.left.terms
        how = (
            "an operation is given as `Sq^2 u = …`, one letter on one generator"
            if self.prime == 2
            else "an operation is given as `P^1 u = …` or `beta u = …`"
        )
        if len(terms) != 1 or terms[0][0] != 1 or len(terms[0][1].factors) < 2:
            refuse("given-form", "the left side is not an operation on a generator", one.left.span, how)
        *letters, last = terms[0][1].factors
        if not isinstance(last, sf.Name):
            refuse("given-form", "the left side is not an operation on a generator", one.left.span, how)
        at = self._at(last)
        word: list[int | None] = []
        for letter in letters:
            word += self._tokens(letter, how)
        if None in word and len(word) > 1:
            refuse("given-form", "the total operation stands alone before the generator", one.left.span, how)
        return Side(tuple(word), at, one.left.span)

    def _tokens(self, letter: sf.Factor, how: str) -> list[int | None]:
        if isinstance(letter, sf.Bockstein) and letter.order in (None, 1):
            return [1 if self.prime == 2 else 0]
        if not isinstance(letter, sf.Operation):
            refuse("given-form", "a presentation takes squares, powers and the Bockstein", letter.span, how)
        if (letter.head == "Sq") != (self.prime == 2):
            message = (
                "Sq^i are operations at the prime 2" if letter.head == "Sq" else "P^i are operations at odd primes"
            )
            refuse("prime-of-operation", f"{message}, and the prime is {self.prime}", letter.span, how)
        indices = [number(index, letter.span) for index in letter.indices]
        if any(index < 1 for index in indices):
            refuse(
                "given-form",
                f"{letter.head}^i is given for i >= 1",
                letter.span,
                "Sq^0 and P^0 are the identity, below them all is 0",
            )
        return list(indices) or [None]

    # --- polynomials ----------------------------------------------------------------------------

    def sum(self, body: sf.Sum) -> Poly:
        """A polynomial in the generators.  Raises Refusal."""
        value, plain = self._sum(body)
        if value and not plain:
            message = "classes of odd degree anticommute: this sum would be 0 without signs, and with them it is not"
            refuse("graded-sign", message, body.span, "y x = -x y where x and y have odd degree")
        return value

    def _sum(self, body: sf.Sum) -> tuple[Poly, Poly]:
        value: Poly = {}
        plain: Poly = {}
        for sign, product in body.terms:
            one, other = self._product(product)
            self.ring.add(value, one, sign)
            self.ring.add(plain, other, sign)
        return value, plain

    def _product(self, body: sf.Product) -> tuple[Poly, Poly]:
        value, plain = self.ring.one(), self.plain.one()
        for factor in body.factors:
            one, other = self._factor(factor)
            value, plain = self.ring.times(value, one), self.plain.times(plain, other)
        if plain and not value and len(body.factors) > 1:
            self._odd_square(body.span)
        return value, plain

    def _factor(self, factor: sf.Factor) -> tuple[Poly, Poly]:
        match factor:
            case sf.Name():
                variable = self.ring.variable(self._at(factor))
                return variable, variable
            case sf.Number():
                unit: tuple[Exponents, ...] = tuple(self.ring.one())
                c = factor.value % self.prime
                return ({unit[0]: c}, {unit[0]: c}) if c else ({}, {})
            case sf.Group():
                return self._sum(factor.body)
            case sf.Power():
                exponent = number(factor.exponent, factor.span)
                if exponent < 0:
                    refuse("index-range", f"an exponent is at least 0, and here it is {exponent}", factor.span)
                one, other = self._factor(factor.base)
                return self.ring.power(one, exponent), self.plain.power(other, exponent)
        message = "the relations and values of a presentation are polynomials in its generators"
        refuse("not-a-polynomial", message, factor.span, "an operation stands at the left of `=` only, behind `where`")

    def _odd_square(self, span: Span) -> None:
        message = "this product is 0: the square of a class of odd degree is 0 at an odd prime"
        self.found.append(warning("odd-square", message, span))

    def _at(self, name: sf.Name) -> int:
        key = (name.letter, None if name.index is None else number(name.index, name.span), name.primes)
        at = self.names.get(key)
        if at is None:
            known = ", ".join(of.text for of in self.generators)
            refuse(
                "unknown-name", f"{spelled(key)} is no generator of this ring", name.span, f"its generators: {known}"
            )
        return at


def _frozen(f: Poly) -> Frozen:
    return tuple(sorted(f.items(), reverse=True))
