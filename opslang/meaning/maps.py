"""Maps of spaces, as far as cohomology sees them: where each class of the target goes.  Knows expressions, no engine.

A pull-back is a map of rings that commutes with every operation, so that it replaces the classes of an expression by
their images
and touches nothing else.
"""

from __future__ import annotations

from collections.abc import Callable

from attrs import define, field

from opslang.ir import tree as ir
from opslang.ir.tree import Class
from opslang.meaning.indices import bounded
from opslang.meaning.value import NONE, Value, cls
from opslang.spaces.space import SpaceValue


@define
class MapValue:
    """A map: its name, its spaces, the prime at which it was given, and the image of each class of the target.

    `image` may raise Refusal where it was not said where a class goes.
    """

    name: str
    source: SpaceValue
    target: SpaceValue
    prime: int
    image: Callable[[Class], Value]

    @property
    def text(self) -> str:
        """`f : X -> Y`."""
        return f"{self.name} : {self.source.text} -> {self.target.text}"


def pulled_back(value: Value, image: Callable[[Class], Value], prime: int) -> Value:
    """A class with each of its classes replaced by the image."""
    walk = _Substitution(image, prime)
    tree = walk.tree(value.cls)
    return cls(tree, NONE.union(*[found.classes for found in walk.images.values()]))


@define
class _Substitution:
    """One walk; shared parts are replaced once."""

    image: Callable[[Class], Value]
    prime: int
    images: dict[Class, Value] = field(factory=dict)
    _done: dict[int, ir.Cls] = field(factory=dict)

    def tree(self, tree: ir.Cls) -> ir.Cls:
        """The expression with its classes replaced."""
        found = self._done.get(id(tree))
        if found is None:
            found = self._done[id(tree)] = self._replaced(tree)
        return found

    def _replaced(self, tree: ir.Cls) -> ir.Cls:
        match tree:
            case ir.Fundamental():
                value = self.images.get(tree.of)
                if value is None:
                    value = self.images[tree.of] = self.image(tree.of)
                return value.cls
            case ir.Unit():
                return tree
            case ir.Cup():
                factors = tuple([self.tree(factor) for factor in tree.factors])
                return ir.Cup(factors, tree.degree, bounded(sum([f.top for f in factors]), tree.span), tree.span)
            case ir.ClassSum():
                terms = tuple([(c, self.tree(term)) for c, term in tree.terms])
                return ir.ClassSum(terms, tree.degree, max([t.top for _, t in terms], default=tree.top), tree.span)
            case ir.ClassPower():
                base = self.tree(tree.base)
                return ir.ClassPower(
                    base, tree.exponent, tree.degree, bounded(base.top * tree.exponent, tree.span), tree.span
                )
            case ir.Apply():
                argument = self.tree(tree.argument)
                top = bounded(tree.top - tree.argument.top + argument.top, tree.span)
                return ir.Apply(tree.op, argument, tree.degree, top, tree.span)
            case ir.HigherBockstein():
                argument = self.tree(tree.argument)
                return ir.HigherBockstein(tree.k, argument, tree.degree, argument.top + 1, tree.span)
            case ir.Total():
                argument = self.tree(tree.argument)
                return ir.Total(argument, tree.degree, bounded(argument.top * self.prime, tree.span), tree.span)
