"""Relations with symbols tried on small values.  A counterexample is a proof of falsehood; agreement proves nothing.

Knows how to choose values; the computing is left to the desk that decides closed relations.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import product

from attrs import evolve, frozen

from opslang.lint.formula.integers import indices_in, letters_of
from opslang.lint.model import BigSum, ClassFact, ClassName, Condition, Index, Known, Statement, Sum
from opslang.lint.symbolic.degrees import own_variables
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import compare, value_of
from opslang.lint.symbolic.walk import factors_of

MOST_POINTS = 9
LARGEST_INDEX = 22
PRIMES = (3, 5)
"""What is tried where p is any odd prime."""
UNKNOWN_DEGREES = ((2, 1, 3), (1, 3, 2), (3, 2, 1))
"""Degrees that classes of unknown degree are given, in turns."""


@frozen
class Point:
    """One set of values, and what was found there."""

    values: tuple[tuple[str, int], ...]
    answer: str
    left: str = ""
    right: str = ""

    @property
    def text(self) -> str:
        """The values in words."""
        return ", ".join(f"{name} = {value}" for name, value in self.values)


@frozen
class Trial:
    """All points that could be computed; `general` says that classes of unknown degree were given several degrees."""

    points: tuple[Point, ...]
    symbols: tuple[str, ...]

    @property
    def false(self) -> tuple[Point, ...]:
        """The counterexamples."""
        return tuple(point for point in self.points if point.answer == "false")

    @property
    def true(self) -> tuple[Point, ...]:
        """The points at which the relation holds."""
        return tuple(point for point in self.points if point.answer == "true")

    @property
    def extent(self) -> str:
        """Up to where it was tried: n ≤ 5, k ≤ 4."""
        largest: dict[str, int] = {}
        for point in self.points:
            for name, value in point.values:
                largest[name] = max(value, largest.get(name, 0))
        return ", ".join(f"{name} ≤ {value}" for name, value in largest.items())


def free_symbols(statement: Statement, known: Known) -> tuple[str, ...]:
    """The letters for numbers that no sum binds, those of the degrees of the classes too."""
    bound: set[str] = set()
    found: list[str] = []
    for side in statement.sides:
        for factor in factors_of(side):
            if isinstance(factor, BigSum):
                bound |= set(own_variables(factor.bounds))
            if isinstance(factor, ClassName):
                degree = known.degree(factor)
                found += sorted(degree.symbols) if degree is not None else []
        for index in indices_in(side):
            found += letters_of(index)
    return tuple(name for name in dict.fromkeys(found) if name not in bound)


def classes_of(statement: Statement) -> list[str]:
    """The spellings of the classes of a statement."""
    names = [f.spelling for side in statement.sides for f in factors_of(side) if isinstance(f, ClassName)]
    return list(dict.fromkeys(names))


def tried(statement: Statement, known: Known, domain: tuple[Condition, ...], most: int = MOST_POINTS) -> Trial | None:
    """A relation at small values in a domain; None where nothing can be computed."""
    from opslang.lint.numeric.desk import decide

    left, right = statement.sides
    if not isinstance(left, Sum) or not isinstance(right, Sum):
        return None
    symbols = free_symbols(statement, known)
    primes = PRIMES if known.prime is None else (known.prime,)
    symbols = tuple(name for name in symbols if name != "p")
    if len(symbols) > 3 or any(not name.isidentifier() for name in symbols):
        return None
    unknown = [name for name in classes_of(statement) if _unknown(name, statement, known)]
    if len(unknown) > 3 or not (symbols or unknown or known.prime is None):
        return None
    points = []
    failed = 0
    for number, given in enumerate(_grid(symbols, domain, primes)):
        if _too_large(statement, given):
            continue
        values = {name: value for name, value in given.items() if name != "p" or known.prime is None}
        here = _with_degrees(evolve(known, prime=given["p"]), unknown, number)
        lengths = {f"|{name}|": _degree(here, name) for name in unknown}
        decision = decide(left, right, here, {**given, **lengths})
        answer = "unknown" if decision.answer == "false" and not decision.certainly_false else decision.answer
        if answer in ("true", "false"):
            degrees = [(f"|{name}|", _degree(here, name)) for name in unknown]
            points.append(Point((*values.items(), *degrees), answer, decision.left, decision.right))
        else:
            failed += 1
        if len(points) >= most or failed > 3 + 2 * len(points):
            break
    return Trial(tuple(points), symbols) if points else None


def _too_large(statement: Statement, given: Mapping[str, int]) -> bool:
    """Whether an index is too large at some values for a quick trial."""
    for side in statement.sides:
        for index in indices_in(side):
            value = value_of(index, given)
            if value is not None and value > LARGEST_INDEX:
                return True
    return False


def _unknown(spelling: str, statement: Statement, known: Known) -> bool:
    for side in statement.sides:
        for factor in factors_of(side):
            if isinstance(factor, ClassName) and factor.spelling == spelling:
                return known.degree(factor) is None
    return False


def _with_degrees(known: Known, unknown: list[str], number: int) -> Known:
    if not unknown:
        return known
    degrees = UNKNOWN_DEGREES[number % len(UNKNOWN_DEGREES)]
    facts = {name: ClassFact(Polynomial.of(degrees[at]), 1) for at, name in enumerate(unknown)}
    return evolve(known, classes={**known.classes, **facts})


def _degree(known: Known, name: str) -> int:
    degree = known.classes[name].degree
    value = degree.constant if degree is not None else 0
    return value if isinstance(value, int) else 0


def _grid(
    symbols: tuple[str, ...], domain: tuple[Condition, ...], primes: tuple[int, ...]
) -> Iterator[Mapping[str, int]]:
    """Small values in the domain, the sum of them growing; all of them at least 1 unless the domain says otherwise."""
    if not symbols:
        yield from ({"p": prime} for prime in primes for _ in UNKNOWN_DEGREES)
        return
    top = {1: 12, 2: 8, 3: 5}[len(symbols)]
    low = 0 if _from_nought(domain) else 1
    grid = sorted(product(range(low, top + 1), repeat=len(symbols)), key=lambda point: (sum(point), max(point)))
    for point in grid:
        for prime in primes:
            values = {"p": prime, **dict(zip(symbols, point))}
            if all(_holds(condition, values) for condition in domain):
                yield values


def _from_nought(domain: tuple[Condition, ...]) -> bool:
    nought = Index("number", (0,))
    return any((c.sign == "≥" and c.right == nought) or (c.sign == "≤" and c.left == nought) for c in domain)


def _holds(condition: Condition, values: Mapping[str, int]) -> bool:
    if condition.left is None or condition.right is None:
        return True
    return compare(condition.sign, condition.left, condition.right, values) is not False
