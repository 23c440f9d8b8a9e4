"""Integers in index positions.  Until relations with variables are decided, a variable is a clear refusal."""

from __future__ import annotations

from opslang.ground.source import Span
from opslang.report.diagnostic import Refusal, error
from opslang.syntax.surface import Index, IndexExpression

MOST_BITS = 2_000
"""Indices and degrees are below 2 to this power."""


def variables(index: Index) -> list[str]:
    """The index variables of an index, in order of appearance."""
    if isinstance(index, int):
        return []
    found = []
    waiting: list[object] = [index]
    while waiting:
        part = waiting.pop(0)
        if isinstance(part, IndexExpression):
            if part.kind == "name":
                found.append(str(part.parts[0]))
            elif part.kind == "length":
                found.append(f"|{part.parts[0]}|")
            else:
                waiting[:0] = part.parts
    return list(dict.fromkeys(found))


def number(index: Index, span: Span) -> int:
    """The value of an index; a Refusal where it holds a variable or is absurdly large."""
    if not isinstance(index, int):
        names = ", ".join(variables(index)) or "an index"
        raise Refusal(
            error(
                "index-variable",
                f"{names} is an index variable, and relations with variables are not decided yet",
                index.span if index.span != (0, 0) else span,
                "put a number there",
            )
        )
    bounded(index, span)
    return index


def bounded(n: int, span: Span) -> int:
    """n itself; a Refusal where it is absurdly large."""
    if n.bit_length() > MOST_BITS:
        raise Refusal(
            error("index-too-large", f"a number of {n.bit_length()} bits stands here; the most is {MOST_BITS}", span)
        )
    return n
