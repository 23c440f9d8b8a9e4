"""Random typed trees, and their values on polynomials, for the tests that hold the engines against the witness.

A map from a product of the spaces K(Z/p^k, 1) and K(Z, 2) into the space of a tree sends each class of the tree to a
polynomial of the right kind.  Pull-back along it is a ring homomorphism that commutes with every operation, so what is
equal in the source of the tree must be equal as polynomials.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from random import Random
from typing import Any

from opslang.ground.grading import Word, degree
from opslang.ir import tree as ir
from opslang.witness import milnor
from opslang.witness.polynomial import Polynomial, Ring, add

Pullback = Mapping[ir.Class, Polynomial]


# --- trees --------------------------------------------------------------------------------------


def random_word(rng: Random, p: int, letters: int, most: int) -> Word:
    """A word of at most so many letters, each at most so big."""
    return tuple(rng.randint(1 if p == 2 else 0, most) for _ in range(rng.randint(0, letters)))


def random_class(rng: Random, p: int, name: str, biggest: int = 4) -> ir.Class:
    """A fundamental class over F_p, Z or Z/p^k."""
    order = rng.choice((1, 1, 1, 0, 0, 2, 3))
    return ir.Class(name, rng.randint(1, biggest), 0, rng.randint(1, biggest), order)


def surviving_word(rng: Random, p: int, on: int, room: int) -> Word:
    """A word on a class of degree `on` in which no letter vanishes for want of degree."""
    word: Word = ()
    for _ in range(rng.choice((1, 1, 2, 2, 3))):
        step = 1 if p == 2 else 2 * (p - 1)
        most = min(on if p == 2 else on // 2, room // step)
        if p > 2 and room and (most < 1 or rng.random() < 0.3) and 0 not in word[:1]:
            token, shift = 0, 1
        elif most >= 1:
            least = p * max(word[:2], default=0) if rng.random() < 0.6 else 1
            token = rng.randint(min(max(1, least), most), most)
            shift = step * token
        else:
            break
        word, on, room = (token, *word), on + shift, room - shift
    return word


def random_operation(rng: Random, p: int, on: int, room: int) -> ir.Op | None:
    """An operation for a class of degree `on` that adds at most the room; None where nothing fits."""
    for _ in range(20):
        if rng.random() < 0.9:
            word = surviving_word(rng, p, on, room)
        else:
            word = random_word(rng, p, 3, max(1, room // (1 if p == 2 else 2 * (p - 1))))
        d = degree(word, p)
        if not 0 < d <= room:
            continue
        plain = ir.Composite(word, d)
        kind = rng.randrange(12)
        if kind == 0:
            return ir.Chi(plain, d)
        if kind == 1:
            k = rng.randint(0, 2)
            d = 2 ** (k + 1) - 1 if p == 2 else 2 * p**k - 1
            if d <= room:
                return ir.MilnorQ(k, d)
        if kind == 2:
            other = list(word)
            rng.shuffle(other)
            return ir.OpSum(((rng.randint(1, 6), plain), (rng.randint(1, 6), ir.Composite(tuple(other), d))), d)
        if kind == 3 and len(word) > 1:
            parts = tuple(ir.Composite(w, degree(w, p)) for w in (word[:1], word[1:]))
            return ir.Compose(parts, d)
        if kind == 4 and 2 * d <= room and 0 not in word:
            return ir.OpPower(plain, 2, 2 * d)
        return plain
    return None


def random_tree(rng: Random, p: int, classes: tuple[ir.Class, ...], room: int, depth: int = 3) -> ir.Cls:
    """A homogeneous class of degree at most the room (a bare class may be bigger), made of the given classes."""
    kind = rng.choice((0, 0, 1, 1, 2, 3, 4, 4, 5, 6)) if depth else 0
    if kind in (1, 2, 3):
        inner = random_tree(rng, p, classes, room if depth == 1 else room * 2 // 3, depth - 1)
        op = random_operation(rng, p, of_degree(inner), room - of_degree(inner))
        if op is not None and op.degree is not None:
            d = of_degree(inner) + op.degree
            return ir.Apply(op, inner, d, d)
        return inner
    if kind in (4, 5):
        left = random_tree(rng, p, classes, room // 2, depth - 1)
        right = random_tree(rng, p, classes, room - of_degree(left), depth - 1)
        d = of_degree(left) + of_degree(right)
        cup = ir.Cup((left, right), d, d)
        if kind == 4:
            return cup
        other = cup if p == 2 else ir.Cup((right, left), d, d)
        op = random_operation(rng, p, of_degree(left), of_degree(right))
        if op is not None and op.degree == of_degree(right):
            other = ir.Apply(op, left, d, d)
        elif p == 2 and of_degree(left) == of_degree(right):
            other = ir.ClassPower(left, 2, d, d)
        return ir.ClassSum(((rng.randint(1, 6), cup), (rng.randint(1, 6), other)), d, d)
    if kind == 6:
        inner = random_tree(rng, p, classes, room // p, depth - 1)
        exponent = rng.randint(2, max(2, p))
        d = exponent * of_degree(inner)
        return ir.ClassPower(inner, exponent, d, d)
    of = rng.choice(classes)
    leaf = ir.Fundamental(of, of.degree, of.degree)
    if of.order >= 2 and rng.random() < 0.5:
        return ir.HigherBockstein(of.order, leaf, of.degree + 1, of.degree + 1)
    return leaf


def of_degree(tree: ir.Cls) -> int:
    """The degree of a homogeneous tree."""
    assert tree.degree is not None
    return tree.degree


# --- maps ---------------------------------------------------------------------------------------


def random_degrees(
    rng: Random, total: int, slots: list[int], orders: tuple[int, ...], even: Callable[[int], bool]
) -> tuple[int, ...]:
    """Degrees in the given slots with the given sum; in slots where `even` says so, even ones.  May fail: then ()."""
    degrees = [0] * len(orders)
    for _ in range(4 * total):
        slot = rng.choice(slots)
        step = 2 if even(slot) else 1
        if total >= step:
            degrees[slot] += step
            total -= step
    return () if total else tuple(degrees)


def integral(rng: Random, ring: Ring, total: int) -> Polynomial:
    """The reduction of an integral class: products of even degrees, and Bocksteins of classes of order 1."""
    f: Polynomial = {}
    everywhere = list(range(len(ring.orders)))
    plain = [slot for slot in everywhere if ring.orders[slot] == 1]
    for _ in range(3):
        if total % 2 == 0 and rng.random() < 0.7:
            degrees = random_degrees(rng, total, everywhere, ring.orders, lambda slot: True)
            if degrees:
                f = add(f, ring.monomial(*degrees), ring.prime, rng.randint(1, ring.prime))
        elif plain and total > 1:
            degrees = random_degrees(rng, total - 1, plain, ring.orders, lambda slot: False)
            if degrees:
                f = add(f, ring.bockstein(1, ring.monomial(*degrees)), ring.prime, rng.randint(1, ring.prime))
    return f


def random_image(rng: Random, ring: Ring, of: ir.Class) -> Polynomial:
    """A polynomial that the class may be sent to."""
    p, f = ring.prime, {}
    if of.order == 1:
        usable = list(range(len(ring.orders)))
        for _ in range(3):
            degrees = random_degrees(rng, of.degree, usable, ring.orders, lambda slot: ring.orders[slot] == 0)
            if degrees:
                f = add(f, ring.monomial(*degrees), p, rng.randint(1, p))
        return f
    f = integral(rng, ring, of.degree)
    if of.order == 0:
        return f
    for slot, order in enumerate(ring.orders):
        if order == of.order:
            # y of a Z/p^k slot times the reduction of an integral class
            m = 2 * rng.randint(0, (of.degree - 1) // 2) + 1
            rest = integral(rng, ring, of.degree - m) if of.degree > m else {(0,) * len(ring.orders): 1}
            f = add(f, ring.product(ring.class_in(slot, m), rest), p, rng.randint(1, p))
    return f


def random_map(rng: Random, p: int, classes: tuple[ir.Class, ...], slots: int) -> tuple[Ring, Pullback]:
    """A product of spaces whose orders suit the classes, and where each class goes."""
    high = sorted({of.order for of in classes if of.order >= 2})
    orders = [1] * slots + high * 2 + ([0] if rng.random() < 0.3 else [])
    rng.shuffle(orders)
    ring = Ring(p, tuple(orders))
    return ring, {of: random_image(rng, ring, of) for of in classes}


# --- values -------------------------------------------------------------------------------------


def operation_in_milnor(op: ir.Op, p: int) -> milnor.Milnor:
    """An operation in Milnor's basis."""
    total: milnor.Milnor = {}
    match op:
        case ir.Composite():
            return milnor.to_milnor(op.word, p)
        case ir.Compose():
            total = {milnor.UNIT: 1}
            for factor in op.factors:
                total = milnor.product(total, operation_in_milnor(factor, p), p)
        case ir.OpSum():
            for coefficient, part in op.terms:
                total = milnor.add(total, operation_in_milnor(part, p), p, scale=coefficient)
        case ir.OpPower():
            total = {milnor.UNIT: 1}
            for _ in range(op.exponent):
                total = milnor.product(total, operation_in_milnor(op.base, p), p)
        case ir.Chi():
            for word, coefficient in milnor.admissible(operation_in_milnor(op.argument, p), p).items():
                total = milnor.add(total, milnor.conjugate(word, p), p, scale=coefficient)
        case ir.MilnorQ():
            return milnor.q(op.k, p)
    return total


def value_of(tree: ir.Cls, ring: Ring, pullback: Pullback) -> Polynomial:
    """The pull-back of a class, computed by Cartan's formula alone."""
    p = ring.prime
    unit: Polynomial = {(0,) * len(ring.orders): 1}
    match tree:
        case ir.Fundamental():
            return dict(pullback[tree.of])
        case ir.Unit():
            return unit
        case ir.Cup():
            result = unit
            for factor in tree.factors:
                result = ring.product(result, value_of(factor, ring, pullback))
            return result
        case ir.ClassPower():
            return ring.power(value_of(tree.base, ring, pullback), tree.exponent)
        case ir.ClassSum():
            result = {}
            for coefficient, part in tree.terms:
                result = add(result, value_of(part, ring, pullback), p, coefficient)
            return result
        case ir.HigherBockstein():
            return ring.bockstein(tree.k, value_of(tree.argument, ring, pullback))
        case ir.Apply():
            inner = value_of(tree.argument, ring, pullback)
            result = {}
            for word, coefficient in milnor.admissible(operation_in_milnor(tree.op, p), p).items():
                result = add(result, ring.act(word, inner), p, coefficient)
            return result
    raise TypeError(f"no value for {tree}")


def value_of_element(element: ir.ClassElement, ring: Ring, pullback: Pullback) -> Polynomial:
    """The pull-back of a canonical element."""
    total: Polynomial = {}
    for monomial, coefficient in element.terms:
        product: Polynomial = {(0,) * len(ring.orders): 1}
        for generator, exponent in monomial:
            factor = ring.act(generator.word, pullback[generator.of])
            product = ring.product(product, ring.power(factor, exponent))
        total = add(total, product, ring.prime, coefficient)
    return total


def tree_of_element(element: ir.ClassElement) -> ir.Cls:
    """A canonical element as a tree again."""
    p = element.prime
    terms: list[tuple[int, ir.Cls]] = []
    top = 0
    for monomial, coefficient in element.terms:
        factors: list[ir.Cls] = []
        for generator, exponent in monomial:
            factor: Any = ir.Fundamental(generator.of, generator.of.degree, generator.of.degree)
            word = generator.word
            if word and word[-1] < 0:
                factor = ir.HigherBockstein(-word[-1], factor, factor.degree + 1, factor.degree + 1)
                word = word[:-1]
            d = factor.degree + degree(word, p)
            factor = ir.Apply(ir.Composite(word, degree(word, p)), factor, d, d)
            factors.append(ir.ClassPower(factor, exponent, d * exponent, d * exponent))
        d = sum(of_degree(factor) for factor in factors)
        top = max(top, d)
        terms.append((coefficient, ir.Cup(tuple(factors), d, d)))
    return ir.ClassSum(tuple(terms), top, top)
