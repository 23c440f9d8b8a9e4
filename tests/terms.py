"""Small terms, and their values on polynomials, for the tests of the laws."""

from __future__ import annotations

from collections.abc import Mapping
from random import Random
from typing import Any

from random_trees import integral, random_degrees

from opslang.ir.term import STABLE, Apply, Element, Factor, Monomial
from opslang.ir.tree import Class
from opslang.witness import milnor
from opslang.witness.polynomial import Polynomial, Ring, add

Images = Mapping[Class, Polynomial]

A, X, Y, W = (Class(name, None, 0, degree) for name, degree in (("a", 1), ("x", 2), ("y", 3), ("w", 4)))
Z4 = Class("z", None, 0, 4, 0)
T = Class("t", None, 0, 1, 0)
U, V = Class("u", None, 0, 1, 2), Class("v", None, 0, 2, 2)
S = Class("s", None, 0, 2, 3)
CLASSES = (A, X, Y, W, Z4, T, U, V, S)


def product(*blocks: tuple[Factor, int]) -> Monomial:
    """Blocks that are in canonical order already."""
    return Monomial(blocks)


def of(factor: Factor) -> Monomial:
    """A factor as a monomial."""
    return Monomial(((factor, 1),))


def image(rng: Random, ring: Ring, target: Class) -> Polynomial:
    """Where a map sends a class: those of order 1 to slots of order 1, so that higher Bocksteins are derivations."""
    p = ring.prime
    if target.order != 1:
        f = integral(rng, ring, target.degree)
        slots = [slot for slot, order in enumerate(ring.orders) if order == target.order and order > 1]
        for slot in slots:
            f = add(f, ring.class_in(slot, target.degree), p, rng.randint(1, p)) if target.degree % 2 else f
            if target.degree % 2 == 0 and len(slots) > 1:
                pair = ring.product(ring.class_in(slots[0], 1), ring.class_in(slots[1], target.degree - 1))
                f = add(f, pair, p, rng.randint(1, p))
        return f
    f = {}
    usable = [slot for slot, order in enumerate(ring.orders) if order == 1]
    for _ in range(3):
        degrees = random_degrees(rng, target.degree, usable, ring.orders, lambda slot: False)
        f = add(f, ring.monomial(*degrees), p, rng.randint(1, p))
    return f


def images(rng: Random, p: int) -> tuple[Ring, Images]:
    """A product of spaces and where each of `CLASSES` goes."""
    ring = Ring(p, (1, 1, 1, 2, 2, 3, 3, 0))
    return ring, {target: image(rng, ring, target) for target in CLASSES}


def _letter(key: str, index: Any, f: Polynomial, ring: Ring) -> Polynomial:
    p = ring.prime
    if key in ("Sq", "P"):
        return ring.act((index,), f)
    if key == "beta":
        return ring.bockstein(index, f)
    if key == "total":
        steps = range(1 + max((sum(m) for m in f), default=0))
        parts = [ring.raise_by(i if p == 2 else 2 * i * (p - 1), f) for i in steps]
        total: Polynomial = {}
        for part in parts:
            total = add(total, part, p)
        return total
    total = {}
    for word, c in milnor.admissible(in_milnor((key, index), p), p).items():
        total = add(total, ring.act(word, f), p, c)
    return total


def in_milnor(letter: tuple[str, Any], p: int) -> milnor.Milnor:
    """A letter of the algebra in Milnor's basis."""
    key, index = letter
    if key == "Q":
        return milnor.q(index, p)
    if key != "chi":
        return milnor.letter(0 if key == "beta" else index, p)
    whole: milnor.Milnor = {milnor.UNIT: 1}
    for inner in index:
        whole = milnor.product(whole, in_milnor(inner, p), p)
    total: milnor.Milnor = {}
    for word, c in milnor.admissible(whole, p).items():
        total = milnor.add(total, milnor.conjugate(word, p), p, scale=c)
    return total


def value_of_factor(factor: Factor, ring: Ring, where: Images) -> Polynomial:
    """The pull-back of a factor, by Cartan's formula and Milnor's product alone."""
    if isinstance(factor, Apply):
        return _letter(factor.key, factor.index, value_of_monomial(factor.argument, ring, where), ring)
    return dict(where[factor])


def value_of_monomial(monomial: Monomial, ring: Ring, where: Images) -> Polynomial:
    """The pull-back of a product."""
    result: Polynomial = {(0,) * len(ring.orders): 1}
    for factor, exponent in monomial.blocks:
        value = value_of_factor(factor, ring, where)
        for _ in range(exponent):
            result = ring.product(result, value)
    return result


def value_of_element(element: Element, ring: Ring, where: Images) -> Polynomial:
    """The pull-back of a sum."""
    total: Polynomial = {}
    for monomial, c in element.terms:
        total = add(total, value_of_monomial(monomial, ring, where), ring.prime, c)
    return total


def is_operation(element: Element) -> bool:
    """Whether every term is a word applied to the universal stable class."""
    found = False
    for monomial, _ in element.terms:
        factor = monomial.blocks[0][0]
        while isinstance(factor, Apply):
            factor = factor.argument.blocks[0][0]
        found = factor == STABLE
    return found
