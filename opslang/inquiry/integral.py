"""Whether a mod p class is seen to be the reduction of an integral class, or of one with coefficients Z/p^k.

A class with a nonzero Bockstein is none.  One is seen to be a reduction where all p-torsion of H^*(X; Z) has order p
and its
Bockstein is 0 (the Bockstein sequence), and where it is a sum of Bocksteins and of products of pieces that lift
(`tables/bockstein.py`: p-th
powers of even degree lift one step further, so that the square of a Z/2 class is the reduction of its Pontryagin
square).
"""

from __future__ import annotations

from typing import Any

from opslang.ground.arith import p_part
from opslang.inquiry.linear import Span
from opslang.ir.measure import element_degree
from opslang.ir.tree import ClassElement, Monomial
from opslang.meaning.canonical import Arithmetic
from opslang.spaces.characteristic import Classifying, Pontryagin
from opslang.spaces.family import Family
from opslang.spaces.projective import Lens, Projective
from opslang.spaces.space import Factor, Localised, SpaceValue, class_order, localise
from opslang.spaces.spin import Spin
from opslang.tables.bockstein import lifts
from opslang.tables.engine import Engine
from opslang.tables.generators import basis


def _simple_family(family: Family, prime: int) -> bool:
    """Whether all p-torsion of the integral cohomology has order p.  Common practice; BO(n), BSO(n): Feshbach 1983."""
    if isinstance(family, Lens):
        return p_part(family.modulus, prime) <= 1
    return isinstance(family, (Classifying, Pontryagin, Projective)) and not isinstance(family, Spin)


def _simple(space: SpaceValue, here: Localised, prime: int) -> bool:
    for factor in space.factors:
        if isinstance(factor, Factor):
            free = factor.order == 0 and factor.degree <= 2
            line = factor.degree == 1 and p_part(factor.order, prime) <= 1 if factor.order else False
            absent = class_order(factor.order, prime, factor.local) is None
            if not (free or line or absent):
                return False
    return all(_simple_family(family, prime) for family in here.families)


def reason_against(element: ClassElement, order: int, space: SpaceValue, a: Arithmetic, engine: Engine) -> str | None:
    """Why a class of a space is not seen to be a reduction from Z (order 0) or Z/p^order; None where it is."""
    if not element.terms or order == 1:
        return None
    p = a.prime
    name = "Sq^1" if p == 2 else "beta"
    group = "an integral class" if order == 0 else f"a class with coefficients Z/{p**order}"
    if a.applied(1 if p == 2 else 0, element).terms:
        return f"it is to be the reduction of {group}, and {name} of it is not 0"
    here = localise(space, p)
    if _simple(space, here, p):
        return None
    degree = element_degree(element)
    if degree is not None and _in_span(element, degree, order, here, a, engine):
        return None
    return f"it is to be the reduction of {group}; {name} of it is 0, but it is not seen to be one"


def _in_span(element: ClassElement, degree: int, order: int, here: Localised, a: Arithmetic, engine: Engine) -> bool:
    p = a.prime
    ring: Any = engine.ring(2 * degree + 2)
    span: Span[Monomial] = Span(p)
    for monomial in basis(p, here, degree, engine.budget):
        packed = ring.unit()
        for generator, exponent in monomial:
            packed = ring.multiply(packed, ring.power(ring.single(ring.place(generator)), exponent))
        if all(lifts(ring, one, order) for one in packed):
            span.add({monomial: 1})
    if not span.reduced(dict(element.terms)):
        return True
    for monomial in basis(p, here, degree - 1, engine.budget):
        engine.budget.spend(len(monomial) + 1)
        span.add(dict(a.applied(1 if p == 2 else 0, ClassElement(p, ((monomial, 1),))).terms))
    return not span.reduced(dict(element.terms))
