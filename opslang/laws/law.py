"""What a law is: a rule stated once, with its source, that replaces a power of one factor by an element.

`instance` is mathematics and is trusted: it gives the equation for given bindings, and refuses (ValueError) outside the
law's condition.  `match` is search and is not trusted: it proposes bindings for a block of a monomial.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from attrs import field, frozen

from opslang.ir.term import UNIT, Apply, Element, Factor, Monomial, degree_of_monomial

Bindings = dict[str, Any]
"""Values for a law's letters: ints, monomials, letters; always with the prime `p`."""

Binomial = tuple[int, int, int]
"""Upper and lower argument and the value modulo the prime."""


@frozen
class Equation:
    """factor^power = rhs, of one degree on both sides (where the degrees are known).

    A relation of a ring may have a product on its left side: `rest` is what stands behind factor^power there, in
    canonical order.
    """

    factor: Factor
    power: int
    rhs: Element
    rest: Monomial = UNIT

    @property
    def lhs(self) -> Monomial:
        """The left side."""
        return Monomial(((self.factor, self.power), *self.rest.blocks))

    @property
    def part(self) -> Monomial | None:
        """The left side where it is a product, for `term.replace`; None where it is a power of one factor."""
        return self.lhs if self.rest.blocks else None

    def __attrs_post_init__(self) -> None:
        p = self.rhs.prime
        degree = degree_of_monomial(self.lhs, p)
        for monomial, _ in self.rhs.terms:
            other = degree_of_monomial(monomial, p)
            if degree is not None and other is not None and degree != other:
                raise ValueError(f"a side of degree {degree} against one of degree {other}")


Remark = tuple["str | Equation | Monomial", ...]
"""Something to be said beside an instance: words, equations and monomials in a row."""


def _no_binomials(**_: Any) -> tuple[Binomial, ...]:
    return ()


def _no_remarks(**_: Any) -> tuple[Remark, ...]:
    return ()


@frozen
class Law:
    """A mathematical rule, stated once.

    `examples` are lines of the language that hold (after the lines of `setting`).  `kills` says that the right side is
    always 0; `vanishes` says of bindings whether it is 0 for them.  `unseen` names the test that stands in where the
    polynomial witness cannot see the law.  `match_product` looks for instances whose left side is a product, in a
    monomial at the block of a number.  `words` gives the title of one instance where that says more than `title`;
    `remarks` what else there is to say of it.
    """

    name: str
    title: str
    formula: str
    condition: str
    source: str
    examples: tuple[str, ...]
    instance: Callable[..., Equation]
    match: Callable[[Factor, int, int], Bindings | None]
    setting: tuple[str, ...] = ()
    kills: bool = False
    vanishes: Callable[..., bool] | None = None
    unseen: str | None = None
    coefficients: Callable[..., Any] | None = None
    binomials: Callable[..., tuple[Binomial, ...]] = field(default=_no_binomials)
    match_product: Callable[[Monomial, int, int], Bindings | None] | None = None
    words: Callable[..., str] | None = None
    remarks: Callable[..., tuple[Remark, ...]] = field(default=_no_remarks)


def require(condition: bool, message: str) -> None:
    """ValueError with the message unless the condition of the law holds."""
    if not condition:
        raise ValueError(message)


def single(factor: Factor) -> Monomial:
    """A factor as a monomial."""
    return Monomial(((factor, 1),))


def only(monomial: Monomial) -> Factor | None:
    """The factor of a monomial that is one factor to the first power; None for every other monomial."""
    if len(monomial.blocks) == 1 and monomial.blocks[0][1] == 1:
        return monomial.blocks[0][0]
    return None


def word(letters: tuple[tuple[str, Any], ...], x: Monomial) -> Monomial:
    """Letters applied to a monomial, the last one first; letters of index 0 that mean the identity fall away."""
    for key, index in reversed(letters):
        if index != 0 or key == "Q":
            x = single(Apply(key, index, x))
    return x


def head(p: int) -> str:
    """The key of the squares or of the reduced powers."""
    return "Sq" if p == 2 else "P"


def bockstein(p: int) -> tuple[str, int]:
    """The letter of the Bockstein of order 1."""
    return ("Sq", 1) if p == 2 else ("beta", 1)


def is_bockstein(factor: Factor, p: int) -> bool:
    """Whether a factor is the Bockstein of order 1 of something."""
    return isinstance(factor, Apply) and (factor.key, factor.index) == bockstein(p)
