"""The typed tree that lowering gives and the engines read: two sorts, every node with its degree.

Words of the Steenrod algebra are flat tuples of ints, *tokens*, everywhere in the project:
at p = 2 the token i > 0 is Sq^i; at odd p the token 0 is the Bockstein and s > 0 is P^s.
The identity is the empty word.  In the word of a generator the last token -k stands for beta_k (k >= 2).

`degree` is None where the expression is inhomogeneous; a zero keeps the degree of what was written.
`top` bounds the degree of everything inside (for the widths that the engine packs with).
What is *absent*: no node holds a negative index or Sq^0, no operation node is applied to a class, no class
of a space that is a point at the prime, no abbreviation (they are expanded, and shared: the tree is a DAG).
"""

from __future__ import annotations

from typing import Any, Union

from attrs import field, frozen

from opslang.ground.source import Span

Token = int
Word = tuple[Token, ...]
HERE: Span = (0, 0)


@frozen(cache_hash=True)
class Class:
    """A class that others are made from: a fundamental class or a declared one.

    `order` says where it comes from: 1, a class with coefficients F_p; 0, the reduction of an integral
    class (every Bockstein of it is 0); k >= 2, the reduction of a Z/p^k class (beta_j is 0 for j < k and
    beta_k is a class of its own, again the reduction of an integral one).
    `letter`, `index`, `primes` spell its name: iota_3' is ("iota", 3, 1).
    `factor` numbers the factor of the product of spaces it comes from (0 where there is no product).
    `ring` is the named space that gives the class its relations and operations (`opslang.spaces.family.Family`);
    None where nothing else is known of it, so that it is the fundamental class of an Eilenberg-MacLane space.
    """

    letter: str
    index: int | None
    primes: int
    degree: int
    order: int = 1
    factor: int = 0
    ring: Any = field(default=None, repr=False)


def _span() -> Span:
    return field(default=HERE, eq=False, repr=False)


# --- operations ---------------------------------------------------------------------------------


@frozen
class Composite:
    """A word of letters: tokens, leftmost first; empty for the identity."""

    word: Word
    degree: int
    span: Span = _span()


@frozen
class Compose:
    """A composition of operations, leftmost first."""

    factors: tuple["Op", ...]
    degree: int | None
    span: Span = _span()


@frozen
class OpSum:
    """A linear combination: pairs (coefficient, operation).  Empty for 0, which keeps its degree."""

    terms: tuple[tuple[int, "Op"], ...]
    degree: int | None
    span: Span = _span()


@frozen
class OpPower:
    """A power by composition."""

    base: "Op"
    exponent: int
    degree: int | None
    span: Span = _span()


@frozen
class Chi:
    """The conjugate of an operation."""

    argument: "Op"
    degree: int | None
    span: Span = _span()


@frozen
class MilnorQ:
    """Milnor's primitive Q_k; Q_0 is the Bockstein."""

    k: int
    degree: int
    span: Span = _span()


Op = Union[Composite, Compose, OpSum, OpPower, Chi, MilnorQ]


# --- classes ------------------------------------------------------------------------------------


@frozen
class Fundamental:
    """A class that others are made from, as an expression."""

    of: Class
    degree: int
    top: int
    span: Span = _span()


@frozen
class Unit:
    """The unit of the ring."""

    degree: int = 0
    top: int = 0
    span: Span = _span()


@frozen
class Cup:
    """A cup product (or cross product: the cup product of the pulled-back classes), in the order written."""

    factors: tuple["Cls", ...]
    degree: int | None
    top: int
    span: Span = _span()


@frozen
class ClassSum:
    """A linear combination: pairs (coefficient, class).  Empty for 0, which keeps its degree."""

    terms: tuple[tuple[int, "Cls"], ...]
    degree: int | None
    top: int
    span: Span = _span()


@frozen
class ClassPower:
    """A power of a class."""

    base: "Cls"
    exponent: int
    degree: int | None
    top: int
    span: Span = _span()


@frozen
class Apply:
    """An operation of the algebra applied to a class."""

    op: Op
    argument: "Cls"
    degree: int | None
    top: int
    span: Span = _span()


@frozen
class HigherBockstein:
    """beta_k of a class, k >= 2."""

    k: int
    argument: "Cls"
    degree: int | None
    top: int
    span: Span = _span()


@frozen
class Total:
    """The total operation on a class: the sum of all Sq^i (p = 2) or of all P^i (p odd)."""

    argument: "Cls"
    degree: int | None
    top: int
    span: Span = _span()


Cls = Union[Fundamental, Unit, Cup, ClassSum, ClassPower, Apply, HigherBockstein, Total]
Tree = Union[Op, Cls]
OPS = (Composite, Compose, OpSum, OpPower, Chi, MilnorQ)


# --- canonical elements -------------------------------------------------------------------------


@frozen(cache_hash=True)
class Generator:
    """A polynomial generator: an admissible word on a class.  The last token may be -k, for beta_k."""

    word: Word
    of: Class


Monomial = tuple[tuple[Generator, int], ...]
"""Generators with their powers (each at least 1), in canonical order; empty for the unit."""


@frozen
class OperationElement:
    """A canonical element of the algebra: (admissible word, coefficient 1 … p-1), in canonical order."""

    prime: int
    terms: tuple[tuple[Word, int], ...]


@frozen
class ClassElement:
    """A canonical element of H^*: (monomial, coefficient 1 … p-1), in canonical order."""

    prime: int
    terms: tuple[tuple[Monomial, int], ...]


Element = Union[OperationElement, ClassElement]
