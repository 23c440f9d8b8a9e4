"""The trees of formulas: factors, products, sums, integer expressions, groups.  Computes nothing.

As near to the surface tree of the language as it can be, with what drafts have besides: symbols as indices, sums
with bounds,
binomials, ellipses, maps.  Every node knows the place that it was read from (`at`), which takes no part in comparisons.
"""

from __future__ import annotations

from typing import NamedTuple, Union

from attrs import field, frozen

from opslang.lint.reading.document import Token


class Origin(NamedTuple):
    """A stretch of a file of the document: its number, offsets of start and end."""

    file: int
    start: int
    end: int


NOWHERE = Origin(0, 0, 0)


def placed() -> Origin:
    """The field `at` of a node."""
    return field(default=NOWHERE, eq=False, repr=False)


# --- index positions ----------------------------------------------------------------------------


@frozen
class Index:
    """An integer expression as written.

    kind (parts): "number" (int), "name" (its spelling: "n", "i_1", "i_{j+1}", "I"), "sum" (indices; a subtracted one
    is a "negative"), "product" (indices), "negative" (one), "power" (two), "quotient" (two), "binom" (two),
    "floor" / "ceiling" (one), "length" (a `Sum` or an `Index`: |x|, |I|, deg x), "call" (name, index, …: e(I)),
    "sigma" (a `Bounds`, index), "dots" (none).
    """

    kind: str
    parts: tuple[object, ...]
    at: Origin = placed()

    @property
    def number(self) -> int | None:
        """The value of a bare number."""
        return self.parts[0] if self.kind == "number" and isinstance(self.parts[0], int) else None


# --- factors ------------------------------------------------------------------------------------


@frozen
class Operation:
    """`Sq^n`, `P^n`, `beta_k`, `Q_k`, or a total operation (no index).

    `head`: Sq, P, beta, Q (Milnor's primitive).  `upper`: the indices above (several in `Sq^{4,2,1}`).  `lower`: the
    one
    below: the order of a Bockstein, the number of Q_k, a square counted from the top.  `bound`: ">" or "<" or "≥" or
    "≤"
    in `Sq^{>|x|}`.  `tensor`: `Sq^{\\otimes I}`.
    """

    head: str
    upper: tuple[Index, ...] = ()
    lower: Index | None = None
    bound: str = ""
    tensor: bool = False
    at: Origin = placed()

    @property
    def total(self) -> bool:
        """No index at all."""
        return not self.upper and self.lower is None and self.head in ("Sq", "P")


@frozen
class ClassName:
    """A letter for a class: `x`, `w_2`, `iota_n`, `B'`, `\\bar x`.

    `letter` is the letter or its name without backslash, with "bar ", "tilde ", "hat " in front, or "bb:", "cal:", …
    for an
    alphabet.  `index` what stands below, `label` what stands above and is no power (`iota_n^{\\Z/2^i}`), as source
    text.
    `family` the argument of a family of classes: the E of w_i(E), as source text.
    """

    letter: str
    index: tuple[Index, ...] = ()
    primes: int = 0
    label: str = ""
    family: str = ""
    at: Origin = placed()

    @property
    def spelling(self) -> str:
        """The name as it is looked up: `x`, `x_3`, `iota_n`, `w_2'`; without its family."""
        below = ",".join(spelled(index) for index in self.index)
        return self.letter + (f"_{below}" if below else "") + "'" * self.primes


@frozen
class Number:
    """A number as a factor (0 and 1 too)."""

    value: int
    at: Origin = placed()


@frozen
class Coefficient:
    """A scalar with symbols: a binomial, a sign (-1)^i, a fraction."""

    value: Index
    at: Origin = placed()


@frozen
class Group:
    """A bracketed expression; `shape` is its opening bracket: ( [ or {."""

    body: "Sum"
    shape: str = "("
    at: Origin = placed()


@frozen
class Power:
    """A factor to a power."""

    base: "Factor"
    exponent: Index
    at: Origin = placed()


@frozen
class Conjugate:
    """`\\chi(…)`, `\\chi \\Sq^n`."""

    body: "Sum"
    at: Origin = placed()


@frozen
class Call:
    """A map or function that is none of the operations: `d_3(x)`, `f^*(x)`, `e(I)`, `\\delta x`.

    `name` is its spelling (`d_3`, `f^*`, `p_*`, `delta`); its letter alone is in `letter`.
    """

    name: str
    letter: str
    arguments: tuple["Sum", ...]
    lower: tuple[Index, ...] = ()
    upper: str = ""
    at: Origin = placed()


@frozen
class Condition:
    """One comparison of integers (`a < 2b`; a chain 0<a<2b gives two), or words.

    sign: < > ≤ ≥ = ≠, or "words" (then `text` is what was said: "n even", "I admissible").
    """

    sign: str
    left: Index | None = None
    right: Index | None = None
    text: str = ""
    at: Origin = placed()


@frozen
class Bounds:
    """What a sum runs over: variables, limits, and conditions under the sign (`i+j=k`, `0<j`).

    `unread` says that something under or over the sign was not understood.
    """

    variables: tuple[str, ...] = ()
    lower: Index | None = None
    upper: Index | None = None
    conditions: tuple["Condition", ...] = ()
    unread: str = ""
    at: Origin = placed()


@frozen
class BigSum:
    """`\\sum_{…}^{…} term`; `sign` is \\sum, \\prod, \\bigoplus, …"""

    bounds: Bounds
    body: "Product"
    sign: str = "\\sum"
    at: Origin = placed()


@frozen
class Dots:
    """An ellipsis."""

    at: Origin = placed()


@frozen
class Mystery:
    """A factor that was not understood: what it is as source text."""

    text: str
    at: Origin = placed()


Factor = Union[Operation, ClassName, Number, Coefficient, Group, Power, Conjugate, Call, BigSum, Dots, Mystery]


@frozen
class Product:
    """A flat list of factors.  `glues[i]` is how factor i is joined to the one before it:
    "" (side by side), "*" (a centred dot), "cup", "cross" (tensor), "times" (×), "compose", "/" (slash) or another
    sign."""

    factors: tuple[Factor, ...]
    glues: tuple[str, ...]
    at: Origin = placed()


@frozen
class Sum:
    """A flat sum: pairs (sign +1 or -1, product)."""

    terms: tuple[tuple[int, Product], ...]
    at: Origin = placed()


@frozen
class Cohomology:
    """`H^n(X; G)`: what stands in the brackets is left as tokens, for the context to read.

    `degree` None: H^*, H^\\bullet.  `letter` is H, or "Ext", "pi", … for other graded groups.
    """

    degree: Index | None
    space: tuple[Token, ...] = field(default=(), repr=False)
    coefficients: tuple[Token, ...] = field(default=(), repr=False)
    letter: str = "H"
    lower: bool = False
    at: Origin = placed()


@frozen
class Opaque:
    """A side that was not read, as tokens."""

    tokens: tuple[Token, ...] = field(repr=False)
    at: Origin = placed()


Side = Union[Sum, Index, Cohomology, Opaque]


def spelled(index: Index) -> str:
    """An index in one normal spelling, for names: `n`, `2`, `j+1`, `2^{j}`."""
    parts = [spelled(part) if isinstance(part, Index) else str(part) for part in index.parts]
    match index.kind:
        case "number" | "name":
            return parts[0]
        case "sum":
            return "".join(part if part.startswith("-") or not at else "+" + part for at, part in enumerate(parts))
        case "negative":
            return "-" + (f"({parts[0]})" if "+" in parts[0] or "-" in parts[0] else parts[0])
        case "product":
            return "".join(f"({part})" if "+" in part or "-" in part else part for part in parts)
        case "power":
            return f"{parts[0]}^{{{parts[1]}}}"
        case "quotient":
            return f"{parts[0]}/{parts[1]}"
        case "dots":
            return "…"
    return f"{index.kind}({','.join(parts)})"
