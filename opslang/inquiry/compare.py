"""`compare X, Y to n`: the first degree and operation by which the cohomology of two spaces is told apart.

Looked at, in this order: dimensions; the rank of each Sq^i, P^i, beta: H^d -> H^{d+i}; the rank of admissible
composites of at most
`LENGTH` letters; in each degree the classes that all operations kill, and those that are sums of values of
operations; the
rank of cup products H^a ⊗ H^b -> H^{a+b} and of the pairing's adjoint.  Each of these is an invariant, so that a
difference
shows that the two are not isomorphic (as modules over the Steenrod algebra, or, for the last, as rings).  That none
is found
shows nothing.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from attrs import define, field, frozen

from opslang.ground.grading import degree as word_degree
from opslang.inquiry.linear import rank
from opslang.ir.outcome import Outcome, changed
from opslang.ir.tree import ClassElement, Monomial
from opslang.meaning.indices import number
from opslang.meaning.lower import Lowering
from opslang.meaning.spaces import space_value
from opslang.render.text import element_text, monomial_text, word_text
from opslang.report.diagnostic import Refusal, error
from opslang.spaces.space import SpaceValue, localise
from opslang.syntax import surface as sf
from opslang.tables.engine import Engine
from opslang.tables.generators import basis, series

LENGTH = 3
"""Letters of the composites that are looked at."""
MOST_VALUES = 12
"""So many values are printed for a space."""

Vector = dict[int, int]
Word = tuple[int, ...]


@frozen
class Difference:
    """What tells two spaces apart: a degree, what was measured, the two results, and values that show each."""

    degree: int
    measured: str
    results: tuple[int, int]
    values: tuple[tuple[str, ...], tuple[str, ...]] = ((), ())


@define
class _Module:
    """The cohomology of one space up to a degree, as vectors over packed monomials."""

    space: SpaceValue
    to: int
    engine: Engine
    _bases: dict[int, list[Monomial]] = field(factory=dict)
    _values: dict[tuple[int, Word], list[Any]] = field(factory=dict)

    @property
    def prime(self) -> int:
        """The prime."""
        return self.engine.prime

    def basis(self, d: int) -> list[Monomial]:
        """The monomials of one degree."""
        if d not in self._bases:
            self._bases[d] = basis(self.prime, localise(self.space, self.prime), d, self.engine.budget)
        return self._bases[d]

    def values(self, d: int, word: Word) -> list[Any]:
        """A word on the basis of degree d, as elements of the ring."""
        found = self._values.get((d, word))
        if found is None:
            ring: Any = self.engine.ring(2 * self.to + 2)
            if word:
                inner = self.values(d, word[1:])
                self.engine.budget.spend(8 + 4 * len(inner))
                found = [ring.letter(word[0], element) if element else element for element in inner]
            else:
                found = [self._packed(monomial) for monomial in self.basis(d)]
            self._values[d, word] = found
        return found

    def _packed(self, monomial: Monomial) -> Any:
        ring: Any = self.engine.ring(2 * self.to + 2)
        element = ring.unit()
        for generator, exponent in monomial:
            element = ring.multiply(element, ring.power(ring.single(ring.place(generator)), exponent))
        return element

    def vector(self, element: Any) -> Vector:
        """An element as coefficients by monomial."""
        return dict.fromkeys(element, 1) if self.prime == 2 else dict(element)

    def rank(self, d: int, word: Word) -> int:
        """The rank of a word on degree d."""
        return rank(self.prime, [self.vector(element) for element in self.values(d, word)])

    def joint(self, d: int) -> int:
        """The rank of all letters together on degree d: what is left of the dimension is killed by every operation."""
        rows: list[dict[tuple[int, int], int]] = [{} for _ in self.basis(d)]
        for token in _letters(self.prime, d, self.to):
            for row, element in zip(rows, self.values(d, (token,))):
                row.update({(token, key): c for key, c in self.vector(element).items()})
        return rank(self.prime, rows)

    def reached(self, d: int) -> int:
        """The dimension of the sums of values of operations in degree d."""
        vectors: list[Vector] = []
        for below in range(1, d):
            for token in _letters(self.prime, below, self.to):
                if below + word_degree((token,), self.prime) == d:
                    vectors += [self.vector(element) for element in self.values(below, (token,))]
        return rank(self.prime, vectors)

    def products(self, a: int, b: int) -> tuple[int, int]:
        """The rank of H^a ⊗ H^b -> H^{a+b}, and of H^a -> Hom(H^b, H^{a+b})."""
        ring: Any = self.engine.ring(2 * self.to + 2)
        rows: list[dict[tuple[int, int], int]] = []
        all_products: list[Vector] = []
        for x in self.values(a, ()):
            row: dict[tuple[int, int], int] = {}
            self.engine.budget.spend(8 + 4 * len(self.values(b, ())))
            for number_, y in enumerate(self.values(b, ())):
                product = self.vector(ring.multiply(x, y))
                all_products.append(product)
                row.update({(number_, key): c for key, c in product.items()})
            rows.append(row)
        return rank(self.prime, all_products), rank(self.prime, rows)

    def shown(self, d: int, word: Word) -> tuple[str, ...]:
        """The values of a word on the basis of degree d, in words."""
        ring: Any = self.engine.ring(2 * self.to + 2)
        lines = []
        for monomial, element in zip(self.basis(d)[:MOST_VALUES], self.values(d, word)):
            value = element_text(ClassElement(self.prime, ring.decode(element)))
            name = monomial_text(monomial, self.prime)
            argument = f"({name})" if len(monomial) > 1 else name
            lines.append(f"{word_text(word, self.prime)} {argument} = {value}")
        return (*lines, "…") if len(self.basis(d)) > MOST_VALUES else tuple(lines)


def _letters(p: int, d: int, to: int) -> list[int]:
    """The letters that may be other than 0 on degree d and do not lead beyond the last degree."""
    if p == 2:
        return list(range(1, min(d, to - d) + 1))
    return [token for token in range(d // 2 + 1) if d + word_degree((token,), p) <= to]


def _admissible(p: int, first: int, word: Word) -> bool:
    if p == 2:
        return first >= 2 * word[0]
    if first == 0:
        return word[0] != 0
    # P^s before beta P^t or P^t
    behind = list(word[:2])
    if behind[0] == 0:
        return len(behind) == 1 or first >= p * behind[1] + 1
    return first >= p * behind[0]


def compared(statement: sf.CompareStatement, blank: Outcome, lowering: Lowering, engine: Engine) -> Outcome:
    """The outcome: a listing whose items are the differences found, at most one."""
    left = space_value(statement.left, lowering.scope)
    right = space_value(statement.right, lowering.scope)
    to = number(statement.to, statement.span)
    if to < 0:
        message = f"spaces are compared to a degree of at least 0, and here it is {to}"
        raise Refusal(error("index-range", message, statement.span))
    found = difference(_Module(left, to, engine), _Module(right, to, engine))
    if found is None:
        words = f"not told apart to degree {to}"
        return changed(blank, space=f"{left.text}, {right.text}", items=(), message=words, lines=(words,))
    item = {
        "degree": found.degree,
        "measured": found.measured,
        "results": list(found.results),
        "values": [list(values) for values in found.values],
    }
    return changed(
        blank,
        space=f"{left.text}, {right.text}",
        items=(item,),
        message=_headline(found),
        lines=tuple(_lines(found, left, right)),
    )


def _headline(found: Difference) -> str:
    return f"told apart in degree {found.degree}: {found.measured} is {found.results[0]} and {found.results[1]}"


def _lines(found: Difference, left: SpaceValue, right: SpaceValue) -> Iterator[str]:
    yield f"told apart in degree {found.degree}: {found.measured}"
    for space, result, values in zip((left, right), found.results, found.values):
        yield f"    {result} for {space.text}"
        for value in values:
            yield f"        {value}"


def difference(left: _Module, right: _Module) -> Difference | None:
    """The first difference of two modules; None where none is found."""
    p, to = left.prime, left.to
    first, second = [series(p, localise(one.space, p), to) for one in (left, right)]
    for d, (a, b) in enumerate(zip(first, second)):
        if a != b:
            shown = tuple([tuple([monomial_text(m, p) for m in one.basis(d)[:MOST_VALUES]]) for one in (left, right)])
            return Difference(d, f"the dimension of H^{d}", (a, b), (shown[0], shown[1]))
    return _by_words(left, right, to) or _by_joint(left, right, to) or _by_products(left, right, to)


def _by_words(left: _Module, right: _Module, to: int) -> Difference | None:
    p = left.prime
    words: dict[int, list[Word]] = {d: [()] for d in range(1, to + 1)}
    for _ in range(LENGTH):
        for d in range(1, to + 1):
            longer = []
            for word in words[d]:
                reached = d + word_degree(word, p)
                for token in _letters(p, reached, to):
                    if word and not _admissible(p, token, word):
                        continue
                    new = (token, *word)
                    a, b = left.rank(d, new), right.rank(d, new)
                    if a != b:
                        name = f"the rank of {word_text(new, p)}: H^{d} -> H^{d + word_degree(new, p)}"
                        return Difference(d, name, (a, b), (left.shown(d, new), right.shown(d, new)))
                    if a:
                        longer.append(new)
            words[d] = longer
    return None


def _by_joint(left: _Module, right: _Module, to: int) -> Difference | None:
    for d in range(1, to + 1):
        a, b = left.joint(d), right.joint(d)
        if a != b:
            dimension = len(left.basis(d))
            name = f"the dimension of the classes of H^{d} that every operation within degree {to} kills"
            return Difference(d, name, (dimension - a, dimension - b))
        a, b = left.reached(d), right.reached(d)
        if a != b:
            return Difference(d, f"the dimension of the sums of values of operations in H^{d}", (a, b))
    return None


def _by_products(left: _Module, right: _Module, to: int) -> Difference | None:
    for d in range(2, to + 1):
        for a in range(1, d // 2 + 1):
            one, other = left.products(a, d - a), right.products(a, d - a)
            if one[0] != other[0]:
                return Difference(d, f"the rank of the cup product H^{a} ⊗ H^{d - a} -> H^{d}", (one[0], other[0]))
            if one[1] != other[1]:
                name = f"the rank of H^{a} -> Hom(H^{d - a}, H^{d}) by the cup product"
                return Difference(d, name, (one[1], other[1]))
    return None
