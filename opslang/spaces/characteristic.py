"""Classifying spaces of the classical groups: BO, BSO, BU, BSU, BSp, each with and without a rank.

Source: Borel 1953; Wu 1950 (Milnor and Stasheff 1974, problem 8-A) at 2; Borel and Serre 1953 at odd p.
"""

from __future__ import annotations

from attrs import frozen

from opslang.ground.arith import binomial_mod
from opslang.ir.tree import Class
from opslang.spaces import symmetric
from opslang.spaces.family import ONE, ZERO, Family, Polynomial, collected, generator


def wu(k: int, m: int) -> list[tuple[int, int]]:
    """The pairs (k - t, m + t) with Sq^k w_m = sum w_{k-t} w_{m+t}, for k < m: those t with C(m-k+t-1, t) odd (Wu
    1950)."""
    return [(k - t, m + t) for t in range(k + 1) if binomial_mod(m - k + t - 1, t, 2)]


@frozen
class Classifying(Family):
    """A classifying space whose ring is polynomial on classes `letter`_i of degree `step` · i, i = first … rank
    (None: no end)."""

    group: str
    rank: int | None
    letter: str
    step: int
    first: int
    factor: int = 0

    @property
    def text(self) -> str:
        """`BO(5)` or `BO`."""
        return f"B{self.group}" + ("" if self.rank is None else f"({self.rank})")

    def _index(self, i: int) -> int:
        """How the class of number i is called: classes w by their degree, all others by number."""
        return i

    def member(self, i: int) -> Polynomial:
        """The class of number i as a polynomial: 1 for i = 0, 0 out of range."""
        if i == 0:
            return ONE
        if i < self.first or (self.rank is not None and i > self.rank):
            return ZERO
        return generator(self.of(i))

    def of(self, i: int) -> Class:
        """The generator of number i."""
        return Class(self.letter, i, 0, self.step * i, 1 if self.letter == "w" else 0, self.factor, self)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        last = to // self.step if self.rank is None else min(self.rank, to // self.step)
        return tuple([self.of(i) for i in range(self.first, last + 1)])

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if letter == self.letter and index is not None and index >= 0 and not primes:
            return self.member(index)
        return None

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        return {self.letter: self.step, "W": 1, "p": 4, "Delta": 1}.get(letter, 1) * (index or 0)

    def names(self, prime: int) -> str:
        first = f"{self.letter}_{self.first}"
        if self.rank is None:
            return f"{first}, {self.letter}_{self.first + 1}, …"
        if self.rank < self.first:
            return "none at this prime"
        return first if self.rank == self.first else f"{first} … {self.letter}_{self.rank}"

    @property
    def last(self) -> int | None:
        """The greatest number of a class that is not 0 (None: no end)."""
        return self.rank

    def product(self, r: symmetric.Partition) -> list[tuple[int, list[tuple[Class, int]]]]:
        """The product of the classes of these numbers, as a list of at most one term."""
        factors: list[tuple[Class, int]] = []
        for i in r:
            value = self.member(i)
            if not value:
                return []
            factors += value[0][1]
        return [(1, factors)]

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        m = of.index or 0
        terms: list[tuple[int, list[tuple[Class, int]]]] = []
        if prime == 2:
            k, odd = divmod(token, self.step)
            if not odd:
                for a, b in wu(k, m):
                    terms += self.product((a, b))
        elif token:
            roots = symmetric.linear_roots if self.step == 2 else symmetric.square_roots
            rows = roots(prime, token, m, self.last)
            for r, c in rows:
                terms += [(c * one, factors) for one, factors in self.product(r)]
        return collected(terms, prime)

    def law(self, prime: int, token: int, of: Class) -> str:
        if prime == 2:
            return "Wu's formula" + {1: "", 2: ", degrees doubled", 4: ", degrees times 4"}[self.step]
        return "the splitting principle"


@frozen
class Orthogonal(Classifying):
    """BO and BSO: Stiefel-Whitney classes at 2.

    At 2 W_k stands for the reduction Sq^1 w_{k-1} of the integral class beta w_{k-1}, and p_i for w_{2i}^2.
    """

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if index is not None and index >= 1 and not primes:
            if letter == "W" and index >= 2:
                return self._sq1(index - 1)
            if letter == "p":
                value = self.member(2 * index)
                return ((1, tuple([(of, 2 * e) for of, e in value[0][1]])),) if value else ZERO
        return Classifying.named(self, prime, letter, index, primes)

    def _sq1(self, m: int) -> Polynomial:
        if not self.member(m):
            return ZERO
        if m == 1:
            return generator(self.of(1), 2)
        return self.operation(2, 1, self.of(m))


@frozen
class Pontryagin(Classifying):
    """BO(n), BSO(n), BSpin(n) at odd p: Pontryagin classes p_i; for BSO(n), n even, the Euler class e with e^2 =
    p_{n/2}.

    `rank` is the greatest i with p_i a generator; `euler` is the degree of e (0: none); `written` is the space's own
    rank.
    """

    euler: int = 0
    written: int | None = None

    @property
    def text(self) -> str:
        return f"B{self.group}" + ("" if self.written is None else f"({self.written})")

    @property
    def last(self) -> int | None:
        return None if self.rank is None else self.rank + bool(self.euler)

    def euler_class(self) -> Class:
        """The class e."""
        return Class("e", None, 0, self.euler, 0, self.factor, self)

    def member(self, i: int) -> Polynomial:
        if self.euler and 2 * self.euler == 4 * i:
            return generator(self.euler_class(), 2)
        return Classifying.member(self, i)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        found = Classifying.classes(self, prime, to)
        return (*found, self.euler_class()) if 0 < self.euler <= to else found

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if self.euler and (letter, index, primes) == ("e", None, 0):
            return generator(self.euler_class())
        return Classifying.named(self, prime, letter, index, primes)

    def names(self, prime: int) -> str:
        named = [Classifying.names(self, prime)] if self.rank is None or self.rank >= 1 else []
        return ", ".join(named + (["e"] if self.euler else [])) or "none at this prime"

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        if of.letter != "e":
            return Classifying.operation(self, prime, token, of)
        if not token:
            return ZERO
        terms = []
        for r, c in symmetric.powers_of_roots(prime, token, (prime - 1) // 2, self.last):
            terms += [(c * one, [*factors, (of, 1)]) for one, factors in self.product(r)]
        return collected(terms, prime)


def orthogonal(group: str, rank: int | None, prime: int, factor: int) -> Family:
    """BO(rank) or BSO(rank) (None: stable) at a prime."""
    special = group != "O"
    if prime == 2:
        return Orthogonal(group, rank, "w", 1, 2 if special else 1, factor)
    if rank is None:
        return Pontryagin(group, None, "p", 4, 1, factor)
    if special and rank % 2 == 0:
        return Pontryagin(group, rank // 2 - 1, "p", 4, 1, factor, euler=rank, written=rank)
    return Pontryagin(group, rank // 2, "p", 4, 1, factor, written=rank)


def unitary(group: str, rank: int | None, prime: int, factor: int) -> Family:
    """BU(rank) or BSU(rank)."""
    return Classifying(group, rank, "c", 2, 2 if group == "SU" else 1, factor)


def symplectic(group: str, rank: int | None, prime: int, factor: int) -> Family:
    """BSp(rank): classes q_i of degree 4i, the elementary symmetric polynomials in the x_j^2, so that q_1 restricts
    to x^2."""
    return Classifying(group, rank, "q", 4, 1, factor)
