"""Named spaces by their text, and two rings given by hand, for the tests of the laws."""

from __future__ import annotations

from attrs import frozen

from opslang.ground.source import Source
from opslang.ir.tree import Class
from opslang.meaning.scope import Scope
from opslang.meaning.statements import on
from opslang.spaces.family import Family, Polynomial, Rule
from opslang.spaces.space import Localised
from opslang.syntax.parser import parse


def localised(text: str, p: int) -> Localised:
    """A space at a prime."""
    statement, found = parse(Source("test", f"on {text}"))
    assert statement is not None and not found, (text, found)
    scope = Scope(p)
    on(statement, scope)  # type: ignore[arg-type]
    here = scope.localised()
    assert here is not None
    return here


def space(text: str, p: int) -> Family:
    """A single named space at a prime."""
    (family,) = localised(text, p).families
    return family


def classes(text: str, p: int, to: int) -> tuple[Class, ...]:
    """Its generators."""
    return space(text, p).classes(p, to)


@frozen
class ByHand(Family):
    """A ring with two generators and relations whose leading monomials are products."""

    degree: int
    names_of: tuple[str, str]

    @property
    def text(self) -> str:
        return f"a ring on {self.names_of[0]}, {self.names_of[1]}"

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        return tuple([Class(name, None, 0, self.degree, 0, 0, self) for name in self.names_of])

    def rules(self, prime: int) -> tuple[Rule, ...]:
        a, b = self.classes(prime, self.degree)
        square: Polynomial = ((1, ((b, 2),)),)
        if prime == 2:
            return ((((a, 1), (b, 1)), square),)
        # b a = 0, written against the order, and a relation on both orders of even classes
        c = Class("c", None, 0, 2 * self.degree, 0, 0, self)
        return (((b, 1), (a, 1)), ((1, ((c, 1),)),)), (((a, 1), (c, 1)), ())


PAIR = ByHand(2, ("a", "b"))
SIGNED = ByHand(1, ("s", "t"))
