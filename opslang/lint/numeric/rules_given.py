"""Rules and conventions of a draft, worked into a closed expression before it is computed.

A transgression d with `d iota_4 = Sq^2 iota_3` is linear and commutes with the operations, and z^2 is Sq^|z| z; so d
of a word on iota_4 is that word on Sq^2 iota_3 (Serre 1951, McCleary 2001, chapter 6).  Conventions: whether Q_0 or
Q_1 is Sq^1, whether P^i counts number or degree.  A class with `Sq^1 u = 0` obeys the same relations of primary
operations as the reduction of a Z/4 class."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from attrs import evolve, frozen

from opslang.lint.context.names import names_of
from opslang.lint.model import (
    BigSum,
    Call,
    ClassName,
    Conjugate,
    Factor,
    Group,
    Index,
    Known,
    Number,
    Operation,
    Power,
    Product,
    Rule,
    Sum,
)
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import polynomial_of, value_of

OF_THE_SPACE = "the space"
"""The source of a rule that the space gives and not the author."""

Change = Callable[[Factor], "Factor | None"]


class Unfit(Exception):
    """The expression cannot be worked out; the message says why."""


class WrongPage(Exception):
    """A differential d_r on a class that does not transgress by it: (the index written, the one it should be)."""

    def __init__(self, written: int, wanted: int) -> None:
        super().__init__(written, wanted)
        self.written, self.wanted = written, wanted


def changed(tree: Sum, change: Change) -> Sum:
    """The tree with every factor replaced for which `change` gives another one."""
    return Sum(tuple([(sign, _product(product, change)) for sign, product in tree.terms]), tree.at)


def _product(product: Product, change: Change) -> Product:
    return evolve(product, factors=tuple([_factor(factor, change) for factor in product.factors]))


def _factor(factor: Factor, change: Change) -> Factor:
    new = change(factor)
    if new is not None:
        return new
    match factor:
        case Group() | Conjugate():
            return evolve(factor, body=changed(factor.body, change))
        case Power():
            return evolve(factor, base=_factor(factor.base, change))
        case BigSum():
            return evolve(factor, body=_product(factor.body, change))
        case Call():
            return evolve(factor, arguments=tuple([changed(argument, change) for argument in factor.arguments]))
    return factor


# --- conventions --------------------------------------------------------------------------------


def conventional(tree: Sum, known: Known, numbers: Mapping[str, int], first_primitive: int) -> Sum:
    """The tree in the conventions of scripts; `first_primitive` is the index of the primitive that is Sq^1."""
    by_degree = known.conventions.get("P") == "degree" and known.prime is not None

    def change(factor: Factor) -> Factor | None:
        if not isinstance(factor, Operation):
            return None
        if factor.head == "Q" and factor.lower is not None and first_primitive:
            k = value_of(factor.lower, numbers)
            return None if not isinstance(k, int) else evolve(factor, lower=Index("number", (k - 1,), factor.at))
        if factor.head == "P" and by_degree and len(factor.upper) == 1 and known.prime is not None:
            i = value_of(factor.upper[0], numbers)
            if not isinstance(i, int):
                return None
            step = 2 * (known.prime - 1)
            if i % step:
                return Number(0, factor.at)
            return evolve(factor, upper=(Index("number", (i // step,), factor.at),))
        return None

    return changed(tree, change)


def has_primitive(tree: Sum) -> bool:
    """Whether a Q_k occurs."""
    found = []
    changed(tree, lambda factor: found.append(factor) if isinstance(factor, Operation) and factor.head == "Q" else None)
    return bool(found)


# --- transgression ------------------------------------------------------------------------------


@frozen
class Transgression:
    """The rules for one map at some numbers; `degree` measures a class."""

    known: Known
    numbers: Mapping[str, int]
    degree: Callable[[ClassName], int]

    def worked_in(self, tree: Sum) -> Sum:
        """The tree with the map carried out wherever it is applied.  Raises Unfit, WrongPage."""
        return changed(tree, self._call)

    def applied(self, tree: Sum, letter: str) -> Sum:
        """The map of that letter applied to the tree."""
        return Sum(tuple([(sign, self._term(product, letter)) for sign, product in tree.terms]), tree.at)

    def _call(self, factor: Factor) -> Factor | None:
        if not isinstance(factor, Call):
            return None
        if len(factor.arguments) != 1 or not any(_letter(rule) == factor.letter for rule in self.known.rules):
            raise Unfit(f"what {factor.name} does")
        argument = self.worked_in(factor.arguments[0])
        image = Group(self.applied(argument, factor.letter), "(", factor.at)
        if len(factor.lower) == 1:
            self._page(factor, argument)
        return image

    def _page(self, factor: Call, argument: Sum) -> None:
        page = value_of(factor.lower[0], self.numbers)
        if isinstance(page, int):
            wanted = self._measure_sum(argument) + 1
            if page != wanted:
                raise WrongPage(page, wanted)

    def _term(self, product: Product, letter: str) -> Product:
        *front, last = product.factors
        if not all(isinstance(factor, (Operation, Number)) for factor in front):
            raise Unfit(f"what {letter} does to products")
        return evolve(product, factors=(*front, self._image(last, letter)))

    def _image(self, factor: Factor, letter: str) -> Factor:
        match factor:
            case Number(value=0):
                return factor
            case ClassName():
                return Group(self._rule(factor, letter), "(", factor.at)
            case Group():
                return Group(self.applied(factor.body, letter), "(", factor.at)
            case Power():
                return self._power(factor, letter)
        raise Unfit(f"what {letter} does here")

    def _power(self, factor: Power, letter: str) -> Factor:
        exponent = value_of(factor.exponent, self.numbers)
        if not isinstance(exponent, int) or exponent < 1 or exponent & (exponent - 1) or self.known.prime != 2:
            raise Unfit(f"what {letter} does to this power")
        degree = self._measure(factor.base)
        image = self._image(factor.base, letter)
        while exponent > 1:
            square = Operation("Sq", (Index("number", (degree,), factor.at),), at=factor.at)
            image = Group(Sum(((1, Product((square, image), ("", ""), factor.at)),), factor.at), "(", factor.at)
            degree *= 2
            exponent //= 2
        return image

    def _rule(self, name: ClassName, letter: str) -> Sum:
        for rule in reversed(self.known.rules):
            if _letter(rule) != letter:
                continue
            values = self._matched(_of(rule), name)
            if values is not None:
                return changed(rule.right, lambda factor, v=values: _put(factor, v))  # type: ignore[misc]
        raise Unfit(f"what {letter} does to {name.spelling}")

    def _matched(self, pattern: ClassName | None, name: ClassName) -> dict[str, int] | None:
        """The numbers for the symbol in a rule's index that make its class this one."""
        if pattern is None or pattern.letter != name.letter or pattern.primes != name.primes:
            return None
        if len(pattern.index) != len(name.index) or len(name.index) > 1:
            return None
        if not name.index:
            return {}
        wanted, written = value_of(name.index[0], self.numbers), polynomial_of(pattern.index[0])
        if not isinstance(wanted, int) or written is None:
            return None
        if written.constant is not None:
            return {} if written.constant == wanted else None
        symbols = sorted(written.symbols)
        parts = written.linear_in(symbols[0]) if len(symbols) == 1 else None
        if parts is None or parts[0] != Polynomial.of(1) or not isinstance(parts[1].constant, int):
            return None
        return {symbols[0]: wanted - parts[1].constant}

    def _measure_sum(self, tree: Sum) -> int:
        return self._measure_product(tree.terms[0][1])

    def _measure_product(self, product: Product) -> int:
        return sum(self._measure(factor) for factor in product.factors)

    def _measure(self, factor: Factor) -> int:
        match factor:
            case Operation(head="Sq"):
                degrees = [value_of(index, self.numbers) for index in factor.upper]
                if all(isinstance(degree, int) for degree in degrees) and not factor.bound:
                    return sum(degree for degree in degrees if isinstance(degree, int))
            case ClassName():
                return self.degree(factor)
            case Group():
                return self._measure_sum(factor.body)
            case Number():
                return 0
            case Power():
                exponent = value_of(factor.exponent, self.numbers)
                if isinstance(exponent, int):
                    return exponent * self._measure(factor.base)
        raise Unfit("a degree")


def _letter(rule: Rule) -> str:
    call = _call_of(rule)
    return call.letter if call is not None else ""


def _call_of(rule: Rule) -> Call | None:
    only = rule.left.terms[0][1].factors if len(rule.left.terms) == 1 else ()
    return only[0] if len(only) == 1 and isinstance(only[0], Call) else None


def _of(rule: Rule) -> ClassName | None:
    """The class that the map of a rule is applied to."""
    call = _call_of(rule)
    if call is None or len(call.arguments) != 1 or len(call.arguments[0].terms) != 1:
        return None
    factors = call.arguments[0].terms[0][1].factors
    return factors[0] if len(factors) == 1 and isinstance(factors[0], ClassName) else None


def transgresses(rule: Rule) -> str:
    """The letter of the map, where a rule is one of a map on a class; else the empty text."""
    return _letter(rule) if _of(rule) is not None else ""


def _put(factor: Factor, values: Mapping[str, int]) -> Factor | None:
    """Numbers for the symbols of a rule's right side."""
    match factor:
        case ClassName() if factor.index:
            return evolve(factor, index=tuple([_number(index, values) for index in factor.index]))
        case Operation() if factor.upper:
            return evolve(factor, upper=tuple([_number(index, values) for index in factor.upper]))
    return None


def _number(index: Index, values: Mapping[str, int]) -> Index:
    value = value_of(index, values)
    return Index("number", (value,), index.at) if isinstance(value, int) else index


# --- classes killed by the Bockstein ------------------------------------------------------------


def killed(known: Known) -> frozenset[str]:
    """The spellings of the classes on which a rule of the draft says that Sq^1 vanishes."""
    found = set()
    for rule in known.rules:
        if len(rule.left.terms) != 1 or not _is_zero(rule.right):
            continue
        factors = rule.left.terms[0][1].factors
        if len(factors) == 2 and isinstance(factors[0], Operation) and isinstance(factors[1], ClassName):
            first = factors[0]
            square = first.head == "Sq" and len(first.upper) == 1 and first.upper[0].number == 1
            if square or (first.head == "beta" and first.lower is None and not first.upper):
                found.add(factors[1].spelling)
    return frozenset(found)


def _is_zero(side: Sum) -> bool:
    factors = side.terms[0][1].factors if len(side.terms) == 1 else ()
    return len(factors) == 1 and isinstance(factors[0], Number) and factors[0].value == 0


def _is_characteristic(name: ClassName) -> bool:
    return name.letter == "iota" or (name.letter in ("w", "v", "c", "bar w") and bool(name.index))


def defined(rule: Rule) -> tuple[ClassName, Sum] | None:
    """The name and what it stands for, where a rule is a definition: `v = beta u`, `beta_2 x = y`."""
    for name_side, side in ((rule.left, rule.right), (rule.right, rule.left)):
        factors = name_side.terms[0][1].factors if len(name_side.terms) == 1 else ()
        if len(factors) != 1 or not isinstance(factors[0], ClassName) or _is_characteristic(factors[0]):
            continue
        name = factors[0]
        used = names_of(side)
        if name_side.terms[0][0] == 1 and used and name.spelling not in {one.spelling for one in used}:
            return name, side
    return None


def spelled_out(tree: Sum, known: Known) -> Sum:
    """The tree with defined names replaced by what they stand for."""
    for rule in known.rules:
        found = defined(rule)
        if found is not None:
            name, side = found

            def change(factor: Factor, name: ClassName = name, side: Sum = side) -> Factor | None:
                same = isinstance(factor, ClassName) and factor == name
                return Group(side, "(", factor.at) if same else None

            tree = changed(tree, change)
    return tree


def other_rules(known: Known, classes: frozenset[str]) -> list[Rule]:
    """The rules said of these classes that are not worked in."""
    done = killed(known)
    found = []
    for rule in known.rules:
        if transgresses(rule) or defined(rule) is not None:
            continue
        names = {name.spelling for side in (rule.left, rule.right) for name in names_of(side)}
        if names & classes and not names <= done:
            found.append(rule)
    return found
