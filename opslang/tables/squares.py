"""The Steenrod algebra at p = 2 on packed words.  Knows no classes and no text.

A word is one int: the first exponent in the lowest slot, the next one above it; a slot has `width` bits,
so the widest exponent must stay below 2**width.  The empty word is 0.  An element is a set of words.

Strategy.  Only products of one square with an admissible word are remembered, and only where the product is
not admissible as it stands; the memory is emptied when it holds too many entries or terms (measured: a small
memory costs little).  Rows of Adem's relation for small exponents come from a table in which one byte is one
coefficient; the decoding is then done by `itertools.compress` in C.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable
from itertools import compress

from opslang.laws.adem import iter_squares
from opslang.tables.budget import Budget, TooLarge

Packed = int
EMPTY: frozenset[int] = frozenset()
_ROWS: list[list[int]] = []
_TABLE = 256


def _row_table(b: int) -> list[int]:
    """Byte lanes of the relations Sq^a Sq^b for all a < 2b: lane j of entry a is C(b-1-j, a-2j) mod 2.

    By Pascal's rule the entry (a, b) is the entry (a, b-1) plus the entry (a-1, b-1), lane by lane, once the
    three lanes on the edge (where Pascal's rule meets C(-1, 0)) are put in by hand.
    """
    while len(_ROWS) <= b:
        n = len(_ROWS) - 1  # the upper argument at j = 0
        if n < 0:
            _ROWS.append([])
            continue
        below = _ROWS[-1]
        size = 2 * n + 2
        row = [0] * size
        held = len(below)
        for a in range(size):
            value = below[a] if a < held else 0
            if 0 < a <= held:
                value ^= below[a - 1]
            row[a] = value
        # Where the upper argument is 0 (j = n) Pascal's rule would need C(-1, .), which is read as 0.
        if size > 2 * n:
            row[2 * n] = row[2 * n] & ~(255 << 8 * n) | 1 << 8 * n
        row[2 * n + 1] &= ~(255 << 8 * n)
        _ROWS.append(row)
    return _ROWS[b]


class Products(dict[int, Collection[int]]):
    """Remembered products Sq^a w, w admissible and Sq^a w not: the key is w << width | a.  Missing ones are computed.

    Values are distinct words in no order, and are not to be changed.
    """

    __slots__ = ("_budget", "_entries", "_held", "_mask", "_pair", "_stored", "_width")

    def __init__(
        self, pair: Callable[[int, int], list[int]], width: int, budget: Budget, entries: int, stored: int
    ) -> None:
        super().__init__()
        self._pair = pair
        self._width = width
        self._mask = (1 << width) - 1
        self._budget = budget
        self._entries = entries
        self._stored = stored
        self._held = 0

    def __missing__(self, key: int) -> Collection[int]:
        width, mask = self._width, self._mask
        a = key & mask
        word = key >> width
        b = word & mask
        rest = word >> width
        if not rest:
            pair = self._pair(a, b)
            self[key] = pair
            return pair
        bound = 2 * (rest & mask)
        shifted = rest << width
        result: set[int] = set()
        for x in self[b << width | a]:
            k = x & mask
            j = x >> width
            if j >= bound:
                word = (shifted | j) << width | k
            elif j:
                inner = self[shifted | j]
                if inner:
                    half = k >> 1
                    for y in inner:
                        word = y << width | k
                        if y & mask > half:
                            other = self[word]
                            if other:
                                result.symmetric_difference_update(other)
                        elif word in result:
                            result.remove(word)
                        else:
                            result.add(word)
                continue
            elif k >= bound:
                word = shifted | k
            else:
                other = self[shifted | k]
                if other:
                    result.symmetric_difference_update(other)
                continue
            if word in result:
                result.remove(word)
            else:
                result.add(word)
        held = len(result)
        self._budget.left -= held + 1
        if self._budget.left < 0:
            raise TooLarge(self._budget.limit)
        self._held += held
        if len(self) >= self._entries or self._held > self._stored:
            self.clear()
            self._held = held
        self[key] = result
        return result


class Squares:
    """Products in the Steenrod algebra at p = 2 of words whose exponents are below 2**width."""

    def __init__(self, width: int, budget: Budget, entries: int = 1 << 14, stored: int = 1 << 18) -> None:
        self.width = width
        self.mask = (1 << width) - 1
        self.budget = budget
        self._products = Products(self.pair, width, budget, entries, stored)

    def pack(self, word: Iterable[int]) -> Packed:
        """The packed form of a word without Sq^0."""
        value = at = 0
        for token in word:
            value |= token << at
            at += self.width
        return value

    def unpack(self, word: Packed) -> tuple[int, ...]:
        """The tokens of a packed word."""
        width, mask = self.width, self.mask
        tokens = []
        while word:
            tokens.append(word & mask)
            word >>= width
        return tuple(tokens)

    def pair(self, a: int, b: int) -> list[Packed]:
        """Sq^a Sq^b, 0 < a < 2b, in canonical order."""
        step, first = self.mask, a + b
        if b < _TABLE:
            lanes = (_ROWS[b] if b < len(_ROWS) else _row_table(b))[a]
            return list(compress(range(first, first + step * (a // 2 + 1), step), lanes.to_bytes(a // 2 + 1, "little")))
        spend = self.budget.spend
        terms = []
        for _, j in iter_squares(a, b):
            spend(1)
            terms.append(first + step * j)
        return terms

    def product(self, a: int, word: Packed) -> Collection[Packed]:
        """Sq^a times an admissible word with which it is not admissible; distinct words, in no order."""
        return self._products[word << self.width | a]

    def times(self, a: int, element: Collection[Packed]) -> set[Packed]:
        """Sq^a (a > 0) times an element in canonical form."""
        width, mask = self.width, self.mask
        half = a >> 1
        result: set[int] = set()
        for x in element:
            if x & mask <= half:
                result.add(x << width | a)
        if len(result) != len(element):
            products, toggle = self._products, result.symmetric_difference_update
            for x in element:
                if x & mask > half:
                    other = products[x << width | a]
                    if other:
                        toggle(other)
        self.budget.spend(len(result))
        return result

    def normal(self, word: tuple[int, ...]) -> Collection[Packed]:
        """The canonical form of a word of positive exponents: distinct admissible words, in no order."""
        if len(word) == 2:
            a, b = word
            return self.pair(a, b) if a < 2 * b else (b << self.width | a,)
        element: Collection[int] = (0,)
        for a in reversed(word):
            element = self.times(a, element)
            if not element:
                return EMPTY
        return element
