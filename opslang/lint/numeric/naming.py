"""Classes of a draft under names of their own, so that a session cannot mistake them for anything else.

Two classes are one where they are spelled alike, with the same argument.  The class keeps the author's spelling for
what is printed."""

from __future__ import annotations

from collections.abc import Mapping

from attrs import define, evolve, field

from opslang.lint.model import (
    BigSum,
    Call,
    ClassFact,
    ClassName,
    Conjugate,
    Factor,
    Group,
    Known,
    Power,
    Product,
    Sum,
    spelled,
)
from opslang.lint.symbolic.values import value_of


class Unnamed(Exception):
    """A class of which too little is known: what is missing."""


@define
class Naming:
    """Names given in one statement; `kept` are names that stay as they are, since the author declared them."""

    known: Known
    values: Mapping[str, int]
    kept: frozenset[str] = frozenset()
    given: dict[tuple[str, str], tuple[str, ClassName]] = field(factory=dict)

    def renamed(self, tree: Sum) -> Sum:
        """The tree with the names changed."""
        return Sum(tuple([(sign, self._product(product)) for sign, product in tree.terms]), tree.at)

    def _product(self, product: Product) -> Product:
        return evolve(product, factors=tuple([self._factor(factor) for factor in product.factors]))

    def _factor(self, factor: Factor) -> Factor:
        match factor:
            case ClassName():
                return self._name(factor)
            case Group() | Conjugate():
                return evolve(factor, body=self.renamed(factor.body))
            case Power():
                return evolve(factor, base=self._factor(factor.base))
            case BigSum():
                return evolve(factor, body=self._product(factor.body))
            case Call():
                raise Unnamed(f"what {factor.name} does")
        return factor

    def _name(self, name: ClassName) -> ClassName:
        spelling = self.spelling(name)
        if spelling in self.kept:
            return name
        key = (spelling, name.family)
        if key not in self.given:
            self.given[key] = (f"#{len(self.given)}", name)
        return ClassName(self.given[key][0], at=name.at)

    def spelling(self, name: ClassName) -> str:
        """The spelling with numbers for the symbols in the index."""
        parts = []
        for index in name.index:
            value = value_of(index, self.values)
            parts.append(spelled(index) if value is None else str(value))
        below = ",".join(parts)
        return (
            name.letter + (f"_{below}" if below else "") + "'" * name.primes + (f"^{name.label}" if name.label else "")
        )

    def fact(self, name: ClassName) -> ClassFact:
        """What is known of a class.  Raises Unnamed where its degree is not."""
        known = self.known.classes.get(self.spelling(name)) or self.known.fact(name)
        if known is not None and known.degree is not None:
            return known
        value = value_of(name.index[0], self.values) if len(name.index) == 1 else None
        for spelling, fact in self.known.classes.items():
            same = spelling.startswith(name.letter + "_") and fact.degree is not None
            if same and name.letter == "iota" and fact.degree is not None and fact.degree.at(self.values) == value:
                return fact
        family = self.known.families.get(name.letter)
        if family is not None and len(name.index) == 1:
            index = value_of(name.index[0], self.values)
            if isinstance(index, int):
                from opslang.lint.symbolic.polynomial import Polynomial

                degree = family.degree.substitute({"index": Polynomial.of(index)})
                space = "a fibration" if name.letter == "iota" and self.known.rules else family.space
                return ClassFact(degree, family.order, "", space, family.source)
        raise Unnamed(f"the degree of {self.spelling(name)}")
