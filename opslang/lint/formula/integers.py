"""Which letters of a statement are numbers, and expressions of such letters turned from factors into integers.

A letter that stands in an index, an exponent or a limit of a statement is a number everywhere in it.
"""

from __future__ import annotations

from collections.abc import Iterator

from attrs import evolve

from opslang.lint.model import (
    BigSum,
    Bounds,
    Call,
    ClassName,
    Coefficient,
    Conjugate,
    Factor,
    Group,
    Index,
    Number,
    Operation,
    Power,
    Product,
    Side,
    Sum,
)


def indices_in(node: object) -> Iterator[Index]:
    """The integer expressions that occur in a side, each one once, those inside others left out."""
    if isinstance(node, Index):
        yield node
    elif isinstance(node, Sum):
        for _, product in node.terms:
            yield from indices_in(product)
    elif isinstance(node, Product):
        for factor in node.factors:
            yield from indices_in(factor)
    elif isinstance(node, Operation):
        yield from node.upper
        if node.lower is not None:
            yield node.lower
    elif isinstance(node, ClassName):
        yield from node.index
    elif isinstance(node, Coefficient):
        yield node.value
    elif isinstance(node, (Group, Conjugate)):
        yield from indices_in(node.body)
    elif isinstance(node, Power):
        yield from indices_in(node.base)
        yield node.exponent
    elif isinstance(node, Call):
        yield from node.lower
        for argument in node.arguments:
            yield from indices_in(argument)
    elif isinstance(node, BigSum):
        yield from _bounds(node.bounds)
        yield from indices_in(node.body)


def _bounds(bounds: Bounds) -> Iterator[Index]:
    if bounds.lower is not None:
        yield bounds.lower
    if bounds.upper is not None:
        yield bounds.upper
    for condition in bounds.conditions:
        if condition.left is not None:
            yield condition.left
        if condition.right is not None:
            yield condition.right


def letters_of(index: Index) -> Iterator[str]:
    """The letters of an integer expression; those between bars are classes and left out."""
    if index.kind == "name":
        yield str(index.parts[0])
    elif index.kind != "length":
        for part in index.parts:
            if isinstance(part, Index):
                yield from letters_of(part)


def number_letters(sides: tuple[Side, ...]) -> frozenset[str]:
    """The letters that stand in index positions."""
    return frozenset(letter for side in sides for index in indices_in(side) for letter in letters_of(index))


def as_index(node: object, letters: frozenset[str] | None = None) -> Index | None:
    """An expression of factors read as an integer; None where something else occurs.

    With `letters` only these may occur.
    """
    if isinstance(node, Index):
        return node
    if isinstance(node, Sum):
        parts = []
        for sign, product in node.terms:
            part = as_index(product, letters)
            if part is None:
                return None
            parts.append(part if sign > 0 else Index("negative", (part,), part.at))
        return parts[0] if len(parts) == 1 else Index("sum", tuple(parts), node.at)
    if isinstance(node, Product):
        return _product(node, letters)
    if isinstance(node, Number):
        return Index("number", (node.value,), node.at)
    if isinstance(node, ClassName):
        if node.family or node.label or (letters is not None and node.spelling not in letters):
            return None
        return Index("name", (node.spelling,), node.at)
    if isinstance(node, Coefficient):
        return node.value
    if isinstance(node, Group):
        return as_index(node.body, letters)
    if isinstance(node, Power):
        base = as_index(node.base, letters)
        return None if base is None else Index("power", (base, node.exponent), node.at)
    return None


def _product(node: Product, letters: frozenset[str] | None) -> Index | None:
    parts: list[Index] = []
    for factor, glue in zip(node.factors, node.glues):
        part = as_index(factor, letters)
        if part is None or glue not in ("", "*", "/", "times"):
            return None
        if glue == "/":
            parts = [Index("quotient", (Index("product", tuple(parts)) if len(parts) > 1 else parts[0], part), node.at)]
        else:
            parts.append(part)
    return parts[0] if len(parts) == 1 else Index("product", tuple(parts), node.at)


# --- factors that are numbers -------------------------------------------------------------------


def with_numbers(side: Side, letters: frozenset[str]) -> Side:
    """A side in which letters that are numbers, and brackets of such, have become coefficients."""
    return _sum(side, letters) if isinstance(side, Sum) else side


def _sum(body: Sum, letters: frozenset[str]) -> Sum:
    return Sum(tuple([(sign, _in_product(product, letters)) for sign, product in body.terms]), body.at)


def _in_product(product: Product, letters: frozenset[str]) -> Product:
    factors = list(product.factors)
    for at, factor in enumerate(factors):
        acted = at > 0 and isinstance(factors[at - 1], (Operation, Conjugate))
        factors[at] = _factor(factor, letters, acted)
    return Product(tuple(factors), product.glues, product.at)


def _factor(factor: Factor, letters: frozenset[str], acted: bool) -> Factor:
    if isinstance(factor, ClassName):
        if factor.spelling in letters and not acted and not factor.family:
            return Coefficient(Index("name", (factor.spelling,), factor.at), factor.at)
        return factor
    if isinstance(factor, Group):
        value = None if acted else as_index(factor, letters)
        if value is not None and value.number is None:
            return Coefficient(value, factor.at)
        return evolve(factor, body=_sum(factor.body, letters))
    if isinstance(factor, Conjugate):
        return evolve(factor, body=_sum(factor.body, letters))
    if isinstance(factor, Power):
        base = _factor(factor.base, letters, acted)
        if isinstance(base, Coefficient) and isinstance(factor.base, ClassName):
            return Coefficient(Index("power", (base.value, factor.exponent), factor.at), factor.at)
        return evolve(factor, base=base)
    if isinstance(factor, Call):
        return evolve(factor, arguments=tuple([_sum(argument, letters) for argument in factor.arguments]))
    if isinstance(factor, BigSum):
        return evolve(factor, body=_in_product(factor.body, letters))
    return factor
