"""Words in the squares, told apart by what they do to a product of classes of degree one.  Shares nothing with opslang.

Sq^k of x_1^{e_1} ... x_m^{e_m} is the part of degree k of the product of the (x_i + x_i^2)^{e_i} (Cartan's formula).
Two elements that act differently on x_1 ... x_m are different; that is the only conclusion drawn here.
"""

from __future__ import annotations

import re

Word = tuple[int, ...]
Polynomial = frozenset[tuple[int, ...]]


def square(k: int, exponents: tuple[int, ...]) -> Polynomial:
    """Sq^k of one monomial: raise e_i by j_i with sum k, where the binomial (e_i, j_i) is odd."""
    parts: set[tuple[tuple[int, ...], int]] = {((), 0)}
    for e in exponents:
        steps = [j for j in range(min(e, k) + 1) if e & j == j]
        parts = {((*head, e + j), done + j) for head, done in parts for j in steps if done + j <= k}
    return frozenset(head for head, done in parts if done == k)


def act(word: Word, start: Polynomial) -> Polynomial:
    """A word on a polynomial, its last letter first."""
    for k in reversed(word):
        total: set[tuple[int, ...]] = set()
        for monomial in start:
            total ^= square(k, monomial)
        start = frozenset(total)
    return start


def differ(left: list[Word], right: list[Word], variables: int = 8) -> bool:
    """Whether two sums of words act differently on x_1 ... x_m for some m up to `variables`."""
    for m in range(1, variables + 1):
        start = frozenset({(1,) * m})
        total: set[tuple[int, ...]] = set()
        for word in left + right:
            total ^= act(word, start)
        if total:
            return True
    return False


SIDE = re.compile(r"0|(?:\\Sq\^(?:\d|\{\d+\}))+(?:\+(?:\\Sq\^(?:\d|\{\d+\}))+)*")


def read_sum(text: str) -> list[Word] | None:
    """`\\Sq^{3}\\Sq^1+\\Sq^4` as a list of words; None for anything else."""
    bare = re.sub(r"[&$\s]|\\,|\\quad", "", text)
    if not SIDE.fullmatch(bare):
        return None
    if bare == "0":
        return []
    return [tuple(int(index) for index in re.findall(r"\d+", word)) for word in bare.split("+")]


def read_relation(text: str) -> tuple[list[Word], list[Word]] | None:
    """Two sides of a relation between numeric words; None for anything else."""
    sides = [read_sum(side) for side in text.split("=")]
    if len(sides) != 2 or sides[0] is None or sides[1] is None:
        return None
    return sides[0], sides[1]
