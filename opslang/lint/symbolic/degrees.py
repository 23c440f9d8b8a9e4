"""Degrees of expressions with symbols.  Knows the degrees of the operations (|Sq^i| = i, |P^i| = 2i(p-1), |beta| = 1,
|Q_k|) and what the draft says of its classes; computes no value of an operation.

A class of unknown degree counts with a symbol `|x|`, so that it may cancel.  Source: Steenrod and Epstein 1962;
Milnor 1958.
"""

from __future__ import annotations

from collections.abc import Mapping

from attrs import define, field, frozen

from opslang.lint.formula.integers import letters_of
from opslang.lint.model import (
    BigSum,
    Bounds,
    Call,
    ClassName,
    Coefficient,
    Condition,
    Conjugate,
    Dots,
    Factor,
    Group,
    Index,
    Known,
    Number,
    Operation,
    Power,
    Product,
    Sum,
    spelled,
)
from opslang.lint.symbolic.polynomial import ONE, ZERO, Polynomial
from opslang.lint.symbolic.values import polynomial_of, power


class Unmeasured(Exception):
    """The expression has no single degree, or one that is not known: why, and what would be needed."""

    def __init__(self, reason: str, needed: str = "") -> None:
        super().__init__(reason)
        self.reason = reason
        self.needed = needed


@frozen
class Term:
    """One term of a sum with its degree; `bound` are the summation variables that the degree depends on."""

    product: Product
    degree: Polynomial
    sort: str
    bound: frozenset[str] = frozenset()


@define
class Measure:
    """Degrees under what is known; `unknown` gathers the names of classes and maps whose degree is not known."""

    known: Known
    unknown: dict[str, str] = field(factory=dict)
    bound: list[str] = field(factory=list)
    """The variables of the sums that one stands in."""

    # --- sums -----------------------------------------------------------------------------------

    def terms(self, body: Sum) -> list[Term]:
        """The terms of a sum that are not 0, each with its degree."""
        found = []
        for _, product in body.terms:
            if is_zero(product) or all(isinstance(factor, Dots) for factor in product.factors):
                continue
            found.append(self.term(product))
        return found

    def term(self, product: Product) -> Term:
        """One product."""
        last = product.factors[-1]
        if isinstance(last, BigSum):
            if last.sign != "\\sum":
                raise Unmeasured("a product sign")
            self.bound += own_variables(last.bounds)
            try:
                inner = self.term(last.body)
            finally:
                self.bound.clear()
            front = ZERO
            sort = inner.sort
            if len(product.factors) > 1:
                head = self.term(Product(product.factors[:-1], product.glues[:-1], product.at))
                front, sort = head.degree, _joined(head.sort, sort)
            degree = (front + inner.degree).substitute(solved(last.bounds, inner.degree))
            hidden = frozenset(own_variables(last.bounds)) & degree.symbols
            return Term(product, degree, sort, inner.bound | hidden)
        degree = ZERO
        sort = "scalar"
        for at, factor in enumerate(product.factors):
            if isinstance(factor, Dots):
                degree = degree + _between(product, at)
                continue
            value, kind = self.factor(factor)
            if kind == "operation" and product.glues[at] == "/":
                raise Unmeasured("a quotient")
            degree = degree + value
            sort = _joined(sort, kind)
        return Term(product, degree, sort)

    def sum(self, body: Sum) -> tuple[Polynomial, str]:
        """The degree of a sum inside an expression: that of its terms, which must agree as far as they can be told."""
        terms = self.terms(body)
        if not terms:
            raise Unmeasured("a zero has every degree")
        if any(term.bound for term in terms):
            raise Unmeasured("the terms of a sum have different degrees")
        if any(term.degree != terms[0].degree for term in terms[1:]):
            raise Unmeasured("a sum of different degrees, or of degrees that are not known to agree")
        return terms[0].degree, next((term.sort for term in terms if term.sort != "scalar"), "scalar")

    # --- factors --------------------------------------------------------------------------------

    def factor(self, factor: Factor) -> tuple[Polynomial, str]:
        """The degree and the sort of one factor."""
        if isinstance(factor, Operation):
            return self.operation(factor), "operation"
        if isinstance(factor, ClassName):
            return self.of_class(factor), "class"
        if isinstance(factor, (Number, Coefficient)):
            return ZERO, "scalar"
        if isinstance(factor, (Group, Conjugate)):
            return self.sum(factor.body)
        if isinstance(factor, Power):
            degree, sort = self.factor(factor.base)
            exponent = polynomial_of(factor.exponent, self.length)
            if exponent is None:
                raise Unmeasured("an exponent that is no number")
            return self._with_prime(exponent) * degree, sort
        if isinstance(factor, Call):
            return self._call(factor)
        raise Unmeasured("a factor that has no degree by itself")

    def operation(self, factor: Operation) -> Polynomial:
        """The degree of an operation."""
        if factor.total:
            raise Unmeasured("a total operation has parts of every degree")
        if factor.bound:
            raise Unmeasured("an index that stands for many")
        if factor.head == "beta":
            times = self.index(factor.upper[0]) if factor.upper else ONE
            return times
        if factor.head == "Q":
            return self._primitive(factor)
        if factor.lower is not None:
            raise Unmeasured("a square counted from the top, or with a label")
        total = ZERO
        for index in factor.upper:
            total = total + self.index(index, multi=len(factor.upper) == 1)
        if factor.head == "Sq" or self.known.conventions.get("P") == "degree":
            return total
        return total.scaled(2) * (self.prime() - ONE)

    def _primitive(self, factor: Operation) -> Polynomial:
        if factor.lower is None or factor.upper:
            raise Unmeasured("a letter Q that is no primitive")
        first = self.known.conventions.get("Q")
        k = self.index(factor.lower)
        if self.known.prime is None:
            raise Unmeasured("Q_k has a degree that depends on the prime", "the prime")
        if first not in ("0", "1"):
            raise Unmeasured("Q_0 or Q_1 may be the Bockstein", "which of Q_0, Q_1 is the Bockstein")
        if first == "1":
            k = k - ONE
        raised = power(self.prime(), k)
        if raised is None:
            raise Unmeasured("a degree that is too large")
        return raised.scaled(2) - ONE

    def prime(self) -> Polynomial:
        """The prime, or the symbol p."""
        return Polynomial.symbol("p") if self.known.prime is None else Polynomial.of(self.known.prime)

    def _with_prime(self, value: Polynomial) -> Polynomial:
        return value if self.known.prime is None else value.substitute({"p": Polynomial.of(self.known.prime)})

    def index(self, index: Index, multi: bool = False) -> Polynomial:
        """An integer, |I| for a multi-index."""
        if multi and index.kind == "name" and str(index.parts[0])[:1] in "IJKL" and len(str(index.parts[0])) == 1:
            return Polynomial.symbol(f"|{index.parts[0]}|")
        value = polynomial_of(index, self.length)
        if value is None:
            raise Unmeasured("an index that is no number")
        return self._with_prime(normal(value))

    def of_class(self, name: ClassName) -> Polynomial:
        """The degree of a class; a symbol where it is not known."""
        degree = self.known.degree(name)
        if degree is not None:
            fact = self.known.fact(name)
            if (
                fact is not None
                and self.bound
                and fact.degree is not None
                and not fact.degree.symbols.isdisjoint(self.bound)
            ):
                raise Unmeasured("a letter stands for two things")
            return self._with_prime(degree)
        if self.bound and any(not set(letters_of(index)).isdisjoint(self.bound) for index in name.index):
            raise Unmeasured("a degree is not known", f"the degree of {name.spelling}")
        symbol = f"|{name.spelling}|"
        self.unknown[symbol] = name.spelling
        return Polynomial.symbol(symbol)

    def length(self, body: object) -> Polynomial | None:
        """|x|, |I|."""
        if isinstance(body, Index):
            return Polynomial.symbol(f"|{spelled(body)}|")
        if isinstance(body, Sum):
            try:
                return self.sum(body)[0]
            except Unmeasured:
                return None
        return None

    def _call(self, call: Call) -> tuple[Polynomial, str]:
        if call.name == "[,]" and len(call.arguments) == 2:
            (left, sort), (right, _) = self.sum(call.arguments[0]), self.sum(call.arguments[1])
            return left + right, sort
        if call.letter in ("pairing", "e") or len(call.arguments) != 1:
            raise Unmeasured("a function, not an operation")
        degree, _ = self.sum(call.arguments[0])
        shift = self.known.maps.get(call.name, self.known.maps.get(call.letter))
        if shift is None and call.upper == "*":
            shift = ZERO
        if shift is None:
            symbol = f"|{call.letter}|"
            self.unknown[symbol] = call.name
            shift = Polynomial.symbol(symbol)
        return degree + shift, "class"


def _joined(left: str, right: str) -> str:
    if "class" in (left, right):
        return "class"
    return "operation" if "operation" in (left, right) else "scalar"


def is_zero(product: Product) -> bool:
    """Whether a product is a literal 0."""
    return any(isinstance(factor, Number) and factor.value == 0 for factor in product.factors)


def _between(product: Product, at: int) -> Polynomial:
    """What the ellipsis in Sq^{2^{j-1}} … Sq^2 Sq^1 stands for: halving indices between its neighbours."""
    before = product.factors[at - 1] if at else None
    after = product.factors[at + 1] if at + 1 < len(product.factors) else None
    if not (isinstance(before, Operation) and isinstance(after, Operation) and before.head == after.head == "Sq"):
        raise Unmeasured("an ellipsis")
    first = polynomial_of(before.upper[0]) if len(before.upper) == 1 else None
    last = polynomial_of(after.upper[0]) if len(after.upper) == 1 else None
    if first is None or last is None or not _is_power_of_two(first) or not _is_power_of_two(last):
        raise Unmeasured("an ellipsis")
    return first - last.scaled(2)


def _is_power_of_two(value: Polynomial) -> bool:
    constant = value.constant
    if constant is not None:
        return isinstance(constant, int) and constant > 0 and constant & (constant - 1) == 0
    return len(value.terms) == 1 and len(value.terms[0][0]) == 1 and value.terms[0][0][0].startswith("2^{")


# --- sums with bound variables ------------------------------------------------------------------


def own_variables(bounds: Bounds) -> tuple[str, ...]:
    """The variables that a sum binds: with limits its first, with conditions those that all stand on one side of an
    equation.
    """
    if bounds.lower is not None or not bounds.conditions:
        return bounds.variables
    for condition in bounds.conditions:
        if condition.sign == "=" and condition.left is not None and condition.right is not None:
            left, right = polynomial_of(condition.left), polynomial_of(condition.right)
            if left is not None and right is not None:
                bigger = left if len(left.symbols) >= len(right.symbols) else right
                return tuple(name for name in bounds.variables if name in bigger.symbols)
    alone = [
        str(side.parts[0])
        for condition in bounds.conditions
        for side in (condition.left, condition.right)
        if side is not None and side.kind == "name"
    ]
    return (max(alone, key=alone.count),) if alone else bounds.variables


def solved(bounds: Bounds, body: Polynomial) -> dict[str, Polynomial]:
    """A substitution that puts the equations under a sum sign into the degree of its body."""
    found: dict[str, Polynomial] = {}
    own = own_variables(bounds)
    for condition in bounds.conditions:
        solution = solve(condition, [name for name in own if name in body.symbols and name not in found])
        if solution is not None:
            found[solution[0]] = solution[1]
    return found


def solve(condition: Condition, names: list[str]) -> tuple[str, Polynomial] | None:
    """An equation solved for the first of some names that it can be solved for."""
    if condition.sign != "=" or condition.left is None or condition.right is None:
        return None
    left, right = polynomial_of(condition.left), polynomial_of(condition.right)
    if left is None or right is None:
        return None
    difference = normal(left - right)
    for name in names:
        split = difference.linear_in(name)
        if split is None:
            continue
        slope = split[0].constant
        if slope in (1, -1):
            return name, split[1].scaled(-slope)
    return None


def equations(conditions: tuple[Condition, ...], fixed: frozenset[str] = frozenset()) -> Mapping[str, Polynomial]:
    """A substitution out of all equations among some conditions; contradictions are left out."""
    found: dict[str, Polynomial] = {}
    for condition in conditions:
        if condition.sign != "=" or condition.left is None or condition.right is None:
            continue
        names = []
        for side in (condition.left, condition.right):
            value = polynomial_of(side)
            if value is not None:
                names += sorted(value.symbols)
        solution = solve(condition, [name for name in names if name not in found and name not in fixed])
        if solution is None:
            continue
        name, value = solution[0], solution[1].substitute(found)
        if name in value.symbols:
            continue
        found = {key: old.substitute({name: value}) for key, old in found.items()}
        found[name] = value
    return found


def normal(value: Polynomial) -> Polynomial:
    """I_+ is |I|."""
    renamed = {
        name: Polynomial.symbol(f"|{name[0]}|") for name in value.symbols if len(name) == 3 and name.endswith("_+")
    }
    return value.substitute(renamed)
