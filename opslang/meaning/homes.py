"""Whether classes can stand in one expression: each name once, and all in one space.  Computes nothing."""

from __future__ import annotations

from opslang.ground.source import Span
from opslang.ir.order import class_key
from opslang.ir.tree import Class
from opslang.meaning.scope import Scope, spelled
from opslang.report.diagnostic import Diagnostic, Refusal, error


def one_home(scope: Scope, classes: frozenset[Class], span: Span) -> None:
    """Refuse classes that cannot stand in one expression: of one name, or of two spaces that are no product."""
    if scope.lost and any(of.letter == "iota" for of in classes):
        raise Refusal(lost(span))
    if len(classes) < 2:
        return
    seen: dict[tuple[str, int | None, int], Class] = {}
    homes: dict[int, Class] = {}
    for of in sorted(classes, key=class_key):
        key = (of.letter, of.index, of.primes)
        if key in seen:
            words = f"{spelled(key)} stands here for two different classes, from different spaces or declarations"
            raise Refusal(error("classes-of-different-spaces", words, span, "give one of them another name"))
        seen[key] = of
        if of.ring is None and of.letter != "iota":
            continue
        other = homes.setdefault(of.factor, of)
        if other.ring != of.ring and not _thom(other, of):
            first, second = (spelled((c.letter, c.index, c.primes)) for c in (other, of))
            words = f"{first} and {second} are classes of different spaces"
            raise Refusal(
                error("classes-of-different-spaces", words, span, "choose their product as the space, or a map")
            )


def _thom(one: Class, other: Class) -> bool:
    """Whether one is the Thom class over the space of the other."""
    if one.ring is None and other.ring is None:
        return True
    pairs = ((one, other), (other, one))
    return any(b.ring is not None and getattr(a.ring, "base", None) == b.ring for a, b in pairs)


def lost(span: Span) -> Diagnostic:
    """What is said where the current space is needed and the last `on` failed."""
    words = "the last `on` could not be read, so there is no current space"
    return error("no-space", words, span, "mend that line first")
