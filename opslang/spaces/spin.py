"""BSpin at 2.  Source: Quillen 1971.

H^*(BSpin) is H^*(BSO) modulo w_2, Sq^1 w_2, Sq^2 Sq^1 w_2, …: the relation of degree 2^r + 1 begins with w_{2^r+1},
so it writes
that class through the others (w_3 = w_5 = w_9 = 0, w_17 = w_4 w_13 + w_6 w_11 + w_7 w_10, …).  H^*(BSpin(n)) has the
relations up to
Sq^{2^{h-2}} … Sq^1 w_2 and one more polynomial generator w_{2^h}(Delta), of degree 2^h, which is called Delta_{2^h}
here;
n = 3 … 9 (h = 2 for n = 3, 4; 3 for 5 … 8; 4 for 9).
"""

from __future__ import annotations

from functools import lru_cache

from attrs import frozen

from opslang.ir.tree import Class
from opslang.spaces.characteristic import Orthogonal, wu
from opslang.spaces.family import ZERO, NotKnown, Polynomial, collected, generator

LARGEST_RANK = 9
MOST_DEGREE = 64
"""Stable relations are worked out up to here: the one of degree 33 is the last."""
Sums = frozenset[tuple[int, ...]]
"""A sum of products of classes w_i at 2: sorted tuples of indices."""


def exponent(rank: int | None) -> int:
    """The h of Quillen's theorem."""
    if rank is None:
        return 6
    return 2 if rank <= 4 else 3 if rank <= 8 else 4


def _bounded(words: list[tuple[int, ...]], rank: int | None) -> Sums:
    """The sum mod 2 of products; those with a w_i out of range (or w_1) are 0, and w_0 is 1."""
    found: set[tuple[int, ...]] = set()
    for word in words:
        kept = tuple(sorted([i for i in word if i]))
        if 1 in kept or (rank is not None and kept and kept[-1] > rank):
            continue
        found ^= {kept}
    return frozenset(found)


@lru_cache(maxsize=1 << 14)
def _square(k: int, word: tuple[int, ...], rank: int | None) -> Sums:
    """Sq^k of a product of classes w_i of BSO(rank), by the Cartan formula and Wu's."""
    if not word:
        return frozenset({()}) if k == 0 else frozenset()
    m, rest = word[0], word[1:]
    terms: list[tuple[int, ...]] = []
    for i in range(min(k, m) + 1):
        ones = [(m, m)] if i == m else wu(i, m)
        for tail in _square(k - i, rest, rank):
            terms += [(*one, *tail) for one in ones]
    return _bounded(terms, rank)


@lru_cache(maxsize=64)
def relations(rank: int | None) -> tuple[tuple[int, Sums], ...]:
    """The pairs (i, sum) with w_i = sum in H^*(BSpin(rank)), by increasing i; the sums hold no w_j of an earlier
    pair."""
    found: list[tuple[int, Sums]] = [(2, frozenset())]
    current: Sums = frozenset({(2,)})
    for r in range(exponent(rank) - 1):
        image: set[tuple[int, ...]] = set()
        for word in current:
            image ^= _square(2**r, word, rank)
        # the next relation, modulo the earlier ones
        current = _reduced(frozenset(image), found, rank)
        lead = 2 ** (r + 1) + 1 if r else 3
        if (lead,) in current:
            found.append((lead, current - {(lead,)}))
        elif current:
            raise NotKnown(f"the relation of degree {lead} in H^*(BSpin({rank})) does not begin with w_{lead}")
    return tuple(found)


def _reduced(terms: Sums, known: list[tuple[int, Sums]], rank: int | None) -> Sums:
    """A sum with the classes w_i of earlier relations written through the others."""
    values = dict(known)
    waiting = list(terms)
    done: set[tuple[int, ...]] = set()
    while waiting:
        word = waiting.pop()
        i = next((i for i in word if i in values), None)
        if i is None:
            done ^= {word}
            continue
        rest = list(word)
        rest.remove(i)
        waiting += [tuple(sorted([*rest, *other])) for other in values[i]]
    return frozenset(done)


@frozen
class Spin(Orthogonal):
    """BSpin, and BSpin(n) for n = 3 … 9, at 2."""

    def relations(self) -> tuple[tuple[int, Sums], ...]:
        """The pairs (i, sum) with w_i = sum."""
        return relations(self.rank)

    def _killed(self) -> dict[int, Sums]:
        return dict(self.relations())

    @property
    def spinor(self) -> Class | None:
        """The class w_{2^h}(Delta) of BSpin(n)."""
        if self.rank is None:
            return None
        degree = 2 ** exponent(self.rank)
        return Class("Delta", degree, 0, degree, 1, self.factor, self)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        if self.rank is None and to > MOST_DEGREE:
            raise NotKnown(f"the ring of BSpin is worked out up to degree {MOST_DEGREE}")
        killed = self._killed()
        found = [of for of in Orthogonal.classes(self, prime, to) if of.index not in killed]
        spinor = self.spinor
        if spinor is not None and spinor.degree <= to:
            found.append(spinor)
        return tuple(found)

    def member(self, i: int) -> Polynomial:
        if self.rank is None and i > MOST_DEGREE:
            raise NotKnown(f"the ring of BSpin is worked out up to degree {MOST_DEGREE}, and w_{i} is asked for")
        value = self._killed().get(i)
        if value is None:
            return Orthogonal.member(self, i)
        return tuple([(1, tuple([(self.of(j), word.count(j)) for j in sorted(set(word))])) for word in sorted(value)])

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        spinor = self.spinor
        if letter == "Delta" and spinor is not None and (index, primes) == (spinor.index, 0):
            return generator(spinor)
        if letter == "p" and index is not None and index >= 1 and not primes:
            return tuple([(1, tuple([(of, 2 * e) for of, e in powers])) for _, powers in self.member(2 * index)])
        return Orthogonal.named(self, prime, letter, index, primes)

    def names(self, prime: int) -> str:
        shown = ", ".join(
            f"{of.letter}_{of.index}" for of in self.classes(prime, 20 if self.rank is None else 2**LARGEST_RANK)
        )
        return shown + (", …" if self.rank is None else "")

    def _sq1(self, m: int) -> Polynomial:
        return self._collected(wu(1, m)) if m >= 2 else ZERO

    def _collected(self, pairs: list[tuple[int, int]]) -> Polynomial:
        """The sum of the products w_a w_b, each class written through the generators."""
        terms: list[tuple[int, list[tuple[Class, int]]]] = []
        for a, b in pairs:
            for _, left in self.member(a):
                terms += [(1, [*left, *right]) for _, right in self.member(b)]
        return collected(terms, 2)

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        if of.letter != "Delta":
            return self._collected(wu(token, of.index or 0))
        if self._empty(of.degree + token):
            return ZERO
        raise NotKnown(
            f"Sq^{token} of {of.letter}_{of.index} needs the Stiefel-Whitney classes of the spin representation, "
            "which are not known here"
        )

    def _empty(self, degree: int) -> bool:
        """Whether H^degree is 0."""
        reached = 1
        for of in self.classes(2, degree):
            step = of.degree
            while step <= degree:
                reached |= reached << step & (2 << degree) - 1
                step *= 2
        return not reached >> degree & 1

    def law(self, prime: int, token: int, of: Class) -> str:
        if of.letter == "Delta":
            return "a space without classes in that degree"
        return "Wu's formula, modulo the relations of BSpin"


def spin(group: str, rank: int | None, prime: int, factor: int) -> Spin:
    """BSpin(rank) at 2.  NotKnown for ranks outside 3 … 9."""
    if rank is not None and not 3 <= rank <= LARGEST_RANK:
        raise NotKnown(f"BSpin(n) is known here for n = 3 … {LARGEST_RANK}, and stably; here n is {rank}")
    return Spin(group, rank, "w", 1, 2, factor)
