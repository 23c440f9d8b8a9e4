"""Fundamental classes: which space K(G, n) a draft means by iota_n.  Knows the spaces named around it."""

from __future__ import annotations

from attrs import evolve

from opslang.lint.context.facts import Spot
from opslang.lint.context.sayings import degree_written
from opslang.lint.context.setting import Settings
from opslang.lint.context.spaces import SpaceSaid, mentioned
from opslang.lint.model import ClassFact, ClassName
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import polynomial_of


def fundamental(name: ClassName, fact: ClassFact | None, spot: Spot, settings: Settings) -> ClassFact | None:
    """The fundamental class of a degree: its coefficients are those of the nearest space K(G, n) of that degree."""
    degree = _index_degree(name)
    if degree is None:
        return fact
    same, here, section = settings.spaces_near(spot)
    near = next((space for space in same if _fits(space, degree)), None)
    if near is not None and near.group is not None:
        return _of_space(degree, near)
    if fact is not None and (fact.order is not None or fact.order_text):
        return fact if fact.degree is not None else evolve(fact, degree=degree)
    for spaces in (here, section):
        fitting = [space for space in spaces if space.kind == "K" and _fits(space, degree)]
        groups = {space.group for space in fitting}
        if len(groups) == 1:
            return _of_space(degree, fitting[0])
        if groups:
            return ClassFact(degree, None, "", "several", "several spaces of this degree are named")
    general = [space for space in (*here, *section) if space.kind == "K"]
    if len({space.group for space in general}) == 1:
        return _of_space(degree, general[0])
    return fact or ClassFact(degree, None, "", "", "the notation of fundamental classes")


def at_prime(fact: ClassFact, prime: int | None) -> ClassFact:
    """The fact, unless its space belongs to another prime."""
    spaces = mentioned(fact.space)
    own = spaces[0].group.prime if len(spaces) == 1 and spaces[0].group is not None else None
    return fact if own is None or prime is None or own == prime else evolve(fact, space="a space at another prime")


def _of_space(degree: Polynomial, space: SpaceSaid) -> ClassFact:
    """The fundamental class of that degree with the coefficients of a space."""
    assert space.group is not None
    text = (
        space.text
        if space.kind == "K" and _fits(space, degree)
        else f"K({space.text.partition(',')[0].removeprefix('K(')},{degree})"
    )
    return ClassFact(degree, space.group.order, space.group.text, text, "the space named beside it")


def _fits(space: SpaceSaid, degree: Polynomial) -> bool:
    if space.kind == "group":
        return True
    return space.kind == "K" and space.group is not None and degree_written(space.degree) == degree


def _index_degree(name: ClassName) -> Polynomial | None:
    return polynomial_of(name.index[0]) if len(name.index) == 1 else None
