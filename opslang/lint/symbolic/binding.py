"""Which letters of a statement are bound by a sum sign, and what can be wrong with that.  Knows letters, no degrees."""

from __future__ import annotations

from collections.abc import Iterator

from attrs import frozen

from opslang.lint.formula.integers import indices_in, letters_of
from opslang.lint.model import BigSum, Bounds, ClassName, Dots, Index, Known, Mystery, Operation, Statement, Sum
from opslang.lint.symbolic.degrees import own_variables
from opslang.lint.symbolic.walk import factors_of


@frozen
class Misbound:
    """One slip: its kind (own-limit, unused, shadowed, unbound), the letter and the sum."""

    kind: str
    letter: str
    big: BigSum


def big_sums_in(statement: Statement) -> list[BigSum]:
    """All sum signs of a statement."""
    return [factor for side in statement.sides for factor in factors_of(side) if isinstance(factor, BigSum)]


def letters_in(node: object) -> set[str]:
    """The letters for numbers in an expression, those between bars and names of classes too."""
    found: set[str] = set()
    for index in indices_in(node):
        found |= set(letters_of(index)) | set(_between_bars(index))
    return found


def _between_bars(index: Index) -> Iterator[str]:
    for part in index.parts:
        if isinstance(part, Index):
            yield from _between_bars(part)
        elif isinstance(part, Sum):
            yield from letters_in(part)


def free_letters(node: object, bound: frozenset[str] = frozenset()) -> set[str]:
    """The letters for numbers that no sum sign inside binds."""
    found = letters_in(node)
    inner = [factor for factor in factors_of(node) if isinstance(factor, BigSum)]
    for big in inner:
        own = set(own_variables(big.bounds))
        outside = _without(node, big)
        if not own & outside:
            found -= own
    return found - bound


def _without(node: object, big: BigSum) -> set[str]:
    """The letters of a side outside one of its sums."""
    found: set[str] = set()
    if isinstance(node, Sum):
        for _, product in node.terms:
            for factor in product.factors:
                if factor is not big and not (isinstance(factor, BigSum) and _same_letters(factor, big)):
                    found |= letters_in(Sum(((1, type(product)((factor,), ("",), factor.at)),), factor.at))
    return found


def _same_letters(left: BigSum, right: BigSum) -> bool:
    return bool(set(own_variables(left.bounds)) & set(own_variables(right.bounds)))


def slips(statement: Statement, known: Known) -> Iterator[Misbound]:
    """What is wrong with the bound variables of a statement."""
    for side in statement.sides:
        if not isinstance(side, Sum):
            continue
        for big in [factor for factor in factors_of(side) if isinstance(factor, BigSum)]:
            if big.bounds.unread or not big.bounds.variables or big.sign not in ("\\sum", "\\prod", "\\bigoplus"):
                continue
            found = _slip(statement, side, big, known)
            if found is not None:
                yield found


def _slip(statement: Statement, side: Sum, big: BigSum, known: Known) -> Misbound | None:
    bounds, body = big.bounds, letters_in(big.body)
    own = own_variables(bounds)
    limits = _limits(bounds)
    for name in own:
        if name in limits:
            return Misbound("own-limit", name, big)
    outside = _without(side, big)
    for other in statement.sides:
        if other is not side:
            outside |= free_letters(other)
    for name in own:
        if name in outside and statement.kind in ("relation", "mapsto", "definition", "degree"):
            return Misbound("shadowed", name, big)
    opaque = any(isinstance(factor, (Dots, Mystery)) for factor in factors_of(big.body))
    multi = any(
        isinstance(factor, Operation) and factor.upper == () and factor.lower is None for factor in factors_of(big.body)
    )
    names = {factor.spelling for factor in factors_of(big.body) if isinstance(factor, ClassName)}
    if own and not (set(own) & (body | names)) and not opaque and not multi and (bounds.lower or bounds.conditions):
        return Misbound("unused", own[0], big)
    return _unbound(statement, side, big, known)


def _limits(bounds: Bounds) -> set[str]:
    found: set[str] = set()
    for limit in (bounds.lower, bounds.upper):
        if limit is not None:
            found |= set(letters_of(limit))
    return found


def _unbound(statement: Statement, side: Sum, big: BigSum, known: Known) -> Misbound | None:
    """A letter in the summand that stands nowhere else."""
    if statement.kind != "relation":
        return None
    elsewhere = _without(side, big) | _limits(big.bounds) | set(big.bounds.variables) | {"p"}
    for other in statement.sides:
        if other is not side:
            elsewhere |= letters_in(other)
    for condition in (*statement.conditions, *known.ranges, *big.bounds.conditions):
        for part in (condition.left, condition.right):
            elsewhere |= set(letters_of(part)) if part is not None else set()
    for fact in known.classes.values():
        elsewhere |= fact.degree.symbols if fact.degree is not None else frozenset()
    nested = {name for f in factors_of(big.body) if isinstance(f, BigSum) for name in f.bounds.variables}
    for letter in sorted(letters_in(big.body) - elsewhere - nested - known.integers):
        if len(letter) == 1 and letter in "ijklrst":
            return Misbound("unbound", letter, big)
    return None
