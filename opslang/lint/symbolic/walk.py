"""What occurs in a statement: its factors, its operations, whether it speaks of operations at all.  Computes no
degree.
"""

from __future__ import annotations

from collections.abc import Iterator

from opslang.lint.model import (
    BigSum,
    Call,
    ClassName,
    Cohomology,
    Conjugate,
    Factor,
    Group,
    Index,
    Known,
    Operation,
    Power,
    Product,
    Statement,
    Sum,
)


def factors_of(node: object) -> Iterator[Factor]:
    """All factors in a side, inner ones too."""
    if isinstance(node, Sum):
        for _, product in node.terms:
            yield from factors_of(product)
    elif isinstance(node, Product):
        for factor in node.factors:
            yield from factors_of(factor)
    elif isinstance(node, (Group, Conjugate)):
        yield node
        yield from factors_of(node.body)
    elif isinstance(node, Power):
        yield node
        yield from factors_of(node.base)
    elif isinstance(node, Call):
        yield node
        for argument in node.arguments:
            yield from factors_of(argument)
    elif isinstance(node, BigSum):
        yield node
        yield from factors_of(node.body)
    elif isinstance(node, Index):
        for part in node.parts:
            yield from factors_of(part)
    elif node is not None and not isinstance(node, (str, int, Cohomology)):
        yield node  # type: ignore[misc]


def operations_in(statement: Statement) -> list[Operation]:
    """The operations that occur in a statement."""
    return [factor for side in statement.sides for factor in factors_of(side) if isinstance(factor, Operation)]


def about_operations(statement: Statement, known: Known) -> bool:
    """Whether a statement speaks of operations: P only at odd primes, beta only where it acts on something or is
    alone with Sq^1, or is said to go from one cohomology group to another.
    """
    for operation in operations_in(statement):
        if operation.head == "Sq":
            return True
        if operation.head == "P" and known.prime != 2 and (known.prime is not None or "prime" in known.conventions):
            return True
        if operation.head == "beta" and statement.kind == "signature" and isinstance(statement.right, Cohomology):
            return True
        if operation.head == "Q" and known.conventions.get("Q"):
            return True
    return any(_acting_bockstein(side) for side in statement.sides)


def _acting_bockstein(side: object) -> bool:
    """Whether a Bockstein has a class at its right somewhere."""
    if isinstance(side, Sum):
        return any(_acting_bockstein(product) for _, product in side.terms)
    if isinstance(side, Product):
        for left, right in zip(side.factors, side.factors[1:]):
            if isinstance(left, Operation) and left.head == "beta" and not left.upper:
                if isinstance(right, (ClassName, Group, Power)):
                    return True
        return any(_acting_bockstein(factor) for factor in side.factors)
    if isinstance(side, (Group, Conjugate)):
        return _acting_bockstein(side.body)
    if isinstance(side, Power):
        return _acting_bockstein(side.base)
    if isinstance(side, Call):
        return any(_acting_bockstein(argument) for argument in side.arguments)
    if isinstance(side, BigSum):
        return _acting_bockstein(side.body)
    return False
