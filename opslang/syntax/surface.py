"""The surface tree: what was written, with its places.  Knows nothing of sorts, degrees or primes.

Spans are offsets into the text of the statement's chunk and do not take part in comparisons,
so two spellings of one expression are equal.

Nodes are not changed once they are built.  All but indices (which are keys) leave that to the reader's word: building
them is most of the work of reading a script, and making 37 frozen classes a good part of a cold start.
"""

from __future__ import annotations

from typing import Union

import attrs
from attrs import define, frozen

from opslang.ground.source import Span

HERE: Span = (0, 0)


# --- integer expressions in index positions -----------------------------------------------------


@frozen
class IndexExpression:
    """An integer expression that holds a variable (closed ones are folded to `int` by the parser).

    kind: "name" (parts: the name), "number" (parts: the int), "sum", "difference", "product",
    "power", "negative", "binom" (parts: index expressions or ints), "length" (|x|, parts: the `Name` or `Fundamental`).
    A sum has two parts or more, a subtracted one being a "negative" or an int below 0; a - b alone is a "difference".
    """

    kind: str
    parts: tuple[object, ...]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


Index = Union[int, IndexExpression]


# --- factors ------------------------------------------------------------------------------------


@define(repr=False)
class Operation:
    """`Sq^4`, `P^3`, `Sq^{4,2,1}` (several indices), `Sq` or `P` alone (no indices: the total operation)."""

    head: str
    indices: tuple[Index, ...]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Bockstein:
    """`beta` (order None) or `beta_k`."""

    order: Index | None
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Milnor:
    """`Q_k`."""

    index: Index
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Fundamental:
    """`iota_n`, with its number of primes."""

    degree: Index
    primes: int = 0
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Name:
    """A name: letter or spelled Greek letter, optional index, number of primes.  A class or an abbreviation."""

    letter: str
    index: Index | None = None
    primes: int = 0
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Number:
    """A non-negative integer written as a factor."""

    value: int
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Group:
    """A bracketed expression."""

    body: "Sum"
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Conjugate:
    """`chi(…)`."""

    body: "Sum"
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Construction:
    """`transgression(…)`, `suspension(…)` of a class, `dual(…)` of a bundle."""

    head: str
    body: "Sum"
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class PullBack:
    """`f^*(…)` or `f^* x`: the pull-back along a named map."""

    name: str
    body: "Sum"
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Power:
    """A factor to a power."""

    base: "Factor"
    exponent: Index
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


Factor = Union[Operation, Bockstein, Milnor, Fundamental, Name, Number, Group, Conjugate, Construction, PullBack, Power]


@define(repr=False)
class Product:
    """A flat list of factors.  `glues[i]` is how factor i is joined to the one before it:
    "" (side by side), "*" (also a centred dot), "cup", "cross" (⊗) or "compose" (∘); `glues[0]` is ""."""

    factors: tuple[Factor, ...]
    glues: tuple[str, ...]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Sum:
    """A flat sum: pairs (sign +1 or -1, product)."""

    terms: tuple[tuple[int, Product], ...]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


# --- groups and spaces --------------------------------------------------------------------------


@define(repr=False)
class Summand:
    """`Z` (order 0), `Z/m` (order m), with how many copies; `F_p` is a field (field=True, order p); `Z_(p)` is Z
    localised at p (order 0, local=p)."""

    order: int
    copies: int = 1
    field: bool = False
    local: int = 0
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Coefficients:
    """A finitely generated abelian group, or a field F_p, as written."""

    summands: tuple[Summand, ...]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class EilenbergMacLane:
    """`K(G, n)`."""

    group: Coefficients
    degree: Index
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class NamedSpace:
    """Any other space word, `X`, `BO(3)`, `RP^5(a)`, `thom(BO(3))`: name, the power after `^`, and what stands
    in its brackets: `Number`s, `Name`s (a lone letter: of a class, or of a space), spaces."""

    name: str
    power: Index | None = None
    arguments: tuple[object, ...] = ()
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class SpaceProduct:
    """Spaces joined by `x`, `×` or `\\times`; two factors or more."""

    factors: tuple[Union[EilenbergMacLane, NamedSpace], ...]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


Space = Union[EilenbergMacLane, NamedSpace, SpaceProduct]


@define(repr=False)
class PresentedClass:
    """`u:2`: a generator of a presented ring, with its degree."""

    name: Name
    degree: Index
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Presentation:
    """`F_2[u:2, v:3] / (u^2, v^2) where Sq^1 u = v to 40`: the p of F_p, generators, relations, operations on
    generators (each the left side and its value), and the degree up to which to check it (None: not said)."""

    prime: int
    generators: tuple[PresentedClass, ...]
    relations: tuple[Sum, ...] = ()
    given: tuple["Assignment", ...] = ()
    to: Index | None = None
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


# --- statements ---------------------------------------------------------------------------------


@define(repr=False)
class PrimeStatement:
    """`prime 3`."""

    value: int
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class SpaceStatement:
    """`space X = …`."""

    name: str
    space: Union[Space, Presentation]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class OnStatement:
    """`on X`."""

    space: Space
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class DeclareStatement:
    """`let x, y in H^2(X; Z/4)`: label and coefficients may be None."""

    names: tuple[Name, ...]
    degree: Index
    label: str | None = None
    coefficients: Coefficients | None = None
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class AbbreviateStatement:
    """`let u = Sq^2 x + x^2`."""

    name: Name
    body: Sum
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class ExpressionStatement:
    """A bare expression."""

    body: Sum
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class RelationStatement:
    """`a = b`, or a chain `a = b = c`; two sides or more.  `modulus` is the 2 of a final `(mod 2)`."""

    sides: tuple[Sum, ...]
    modulus: Number | None = None
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class WhyStatement:
    """`why …` of an expression or a relation."""

    body: Union[ExpressionStatement, RelationStatement]
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class BasisStatement:
    """`basis H^9(K(Z/2, 3))`; no space: the current one."""

    degree: Index
    space: Space | None = None
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class SeriesStatement:
    """`series K(Z/4, 3) to 20`; no space: the current one."""

    space: Space | None
    to: Index
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class Assignment:
    """`x -> a^2`, where a map takes a class of its target; `w = 1 + a`, the total class of a bundle."""

    left: Sum
    right: Sum
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class MapStatement:
    """`map f : X -> Y with …`; `how` is "with", "diagonal", "standard" or "projection" (on the factor `number`)."""

    name: str
    source: Space
    target: Space
    how: str
    assignments: tuple[Assignment, ...] = ()
    number: int = 0
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class ComposeStatement:
    """`map h = g f`: first f, then g."""

    name: str
    body: Product
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class BundleStatement:
    """`bundle E of rank 3 over X with w = 1 + a`: rank and space may be None; with no classes, the universal bundle."""

    name: str
    rank: Index | None
    space: Space | None
    classes: tuple[Assignment, ...] = ()
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class BundleSumStatement:
    """`bundle D = E + F`: a name for a bundle that is made from others."""

    name: str
    body: Sum
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


@define(repr=False)
class CompareStatement:
    """`compare X, Y to 12`."""

    left: Space
    right: Space
    to: Index
    span: Span = attrs.field(default=HERE, eq=False, repr=False)


Statement = Union[
    PrimeStatement,
    SpaceStatement,
    OnStatement,
    DeclareStatement,
    AbbreviateStatement,
    ExpressionStatement,
    RelationStatement,
    WhyStatement,
    BasisStatement,
    SeriesStatement,
    MapStatement,
    ComposeStatement,
    BundleStatement,
    BundleSumStatement,
    CompareStatement,
]
