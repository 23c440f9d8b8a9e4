"""The shapes of the general relations: which statements are Adem's, Cartan's or Wu's.  Knows shapes, computes
nothing.
"""

from __future__ import annotations

from opslang.lint.formula.integers import letters_of
from opslang.lint.model import (
    BigSum,
    ClassName,
    Coefficient,
    Condition,
    Group,
    Index,
    Operation,
    Power,
    Product,
    Side,
    Statement,
    Sum,
)

NOUGHT = Index("number", (0,))


def only_product(side: Side) -> Product | None:
    """The product that is the whole side, with the sign +."""
    if isinstance(side, Sum) and len(side.terms) == 1 and side.terms[0][0] > 0:
        return side.terms[0][1]
    return None


def big_sums(side: Side) -> list[BigSum]:
    """The sum signs at the outside of a side."""
    if not isinstance(side, Sum):
        return []
    return [product.factors[-1] for _, product in side.terms if isinstance(product.factors[-1], BigSum)]


def _letter(index: Index) -> bool:
    return index.kind == "name"


def adem(statement: Statement) -> tuple[str, Index, Index] | None:
    """(shape, a, b) of a statement Sq^a Sq^b = sum with binomials: "Sq", "P" or "PbP"."""
    if statement.kind != "relation":
        return None
    for left, right in (statement.sides, statement.sides[::-1]):
        product = only_product(left)
        if product is None or not any(has_binomial(big.body) for big in big_sums(right)):
            continue
        found = _word(product)
        if found is not None:
            return found
    return None


def _word(product: Product) -> tuple[str, Index, Index] | None:
    letters = product.factors
    if not all(isinstance(factor, Operation) for factor in letters) or any(g in ("cross",) for g in product.glues):
        return None
    heads = [factor.head for factor in letters if isinstance(factor, Operation)]
    if heads not in (["Sq", "Sq"], ["P", "P"], ["P", "beta", "P"]):
        return None
    first, last = letters[0], letters[-1]
    if not (isinstance(first, Operation) and isinstance(last, Operation)):
        return None
    if len(first.upper) != 1 or len(last.upper) != 1 or first.lower or last.lower:
        return None
    shape = "PbP" if len(heads) == 3 else heads[0]
    return shape, first.upper[0], last.upper[0]


def has_binomial(body: Product) -> bool:
    """Whether a binomial stands among the factors."""
    return any(isinstance(factor, Coefficient) and _binomial(factor.value) for factor in body.factors)


def _binomial(index: Index) -> bool:
    return index.kind == "binom" or any(isinstance(part, Index) and _binomial(part) for part in index.parts)


def adem_range(shape: str, a: Index, b: Index) -> tuple[Condition, ...]:
    """0 < a < 2b; a < pb; a ≤ pb.  Source: Steenrod and Epstein 1962, chapters I and VI."""
    factor = Index("number", (2,)) if shape == "Sq" else Index("name", ("p",))
    top = Index("product", (factor, b))
    return (Condition("<", NOUGHT, a), Condition("≤" if shape == "PbP" else "<", a, top))


def says_range(conditions: tuple[Condition, ...], a: Index, b: Index) -> bool:
    """Whether an inequality that bounds the left index by the right one is among some conditions."""
    names = (set(letters_of(a)), set(letters_of(b)))
    for condition in conditions:
        if condition.sign not in ("<", ">", "≤", "≥") or condition.left is None or condition.right is None:
            continue
        seen = set(letters_of(condition.left)) | set(letters_of(condition.right))
        if all(one & seen for one in names if one):
            return True
    return False


def cartan(statement: Statement) -> bool:
    """An operation on a product of two classes or more, against a sum with a sum sign."""
    if statement.kind != "relation":
        return False
    for left, right in (statement.sides, statement.sides[::-1]):
        product = only_product(left)
        if product is None or not big_sums(right) or len(product.factors) != 2:
            continue
        operation, group = product.factors
        if isinstance(operation, Operation) and isinstance(group, Group) and not operation.total:
            inner = only_product(group.body)
            if inner is not None and len(inner.factors) >= 2 and all(_class(f) for f in inner.factors):
                return True
    return False


def _class(factor: object) -> bool:
    return isinstance(factor, ClassName) or (isinstance(factor, Group) and _wrapped(factor))


def _wrapped(group: Group) -> bool:
    inner = only_product(group.body)
    return inner is not None and len(inner.factors) == 1 and _class(inner.factors[0])


def wu(statement: Statement) -> tuple[str, Index, Index] | None:
    """(letter, k, m) of a statement Sq^k(w_m) = products of w's, with a symbol as m."""
    if statement.kind != "relation":
        return None
    product = only_product(statement.left)
    if product is None or len(product.factors) != 2:
        return None
    operation, on = product.factors
    if isinstance(on, Group):
        inner = only_product(on.body)
        on = inner.factors[0] if inner is not None and len(inner.factors) == 1 else on
    if not (isinstance(operation, Operation) and operation.head == "Sq" and len(operation.upper) == 1):
        return None
    if not isinstance(on, ClassName) or on.letter not in ("w", "c") or len(on.index) != 1 or isinstance(on, Power):
        return None
    if not set(letters_of(on.index[0])):
        return None
    return on.letter, operation.upper[0], on.index[0]
