"""Pull-backs in expressions, and which space the classes of an expression live in."""

from __future__ import annotations

from typing import TYPE_CHECKING

from attrs import evolve

from opslang.ground.source import Span
from opslang.meaning.canonical import Arithmetic
from opslang.meaning.characteristic import Characteristic
from opslang.meaning.maps import MapValue, pulled_back
from opslang.meaning.scope import spelled
from opslang.meaning.value import Value, as_sort
from opslang.report.diagnostic import Refusal, error
from opslang.spaces.space import SpaceValue
from opslang.syntax import surface as sf

if TYPE_CHECKING:
    from opslang.meaning.lower import Lowering


def arithmetic(lowering: Lowering) -> Arithmetic:
    """Sums and products of canonical classes."""
    assert lowering.evaluate is not None
    return Arithmetic(lowering.scope.prime, lowering.evaluate)


def live_in(lowering: Lowering, space: SpaceValue, span: Span) -> None:
    """Note that classes of a space occur; Refusal where there are classes of another one.

    A space and a product that begins with it go together: the classes are pulled back along the projection.
    """
    here = lowering.home or (lowering.scope.space if lowering.chosen else None)
    if here is not None:
        common = min(len(here.factors), len(space.factors))
        if here.factors[:common] != space.factors[:common]:
            message = f"this is a class of {space.text}, and the expression has classes of {here.text}"
            raise Refusal(error("classes-of-different-spaces", message, span, "pull them back to one space"))
        space = max(here, space, key=lambda one: len(one.factors))
    lowering.home = space


def map_named(lowering: Lowering, name: str, span: Span) -> MapValue:
    """The map of a name.  Refusal where there is none."""
    found = lowering.scope.maps.get(name)
    if found is None:
        known = ", ".join(lowering.scope.maps) or "none so far"
        help = f"maps named in this script: {known}"
        raise Refusal(error("unknown-map", f"no map is called {name}", span, help))
    return found


def made(lowering: Lowering, factor: sf.PullBack | sf.Construction | Characteristic) -> Value:
    """A class that is made of others along a map, a bundle or a fibration."""
    from opslang.meaning import bundle_classes, looping

    if isinstance(factor, sf.PullBack):
        return pull_back(lowering, factor)
    if isinstance(factor, sf.Construction):
        return looping.value(lowering, factor)
    return bundle_classes.value(lowering, factor)


def pull_back(lowering: Lowering, factor: sf.PullBack) -> Value:
    """`f^*(…)`: the class in the brackets is one of the target of f, its pull-back one of the source.  Refusal."""
    f = map_named(lowering, factor.name, factor.span)
    value = in_space(lowering, f.target).sum(factor.body)
    if value.sort == "operation":
        message = f"{f.name}^* pulls back classes, and this is an operation"
        raise Refusal(error("sorts-differ", message, factor.body.span))
    value = as_sort(value, "class", factor.span)
    belongs(value, f.target, lowering.scope.prime, f"the target of {f.name}", factor.body.span)
    live_in(lowering, f.source, factor.span)
    return pulled_back(value, f.image, lowering.scope.prime)


def in_space(lowering: Lowering, space: SpaceValue) -> Lowering:
    """The lowering of a part of the statement that speaks of another space."""
    return evolve(lowering, scope=evolve(lowering.scope, space=space), home=None, chosen=False)


def total_class(lowering: Lowering, space: SpaceValue | None, body: sf.Sum) -> Value:
    """A class of a space whose parts may have different degrees, as total classes do."""
    inner = lowering if space is None else in_space(lowering, space)
    value = as_sort(inner.sum(body, mixed_degrees=True), "class", body.span)
    lowering.diagnostics[:] = [d for d in lowering.diagnostics if d.name != "inhomogeneous-sum"]
    return value


def belongs(value: Value, space: SpaceValue, prime: int, what: str, span: Span) -> None:
    """Refusal where an expression has a class that is not one of the space."""
    from opslang.spaces.space import localise

    there = localise(space, prime)
    for of in value.classes:
        if of not in there.classes and of.ring not in there.families:
            name = spelled((of.letter, of.index, of.primes))
            raise Refusal(error("no-such-class", f"{name} is not a class of {space.text}, {what}", span))
