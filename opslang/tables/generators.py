"""Generators, bases and Poincaré series of products of Eilenberg-MacLane spaces.  Knows classes, no packed forms.

Source: Serre 1953; Cartan 1954-55; May 1970, thm 10.3; statements as in the language reference.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from operator import mul
from typing import TYPE_CHECKING

from opslang.ground.grading import Word
from opslang.ir.order import generator_key, monomial_key
from opslang.ir.tree import Class, Generator, Monomial
from opslang.spaces.family import Family
from opslang.spaces.space import Localised
from opslang.tables.budget import Budget

if TYPE_CHECKING:
    from opslang.spaces.bundle_thom import BundleThom


def _roots(of: Class) -> tuple[tuple[Word, int, bool], ...]:
    """The roots under a class: (tail of the word, degree, killed by the Bockstein)."""
    if of.order == 1:
        return (((), of.degree, False),)
    if of.order == 0:
        return (((), of.degree, True),)
    return ((), of.degree, True), ((-of.order,), of.degree + 1, True)


def _words(p: int, degree: int, killed: bool, to: int) -> Iterator[tuple[Word, int]]:
    """The words of polynomial generators on a root of the given degree, with the degrees of the generators, up to
    `to`."""
    waiting: list[tuple[Word, int]] = [((), degree)] if degree <= to else []
    while waiting:
        word, d = waiting.pop()
        yield word, d
        if p == 2:
            low = 2 * word[0] if word else 1 + killed
            waiting += [((i, *word), d + i) for i in range(low, min(d - 1, to - d) + 1)]
            continue
        begins = bool(word) and word[0] == 0
        if not begins and d < to and (word or not killed):
            waiting.append(((0, *word), d + 1))
        head = word[begins] if len(word) > begins else 0
        low = max(1, p * head + begins)
        high = min((d - 1) // 2, (to - d) // (2 * (p - 1)))
        waiting += [((i, *word), d + 2 * i * (p - 1)) for i in range(low, high + 1)]


def generators(p: int, classes: Iterable[Class], to: int, budget: Budget | None = None) -> list[tuple[Generator, int]]:
    """The polynomial generators up to degree `to`, with their degrees, in canonical order."""
    found = []
    for of in classes:
        for tail, degree, killed in _roots(of):
            for word, d in _words(p, degree, killed, to):
                if budget is not None:
                    budget.spend(2 + len(word))
                found.append((Generator(word + tail, of), d))
    found.sort(key=lambda pair: generator_key(pair[0], p))
    return found


Item = tuple[Generator, int, int | None]
"""A generator, its degree, and the least power of it that is 0 (None: none)."""


def items(p: int, space: Localised, to: int, budget: Budget | None = None) -> list[Item]:
    """The generators of the ring of a space up to degree `to`, in canonical order."""
    found: list[Item] = [
        (generator, d, 2 if squares_to_zero(generator, d, p) else None)
        for generator, d in generators(p, space.classes, to, budget)
    ]
    for family in space.families:
        for of in family.classes(p, to):
            height = family.height(p, of)
            if squares_to_zero(Generator((), of), of.degree, p):
                height = 2
            found.append((Generator((), of), of.degree, height))
    found.sort(key=lambda item: generator_key(item[0], p))
    return found


def squares_to_zero(generator: Generator, degree: int, p: int) -> bool:
    """Whether the square of a generator is 0: odd degree at odd p; at 2 degree 1 and killed by Sq^1."""
    return degree % 2 == 1 if p != 2 else degree == 1 and generator.of.order != 1


def _powers_of_two(parts: int, to: int) -> list[int]:
    """How many multisets of exactly `parts` powers of 2 have each sum 0 … to."""
    table = [[1] + [0] * to] + [[0] * (to + 1) for _ in range(parts)]
    step = 1
    while step <= to:
        for k in range(1, parts + 1):
            row, below = table[k], table[k - 1]
            for d in range(step, to + 1):
                if below[d - step]:
                    row[d] += below[d - step]
        step *= 2
    return table[parts]


def _counts_at_two(degree: int, killed: bool, to: int) -> list[int]:
    """How many generators a root has in each degree, at p = 2.

    Words of excess < n correspond to h_1 >= … >= h_{n-1} >= 0 with degree 1 + sum 2^{h_i} (Serre 1953, § 3);
    on a class killed by Sq^1 only those with h_1 = h_2 (n = 2: h_1 = 0; n = 1: the class alone).
    """
    counts = [0] * (to + 1)
    if killed and degree <= 2:
        if degree <= to:
            counts[degree] = 1
        return counts
    if not killed:
        if to >= 1:
            counts[1:] = _powers_of_two(degree - 1, to - 1)
        return counts
    # h_1 = h_2 = h: the greatest part twice, the other n - 3 parts at most 2^h.
    rest = [[1] + [0] * to] + [[0] * (to + 1) for _ in range(degree - 3)]
    step = 1
    while 2 * step < to:
        for k in range(1, degree - 2):
            row, below = rest[k], rest[k - 1]
            for d in range(step, to + 1):
                if below[d - step]:
                    row[d] += below[d - step]
        for d, count in enumerate(rest[degree - 3]):
            if count and 1 + 2 * step + d <= to:
                counts[1 + 2 * step + d] += count
        step *= 2
    return counts


def counts(p: int, of: Class, to: int) -> tuple[list[int], list[int]]:
    """The numbers of polynomial and of exterior generators of a class in degrees 0 … to."""
    even, odd = [0] * (to + 1), [0] * (to + 1)
    for _, degree, killed in _roots(of):
        if p == 2:
            into = odd if killed and degree == 1 else even
            for d, count in enumerate(_counts_at_two(degree, killed, to)):
                into[d] += count
        else:
            for _, d in _words(p, degree, killed, to):
                (odd if d % 2 else even)[d] += 1
    return even, odd


def series(p: int, space: Localised, to: int) -> list[int]:
    """The dimensions of H^0 … H^to of a space, by the Euler transform of the numbers of generators.  Quadratic in
    `to`."""
    thom = space.thom
    if thom is not None:
        return _over_thom_class(p, space, thom, to)
    weight = [0] * (to + 1)
    others = []
    for of in space.classes:
        even, odd = counts(p, of, to)
        for d in range(1, to + 1):
            # 1 + t^d = (1 - t^{2d}) / (1 - t^d)
            weight[d] += even[d] + odd[d]
            if odd[d] and 2 * d <= to:
                weight[2 * d] -= odd[d]
    for family in space.families:
        own = family.dimensions(p, to)
        if own is not None:
            others.append(own)
            continue
        for _, d, height in items(p, Localised((), frozenset(), (family,)), to):
            weight[d] += 1
            if height is not None and height * d <= to:
                weight[height * d] -= 1
    dimensions = _euler_transform(weight, to)
    for own in others:
        dimensions = [sum(map(mul, dimensions[: n + 1], reversed(own[: n + 1]))) for n in range(to + 1)]
    return dimensions


def _over_thom_class(p: int, space: Localised, thom: BundleThom, to: int) -> list[int]:
    """The dimensions of (1 + U · base) ⊗ the rest."""
    base, rest = space.around(thom)
    own = [1] + [0] * to
    if thom.rank <= to:
        for d, count in enumerate(series(p, base, to - thom.rank)):
            own[thom.rank + d] += count
    other = series(p, rest, to)
    return [sum(map(mul, other[: n + 1], reversed(own[: n + 1]))) for n in range(to + 1)]


def _basis_over_thom_class(p: int, space: Localised, thom: BundleThom, degree: int, budget: Budget) -> list[Monomial]:
    """The same for the monomials of one degree."""
    base, rest = space.around(thom)
    found = basis(p, rest, degree, budget)
    last: tuple[tuple[Generator, int], ...] = ((Generator((), thom.thom_class), 1),)
    for d in range(thom.rank, degree + 1):
        above = basis(p, rest, degree - d, budget)
        if above:
            below = basis(p, base, d - thom.rank, budget)
            found += [_merged((*one, *last, *other), p) for one in below for other in above]
    return sorted(found, key=lambda monomial: monomial_key(monomial, p))


def _merged(monomial: Monomial, p: int) -> Monomial:
    return tuple(sorted(monomial, key=lambda pair: generator_key(pair[0], p)))


def _euler_transform(weight: list[int], to: int) -> list[int]:
    """The coefficients of the product of 1 / (1 - t^d)^weight[d]."""
    sums = [0] * (to + 1)
    for d in range(1, to + 1):
        if weight[d]:
            value = d * weight[d]
            for multiple in range(d, to + 1, d):
                sums[multiple] += value
    dimensions = [1]
    tail = sums[1:]
    for n in range(1, to + 1):
        dimensions.append(sum(map(mul, tail[:n], reversed(dimensions))) // n)
    return dimensions


def basis(p: int, space: Localised, degree: int, budget: Budget) -> list[Monomial]:
    """The monomials of one degree, in canonical order; TooLarge when they are more than the budget allows."""
    thom = space.thom
    if thom is not None:
        return _basis_over_thom_class(p, space, thom, degree, budget)
    available = items(p, space, degree, budget)
    budget.spend(len(available) * (1 + (degree >> 10)))
    reach = _reachable(available, degree)
    admits = _admission(p, space)
    found: list[Monomial] = []
    # Depth first, highest power of the first generator first, which is the canonical order: what is left of the
    # degree, the next generator, the monomial so far.
    stack: list[tuple[int, int, Monomial]] = [(degree, 0, ())]
    while stack:
        left, at, monomial = stack.pop()
        if not left:
            budget.spend(1)
            if admits is None or admits(monomial):
                found.append(monomial)
            continue
        if not reach[at] >> left & 1:
            continue
        budget.spend(1)
        generator, d, height = available[at]
        at += 1
        stack.append((left, at, monomial))
        for exponent in range(1, min(left // d, left if height is None else height - 1) + 1):
            stack.append((left - exponent * d, at, (*monomial, (generator, exponent))))
    return found


def _admission(p: int, space: Localised) -> Callable[[Monomial], bool] | None:
    """Whether a monomial is a basis element: no rule of a named factor rewrites it, and each factor admits its part."""
    rules = [rule[0] for family in space.families for rule in family.rules(p)]
    if not rules and all(type(family).admits is Family.admits for family in space.families):
        return None

    def admits(monomial: Monomial) -> bool:
        powers = {generator.of: exponent for generator, exponent in monomial if not generator.word}
        if any(all(powers.get(of, 0) >= exponent for of, exponent in lead) for lead in rules):
            return False
        return all(
            family.admits(
                p, tuple([(of, exponent) for of, exponent in powers.items() if of.factor == at and of.ring is not None])
            )
            for at, family in _numbered(space)
        )

    return admits


def _numbered(space: Localised) -> list[tuple[int, Family]]:
    return [(getattr(family, "factor", 0), family) for family in space.families]


def _reachable(available: list[Item], degree: int) -> list[int]:
    """For each number of generators passed over, the degrees that the others reach, as bits of an int."""
    within = (1 << degree + 1) - 1
    reach = [1]
    for _, d, height in reversed(available):
        bits = reach[-1]
        if height is None:
            step = d
            while step <= degree:
                bits |= bits << step & within
                step *= 2
        else:
            for _ in range(min(height - 1, degree // d)):
                bits |= reach[-1] | bits << d & within
        reach.append(bits)
    reach.reverse()
    return reach
