"""Projective spaces and lens spaces: truncated polynomial rings.

RP^n: F_2[x]/(x^{n+1}).  CP^n: F_p[y]/(y^{n+1}).  HP^n: F_p[u]/(u^{n+1}), u restricting to y^2 on CP^{2n+1}, so that
P u = u (1 + u^{(p-1)/2})^2.
lens(m) is K(Z/m, 1): Lambda[x] tensor F_p[y] with beta_k x = y, where p^k is the p-part of m (F_2[x] where that is 2).
Common practice; the binomials follow from the Cartan formula.
"""

from __future__ import annotations

from attrs import frozen

from opslang.ground.arith import p_part
from opslang.ir.tree import Class
from opslang.spaces.family import ZERO, Family, Polynomial, generator


@frozen
class Projective(Family):
    """RP^n, CP^n or HP^n: one generator; `size` is the n (None: no end)."""

    field: str
    size: int | None
    letter: str
    factor: int = 0
    named_by_user: bool = False

    @property
    def text(self) -> str:
        return (
            f"{self.field}P"
            + ("" if self.size is None else f"^{self.size}")
            + (f"({self.letter})" if self.named_by_user else "")
        )

    def _degree(self, prime: int) -> int:
        """The degree of the generator; 0 where there is none at the prime."""
        if self.size == 0:
            return 0
        if self.field == "R" and prime != 2:
            # an odd-dimensional real projective space is a sphere at odd primes
            return self.size if self.size is not None and self.size % 2 else 0
        return {"R": 1, "C": 2, "H": 4}[self.field]

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        degree = self._degree(prime)
        if not 0 < degree <= to:
            return ()
        order = 1 if self.field == "R" and prime == 2 else 0
        return (Class(self.letter, None, 0, degree, order, self.factor, self),)

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if (letter, index, primes) != (self.letter, None, 0):
            return None
        found = self.classes(prime, self._degree(prime))
        return generator(found[0]) if found else ZERO

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        return {"R": 1, "C": 2, "H": 4}[self.field]

    def names(self, prime: int) -> str:
        return self.letter if self._degree(prime) else "none at this prime"

    def height(self, prime: int, of: Class) -> int | None:
        if self.size is None:
            return None
        return 2 if self.field == "R" and prime != 2 else self.size + 1

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        if prime == 2 or self.field != "H" or not token:
            return ZERO
        # P^1 u = 2 u^{1 + (p-1)/2}; P^2 u = u^p is the top power
        return ((2, ((of, (prime + 1) // 2),)),) if token == 1 else ZERO

    def law(self, prime: int, token: int, of: Class) -> str:
        return "the operations of a projective space"


@frozen
class Lens(Family):
    """lens(m): classes x of degree 1 and y of degree 2."""

    modulus: int
    letters: tuple[str, str] = ("x", "y")
    factor: int = 0

    @property
    def text(self) -> str:
        named = "" if self.letters == ("x", "y") else ", " + ", ".join(self.letters)
        return f"lens({self.modulus}{named})"

    def _order(self, prime: int) -> int:
        return p_part(self.modulus, prime)

    def _x(self, prime: int) -> Class:
        return Class(self.letters[0], None, 0, 1, max(1, self._order(prime)), self.factor, self)

    def _y(self) -> Class:
        return Class(self.letters[1], None, 0, 2, 0, self.factor, self)

    def classes(self, prime: int, to: int) -> tuple[Class, ...]:
        order = self._order(prime)
        if not order:
            return ()
        found = (self._x(prime),) if prime == 2 and order == 1 else (self._x(prime), self._y())
        return tuple([of for of in found if of.degree <= to])

    def named(self, prime: int, letter: str, index: int | None, primes: int) -> Polynomial | None:
        if index is not None or primes or letter not in self.letters:
            return None
        order = self._order(prime)
        if not order:
            return ZERO
        if letter == self.letters[0]:
            return generator(self._x(prime))
        return generator(self._x(prime), 2) if prime == 2 and order == 1 else generator(self._y())

    def name_degree(self, prime: int, letter: str, index: int | None) -> int:
        return 1 + self.letters.index(letter)

    def names(self, prime: int) -> str:
        return ", ".join(self.letters) if self._order(prime) else "none at this prime"

    def operation(self, prime: int, token: int, of: Class) -> Polynomial:
        if prime != 2 and not token and of.degree == 1 and of.order == 1:
            return generator(self._y())
        return ZERO

    def bockstein(self, prime: int, of: Class) -> tuple[int | None, Polynomial]:
        if of.degree == 2:
            return None, ZERO
        if prime == 2 and of.order == 1:
            return 1, generator(of, 2)
        return of.order, generator(self._y())

    def law(self, prime: int, token: int, of: Class) -> str:
        return "the Bockstein of a lens space"


def real(size: int | None, letter: str | None, factor: int) -> Projective:
    """RP^n."""
    return Projective("R", size, letter or "x", factor, letter is not None)


def complex_(size: int | None, letter: str | None, factor: int) -> Projective:
    """CP^n."""
    return Projective("C", size, letter or "y", factor, letter is not None)


def quaternionic(size: int | None, letter: str | None, factor: int) -> Projective:
    """HP^n."""
    return Projective("H", size, letter or "u", factor, letter is not None)
