"""Bocksteins of higher order on elements of H^*.  Knows the rings of this room.

A monomial is read as a product of *pieces* g^{p^j}, one for each base-p digit of each exponent.  Each piece lifts to
some Z/p^m (m its order; None where it is the reduction of an integral class), where beta_m of it is known:

* a class with coefficients Z/p^k has order k, beta_k of it is a generator; an integral class has order None;
* a generator that is a Bockstein (word beginning with beta, or with an odd square) has order None;
* any other generator has order 1;
* the p-th power of y of order m and even degree has order m + 1 and beta_{m+1}(y^p) = y^{p-1} beta_m y, plus
  Sq^{|y|} beta_1 y where p = 2 and m = 1 (May 1970, prop. 6.8); at p = 2 the square of a class of odd degree is Sq^1 of
  Sq^{|y|-1} y, so it has order None.

beta_k is a derivation on products of pieces of order >= k.  Values that come from p-th powers are defined modulo the
images of the lower Bocksteins.
"""

from __future__ import annotations

from typing import Any

from attrs import frozen

from opslang.ground.arith import digits
from opslang.tables.ring2 import Ring2
from opslang.tables.slots import exponents


class Undefined(Exception):
    """beta_k is not (seen to be) defined; the words say why."""


@frozen
class Piece:
    """(g^{p^j})^times in a monomial: its slot, p^j, its order (None: every Bockstein of it is 0), and beta_order of
    g^{p^j}."""

    slot: int
    scale: int
    times: int
    order: int | None
    image: Any
    from_power: bool


def _terms(ring: Any, f: Any) -> list[tuple[int, int]]:
    return [(x, 1) for x in f] if isinstance(ring, Ring2) else list(f.items())


def _single(ring: Any, monomial: int, coefficient: int = 1) -> Any:
    return {monomial} if isinstance(ring, Ring2) else {monomial: coefficient % ring.prime}


def _first_order(ring: Any, slot: int) -> tuple[int | None, Any]:
    """The order of the generator in a slot, and its Bockstein of that order."""
    word = ring.slots.word[slot]
    root = ring.slots.roots[ring.slots.root[slot]]
    if root.of.ring is not None:
        order, value = root.of.ring.bockstein(ring.prime, root.of)
        return order, None if order is None else ring.polynomial(value)
    if not word:
        if root.bockstein or root.of.order == 0:
            return None, None
        if root.of.order > 1:
            return root.of.order, ring.generator(root.of, root.of.order)
    elif word & 1:  # begins with an odd square, or with the Bockstein
        return None, None
    place = 1 << slot * ring.width
    if isinstance(ring, Ring2):
        return 1, ring.letter(1, {place})
    return 1, ring.letter(0, {place: 1})


def _pieces(ring: Any, monomial: int) -> list[Piece]:
    pieces = []
    p = ring.prime
    for slot, exponent in exponents(monomial, ring.width):
        order, image = _first_order(ring, slot)
        degree = ring.slots.degree[slot]
        place = 1 << slot * ring.width
        scale = 1
        for j, digit in enumerate(digits(exponent, p)):
            if j:
                if order is not None:
                    if p == 2 and degree % 2:
                        order = None
                    else:
                        image = _beta_of_power(ring, _single(ring, place * scale), degree * scale, order, image)
                        order += 1
                scale *= p
            if digit:
                pieces.append(Piece(slot, scale, digit, order, image, j > 0))
    return pieces


def _beta_of_power(ring: Any, y: Any, degree: int, order: int, image: Any) -> Any:
    """beta_{order+1}(y^p), for y of even degree with beta_order y = image."""
    value = ring.multiply(ring.power(y, ring.prime - 1), image)
    if isinstance(ring, Ring2) and order == 1:
        ring.add(value, ring.letter(degree, image))
    return value


def higher(ring: Any, k: int, f: Any) -> tuple[Any, bool]:
    """beta_k of an element, and whether it is defined only modulo the images of the lower Bocksteins.

    Raises Undefined where a monomial holds a piece of order below k.
    """
    result = ring.zero()
    modulo = False
    for x, c in _terms(ring, f):
        pieces = _pieces(ring, x)
        low = [piece for piece in pieces if piece.order is not None and piece.order < k]
        if low:
            raise Undefined(_reason(ring, k, f, low[0].order or 1))
        for piece in pieces:
            if piece.order != k:
                continue
            modulo = modulo or piece.from_power
            ring.add(result, _derive(ring, x, piece), c)
    return result, modulo


def lifts(ring: Any, monomial: int, order: int) -> bool:
    """Whether a monomial is seen to be the reduction of an integral class (order 0), or of a Z/p^order class."""
    return all(piece.order is None or 0 < order <= piece.order for piece in _pieces(ring, monomial))


def _derive(ring: Any, monomial: int, piece: Piece) -> Any:
    """The summand of beta(monomial) in which one unit of the piece is replaced by its image, with its sign."""
    place = piece.slot * ring.width
    before = monomial & ((1 << place) - 1)
    left = before | ((monomial >> place & (1 << ring.width) - 1) - piece.scale) << place
    right = monomial >> place + ring.width << place + ring.width
    sign = -1 if ring.prime != 2 and (before & ring.slots.nilpotent).bit_count() % 2 else 1
    head = ring.multiply(_single(ring, left, sign * piece.times), piece.image)
    if ring.prime == 2 and piece.times % 2 == 0:
        return ring.zero()
    return ring.multiply(head, _single(ring, right))


def _reason(ring: Any, k: int, f: Any, order: int) -> str:
    name = "Sq^1" if ring.prime == 2 else "beta"
    lower = ring.letter(1, f) if isinstance(ring, Ring2) else ring.letter(0, f)
    only = f"beta_{k} is defined only on classes on which the lower Bocksteins vanish"
    if lower:
        return f"{only}, and {name} of this class is not 0"
    if order > 1:
        return f"{only}, and beta_{order} of this class is not seen to be 0"
    lift = f"Z/{ring.prime}^{k}"
    return f"beta_{k} of this class is not shown to be defined: {name} of it is 0, but no lift of it to {lift} is known"
