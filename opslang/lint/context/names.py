"""Walks over the trees of statements: which names and operations occur in them.  Knows the shapes of nodes only."""

from __future__ import annotations

from collections.abc import Iterator

from opslang.lint.model import (
    BigSum,
    Call,
    ClassName,
    Cohomology,
    Conjugate,
    Group,
    Index,
    Operation,
    Power,
    Product,
    Statement,
    Sum,
)


def nodes_in(statement: Statement) -> Iterator[object]:
    """All factors in a statement, and the sides that are no sums."""
    yield from _walk(list(reversed(statement.sides)))


def _walk(waiting: list[object]) -> Iterator[object]:
    while waiting:
        node = waiting.pop()
        yield node
        waiting += reversed(_inside(node))


def _inside(node: object) -> list[object]:
    match node:
        case Sum():
            return [product for _, product in node.terms]
        case Product():
            return list(node.factors)
        case Group() | Conjugate() | BigSum():
            return [node.body]
        case Power():
            return [node.base]
        case Call():
            return list(node.arguments)
        case Index(kind="length"):
            return list(node.parts)
        case Index():
            return [part for part in node.parts if isinstance(part, Index)]
        case Cohomology():
            return []
    return []


def names_of(side: Sum) -> list[ClassName]:
    """The class names in an expression."""
    return [node for node in _walk([side]) if isinstance(node, ClassName)]


def class_names(statement: Statement) -> list[ClassName]:
    """The class names in a statement."""
    return [node for node in nodes_in(statement) if isinstance(node, ClassName)]


def operations_in(statement: Statement) -> list[Operation]:
    """The operations in a statement."""
    return [node for node in nodes_in(statement) if isinstance(node, Operation)]
