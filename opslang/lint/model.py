"""What the linter's rooms hand to each other: statements, their trees, what is known, findings.  Computes nothing.

A formula is cut into `Statement`s (opslang.lint.formula); the context (opslang.lint.context) gives each one a `Known`;
a rule looks at one statement and what is known and gives a `Verdict` or None, or looks at the whole draft and gives
findings.  Every node knows the place in the author's file that it was read from (`at`), which takes no part in
comparisons.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Literal

import attrs
from attrs import field, frozen

from opslang.lint.reading.document import Formula
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.trees import (
    NOWHERE,
    BigSum,
    Bounds,
    Call,
    ClassName,
    Coefficient,
    Cohomology,
    Condition,
    Conjugate,
    Dots,
    Factor,
    Group,
    Index,
    Mystery,
    Number,
    Opaque,
    Operation,
    Origin,
    Power,
    Product,
    Side,
    Sum,
    placed,
    spelled,
)

__all__ = [
    "NOWHERE",
    "BigSum",
    "Bounds",
    "Call",
    "ClassFact",
    "ClassName",
    "Coefficient",
    "Cohomology",
    "Condition",
    "Conjugate",
    "Dots",
    "Factor",
    "FamilyFact",
    "Finding",
    "Group",
    "Index",
    "Kind",
    "Known",
    "Mystery",
    "Number",
    "Opaque",
    "Operation",
    "Origin",
    "Power",
    "Product",
    "Rule",
    "Severity",
    "Side",
    "Standing",
    "Statement",
    "Sum",
    "Unread",
    "Verdict",
    "found",
    "spelled",
]


# --- statements ---------------------------------------------------------------------------------


@frozen
class Unread:
    """Something in the statement that was not understood."""

    reason: str
    at: Origin = placed()


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

    `sign` is the sign between the sides (=, ≡, ≠, :=, ↦, ∈, →, ⊂, ≅ …).  `conditions` hold for this statement: they
    stood in the
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
    at: Origin = placed()

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
    at: Origin = placed()


@frozen
class FamilyFact:
    """Classes with a running index: w_i of degree i, x_i of degree 2i.  `degree` is a polynomial in the symbol
    "index".
    """

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
    at: Origin = placed()


@frozen
class Known:
    """What may be used in judging one statement.

    `prime` None: the draft does not say and no operation tells.  `classes` by spelling, `families` by letter.
    `maps`: degree by which a map that is no operation raises degree, by its spelling or letter (d: 1, f^*: 0).
    `operations`: spellings that mean an operation (macro declarations).  `conventions`: "lower-squares" …, free text
    keys.
    `ranges`: what the neighbouring sentences say of symbols.  `counted_by`: what the index of P^i counts.
    `integers`: symbols said to be numbers, so that they are no classes (`beta`, `P` among them: no operations).
    `script`: lines of the author's own declarations, in the notation of scripts.  `lead` and `tail`: the
    words of its sentence before and behind the formula.  `explain`: derivations are wanted.
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
    lead: str = ""
    tail: str = ""
    explain: bool = False

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
    """One thing said about a draft.  `mend` is the text that would replace `at`; `certain` says that it may be put
    in unasked.
    """

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

    true: proved.  agrees: tried on small values, `reason` says which.  consistent: sorts and degrees fit, no more is
    claimed.
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
