"""Names of characteristic classes that a classifying space has besides its generators.

BU(n), BSU(n): w_{2i} is c_i and w_{2i+1} is 0 at 2, e is c_n, p_i is (-1)^i sum (-1)^j c_j c_{2i-j}.  BSp(n): c_{2i}
is (-1)^i q_i, w_{4i} is q_i,
e is the Euler class (-1)^n c_{2n} up to the sign of an orientation, so q_n at 2.  BO(n), BSO(n) at 2: e is w_n.  BO,
BSO, BSpin at odd p: w has no
classes there.  Source: Milnor and Stasheff 1974, chapters 14 and 15.
"""

from __future__ import annotations

from opslang.ir.tree import Class
from opslang.spaces.characteristic import Classifying, Orthogonal
from opslang.spaces.family import ZERO, Family, Polynomial, collected


def signed(value: Polynomial, sign: int, prime: int) -> Polynomial:
    """A polynomial times a scalar."""
    return tuple([(c * sign % prime, powers) for c, powers in value])


def times(left: Polynomial, right: Polynomial) -> list[tuple[int, list[tuple[Class, int]]]]:
    """The terms of a product of polynomials in classes of even degree, or at 2."""
    return [(c * d, [*first, *second]) for c, first in left for d, second in right]


def pontryagin(family: Classifying, i: int, prime: int) -> Polynomial:
    """p_i of the real bundle under the universal one of BU(n)."""
    terms: list[tuple[int, list[tuple[Class, int]]]] = []
    for j in range(2 * i + 1):
        terms += times(signed(family.member(j), (-1) ** (i + j), prime), family.member(2 * i - j))
    return collected(terms, prime)


def further(family: Family, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
    """What such a name stands for; None where the space has no class of that name."""
    if primes or not isinstance(family, Classifying):
        return None
    if letter == "e" and index is None and family.rank is not None:
        if isinstance(family, Orthogonal) or family.letter == "c":
            return family.member(family.rank)
        return family.member(family.rank) if family.letter == "q" and prime == 2 else None
    if index is None or index < 0:
        return None
    if family.letter == "c":
        if letter == "w" and prime == 2:
            return ZERO if index % 2 else family.member(index // 2)
        return pontryagin(family, index, prime) if letter == "p" else None
    if family.letter == "q":
        if letter == "w" and prime == 2:
            return ZERO if index % 4 else family.member(index // 4)
        if letter == "c":
            return ZERO if index % 2 else signed(family.member(index // 2), (-1) ** (index // 2), prime)
    return None


def further_degree(family: Family, letter: str, index: int | None) -> int:
    """The degree of such a name."""
    if index is None:
        return family.step * (family.rank or 0) if isinstance(family, Classifying) else 0
    return {"w": 1, "c": 2, "p": 4}.get(letter, 1) * index
