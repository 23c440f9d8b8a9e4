"""Sq^2 x y: of x alone, or of the product?"""

from __future__ import annotations

from collections.abc import Iterator

from opslang.lint.model import (
    ClassName,
    Finding,
    Known,
    Operation,
    Origin,
    Power,
    Product,
    Statement,
    Sum,
    Verdict,
    found,
)
from opslang.lint.rule import LintRule


def check(statement: Statement, known: Known) -> Verdict | None:
    """A bare expression in which an operation stands before two classes with nothing between them."""
    if statement.kind != "mention" or statement.unread:
        return None
    for side in statement.sides:
        for at in _ambiguous(side, known):
            message = (
                "does the operation act on the first class alone, or on the product?\nput its argument in brackets"
            )
            return found(Finding("ambiguous-scope", "warning", message, at))
    return None


def _ambiguous(side: object, known: Known) -> Iterator[Origin]:
    if not isinstance(side, Sum):
        return
    for _, product in side.terms:
        yield from _in_product(product, known)


def _in_product(product: Product, known: Known) -> Iterator[Origin]:
    factors, glues = product.factors, product.glues
    for at in range(len(factors) - 2):
        head, first, second = factors[at : at + 3]
        if not isinstance(head, Operation) or head.head not in ("Sq", "P") or head.total:
            continue
        if head.head == "P" and known.prime in (None, 2):
            continue
        if (
            isinstance(first, (ClassName, Power))
            and isinstance(second, (ClassName, Power))
            and not any(glues[at + 1 : at + 3])
        ):
            yield Origin(head.at.file, head.at.start, second.at.end)


RULE = LintRule(
    name="ambiguous-scope",
    title="an operation before two classes",
    why="Readers differ on what an operation before a product without brackets acts on, and the two values differ.",
    bad=(r"The term $\mathrm{Sq}^2 B C$ is of degree five.",),
    good=(r"The term $\mathrm{Sq}^2(B C)$ is of degree five.", r"The term $(\mathrm{Sq}^2 B)C$ is of degree five."),
    check=check,
    severity="warning",
    rank=60,
    source="common practice",
)
