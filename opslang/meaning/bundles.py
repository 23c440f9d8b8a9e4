"""Vector bundles, as far as characteristic classes see them: sums, inverses, duals, tensor products with a line bundle.

A bundle is its classes in canonical form, asked for by number.  A real bundle has w_i at 2 and p_i at odd primes, a
complex one c_i.
Sources: Milnor and Stasheff 1974 (Whitney sums; the real bundle under a complex one, chapter 14 and 15); the tensor
product with a line bundle by
the splitting principle (Borel and Serre 1953).
"""

from __future__ import annotations

from collections.abc import Callable
from math import comb

from attrs import define, field

from opslang.ir.tree import ClassElement
from opslang.meaning.canonical import Arithmetic
from opslang.spaces.space import SpaceValue

STEP = {"w": 1, "c": 2, "p": 4}
"""The degree of the first class."""
MOST_CLASSES = 48
"""So many classes of an inverse bundle are looked at to find the end of its total class."""


class NoBundle(Exception):
    """What is asked of a bundle has no answer here; the words say why."""


@define(eq=False)
class Bundle:
    """A bundle: its name, the letter of its classes, its rank (over the complex numbers where they are c_i; None: not
    known).

    `space` is its base, None where it lives on declared classes; `last` is the number of the last class that may be
    other than 0, None where there may be no end to them; then `fraction` gives the last numbers of two total classes of
    which its own is the quotient.  `euler` is its Euler class at odd primes, where it is known.
    """

    name: str
    letter: str
    rank: int | None
    space: SpaceValue | None
    arithmetic: Arithmetic
    last: int | None
    _piece: Callable[[int], ClassElement]
    euler: ClassElement | None = None
    fraction: tuple[int, int] | None = None
    _known: dict[int, ClassElement] = field(factory=dict)

    @property
    def complex(self) -> bool:
        """Whether it is a complex bundle."""
        return self.letter == "c"

    @property
    def quotient(self) -> tuple[int, int] | None:
        """The last numbers of two total classes of which the bundle's is the quotient, where they are known."""
        return self.fraction if self.last is None else (self.last, 0)

    def end(self) -> int | None:
        """The number of the last class that may be other than 0, where one is seen.

        Beyond the numerator the classes satisfy a recursion of the order of the denominator: when so many in a row
        are 0,
        all that follow are.
        """
        if self.quotient is None:
            return None
        above, below = self.quotient
        zeros = 0
        for k in range(above + 1, above + MOST_CLASSES):
            if zeros >= below:
                return k - 1 - zeros
            zeros = 0 if self.piece(k).terms else zeros + 1
        return None

    def piece(self, i: int) -> ClassElement:
        """The class of that number."""
        if i == 0:
            return self.arithmetic.one()
        if i < 0 or (self.last is not None and i > self.last):
            return self.arithmetic.zero()
        found = self._known.get(i)
        if found is None:
            found = self._known[i] = self._piece(i)
        return found


def real_letter(prime: int) -> str:
    """The letter of the classes of a real bundle."""
    return "w" if prime == 2 else "p"


def trivial(rank: int, letter: str, arithmetic: Arithmetic) -> Bundle:
    """The trivial bundle."""
    return Bundle(str(rank), letter, rank, None, arithmetic, 0, lambda i: arithmetic.zero())


def _doubled(quotient: tuple[int, int] | None) -> tuple[int, int] | None:
    return None if quotient is None else (2 * quotient[0], 2 * quotient[1])


def as_real(bundle: Bundle) -> Bundle:
    """The real bundle under a complex one: w_{2i} = c_i at 2; p_i = (-1)^i sum (-1)^j c_j c_{2i-j} at odd primes; e =
    c_n."""
    if not bundle.complex:
        return bundle
    a = bundle.arithmetic
    last = bundle.last
    euler = None if bundle.rank is None or bundle.rank < 0 else bundle.piece(bundle.rank)
    rank = None if bundle.rank is None else 2 * bundle.rank
    if a.prime == 2:
        double = None if last is None else 2 * last

        def halved(i: int) -> ClassElement:
            return a.zero() if i % 2 else bundle.piece(i // 2)

        return Bundle(bundle.name, "w", rank, bundle.space, a, double, halved, None, _doubled(bundle.quotient))

    def pontryagin(i: int) -> ClassElement:
        return a.combined([((-1) ** (i + j), bundle.piece(j), bundle.piece(2 * i - j)) for j in range(2 * i + 1)])

    return Bundle(bundle.name, "p", rank, bundle.space, a, last, pontryagin, euler, bundle.quotient)


def complexified(bundle: Bundle) -> Bundle:
    """The complexification of a real bundle: c_i is w_i^2 at 2; c_{2i} is (-1)^i p_i at odd primes, the others 0."""
    if bundle.complex:
        raise NoBundle("the complexification is that of a real bundle")
    a, last = bundle.arithmetic, bundle.last
    if a.prime == 2:
        square = bundle.quotient
        return Bundle(
            bundle.name, "c", bundle.rank, bundle.space, a, last, lambda i: a.power(bundle.piece(i), 2), None, square
        )

    def chern(i: int) -> ClassElement:
        return a.zero() if i % 2 else a.combined([((-1) ** (i // 2), bundle.piece(i // 2), a.one())])

    twice = None if last is None else 2 * last
    return Bundle(bundle.name, "c", bundle.rank, bundle.space, a, twice, chern, None, _doubled(bundle.quotient))


def _alike(left: Bundle, right: Bundle) -> tuple[Bundle, Bundle]:
    """Two bundles with classes of one letter: both complex, or both real."""
    if left.complex == right.complex:
        return left, right
    if left.last == 0 and left.space is None:
        return trivial(left.rank or 0, right.letter, left.arithmetic), right
    if right.last == 0 and right.space is None:
        return left, trivial(right.rank or 0, left.letter, left.arithmetic)
    return as_real(left), as_real(right)


def common_space(left: Bundle, right: Bundle) -> SpaceValue | None:
    """The base of two bundles.  NoBundle where they live over different ones."""
    if left.space is None or right.space is None or left.space.factors == right.space.factors:
        return left.space or right.space
    first = f"{left.name} is a bundle over {left.space.text}, and {right.name} is one over {right.space.text}"
    raise NoBundle(f"{first}: pull one of them back along a map")


def _rank(left: Bundle, right: Bundle, sign: int = 1) -> int | None:
    return None if left.rank is None or right.rank is None else left.rank + sign * right.rank


def whitney(left: Bundle, right: Bundle, name: str) -> Bundle:
    """The Whitney sum: the total class is the product."""
    space = common_space(left, right)
    left, right = _alike(left, right)
    a = left.arithmetic
    last = None if left.last is None or right.last is None else left.last + right.last
    rank = _rank(left, right)
    if last is not None and rank is not None and rank >= 0:
        last = min(last, rank if left.letter != "p" else rank // 2)

    def piece(k: int) -> ClassElement:
        low = 0 if right.last is None else max(0, k - right.last)
        high = k if left.last is None else min(k, left.last)
        return a.combined([(1, left.piece(i), right.piece(k - i)) for i in range(low, high + 1)])

    euler = a.product(left.euler, right.euler) if left.euler is not None and right.euler is not None else None

    one, other = left.quotient, right.quotient
    fraction = None if one is None or other is None else (one[0] + other[0], one[1] + other[1])
    return Bundle(name, left.letter, rank, space, a, last, piece, euler, fraction)


def inverse(bundle: Bundle, name: str) -> Bundle:
    """The stable inverse: the total class is the inverse one, which in general has no end."""
    a = bundle.arithmetic
    rank = None if bundle.rank is None else -bundle.rank

    def piece(k: int) -> ClassElement:
        high = k if bundle.last is None else min(k, bundle.last)
        for i in range(1, k):
            found.piece(i)  # smaller numbers first: no deep recursion
        return a.combined([(-1, bundle.piece(i), found.piece(k - i)) for i in range(1, high + 1)])

    one = bundle.quotient
    fraction = None if one is None else (one[1], one[0])
    last = 0 if bundle.last == 0 else None
    found = Bundle(name, bundle.letter, rank, bundle.space, a, last, piece, None, fraction)
    return found


def dual(bundle: Bundle, name: str) -> Bundle:
    """The dual: c_i changes its sign with i; a real bundle is its own dual."""
    if not bundle.complex:
        return bundle
    a = bundle.arithmetic
    return Bundle(
        name,
        "c",
        bundle.rank,
        bundle.space,
        a,
        bundle.last,
        lambda i: a.combined([((-1) ** i, bundle.piece(i), a.one())]),
        None,
        bundle.quotient,
    )


def multiple(count: int, bundle: Bundle, name: str) -> Bundle:
    """A bundle added to itself so many times (0 or more)."""
    result = trivial(0, bundle.letter, bundle.arithmetic)
    base = bundle
    while count:
        if count & 1:
            result = whitney(result, base, name)
        count >>= 1
        if count:
            base = whitney(base, base, name)
    return result


def tensor(left: Bundle, right: Bundle, name: str) -> Bundle:
    """The tensor product, one of the two being a line bundle.  NoBundle where neither is.

    c_k(L ⊗ E) = sum_i C(n - i, k - i) c_1(L)^{k-i} c_i(E), n the rank of E; w alike; p_i(L ⊗ E) = p_i(E) for a real
    line at odd primes.
    """
    space = common_space(left, right)
    line, other = (left, right) if left.rank == 1 else (right, left)
    if line.rank != 1:
        raise NoBundle(
            f"the tensor product is known with a line bundle, and neither {left.name} nor {right.name} is one"
        )
    if line.complex != other.complex:
        if line.complex:
            other = complexified(other)
        else:
            line = complexified(line)
    rank, a = other.rank, other.arithmetic
    if rank is None or rank < 0:
        raise NoBundle(f"a tensor product needs the rank of {other.name}: bundle E of rank 3 …")
    if other.letter == "p":
        return Bundle(name, "p", rank, space, a, other.last, other.piece)
    first = line.piece(1)

    def piece(k: int) -> ClassElement:
        return a.combined([(comb(rank - i, k - i), a.power(first, k - i), other.piece(i)) for i in range(k + 1)])

    return Bundle(name, other.letter, rank, space, a, rank, piece)
