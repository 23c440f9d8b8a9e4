"""What lowering an expression gives: its sort, its tree and what later stages ask of it.

Ways in: `scalar`, `operation`, `cls` and the combinations below; they keep degree, top and classes in step, so that
nobody walks a tree (which may share nodes) to find them.
"""

from __future__ import annotations

from typing import Literal, cast

from attrs import frozen

from opslang.ground.source import Span
from opslang.ir import tree as ir
from opslang.ir.tree import Class
from opslang.spaces.family import Polynomial

Sort = Literal["scalar", "operation", "class"]
NONE: frozenset[Class] = frozenset()


@frozen
class Value:
    """A lowered expression.

    A scalar has its number in `number`, no tree and degree 0.  `top` bounds the degree of everything inside;
    `classes` are the classes that occur.
    """

    sort: Sort
    degree: int | None
    top: int
    tree: ir.Tree | None = None
    classes: frozenset[Class] = NONE
    number: int = 0

    @property
    def op(self) -> ir.Op:
        """The tree of an operation."""
        return cast(ir.Op, self.tree)

    @property
    def cls(self) -> ir.Cls:
        """The tree of a class."""
        return cast(ir.Cls, self.tree)


def scalar(number: int) -> Value:
    """A number."""
    return Value("scalar", 0, 0, None, NONE, number)


def operation(tree: ir.Op, top: int) -> Value:
    """An operation."""
    return Value("operation", tree.degree, top, tree)


def cls(tree: ir.Cls, classes: frozenset[Class]) -> Value:
    """A class."""
    return Value("class", tree.degree, tree.top, tree, classes)


def polynomial_value(terms: Polynomial, prime: int, span: Span) -> Value:
    """A polynomial in classes of a named space, all terms of one degree."""
    sums: list[tuple[int, Value]] = []
    for c, powers in terms:
        factors: list[ir.Cls] = []
        for of, exponent in powers:
            one = ir.Fundamental(of, of.degree, of.degree, span)
            degree = of.degree * exponent
            factors.append(one if exponent == 1 else ir.ClassPower(one, exponent, degree, degree, span))
        classes = frozenset([of for of, _ in powers])
        degree = sum([of.degree * exponent for of, exponent in powers])
        tree: ir.Cls
        if len(factors) == 1:
            tree = factors[0]
        else:
            tree = ir.Cup(tuple(factors), degree, degree, span) if factors else ir.Unit(0, 0, span)
        sums.append((c, cls(tree, classes)))
    if len(sums) == 1 and sums[0][0] == 1:
        return sums[0][1]
    return total(sums, "class", prime, span)


def as_sort(value: Value, sort: Sort, span: Span) -> Value:
    """A scalar as a multiple of the identity or of the unit; any other value as it is."""
    if value.sort != "scalar" or sort == "scalar":
        return value
    if sort == "operation":
        one: ir.Op = ir.Composite((), 0, span)
        return operation(
            one if value.number == 1 else ir.OpSum(((value.number, one),) if value.number else (), 0, span), 0
        )
    unit: ir.Cls = ir.Unit(0, 0, span)
    return cls(
        unit if value.number == 1 else ir.ClassSum(((value.number, unit),) if value.number else (), 0, 0, span), NONE
    )


def multiple(value: Value, number: int, prime: int, span: Span) -> Value:
    """A scalar multiple; 0 keeps the degree of what was written."""
    if value.sort == "scalar":
        return scalar(value.number * number)
    number %= prime
    if number == 1:
        return value
    if value.sort == "operation":
        return operation(ir.OpSum(((number, value.op),) if number else (), value.degree, span), value.top)
    return cls(ir.ClassSum(((number, value.cls),) if number else (), value.degree, value.top, span), value.classes)


def total(terms: list[tuple[int, Value]], sort: Sort, prime: int, span: Span) -> Value:
    """A sum of signed values of one sort (scalars already lifted)."""
    degrees = {value.degree for _, value in terms if not _literal_zero(value)}
    degree = degrees.pop() if len(degrees) == 1 else None if degrees else terms[0][1].degree
    top = max(value.top for _, value in terms)
    if sort == "operation":
        return operation(ir.OpSum(tuple([(sign % prime, value.op) for sign, value in terms]), degree, span), top)
    classes = NONE.union(*[value.classes for _, value in terms])
    return cls(ir.ClassSum(tuple([(sign % prime, value.cls) for sign, value in terms]), degree, top, span), classes)


def _literal_zero(value: Value) -> bool:
    """Whether a value is a 0 with no degree of its own: the literal 0, lifted to a sort."""
    return isinstance(value.tree, (ir.OpSum, ir.ClassSum)) and not value.tree.terms and value.degree == 0


def degrees_of(terms: list[tuple[int, Value]]) -> set[int | None]:
    """The degrees of the terms of a sum, zeros left out."""
    return {value.degree for _, value in terms if not _literal_zero(value)}
