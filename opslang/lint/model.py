"""What the linter's rooms hand to each other: statements, their trees, what is known, findings.  Computes nothing.

A formula is cut into `Statement`s (opslang.lint.formula); the context (opslang.lint.context) gives each one a `Known`;
a rule looks at one statement and what is known and gives a `Verdict` or None, or looks at the whole draft and gives
findings.  Every node knows the place in the author's file that it was read from (`at`), which takes no part in comparisons.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Literal, NamedTuple, Union

import attrs
from attrs import field, frozen

from opslang.lint.reading.document import Formula, Token
from opslang.lint.symbolic.polynomial import Polynomial


class Origin(NamedTuple):
    """A stretch of a file of the document: its number, offsets of start and end."""

    file: int
    start: int
    end: int


NOWHERE = Origin(0, 0, 0)


def _at() -> Origin:
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
    at: Origin = _at()

    @property
    def number(self) -> int | None:
        """The value of a bare number."""
        return self.parts[0] if self.kind == "number" and isinstance(self.parts[0], int) else None


# --- factors ------------------------------------------------------------------------------------


@frozen
class Operation:
    """`Sq^n`, `P^n`, `beta_k`, `Q_k`, or a total operation (no index).

    `head`: Sq, P, beta, Q (Milnor's primitive).  `upper`: the indices above (several in `Sq^{4,2,1}`).  `lower`: the one
    below: the order of a Bockstein, the number of Q_k, a square counted from the top.  `bound`: ">" or "<" or "≥" or "≤"
    in `Sq^{>|x|}`.  `tensor`: `Sq^{\\otimes I}`.
    """

    head: str
    upper: tuple[Index, ...] = ()
    lower: Index | None = None
    bound: str = ""
    tensor: bool = False
    at: Origin = _at()

    @property
    def total(self) -> bool:
        """No index at all."""
        return not self.upper and self.lower is None and self.head in ("Sq", "P")


@frozen
class ClassName:
    """A letter for a class: `x`, `w_2`, `iota_n`, `B'`, `\\bar x`.

    `letter` is the letter or its name without backslash, with "bar ", "tilde ", "hat " in front, or "bb:", "cal:", … for an
    alphabet.  `index` what stands below, `label` what stands above and is no power (`iota_n^{\\Z/2^i}`), as source text.
    `family` the argument of a family of classes: the E of w_i(E), as source text.
    """

    letter: str
    index: tuple[Index, ...] = ()
    primes: int = 0
    label: str = ""
    family: str = ""
    at: Origin = _at()

    @property
    def spelling(self) -> str:
        """The name as it is looked up: `x`, `x_3`, `iota_n`, `w_2'`; without its family."""
        below = ",".join(spelled(index) for index in self.index)
        return self.letter + (f"_{below}" if below else "") + "'" * self.primes


@frozen
class Number:
    """A number as a factor (0 and 1 too)."""

    value: int
    at: Origin = _at()


@frozen
class Coefficient:
    """A scalar with symbols: a binomial, a sign (-1)^i, a fraction."""

    value: Index
    at: Origin = _at()


@frozen
class Group:
    """A bracketed expression; `shape` is its opening bracket: ( [ or {."""

    body: "Sum"
    shape: str = "("
    at: Origin = _at()


@frozen
class Power:
    """A factor to a power."""

    base: "Factor"
    exponent: Index
    at: Origin = _at()


@frozen
class Conjugate:
    """`\\chi(…)`, `\\chi \\Sq^n`."""

    body: "Sum"
    at: Origin = _at()


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
    at: Origin = _at()


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
    at: Origin = _at()


@frozen
class BigSum:
    """`\\sum_{…}^{…} term`; `sign` is \\sum, \\prod, \\bigoplus, …"""

    bounds: Bounds
    body: "Product"
    sign: str = "\\sum"
    at: Origin = _at()


@frozen
class Dots:
    """An ellipsis."""

    at: Origin = _at()


@frozen
class Mystery:
    """A factor that was not understood: what it is as source text."""

    text: str
    at: Origin = _at()


Factor = Union[Operation, ClassName, Number, Coefficient, Group, Power, Conjugate, Call, BigSum, Dots, Mystery]


@frozen
class Product:
    """A flat list of factors.  `glues[i]` is how factor i is joined to the one before it:
    "" (side by side), "*" (a centred dot), "cup", "cross" (tensor), "times" (×), "compose", "/" (slash) or another sign."""

    factors: tuple[Factor, ...]
    glues: tuple[str, ...]
    at: Origin = _at()


@frozen
class Sum:
    """A flat sum: pairs (sign +1 or -1, product)."""

    terms: tuple[tuple[int, Product], ...]
    at: Origin = _at()


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
    at: Origin = _at()


@frozen
class Opaque:
    """A side that was not read, as tokens."""

    tokens: tuple[Token, ...] = field(repr=False)
    at: Origin = _at()


Side = Union[Sum, Index, Cohomology, Opaque]


# --- statements ---------------------------------------------------------------------------------


@frozen
class Condition:
    """One comparison of integers (`a < 2b`; a chain 0<a<2b gives two), or words.

    sign: < > ≤ ≥ = ≠, or "words" (then `text` is what was said: "n even", "I admissible").
    """

    sign: str
    left: Index | None = None
    right: Index | None = None
    text: str = ""
    at: Origin = _at()


@frozen
class Unread:
    """Something in the statement that was not understood."""

    reason: str
    at: Origin = _at()


Kind = Literal[
    "relation",  # left = right: one link of a chain
    "mapsto",  # left \mapsto right
    "membership",  # x, y \in H^n(X; G): the last side is what it lies in
    "degree",  # |x| = n, \deg x = n: sides are indices
    "signature",  # Sq^n : H^k \to H^{k+n}: sides are the operation, source, target
    "list",  # a, b, c: sides are the members
    "mention",  # a bare expression
    "definition",  # left := right
    "condition",  # a comparison of integers, in `conditions`
    "other",  # a relation of another kind (inclusion, isomorphism, ≠), or nothing that was understood
]


@frozen
class Statement:
    """One unit of a formula that can be checked by itself.

    `sign` is the sign between the sides (=, ≡, ≠, :=, ↦, ∈, →, ⊂, ≅ …).  `conditions` hold for this statement: they stood in the
    same formula (`\\text{if } i > n`, a set's condition).  `modulus` is the source text of a tail `mod 2`.
    `row` counts the rows of the formula from 0; statements with one `chain` number are links of one chain.
    `inherited`: the left side was taken from an earlier link or row.  `notes` are the words beside it.
    """

    kind: Kind
    sides: tuple[Side, ...]
    sign: str = ""
    conditions: tuple[Condition, ...] = ()
    modulus: str = ""
    notes: tuple[str, ...] = ()
    unread: tuple[Unread, ...] = ()
    row: int = 0
    chain: int = 0
    inherited: bool = False
    in_set: bool = False
    formula: Formula | None = field(default=None, eq=False, repr=False)
    at: Origin = _at()

    @property
    def left(self) -> Side:
        """The first side."""
        return self.sides[0]

    @property
    def right(self) -> Side:
        """The last side."""
        return self.sides[-1]


# --- what is known ------------------------------------------------------------------------------


@frozen
class ClassFact:
    """What the draft says of a class.

    `order`: 0 the reduction of an integral class, 1 coefficients F_p, k >= 2 coefficients Z/p^k; None: not said.
    `order_text` is the order where it is a symbol (Z/2^i: "i").  `source` says where it was learnt, for messages.
    """

    degree: Polynomial | None = None
    order: int | None = None
    order_text: str = ""
    space: str = ""
    source: str = ""
    at: Origin = _at()


@frozen
class FamilyFact:
    """Classes with a running index: w_i of degree i, x_i of degree 2i.  `degree` is a polynomial in the symbol "index"."""

    degree: Polynomial
    order: int | None = None
    space: str = ""
    source: str = ""


@frozen
class Rule:
    """A relation that holds in this draft by its own word: `given d iota_4 = Sq^2 iota_3`."""

    left: Sum
    right: Sum
    source: str = ""
    at: Origin = _at()


@frozen
class Known:
    """What may be used in judging one statement.

    `prime` None: the draft does not say and no operation tells.  `classes` by spelling, `families` by letter.
    `maps`: degree by which a map that is no operation raises degree, by its spelling or letter (d: 1, f^*: 0).
    `operations`: spellings that mean an operation (macro declarations).  `conventions`: "lower-squares" …, free text keys.
    `ranges`: what the neighbouring sentences say of symbols.  `counted_by`: what the index of P^i counts.
    `integers`: symbols said to be numbers, so that they are no classes (`beta`, `P` among them: no operations).
    `script`: lines of the author's own declarations, in the notation of scripts.
    """

    prime: int | None = None
    classes: Mapping[str, ClassFact] = attrs.field(factory=dict)
    families: Mapping[str, FamilyFact] = attrs.field(factory=dict)
    maps: Mapping[str, Polynomial] = attrs.field(factory=dict)
    operations: Mapping[str, str] = attrs.field(factory=dict)
    conventions: Mapping[str, str] = attrs.field(factory=dict)
    ranges: tuple[Condition, ...] = ()
    rules: tuple[Rule, ...] = ()
    integers: frozenset[str] = frozenset()
    space: str = ""
    sentences: str = ""
    script: tuple[str, ...] = ()

    def fact(self, name: ClassName) -> ClassFact | None:
        """What is known of a class by its spelling."""
        return self.classes.get(name.spelling)

    def degree(self, name: ClassName) -> Polynomial | None:
        """The degree of a class; a family answers with its index, iota_n with n; None where the draft does not say."""
        fact = self.fact(name)
        if fact is not None and fact.degree is not None:
            return fact.degree
        if len(name.index) != 1:
            return None
        from opslang.lint.symbolic.values import polynomial_of

        index = polynomial_of(name.index[0])
        if index is None:
            return None
        family = self.families.get(name.letter)
        if family is not None:
            return family.degree.substitute({"index": index})
        return index if name.letter == "iota" else None


# --- findings -----------------------------------------------------------------------------------

Severity = Literal["error", "warning", "note"]


@frozen
class Finding:
    """One thing said about a draft.  `mend` is the text that would replace `at`; `certain` says that it may be put in unasked."""

    name: str
    severity: Severity
    message: str
    at: Origin
    formula: str = ""
    mend: str | None = None
    certain: bool = False
    derivation: tuple[str, ...] = ()


Standing = Literal["true", "agrees", "consistent", "finding", "not-checked", "not-about-operations"]


@frozen
class Verdict:
    """What one rule says of one statement.

    true: proved.  agrees: tried on small values, `reason` says which.  consistent: sorts and degrees fit, no more is claimed.
    not-checked: `reason` says why and `needed` what would be needed.
    """

    standing: Standing
    findings: tuple[Finding, ...] = ()
    reason: str = ""
    needed: str = ""
    derivation: tuple[str, ...] = ()


def found(finding: Finding) -> Verdict:
    """The verdict of a single finding."""
    return Verdict("finding", (finding,))


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
