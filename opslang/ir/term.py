"""Terms that can be rewritten: flat sums of flat products, canonical on construction.

An `Element` is a flat sum of `Monomial`s, a `Monomial` a flat cup product of blocks (factor, exponent), a factor a
class or one letter applied to a monomial.  `add`, `scale`, `cup`, `power`, `apply` are the only ways in; they settle
linearity, associativity, graded commutativity with its sign, and nothing that belongs to topology.

Letters are pairs (key, index): ("Sq", i), ("P", i), ("beta", k), ("Q", k), ("total", 0), and ("chi", word of letters).
At p = 2 the Bockstein of order 1 is ("Sq", 1).  An operation is a word applied to `STABLE`, a class on which nothing
is unstable.  What is *absent*: no Sq^0, no negative index, no nested sum, no coefficient outside 1 … p-1.
"""

from __future__ import annotations

from collections.abc import Iterable
from functools import lru_cache
from typing import Any, Union

from attrs import frozen

from opslang.ir.order import class_key, word_key
from opslang.ir.tree import Class as Class

TERM_LIMIT = 2_000
"""Terms that an element may have here: nobody reads more than a few dozen."""

Index = Union[int, tuple["Letter", ...]]
Letter = tuple[str, Any]
"""A key and an `Index` (typed loosely: the type is recursive)."""
Letters = tuple[Letter, ...]
Path = tuple[int, ...]
"""Which term, which block, then which block of that factor's argument, and so on."""


class TooMany(Exception):
    """An element would have more terms than a reader can use."""


@frozen(cache_hash=True)
class Apply:
    """One letter applied to a monomial."""

    key: str
    index: Any
    argument: "Monomial"


Factor = Union[Class, Apply]
Block = tuple[Factor, int]


@frozen(cache_hash=True)
class Monomial:
    """A cup product: blocks (factor, exponent >= 1) in canonical order; none for the unit."""

    blocks: tuple[Block, ...]


@frozen
class Element:
    """A linear combination: pairs (monomial, coefficient 1 … p-1) in canonical order."""

    prime: int
    terms: tuple[tuple[Monomial, int], ...]


STABLE = Class("", None, 0, 0)
UNIT = Monomial(())
IDENTITY = Monomial(((STABLE, 1),))


# --- degrees --------------------------------------------------------------------------------------


def letter_degree(letter: Letter, p: int) -> int | None:
    """By how much a letter raises the degree; None for a total operation."""
    key, index = letter
    if key == "chi":
        degrees = [letter_degree(inner, p) for inner in index]
        return None if None in degrees else sum(d for d in degrees if d is not None)
    if key == "total":
        return None
    return {"Sq": index, "P": 2 * (p - 1) * index, "beta": 1, "Q": 2 * p**index - 1 if key == "Q" else 0}[key]  # type: ignore[no-any-return]


@lru_cache(maxsize=1 << 15)
def degree_of(factor: Factor, p: int) -> int | None:
    """The degree of a factor; None where a total operation stands inside it."""
    if isinstance(factor, Class):
        return factor.degree
    inner = degree_of_monomial(factor.argument, p)
    shift = letter_degree((factor.key, factor.index), p)
    return None if inner is None or shift is None else inner + shift


def degree_of_monomial(monomial: Monomial, p: int) -> int | None:
    """The degree of a product; None where a total operation stands inside it."""
    total = 0
    for factor, exponent in monomial.blocks:
        degree = degree_of(factor, p)
        if degree is None:
            return None
        total += degree * exponent
    return total


def _letter_parity(letter: Letter) -> int:
    key, index = letter
    if key == "chi":
        return sum(map(_letter_parity, index)) % 2
    return int(key in ("beta", "Q"))


@lru_cache(maxsize=1 << 15)
def parity_of(factor: Factor) -> int:
    """The parity of the degree at an odd prime, where total operations are even."""
    if isinstance(factor, Class):
        return factor.degree % 2
    return (parity_of_monomial(factor.argument) + _letter_parity((factor.key, factor.index))) % 2


def parity_of_monomial(monomial: Monomial) -> int:
    """The parity of a product at an odd prime."""
    return sum(parity_of(factor) * exponent for factor, exponent in monomial.blocks) % 2


def is_stable(monomial: Monomial) -> bool:
    """Whether the monomial is an operation rather than a class."""
    while len(monomial.blocks) == 1:
        factor = monomial.blocks[0][0]
        if isinstance(factor, Class):
            return factor == STABLE
        monomial = factor.argument
    return False


def word_on_class(factor: Factor, p: int) -> tuple[tuple[int, ...], Class] | None:
    """The tokens of a factor that is a word of plain letters on one class; None for every other factor."""
    tokens: list[int] = []
    while isinstance(factor, Apply):
        if factor.key not in ("Sq", "P", "beta") or len(factor.argument.blocks) != 1:
            return None
        if factor.key == "beta":
            tokens.append(0 if factor.index == 1 else -factor.index)
        else:
            tokens.append(factor.index)
        factor, exponent = factor.argument.blocks[0]
        if exponent != 1:
            return None
    return tuple(tokens), factor


# --- order ----------------------------------------------------------------------------------------


def _letter_key(letter: Letter) -> tuple[Any, ...]:
    key, index = letter
    return (key, tuple(map(_letter_key, index))) if key == "chi" else (key, -index)


@lru_cache(maxsize=1 << 15)
def factor_key(factor: Factor, p: int) -> tuple[Any, ...]:
    """Sorts factors: words on classes in the order of generators, then everything else by its letters."""
    plain = word_on_class(factor, p)
    if plain:
        word, of = plain
        return 0, class_key(of), (degree_of(factor, p) or 0) - of.degree, word_key(word, p)
    letters = []
    while isinstance(factor, Apply):
        letters.append(_letter_key((factor.key, factor.index)))
        inner = factor.argument
        if len(inner.blocks) != 1 or inner.blocks[0][1] != 1:
            return 1, tuple(letters), 1, _blocks_key(inner, p)
        factor = inner.blocks[0][0]
    return 1, tuple(letters), 0, class_key(factor)


def _blocks_key(monomial: Monomial, p: int) -> tuple[Any, ...]:
    return tuple([(factor_key(factor, p), -exponent) for factor, exponent in monomial.blocks])


@lru_cache(maxsize=1 << 15)
def _monomial_key(monomial: Monomial, p: int) -> tuple[Any, ...]:
    degree = degree_of_monomial(monomial, p)
    return -1 if degree is None else degree, _blocks_key(monomial, p)


# --- the ways in ----------------------------------------------------------------------------------


def zero(p: int) -> Element:
    """The sum of nothing."""
    return Element(p, ())


def of_monomial(p: int, monomial: Monomial, coefficient: int = 1) -> Element:
    """A multiple of one monomial."""
    coefficient %= p
    return Element(p, ((monomial, coefficient),) if coefficient else ())


def of_factor(p: int, factor: Factor, exponent: int = 1) -> Element:
    """A power of one factor."""
    return Element(p, ((Monomial(((factor, exponent),)), 1),))


def collect(p: int, pairs: Iterable[tuple[Monomial, int]]) -> Element:
    """The sum of multiples of monomials that are themselves canonical."""
    total: dict[Monomial, int] = {}
    for monomial, coefficient in pairs:
        total[monomial] = total.get(monomial, 0) + coefficient
        if len(total) > TERM_LIMIT:
            raise TooMany(f"a sum of more than {TERM_LIMIT:,} terms")
    kept = [(monomial, coefficient % p) for monomial, coefficient in total.items() if coefficient % p]
    kept.sort(key=lambda term: _monomial_key(term[0], p))
    return Element(p, tuple(kept))


def add(p: int, *parts: tuple[int, Element]) -> Element:
    """The linear combination of elements with these coefficients."""
    return collect(p, ((m, scalar * c) for scalar, element in parts for m, c in element.terms))


def scale(scalar: int, element: Element) -> Element:
    """A multiple of an element."""
    return add(element.prime, (scalar, element))


def _cup_monomials(a: Monomial, b: Monomial, p: int) -> tuple[Monomial, int]:
    """The product in canonical order, and the sign of the reordering."""
    if not a.blocks or not b.blocks:
        return (a if a.blocks else b), 1
    exponents = dict(a.blocks)
    for factor, exponent in b.blocks:
        exponents[factor] = exponents.get(factor, 0) + exponent
    blocks = tuple(sorted(exponents.items(), key=lambda block: factor_key(block[0], p)))
    if p == 2:
        return Monomial(blocks), 1
    odd_left = [factor_key(f, p) for f, e in a.blocks if e % 2 and parity_of(f)]
    odd_right = [factor_key(f, p) for f, e in b.blocks if e % 2 and parity_of(f)]
    swaps = sum(1 for left in odd_left for right in odd_right if left > right)
    return Monomial(blocks), -1 if swaps % 2 else 1


def cup(*elements: Element) -> Element:
    """The cup product, in the order given.  At least one element."""
    result = elements[0]
    p = result.prime
    for other in elements[1:]:
        if len(result.terms) * len(other.terms) > TERM_LIMIT:
            raise TooMany(f"a product of {len(result.terms):,} by {len(other.terms):,} terms")
        pairs = []
        for a, first in result.terms:
            for b, second in other.terms:
                product, sign = _cup_monomials(a, b, p)
                pairs.append((product, sign * first * second))
        result = collect(p, pairs)
    return result


def _power_of_term(monomial: Monomial, coefficient: int, n: int, p: int) -> tuple[Monomial, int]:
    odd = sum(1 for f, e in monomial.blocks if e % 2 and parity_of(f)) if p > 2 else 0
    sign = -1 if (odd * (odd - 1) // 2) * (n * (n - 1) // 2) % 2 else 1
    return Monomial(tuple((f, e * n) for f, e in monomial.blocks)), sign * pow(coefficient, n, p)


def power(element: Element, n: int) -> Element:
    """The n-th power of an element, n >= 0; p-th powers of sums are taken term by term."""
    p = element.prime
    if n == 0:
        return of_monomial(p, UNIT)
    if len(element.terms) <= 1:
        return collect(p, [_power_of_term(m, c, n, p) for m, c in element.terms])
    commutes = p == 2 or not any(parity_of_monomial(m) for m, _ in element.terms)
    step = p if commutes else 2
    result, base = of_monomial(p, UNIT), element
    while n:
        n, digit = divmod(n, step)
        for _ in range(digit):
            result = cup(result, base)
        if n:
            base = collect(p, [_power_of_term(m, c, p, p) for m, c in base.terms]) if commutes else cup(base, base)
    return result


def apply(key: str, index: Any, element: Element) -> Element:
    """A letter applied to a sum, term by term."""
    return collect(element.prime, ((Monomial(((Apply(key, index, m), 1),)), c) for m, c in element.terms))


# --- places ---------------------------------------------------------------------------------------


def factor_at(element: Element, path: Path) -> Block:
    """The block at a path.  IndexError or TypeError where the path leads nowhere."""
    if len(path) < 2 or min(path) < 0:
        raise IndexError("a path names a term and a block at least")
    factor, exponent = element.terms[path[0]][0].blocks[path[1]]
    for step in path[2:]:
        if not isinstance(factor, Apply):
            raise IndexError("the path goes on inside a class")
        factor, exponent = factor.argument.blocks[step]
    return factor, exponent


def monomial_at(element: Element, path: Path) -> Monomial:
    """The product that holds the block at a path.  IndexError where the path leads nowhere."""
    if len(path) == 2:
        return element.terms[path[0]][0]
    factor, _ = factor_at(element, path[:-1])
    if not isinstance(factor, Apply):
        raise IndexError("the path goes on inside a class")
    return factor.argument


def quotient(monomial: Monomial, divisor: Monomial) -> Monomial | None:
    """What is left of a product without a part of it; None where that is no part of it."""
    exponents = dict(monomial.blocks)
    for factor, exponent in divisor.blocks:
        left = exponents.get(factor, 0) - exponent
        if left < 0:
            return None
        exponents[factor] = left
    return Monomial(tuple([(factor, exponents[factor]) for factor, _ in monomial.blocks if exponents[factor]]))


Pairs = list[tuple[Monomial, int]]


def _replace_part(monomial: Monomial, part: Monomial, rhs: Element) -> Pairs:
    """A product with a part of it, canonical and once, replaced."""
    p = rhs.prime
    left = quotient(monomial, part)
    if left is None:
        raise ValueError("the product does not hold that part")
    _, sign = _cup_monomials(part, left, p)
    return list(cup(scale(sign, rhs), of_monomial(p, left)).terms)


def _replace_inside(monomial: Monomial, path: Path, lhs_power: int, rhs: Element, part: Monomial | None) -> Pairs:
    p, at = rhs.prime, path[0]
    factor, exponent = monomial.blocks[at]
    if len(path) == 1 and part is not None:
        return _replace_part(monomial, part, rhs)
    if len(path) == 1:
        whole, rest = divmod(exponent, lhs_power)
        middle = list(power(rhs, whole).terms)
        if rest:
            middle = list(cup(collect(p, middle), of_factor(p, factor, rest)).terms)
    else:
        assert isinstance(factor, Apply)
        inner = _replace_inside(factor.argument, path[1:], lhs_power, rhs, part)
        middle = [(Monomial(((Apply(factor.key, factor.index, m), 1),)), c) for m, c in inner]
        if exponent > 1:
            middle = list(power(collect(p, middle), exponent).terms)
    if len(monomial.blocks) == 1:
        return middle
    left, right = Monomial(monomial.blocks[:at]), Monomial(monomial.blocks[at + 1 :])
    return list(cup(of_monomial(p, left), collect(p, middle), of_monomial(p, right)).terms)


def replace(element: Element, path: Path, lhs_power: int, rhs: Element, part: Monomial | None = None) -> Element:
    """The element with factor^lhs_power replaced by rhs in the block at the path, as often as the exponent allows.

    Where `part` is given it is replaced instead, once, in the product that the block belongs to.
    """
    monomial, coefficient = element.terms[path[0]]
    fresh = _replace_inside(monomial, path[1:], lhs_power, rhs, part)
    others = element.terms[: path[0]] + element.terms[path[0] + 1 :]
    return collect(element.prime, [*others, *((m, coefficient * c) for m, c in fresh)])
