"""What is said of each class, where, and which of several sayings holds at a place.

A saying in the same sentence goes before one in the same paragraph, that before one in the same section, that before
one in an earlier section.  What was said only of a sentence ("if |x| = 1") holds in its paragraph alone.  Where two
sayings of other sections disagree, nothing is known."""

from __future__ import annotations

from collections.abc import Iterable

from attrs import define, evolve, field, frozen

from opslang.lint.model import NOWHERE, ClassFact, Origin
from opslang.lint.symbolic.polynomial import Polynomial

SEVERAL = "several spaces"


@frozen
class Spot:
    """A place in the order of reading: section, paragraph, sentence and offset in it."""

    section: int
    paragraph: int
    sentence: int
    offset: int
    environment: int = 0


@frozen
class Saying:
    """One thing said of a class, by its spelling.  `local`: of the sentence only."""

    name: str
    spot: Spot
    degree: Polynomial | None = None
    order: int | None = None
    order_text: str = ""
    space: str = ""
    local: bool = False
    source: str = ""
    at: Origin = NOWHERE


@define
class Ledger:
    """All sayings of a draft, by name."""

    sayings: dict[str, list[Saying]] = field(factory=dict)

    def add(self, saying: Saying) -> None:
        """Take note of one."""
        self.sayings.setdefault(saying.name, []).append(saying)

    def fact(self, name: str, spot: Spot) -> ClassFact | None:
        """What is known of a class at a place."""
        found = self.sayings.get(name)
        if not found:
            return None
        degree = _chosen([saying for saying in found if saying.degree is not None], spot, "degree")
        order = _chosen([saying for saying in found if _tells_order(saying)], spot, "order")
        if degree is None and order is None:
            return None
        if degree is not None and order is not None and degree.spot.section != order.spot.section:
            order = degree if _tells_order(degree) else None
        basis = degree or order
        assert basis is not None
        fact = ClassFact(basis.degree, None, "", basis.space, basis.source, basis.at)
        if order is not None:
            fact = evolve(fact, order=order.order, order_text=order.order_text)
        return fact


def _tells_order(saying: Saying) -> bool:
    return saying.order is not None or bool(saying.order_text)


def _chosen(found: list[Saying], spot: Spot, what: str) -> Saying | None:
    """The saying that holds at a place; None where there is none, or where it cannot be told which."""
    near = [saying for saying in found if saying.spot.paragraph == spot.paragraph]
    same = [saying for saying in near if saying.spot.sentence == spot.sentence]
    for group in (same, near):
        before = [saying for saying in group if saying.spot.offset <= spot.offset]
        if before:
            return max(before, key=lambda saying: saying.spot.offset)
        after = [saying for saying in group if not saying.local or group is same]
        if after:
            return min(after, key=lambda saying: saying.spot.offset)
    lasting = [saying for saying in found if not saying.local]
    section = [saying for saying in lasting if saying.spot.section == spot.section]
    before = [saying for saying in section if _earlier(saying.spot, spot)]
    if before:
        return _nearest(before, spot, what)
    if section:
        return _agreed(section, what)
    earlier = [saying for saying in lasting if _earlier(saying.spot, spot)]
    return _agreed(earlier, what) if earlier else None


def _earlier(first: Spot, second: Spot) -> bool:
    return (first.paragraph, first.offset) <= (second.paragraph, second.offset)


def _nearest(before: list[Saying], spot: Spot, what: str) -> Saying | None:
    last = max(before, key=lambda saying: (saying.spot.paragraph, saying.spot.offset))
    enclosed = last.spot.environment and last.spot.environment not in (spot.environment, spot.environment - 1)
    return _agreed(before, what) if enclosed else last


def _agreed(found: Iterable[Saying], what: str) -> Saying | None:
    """The last of them, if they say the same."""
    listed = list(found)
    values = {(getattr(saying, what), saying.order_text if what == "order" else "") for saying in listed}
    if len(values) != 1:
        return None
    spaces = {saying.space for saying in listed}
    return listed[-1] if len(spaces) == 1 else evolve(listed[-1], space=SEVERAL)
