"""What a sum runs over, and comparisons of integers.  Knows signs between integers, no operations."""

from __future__ import annotations

from opslang.lint.formula.indices import index_of
from opslang.lint.formula.signs import EQUALS, ORDERS
from opslang.lint.formula.stretch import NotRead, Stretch, shown
from opslang.lint.model import Bounds, Condition, Index

SIGNS: dict[str, str] = {**ORDERS, **dict.fromkeys(EQUALS, "=")}


def read_bounds(stretch: Stretch) -> Bounds:
    """\\sum_{…}^{…}: the sign and what stands under and over it."""
    start = stretch.at
    stretch.at += 1
    lower: Stretch | None = None
    upper: Index | None = None
    unread = ""
    while (token := stretch.peek()) is not None and token.kind in ("sub", "sup"):
        stretch.at += 1
        inner = stretch.argument()
        if token.kind == "sub":
            lower = inner
            continue
        try:
            upper = index_of(inner)
        except NotRead as trouble:
            unread = trouble.reason
    at = stretch.origin(start)
    if lower is None or lower.done:
        return Bounds((), None, upper, (), unread, at)
    return _under(lower, upper, unread, start, stretch)


def _under(lower: Stretch, upper: Index | None, unread: str, start: int, outer: Stretch) -> Bounds:
    at = outer.origin(start)
    try:
        conditions = comparisons(lower)
    except NotRead as trouble:
        return Bounds((), None, upper, (), unread or trouble.reason, at)
    if not conditions:  # a lone variable, or several with commas
        names = [part.strip() for part in shown(lower.rest()).lstrip("\\").split(",")]
        return Bounds(tuple(names), None, upper, (), unread, at)
    first = conditions[0]
    if upper is not None and first.sign == "=" and first.left is not None and first.left.kind == "name":
        return Bounds((str(first.left.parts[0]),), first.right, upper, conditions[1:], unread, at)
    if (
        upper is None
        and len(conditions) == 1
        and first.sign == "="
        and first.left is not None
        and first.left.kind == "name"
    ):
        return Bounds((str(first.left.parts[0]),), first.right, None, (), unread, at)
    names = []
    for condition in conditions:
        for side in (condition.left, condition.right):
            if side is not None:
                names += [name for name in names_in(side) if name not in names]
    return Bounds(tuple(names), None, upper, conditions, unread, at)


def names_in(index: Index) -> list[str]:
    """The letters of an integer expression, in order."""
    if index.kind == "name":
        return [str(index.parts[0])]
    found: list[str] = []
    for part in index.parts:
        if isinstance(part, Index):
            found += [name for name in names_in(part) if name not in found]
    return found


def comparisons(stretch: Stretch) -> tuple[Condition, ...]:
    """a < b ≤ c, i+j=k, and several of these with commas; empty where there is no sign of comparison."""
    found: list[Condition] = []
    for part in parted(stretch, ",", ";"):
        cuts = [at for at in _top(part) if _sign(part, at) is not None]
        if not cuts:
            continue
        edges = [part.at - 1, *cuts, part.end]
        sides = [Stretch(part.tokens, part.pairs, first + 1, last) for first, last in zip(edges, edges[1:])]
        many = [_sides(side) for side in sides]
        for number, cut in enumerate(cuts):
            sign = _sign(part, cut) or "="
            for left in many[number]:
                for right in many[number + 1]:
                    found.append(Condition(sign, left, right, "", part.whole()))
    return tuple(found)


def _sides(side: Stretch) -> list[Index]:
    from opslang.lint.formula.indices import read_indices

    return list(read_indices(side))


def _sign(stretch: Stretch, at: int) -> str | None:
    token = stretch.tokens[at]
    return SIGNS.get(token.text) if token.kind in ("other", "command") else None


def _top(stretch: Stretch) -> list[int]:
    """The numbers of the tokens outside brackets."""
    found = []
    at = stretch.at
    while at < stretch.end:
        found.append(at)
        at = stretch.pairs.get(at, at) + 1
    return found


def parted(stretch: Stretch, *signs: str) -> list[Stretch]:
    """The parts of a stretch between some signs outside brackets."""
    parts = []
    start = stretch.at
    for at in _top(stretch):
        if stretch.tokens[at].text in signs and stretch.tokens[at].kind == "other":
            if at > start:
                parts.append(Stretch(stretch.tokens, stretch.pairs, start, at))
            start = at + 1
    if start < stretch.end:
        parts.append(Stretch(stretch.tokens, stretch.pairs, start, stretch.end))
    return parts
